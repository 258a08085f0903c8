#include "crystal/fraction_matrix.hpp"

#include <limits>

#include "exact/error.hpp"

namespace spinsieve {

FractionMatrix to_fractions(const IntMatrix& R) {
  FractionMatrix result;
  for (std::size_t i = 0; i < 3; ++i) result[i] = {R[i][0], R[i][1], R[i][2]};
  return result;
}

std::optional<IntMatrix> to_integers(const FractionMatrix& A) {
  IntMatrix result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      const std::int64_t value = A[i][j].numerator();
      if (!A[i][j].is_integer() || value > std::numeric_limits<int>::max() ||
          value < std::numeric_limits<int>::min())
        return std::nullopt;
      result[i][j] = static_cast<int>(value);
    }
  return result;
}

FractionMatrix transpose(const FractionMatrix& A) {
  FractionMatrix result;
  for (std::size_t i = 0; i < 3; ++i) result[i] = {A[0][i], A[1][i], A[2][i]};
  return result;
}

FractionMatrix product(const FractionMatrix& A, const FractionMatrix& B) {
  const FractionMatrix columns = transpose(B);
  FractionMatrix result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i][j] = dot(A[i], columns[j]);
  return result;
}

namespace {

FractionVector cross(const FractionVector& a, const FractionVector& b) {
  return {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};
}

}  // namespace

Fraction determinant(const FractionMatrix& A) { return dot(A[0], cross(A[1], A[2])); }

FractionMatrix inverse(const FractionMatrix& A) {
  const Fraction scale = Fraction(1) / determinant(A);
  return transpose(
      {scale * cross(A[1], A[2]), scale * cross(A[2], A[0]), scale * cross(A[0], A[1])});
}

FractionVector times(const FractionMatrix& A, const FractionVector& column) {
  return {dot(A[0], column), dot(A[1], column), dot(A[2], column)};
}

namespace {

/// Rows of width 3 or 4 to reduced echelon form over the first three columns; returns the pivots.
template <std::size_t width>
std::vector<std::size_t> reduce(std::vector<std::array<Fraction, width>>& rows) {
  std::vector<std::size_t> pivots;
  for (std::size_t column = 0; column < 3; ++column) {
    const std::size_t rank = pivots.size();
    std::size_t found = rank;
    while (found < rows.size() && rows[found][column].is_zero()) ++found;
    if (found == rows.size()) continue;
    std::swap(rows[rank], rows[found]);
    const Fraction scale = Fraction(1) / rows[rank][column];
    for (Fraction& entry : rows[rank]) entry *= scale;
    for (std::size_t i = 0; i < rows.size(); ++i) {
      const Fraction factor = rows[i][column];
      if (i == rank || factor.is_zero()) continue;
      for (std::size_t j = 0; j < width; ++j) rows[i][j] -= factor * rows[rank][j];
    }
    pivots.push_back(column);
  }
  return pivots;
}

}  // namespace

std::vector<FractionVector> row_echelon(std::vector<FractionVector> rows) {
  rows.resize(reduce(rows).size());
  return rows;
}

std::vector<FractionVector> null_space(const std::vector<FractionVector>& rows) {
  std::vector<FractionVector> echelon = rows;
  const std::vector<std::size_t> pivots = reduce(echelon);
  std::vector<FractionVector> basis;
  for (std::size_t column = 0; column < 3; ++column) {
    bool free = true;
    FractionVector x{};
    x[column] = 1;
    for (std::size_t i = 0; i < pivots.size(); ++i) {
      if (pivots[i] == column) free = false;
      x[pivots[i]] = -echelon[i][column];
    }
    if (free) basis.push_back(x);
  }
  return row_echelon(std::move(basis));
}

std::optional<FractionVector> solution(std::span<const FractionVector> rows,
                                       std::span<const Fraction> right) {
  std::vector<std::array<Fraction, 4>> system;
  system.reserve(rows.size());
  for (std::size_t i = 0; i < rows.size(); ++i)
    system.push_back({rows[i][0], rows[i][1], rows[i][2], right[i]});
  const std::vector<std::size_t> pivots = reduce(system);
  for (std::size_t i = pivots.size(); i < system.size(); ++i)
    if (!system[i][3].is_zero()) return std::nullopt;
  FractionVector x{};
  for (std::size_t i = 0; i < pivots.size(); ++i) x[pivots[i]] = system[i][3];
  return x;
}

}  // namespace spinsieve
