#include "search/fixed_subspaces.hpp"

#include <algorithm>
#include <cstdlib>
#include <stdexcept>
#include <utility>

#include "exact/error.hpp"

namespace spinsieve {

namespace {

using Rows = std::array<std::vector<int>, 3>;

FractionVector combination(const FractionVector& factors,
                           const std::array<FractionVector, 3>& rows) {
  FractionVector sum{};
  for (std::size_t i = 0; i < 3; ++i) sum = sum + factors[i] * rows[i];
  return sum;
}

FractionVector cross(const FractionVector& a, const FractionVector& b) {
  return {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};
}

FractionVector to_fractions(const IntVector& v) { return {v[0], v[1], v[2]}; }

// U M V = diagonal for some V; only U and the diagonal are kept.
struct Diagonalised {
  IntMatrix U{};
  IntMatrix U_inverse{};
  std::array<int, 3> diagonal{};
};

Diagonalised diagonalised(Rows M) {
  Diagonalised result;
  result.U = {{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  const std::size_t columns = M[0].size();
  for (std::size_t p = 0; p < std::min<std::size_t>(3, columns); ++p) {
    while (true) {
      std::size_t row = 3;
      std::size_t column = 0;
      for (std::size_t i = p; i < 3; ++i)
        for (std::size_t j = p; j < columns; ++j)
          if (M[i][j] != 0 && (row == 3 || std::abs(M[i][j]) < std::abs(M[row][column]))) {
            row = i;
            column = j;
          }
      if (row == 3) break;
      std::swap(M[p], M[row]);
      std::swap(result.U[p], result.U[row]);
      for (std::vector<int>& r : M) std::swap(r[p], r[column]);
      bool clean = true;
      for (std::size_t i = p + 1; i < 3; ++i) {
        const int factor = M[i][p] / M[p][p];
        for (std::size_t j = 0; j < columns; ++j) M[i][j] -= factor * M[p][j];
        for (std::size_t j = 0; j < 3; ++j) result.U[i][j] -= factor * result.U[p][j];
        clean = clean && M[i][p] == 0;
      }
      for (std::size_t j = p + 1; j < columns; ++j) {
        const int factor = M[p][j] / M[p][p];
        for (std::vector<int>& r : M) r[j] -= factor * r[p];
        clean = clean && M[p][j] == 0;
      }
      if (clean) break;
    }
    result.diagonal[p] = std::abs(M[p][p]);
  }
  result.U_inverse = inverse(result.U);
  return result;
}

// A group of rotations on rows of primitive reciprocal coordinates.
class PrimitiveRotations {
 public:
  PrimitiveRotations(const SpaceGroup& group, std::span<const IntMatrix> rotations)
      : direct_(primitive_basis(group)), reciprocal_(dual_basis(direct_)) {
    for (const IntMatrix& R : rotations) {
      IntMatrix primitive{};
      for (std::size_t i = 0; i < 3; ++i) {
        const FractionVector row = to_primitive(row_times(reciprocal_[i], R));
        for (std::size_t j = 0; j < 3; ++j) {
          if (!row[j].is_integer()) throw Error("a rotation does not keep the lattice");
          primitive[i][j] = static_cast<int>(row[j].numerator());
        }
      }
      rotations_.push_back(primitive);
    }
  }

  FixedSubspace described(const Stratum& stratum, const SymmetryTables& tables,
                          std::span<const IntMatrix> rotations) const {
    FixedSubspace result;
    result.kind = stratum.kind;
    result.k = stratum.k;
    Rows columns;
    for (std::size_t g = 0; g < rotations.size(); ++g) {
      if (!tables.keeps(stratum.k, rotations[g])) continue;
      result.cogroup.push_back(g);
      for (std::size_t i = 0; i < 3; ++i)
        for (std::size_t j = 0; j < 3; ++j)
          columns[i].push_back((i == j ? 1 : 0) - rotations_[g][i][j]);
    }
    const Diagonalised form = diagonalised(std::move(columns));
    for (std::size_t i = 0; i < 3; ++i)
      if (form.diagonal[i] == 0)
        result.lattice.push_back(combination(to_fractions(form.U[i]), reciprocal_));
    if (static_cast<int>(result.dimension()) != stratum.k.free_parameters())
      throw std::logic_error("a stratum and its co-group differ in dimension");
    const FractionVector offset = to_primitive(stratum.k.constant);
    for (std::size_t g = 0; g < rotations_.size(); ++g) {
      if (!keeps_directions(form, rotations_[g])) continue;
      // The image must differ by a reciprocal vector and a step along the subspace.
      FractionVector step = row_times(offset - row_times(offset, rotations_[g]), form.U_inverse);
      for (std::size_t i = 0; i < 3; ++i)
        if (form.diagonal[i] == 0) step[i] = 0;
      if (is_integer(step))
        result.maps.push_back({g, combination(row_times(step, form.U), reciprocal_)});
    }
    return result;
  }

 private:
  FractionVector to_primitive(const FractionVector& k) const {
    return {dot(k, direct_[0]), dot(k, direct_[1]), dot(k, direct_[2])};
  }

  static bool keeps_directions(const Diagonalised& form, const IntMatrix& R) {
    for (std::size_t i = 0; i < 3; ++i) {
      if (form.diagonal[i] != 0) continue;
      const IntVector y = row_times(row_times(form.U[i], R), form.U_inverse);
      for (std::size_t j = 0; j < 3; ++j)
        if (form.diagonal[j] != 0 && y[j] != 0) return false;
    }
    return true;
  }

  std::array<FractionVector, 3> direct_;
  std::array<FractionVector, 3> reciprocal_;
  std::vector<IntMatrix> rotations_;
};

}  // namespace

std::array<FractionVector, 3> dual_basis(const std::array<FractionVector, 3>& basis) {
  const FractionVector normal = cross(basis[0], basis[1]);
  const Fraction volume = dot(normal, basis[2]);
  if (volume.is_zero()) throw Error("the basis vectors of the lattice lie in one plane");
  const Fraction scale = Fraction(1) / volume;
  return {scale * cross(basis[1], basis[2]), scale * cross(basis[2], basis[0]), scale * normal};
}

std::vector<FixedSubspace> fixed_subspaces(const SpaceGroup& group,
                                           std::span<const IntMatrix> rotations) {
  const SymmetryTables tables(group);
  const PrimitiveRotations primitive(group, rotations);
  std::vector<FixedSubspace> result;
  for (const Stratum& stratum : strata(tables, rotations))
    result.push_back(primitive.described(stratum, tables, rotations));
  std::ranges::stable_sort(result, {}, &FixedSubspace::dimension);
  return result;
}

}  // namespace spinsieve
