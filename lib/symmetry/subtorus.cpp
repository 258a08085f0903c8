#include "symmetry/subtorus.hpp"

#include <cstdlib>
#include <numeric>
#include <utility>

#include "exact/checked.hpp"

namespace spinsieve {

namespace {

/// a −= q·b.
void subtract(IntegerRow& a, std::int64_t q, const IntegerRow& b) {
  for (std::size_t c = 0; c < 3; ++c) a[c] = checked_subtract(a[c], checked_multiply(q, b[c]));
}

std::int64_t floor_quotient(std::int64_t a, std::int64_t b) {
  return (a - positive_modulo(a, b)) / b;
}

/// Diagonal form U N V = D of an integer matrix with three columns; V is unimodular, row operations
/// act on the values too.
struct Diagonal {
  std::array<IntegerRow, 3> V{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  IntegerRow d{};
  std::size_t rank = 0;
};

Diagonal diagonalized(std::vector<IntegerRow> N, std::span<std::int64_t> values = {}) {
  Diagonal result;
  for (std::size_t step = 0; step < 3; ++step) {
    for (;;) {
      // Smallest entry of the remaining block to the corner.
      std::size_t row = N.size();
      std::size_t column = 0;
      for (std::size_t i = step; i < N.size(); ++i)
        for (std::size_t c = step; c < 3; ++c)
          if (N[i][c] != 0 && (row == N.size() || std::abs(N[i][c]) < std::abs(N[row][column]))) {
            row = i;
            column = c;
          }
      if (row == N.size()) return result;
      std::swap(N[step], N[row]);
      if (!values.empty()) std::swap(values[step], values[row]);
      if (column != step) {
        for (IntegerRow& r : N) std::swap(r[step], r[column]);
        for (IntegerRow& r : result.V) std::swap(r[step], r[column]);
      }
      bool clean = true;
      for (std::size_t i = step + 1; i < N.size(); ++i) {
        const std::int64_t q = N[i][step] / N[step][step];
        if (q == 0 && N[i][step] == 0) continue;
        subtract(N[i], q, N[step]);
        if (!values.empty())
          values[i] = checked_subtract(values[i], checked_multiply(q, values[step]));
        clean = clean && N[i][step] == 0;
      }
      for (std::size_t c = step + 1; c < 3; ++c) {
        const std::int64_t q = N[step][c] / N[step][step];
        if (q == 0 && N[step][c] == 0) continue;
        for (IntegerRow& r : N) r[c] = checked_subtract(r[c], checked_multiply(q, r[step]));
        for (IntegerRow& r : result.V) r[c] = checked_subtract(r[c], checked_multiply(q, r[step]));
        clean = clean && N[step][c] == 0;
      }
      if (!clean) continue;
      if (N[step][step] < 0 && !values.empty()) values[step] = -values[step];
      result.d[step] = std::abs(N[step][step]);
      result.rank = step + 1;
      break;
    }
  }
  return result;
}

std::array<IntegerRow, 3> unimodular_inverse(const std::array<IntegerRow, 3>& m) {
  std::array<IntegerRow, 3> adjugate{};
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j) {
      const std::size_t a = (j + 1) % 3;
      const std::size_t b = (j + 2) % 3;
      const std::size_t c = (i + 1) % 3;
      const std::size_t d = (i + 2) % 3;
      adjugate[i][j] =
          checked_subtract(checked_multiply(m[a][c], m[b][d]), checked_multiply(m[a][d], m[b][c]));
    }
  }
  std::int64_t determinant = 0;  // ±1
  for (std::size_t j = 0; j < 3; ++j)
    determinant = checked_add(determinant, checked_multiply(m[0][j], adjugate[j][0]));
  if (determinant < 0)
    for (IntegerRow& row : adjugate)
      for (std::int64_t& entry : row) entry = -entry;
  return adjugate;
}

}  // namespace

Subtorus normalized(std::array<IntegerRow, 3> conditions, IntegerRow values, std::size_t rank,
                    std::int64_t denominator) {
  std::size_t done = 0;
  for (std::size_t column = 0; column < 3 && done < rank; ++column) {
    bool found = false;
    for (;;) {
      std::size_t best = rank;
      for (std::size_t i = done; i < rank; ++i)
        if (conditions[i][column] != 0 &&
            (best == rank || std::abs(conditions[i][column]) < std::abs(conditions[best][column])))
          best = i;
      if (best == rank) break;
      found = true;
      std::swap(conditions[done], conditions[best]);
      std::swap(values[done], values[best]);
      bool clean = true;
      for (std::size_t i = done + 1; i < rank; ++i) {
        if (conditions[i][column] == 0) continue;
        const std::int64_t q = conditions[i][column] / conditions[done][column];
        subtract(conditions[i], q, conditions[done]);
        values[i] = checked_subtract(values[i], checked_multiply(q, values[done]));
        clean = clean && conditions[i][column] == 0;
      }
      if (clean) break;
    }
    if (!found) continue;
    if (conditions[done][column] < 0) {
      for (std::int64_t& entry : conditions[done]) entry = -entry;
      values[done] = -values[done];
    }
    for (std::size_t i = 0; i < done; ++i) {
      const std::int64_t q = floor_quotient(conditions[i][column], conditions[done][column]);
      if (q == 0) continue;
      subtract(conditions[i], q, conditions[done]);
      values[i] = checked_subtract(values[i], checked_multiply(q, values[done]));
    }
    ++done;
  }
  std::int64_t common = denominator;
  for (std::size_t i = 0; i < rank; ++i) {
    values[i] = positive_modulo(values[i], denominator);
    common = std::gcd(common, values[i]);
  }
  for (std::size_t i = 0; i < rank; ++i) values[i] /= common;
  return {rank, conditions, values, denominator / common};
}

std::vector<Subtorus> components(std::span<const IntegerRow> N) {
  const Diagonal form = diagonalized({N.begin(), N.end()});
  // κ = V y with d_i y_i ∈ Z; the conditions are the rows of V⁻¹ with d_i ≠ 0.
  const std::array<IntegerRow, 3> rows = unimodular_inverse(form.V);
  std::int64_t denominator = 1;
  for (std::size_t i = 0; i < form.rank; ++i) denominator = std::lcm(denominator, form.d[i]);
  std::vector<Subtorus> result;
  IntegerRow n{};
  for (;;) {
    IntegerRow values{};
    for (std::size_t i = 0; i < form.rank; ++i) values[i] = n[i] * (denominator / form.d[i]);
    result.push_back(normalized(rows, values, form.rank, denominator));
    for (std::size_t r = form.rank; r < 3; ++r) result.back().conditions[r] = {};
    std::size_t i = 0;
    while (i < form.rank && ++n[i] == form.d[i]) n[i++] = 0;
    if (i == form.rank) return result;
  }
}

Subtorus subtorus(const SymmetryTables& tables, const Wavevector& k) {
  std::vector<IntegerRow> directions;
  for (const FractionVector& row : k.along) {
    if (row == FractionVector{}) continue;
    const FractionVector primitive = tables.primitive(row);
    std::int64_t denominator = 1;
    for (const Fraction f : primitive)
      denominator =
          checked_multiply(denominator / std::gcd(denominator, f.denominator()), f.denominator());
    IntegerRow& d = directions.emplace_back();
    for (std::size_t i = 0; i < 3; ++i)
      d[i] = checked_multiply(primitive[i].numerator(), denominator / primitive[i].denominator());
  }
  // Conditions: a basis of the integer rows orthogonal to all directions, from the diagonal form.
  const Diagonal form = diagonalized(directions);
  const FractionVector point = tables.primitive(k.constant);
  std::int64_t denominator = 1;
  for (const Fraction f : point)
    denominator =
        checked_multiply(denominator / std::gcd(denominator, f.denominator()), f.denominator());
  std::array<IntegerRow, 3> conditions{};
  IntegerRow values{};
  std::size_t rank = 0;
  for (std::size_t c = form.rank; c < 3; ++c, ++rank) {
    conditions[rank] = {form.V[0][c], form.V[1][c], form.V[2][c]};
    for (std::size_t i = 0; i < 3; ++i) {
      const std::int64_t numerator =
          checked_multiply(point[i].numerator(), denominator / point[i].denominator());
      values[rank] = checked_add(values[rank], checked_multiply(conditions[rank][i], numerator));
    }
  }
  return normalized(conditions, values, rank, denominator);
}

Subtorus image(const Subtorus& torus, const IntMatrix& inverse_A) {
  std::array<IntegerRow, 3> conditions{};
  for (std::size_t r = 0; r < torus.rank; ++r)
    for (std::size_t m = 0; m < 3; ++m) {
      const std::int64_t entry = torus.conditions[r][m];
      if (entry == 0) continue;
      for (std::size_t c = 0; c < 3; ++c)
        conditions[r][c] = checked_add(conditions[r][c], checked_multiply(entry, inverse_A[m][c]));
    }
  return normalized(conditions, torus.values, torus.rank, torus.denominator);
}

bool inside(const Subtorus& small, const Subtorus& large) {
  if (large.rank > small.rank) return false;
  // Each condition of the larger one must be an integer combination of those of the smaller.
  for (std::size_t r = 0; r < large.rank; ++r) {
    Fraction value(large.values[r], large.denominator);
    IntegerRow rest = large.conditions[r];
    for (std::size_t s = 0; s < small.rank; ++s) {
      std::size_t pivot = 0;
      while (small.conditions[s][pivot] == 0) ++pivot;
      const std::int64_t q = rest[pivot] / small.conditions[s][pivot];
      if (q == 0) continue;
      subtract(rest, q, small.conditions[s]);
      value -= Fraction(q) * Fraction(small.values[s], small.denominator);
    }
    if (rest != IntegerRow{} || !value.is_integer()) return false;
  }
  return true;
}

Parametrization parametrization(const Subtorus& torus) {
  // Saturated conditions have the diagonal form (1 | 0): y = values, κ = V y.
  IntegerRow y = torus.values;
  const Diagonal form =
      diagonalized({torus.conditions.begin(),
                    torus.conditions.begin() + static_cast<std::ptrdiff_t>(torus.rank)},
                   y);
  Parametrization result;
  for (std::size_t m = 0; m < 3; ++m)
    for (std::size_t c = 0; c < torus.rank; ++c)
      result.point[m] = checked_add(result.point[m], checked_multiply(form.V[m][c], y[c]));
  for (std::size_t c = torus.rank; c < 3; ++c)
    result.directions.push_back({form.V[0][c], form.V[1][c], form.V[2][c]});
  return result;
}

bool keeps_pointwise(const IntMatrix& A, const Parametrization& form, std::int64_t denominator) {
  const auto moved = [&A](const IntegerRow& v, std::size_t r) {
    std::int64_t sum = -v[r];
    for (std::size_t c = 0; c < 3; ++c) sum += A[r][c] * v[c];
    return sum;
  };
  for (std::size_t r = 0; r < 3; ++r) {
    if (moved(form.point, r) % denominator != 0) return false;
    for (const IntegerRow& direction : form.directions)
      if (moved(direction, r) != 0) return false;
  }
  return true;
}

}  // namespace spinsieve
