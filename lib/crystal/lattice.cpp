#include "crystal/lattice.hpp"

#include <algorithm>
#include <array>
#include <cstdint>
#include <numeric>

#include "crystal/fraction_matrix.hpp"
#include "crystal/space_group.hpp"
#include "exact/checked.hpp"

namespace spinsieve {

namespace {

using Row = std::array<std::int64_t, 3>;

/// Hermite normal form of the rows: upper triangular, positive diagonal, entries above reduced.
std::array<Row, 3> hermite(std::vector<Row> rows) {
  for (std::size_t column = 0; column < 3; ++column) {
    while (true) {
      // The row of the smallest non-zero entry comes up; the others are reduced by it.
      std::size_t smallest = rows.size();
      for (std::size_t i = column; i < rows.size(); ++i)
        if (rows[i][column] != 0 && (smallest == rows.size() ||
                                     std::abs(rows[i][column]) < std::abs(rows[smallest][column])))
          smallest = i;
      std::swap(rows[column], rows[smallest]);
      if (rows[column][column] < 0)
        for (std::int64_t& entry : rows[column]) entry = -entry;
      bool clean = true;
      for (std::size_t i = column + 1; i < rows.size(); ++i) {
        const std::int64_t n = rows[i][column] / rows[column][column];
        for (std::size_t j = 0; j < 3; ++j)
          rows[i][j] = checked_subtract(rows[i][j], checked_multiply(n, rows[column][j]));
        clean = clean && rows[i][column] == 0;
      }
      if (clean) break;
    }
    for (std::size_t i = 0; i < column; ++i) {
      const std::int64_t rest = positive_modulo(rows[i][column], rows[column][column]);
      const std::int64_t n = (rows[i][column] - rest) / rows[column][column];
      for (std::size_t j = 0; j < 3; ++j) rows[i][j] -= n * rows[column][j];
    }
  }
  return {rows[0], rows[1], rows[2]};
}

}  // namespace

FractionMatrix lattice_basis(std::span<const FractionVector> centrings) {
  std::int64_t common = 1;
  for (const FractionVector& centring : centrings)
    for (const Fraction x : centring)
      common = checked_multiply(common, x.denominator() / std::gcd(common, x.denominator()));
  std::vector<Row> rows{{common, 0, 0}, {0, common, 0}, {0, 0, common}};
  for (const FractionVector& centring : centrings) {
    Row row{};
    for (std::size_t i = 0; i < 3; ++i)
      row[i] = checked_multiply(centring[i].numerator(), common / centring[i].denominator());
    rows.push_back(row);
  }
  FractionMatrix basis;
  const std::array<Row, 3> reduced = hermite(std::move(rows));
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) basis[i][j] = Fraction(reduced[i][j], common);
  return basis;
}

namespace {

std::int64_t product(const IntMetric& G, const IntVector& v, const IntVector& w) {
  std::int64_t sum = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) sum += v[i] * G[i][j] * w[j];
  return sum;
}

std::int64_t nearest_quotient(std::int64_t a, std::int64_t b) {
  return (2 * a + b - positive_modulo(2 * a + b, 2 * b)) / (2 * b);
}

/// One round of shortening; true when something became shorter.
bool shorten(const IntMetric& G, IntMatrix& basis) {
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      if (i == j) continue;
      const std::int64_t n =
          nearest_quotient(product(G, basis[i], basis[j]), product(G, basis[j], basis[j]));
      IntVector candidate = basis[i];
      for (std::size_t k = 0; k < 3; ++k) candidate[k] -= static_cast<int>(n) * basis[j][k];
      if (product(G, candidate, candidate) < product(G, basis[i], basis[i])) {
        basis[i] = candidate;
        return true;
      }
    }
  for (std::size_t i = 0; i < 3; ++i)
    for (const int p : {-1, 1})
      for (const int q : {-1, 1}) {
        IntVector candidate = basis[i];
        for (std::size_t k = 0; k < 3; ++k)
          candidate[k] += p * basis[(i + 1) % 3][k] + q * basis[(i + 2) % 3][k];
        if (product(G, candidate, candidate) < product(G, basis[i], basis[i])) {
          basis[i] = candidate;
          return true;
        }
      }
  return false;
}

}  // namespace

IntMatrix reduced_basis(const IntMetric& G) {
  IntMatrix basis{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  while (shorten(G, basis)) {
  }
  if (determinant(basis) < 0)
    for (IntVector& row : basis)
      for (int& entry : row) entry = -entry;
  return basis;
}

IntMetric averaged_metric(std::span<const IntMatrix> rotations, const IntMetric& start) {
  IntMetric sum{};
  for (const IntMatrix& R : rotations)
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j)
        for (std::size_t p = 0; p < 3; ++p)
          for (std::size_t q = 0; q < 3; ++q) sum[i][j] += R[p][i] * start[p][q] * R[q][j];
  return sum;
}

std::array<FractionVector, 3> primitive_basis(const SpaceGroup& group) {
  return lattice_basis(group.centrings());
}

namespace {

/// R in the basis whose rows are given: coordinates x = basisᵀ y.
std::optional<IntMatrix> in_basis(const IntMatrix& R, const FractionMatrix& basis) {
  const FractionMatrix columns = transpose(basis);
  return to_integers(product(product(inverse(columns), to_fractions(R)), columns));
}

/// Integer matrices of the reduced basis that keep all the metrics; entries are within ±2 there.
std::vector<IntMatrix> automorphisms(std::span<const IntMetric> metrics) {
  std::array<std::vector<IntVector>, 3> images;
  for (int x = -2; x <= 2; ++x)
    for (int y = -2; y <= 2; ++y)
      for (int z = -2; z <= 2; ++z)
        for (std::size_t i = 0; i < 3; ++i) {
          const IntVector v{x, y, z};
          if (std::all_of(metrics.begin(), metrics.end(),
                          [&](const IntMetric& G) { return product(G, v, v) == G[i][i]; }))
            images[i].push_back(v);
        }
  const auto fits = [&metrics](const IntVector& v, const IntVector& w, std::size_t i,
                               std::size_t j) {
    return std::all_of(metrics.begin(), metrics.end(),
                       [&](const IntMetric& G) { return product(G, v, w) == G[i][j]; });
  };
  std::vector<IntMatrix> result;
  for (const IntVector& a : images[0])
    for (const IntVector& b : images[1]) {
      if (!fits(a, b, 0, 1)) continue;
      for (const IntVector& c : images[2])
        if (fits(a, c, 0, 2) && fits(b, c, 1, 2))
          result.push_back({{{a[0], b[0], c[0]}, {a[1], b[1], c[1]}, {a[2], b[2], c[2]}}});
    }
  return result;
}

}  // namespace

std::vector<IntMatrix> holohedry(const SpaceGroup& group) {
  FractionMatrix basis = primitive_basis(group);
  std::vector<IntMatrix> rotations;
  for (const Operation& operation : group.operations())
    rotations.push_back(*in_basis(operation.rotation, basis));
  const IntMatrix shortest = reduced_basis(averaged_metric(rotations, generic_metric));
  basis = product(to_fractions(shortest), basis);
  for (std::size_t i = 0; i < rotations.size(); ++i)
    rotations[i] = *in_basis(group.operations()[i].rotation, basis);
  // The averages of the six symmetric unit matrices span every metric the group allows; a positive
  // one stands first, which bounds the search.
  std::vector<IntMetric> metrics{averaged_metric(rotations, generic_metric)};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = i; j < 3; ++j) {
      IntMetric unit{};
      unit[i][j] = unit[j][i] = 1;
      metrics.push_back(averaged_metric(rotations, unit));
    }
  constexpr IntMatrix identity{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  std::vector<IntMatrix> result{identity};
  const FractionMatrix back = inverse(transpose(basis));
  for (const IntMatrix& W : automorphisms(metrics)) {
    const auto R = to_integers(product(product(transpose(basis), to_fractions(W)), back));
    if (R && *R != identity) result.push_back(*R);
  }
  std::sort(result.begin() + 1, result.end(), std::greater<>());
  return result;
}

}  // namespace spinsieve
