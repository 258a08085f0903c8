#include "arrangement/lattice_algebra.hpp"

#include <algorithm>
#include <cstdlib>
#include <numeric>
#include <utility>

#include "exact/checked.hpp"

namespace spinsieve {
namespace {

using Row = std::array<std::int64_t, 3>;

/// row −= factor · other
template <typename Vector>
void subtract_multiple(Vector& row, std::int64_t factor, const Vector& other) {
  if (factor == 0) return;
  for (std::size_t i = 0; i < row.size(); ++i)
    row[i] = checked_subtract(row[i], checked_multiply(factor, other[i]));
}

/// The integer nearest to a fraction; halves go up.
std::int64_t nearest_integer(Fraction value) { return (value + Fraction(1, 2)).floor(); }

/// Subtracts integer multiples of one vector from another until no step makes one shorter.
void reduce_pairwise(FractionMatrix& basis) {
  bool changed = true;
  while (changed) {
    changed = false;
    for (std::size_t i = 0; i < 3; ++i) {
      for (std::size_t j = 0; j < 3; ++j) {
        if (i == j) continue;
        const std::int64_t n = nearest_integer(dot(basis[i], basis[j]) / dot(basis[j], basis[j]));
        if (n == 0) continue;
        const FractionVector shorter = basis[i] - Fraction(n) * basis[j];
        if (dot(shorter, shorter) < dot(basis[i], basis[i])) {
          basis[i] = shorter;
          changed = true;
        }
      }
    }
  }
}

/// The first non-zero component of each vector is made positive, those that lie most along a come
/// first, and the last vector makes the basis right-handed: unit vectors stay in the order a, b, c.
void order_basis(FractionMatrix& basis) {
  for (auto& v : basis) {
    const auto first = std::ranges::find_if(v, [](const Fraction& x) { return !x.is_zero(); });
    if (*first < Fraction(0)) v = Fraction(-1) * v;
  }
  std::ranges::sort(basis, [](const FractionVector& a, const FractionVector& b) {
    return std::ranges::lexicographical_compare(b, a);
  });
  if (determinant(basis) < Fraction(0)) basis[2] = Fraction(-1) * basis[2];
}

}  // namespace

std::vector<Row> integer_row_basis(std::vector<Row> rows) {
  std::size_t done = 0;
  for (std::size_t column = 0; column < 3 && done < rows.size(); ++column) {
    while (true) {
      // The row with the smallest non-zero entry of this column comes to the front.
      std::size_t best = rows.size();
      for (std::size_t i = done; i < rows.size(); ++i)
        if (rows[i][column] != 0 &&
            (best == rows.size() || std::abs(rows[i][column]) < std::abs(rows[best][column])))
          best = i;
      if (best == rows.size()) break;
      std::swap(rows[done], rows[best]);
      bool clean = true;
      for (std::size_t i = done + 1; i < rows.size(); ++i) {
        subtract_multiple(rows[i], rows[i][column] / rows[done][column], rows[done]);
        clean = clean && rows[i][column] == 0;
      }
      if (clean) {
        ++done;
        break;
      }
    }
  }
  rows.resize(done);
  return rows;
}

RationalLattice::RationalLattice()
    : basis_(to_fractions(Operation{}.rotation)), columns_(basis_), to_coordinates_(basis_) {}

RationalLattice::RationalLattice(std::span<const FractionVector> generators) {
  std::int64_t denominator = 1;
  for (const auto& v : generators)
    for (const auto& x : v)
      denominator =
          checked_multiply(denominator / std::gcd(denominator, x.denominator()), x.denominator());
  std::vector<Row> rows;
  rows.reserve(generators.size());
  for (const auto& v : generators) {
    Row row{};
    for (std::size_t i = 0; i < 3; ++i)
      row[i] = checked_multiply(v[i].numerator(), denominator / v[i].denominator());
    rows.push_back(row);
  }
  rows = integer_row_basis(std::move(rows));
  if (rows.size() != 3) throw Error("the translations do not span a lattice of three dimensions");
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) basis_[i][j] = Fraction(rows[i][j], denominator);
  reduce_pairwise(basis_);
  order_basis(basis_);
  columns_ = transpose(basis_);
  to_coordinates_ = inverse(columns_);
}

FractionVector RationalLattice::coordinates(const FractionVector& v) const {
  return times(to_coordinates_, v);
}

FractionVector RationalLattice::vector(const FractionVector& coordinates) const {
  return times(columns_, coordinates);
}

FractionVector RationalLattice::reduced(const FractionVector& v) const {
  return vector(modulo_one(coordinates(v)));
}

FractionMatrix RationalLattice::in_basis(const IntMatrix& R) const {
  return product(to_coordinates_, product(to_fractions(R), columns_));
}

CongruenceSystem::CongruenceSystem(std::vector<Row> rows) {
  const std::size_t count = rows.size();
  left_.assign(count, std::vector<std::int64_t>(count, 0));
  for (std::size_t i = 0; i < count; ++i) left_[i][i] = 1;
  for (std::size_t i = 0; i < 3; ++i) right_[i][i] = 1;
  const auto add_column = [&](std::size_t to, std::int64_t factor, std::size_t from) {
    for (auto& row : rows) row[to] = checked_subtract(row[to], checked_multiply(factor, row[from]));
    for (auto& row : right_)
      row[to] = checked_subtract(row[to], checked_multiply(factor, row[from]));
  };
  for (std::size_t pivot = 0; pivot < std::min<std::size_t>(3, count); ++pivot) {
    while (true) {
      // The smallest non-zero entry of the rest comes to the pivot; then its row and column are
      // cleared, and remainders start another round with a smaller pivot.
      std::size_t best_row = count;
      std::size_t best_column = 0;
      for (std::size_t i = pivot; i < count; ++i)
        for (std::size_t j = pivot; j < 3; ++j)
          if (rows[i][j] != 0 &&
              (best_row == count || std::abs(rows[i][j]) < std::abs(rows[best_row][best_column]))) {
            best_row = i;
            best_column = j;
          }
      if (best_row == count) return;
      std::swap(rows[pivot], rows[best_row]);
      std::swap(left_[pivot], left_[best_row]);
      for (auto& row : rows) std::swap(row[pivot], row[best_column]);
      for (auto& row : right_) std::swap(row[pivot], row[best_column]);
      bool clean = true;
      for (std::size_t i = pivot + 1; i < count; ++i) {
        const std::int64_t factor = rows[i][pivot] / rows[pivot][pivot];
        subtract_multiple(rows[i], factor, rows[pivot]);
        subtract_multiple(left_[i], factor, left_[pivot]);
        clean = clean && rows[i][pivot] == 0;
      }
      for (std::size_t j = pivot + 1; j < 3; ++j) {
        add_column(j, rows[pivot][j] / rows[pivot][pivot], pivot);
        clean = clean && rows[pivot][j] == 0;
      }
      if (clean) break;
    }
    divisors_.push_back(rows[pivot][pivot]);
  }
}

Fraction CongruenceSystem::transformed(std::size_t row,
                                       std::span<const Fraction> right_side) const {
  Fraction sum;
  for (std::size_t j = 0; j < right_side.size(); ++j)
    if (left_[row][j] != 0 && !right_side[j].is_zero())
      sum += Fraction(left_[row][j]) * right_side[j];
  return sum;
}

bool CongruenceSystem::solvable(std::span<const Fraction> right_side) const {
  for (std::size_t i = rank(); i < left_.size(); ++i)
    if (!transformed(i, right_side).is_integer()) return false;
  return true;
}

std::vector<FractionVector> CongruenceSystem::solutions(
    std::span<const Fraction> right_side) const {
  if (!solvable(right_side)) return {};
  std::vector<FractionVector> diagonal(1);
  for (std::size_t i = 0; i < rank(); ++i) {
    const Fraction value = transformed(i, right_side);
    std::vector<FractionVector> extended;
    for (std::int64_t n = 0; n < std::abs(divisors_[i]); ++n) {
      for (auto y : diagonal) {
        y[i] = (value + Fraction(n)) / Fraction(divisors_[i]);
        extended.push_back(y);
      }
    }
    diagonal = std::move(extended);
  }
  for (auto& y : diagonal) {
    FractionVector x;
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j) x[i] += Fraction(right_[i][j]) * y[j];
    y = x;
  }
  return diagonal;
}

std::vector<IntVector> CongruenceSystem::free_directions() const {
  std::vector<IntVector> result;
  for (std::size_t j = rank(); j < 3; ++j)
    result.push_back({static_cast<int>(right_[0][j]), static_cast<int>(right_[1][j]),
                      static_cast<int>(right_[2][j])});
  return result;
}

}  // namespace spinsieve
