#include "crystal/origin.hpp"

#include <algorithm>
#include <array>
#include <cstdlib>

#include "crystal/lattice.hpp"
#include "exact/checked.hpp"

namespace spinsieve {

namespace {

using Row = std::array<std::int64_t, 3>;

/// Integer congruences rows · y ≡ right modulo 1, with y = columns · z.
struct Congruences {
  std::vector<Row> rows;
  std::vector<Fraction> right;
  std::array<Row, 3> columns{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};

  void subtract_row(std::size_t from, std::size_t row, std::int64_t n) {
    for (std::size_t j = 0; j < 3; ++j)
      rows[from][j] = checked_subtract(rows[from][j], checked_multiply(n, rows[row][j]));
    right[from] = (right[from] - Fraction(n) * right[row]).modulo_one();
  }
  void subtract_column(std::size_t from, std::size_t column, std::int64_t n) {
    for (Row& row : rows) row[from] = checked_subtract(row[from], checked_multiply(n, row[column]));
    for (Row& row : columns)
      row[from] = checked_subtract(row[from], checked_multiply(n, row[column]));
  }
  void swap_columns(std::size_t a, std::size_t b) {
    for (Row& row : rows) std::swap(row[a], row[b]);
    for (Row& row : columns) std::swap(row[a], row[b]);
  }

  /// Puts the smallest non-zero entry at or beyond (k, k) there; false when there is none.
  bool bring_pivot(std::size_t k) {
    std::size_t best_row = rows.size();
    std::size_t best_column = 0;
    for (std::size_t i = k; i < rows.size(); ++i)
      for (std::size_t j = k; j < 3; ++j)
        if (rows[i][j] != 0 && (best_row == rows.size() ||
                                std::abs(rows[i][j]) < std::abs(rows[best_row][best_column]))) {
          best_row = i;
          best_column = j;
        }
    if (best_row == rows.size()) return false;
    std::swap(rows[k], rows[best_row]);
    std::swap(right[k], right[best_row]);
    swap_columns(k, best_column);
    return true;
  }

  /// Row and column k to zero beyond the pivot, as far as one division goes; true when done.
  bool clear(std::size_t k) {
    bool done = true;
    for (std::size_t i = k + 1; i < rows.size(); ++i) {
      if (rows[i][k] == 0) continue;
      subtract_row(i, k, rows[i][k] / rows[k][k]);
      done = done && rows[i][k] == 0;
    }
    for (std::size_t j = k + 1; j < 3; ++j) {
      if (rows[k][j] == 0) continue;
      subtract_column(j, k, rows[k][j] / rows[k][k]);
      done = done && rows[k][j] == 0;
    }
    return done;
  }

  /// One solution y.
  std::optional<FractionVector> solve() {
    std::size_t rank = 0;
    while (rank < 3 && rank < rows.size() && bring_pivot(rank))
      if (clear(rank)) ++rank;
    for (std::size_t i = rank; i < rows.size(); ++i)
      if (!right[i].is_integer()) return std::nullopt;
    FractionVector z{};
    for (std::size_t k = 0; k < rank; ++k) z[k] = right[k] / Fraction(rows[k][k]);
    FractionVector y{};
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j) y[i] += Fraction(columns[i][j]) * z[j];
    return y;
  }
};

}  // namespace

std::optional<FractionVector> shift_between(const OperationSet& from, const OperationSet& to) {
  if (from.representatives.size() != to.representatives.size() || from.centrings != to.centrings)
    return std::nullopt;
  const FractionMatrix axes = transpose(lattice_basis(to.centrings));
  const FractionMatrix back = inverse(axes);
  Congruences system;
  for (const Operation& operation : from.representatives) {
    const auto target =
        std::find_if(to.representatives.begin(), to.representatives.end(),
                     [&operation](const Operation& o) { return o.rotation == operation.rotation; });
    if (target == to.representatives.end()) return std::nullopt;
    // Rotations keep the lattice, hence integers in its basis.
    const auto R = to_integers(product(product(back, to_fractions(operation.rotation)), axes));
    const FractionVector right = times(back, target->translation - operation.translation);
    for (std::size_t i = 0; i < 3; ++i) {
      Row row{};
      for (std::size_t j = 0; j < 3; ++j) row[j] = (i == j ? 1 : 0) - (*R)[i][j];
      if (row == Row{} && right[i].is_integer()) continue;
      system.rows.push_back(row);
      system.right.push_back(right[i].modulo_one());
    }
  }
  const auto y = system.solve();
  if (!y) return std::nullopt;
  return modulo_one(times(axes, *y));
}

}  // namespace spinsieve
