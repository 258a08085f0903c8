#include "search/presentation.hpp"

#include <algorithm>
#include <cmath>
#include <optional>
#include <tuple>

namespace spinsieve {

namespace {

// Smaller reads better. Lengths that differ by rounding alone count as equal.
using Readability = std::tuple<std::int64_t, int, std::array<std::int64_t, 3>>;

Readability readability(const Vector3& k, const ReciprocalSpace& space) {
  constexpr double unit = 1e-7;
  Readability result{std::llround(norm(space.cartesian(k)) / unit), 0, {}};
  for (std::size_t i = 0; i < 3; ++i) {
    const std::int64_t component = std::llround(k[i] / unit);
    std::get<1>(result) += component < 0 ? 1 : 0;
    std::get<2>(result)[i] = -component;
  }
  return result;
}

// Calls use(k + step) for all small lattice steps along the directions.
template <typename Use>
void for_each_step(const Vector3& k, std::span<const Vector3> directions, const Use& use) {
  constexpr int reach = 2;
  if (directions.empty()) {
    use(k);
    return;
  }
  for (int n = -reach; n <= reach; ++n)
    for_each_step(k + static_cast<double>(n) * directions.front(), directions.subspan(1), use);
}

// A vector without the rounding noise of exact zeros and simple constants.
Vector3 clean(const Vector3& k, const Wavevector& family) {
  Vector3 result = to_double(family.constant);
  const std::vector<double> values = free_values(family, k);
  for (std::size_t p = 0; p < values.size(); ++p)
    result = result + values[p] * to_double(family.along[p]);
  return result;
}

// The family moved by a lattice vector, its constants free of whole steps along itself.
Wavevector shifted(const Wavevector& family, const Vector3& by) {
  Wavevector result = family;
  for (std::size_t i = 0; i < 3; ++i)
    result.constant[i] += Fraction(static_cast<std::int64_t>(std::llround(by[i])));
  for (const FractionVector& row : result.along) {
    std::size_t pivot = 0;
    while (pivot < 3 && row[pivot].is_zero()) ++pivot;
    if (pivot < 3) result.constant = result.constant - (result.constant[pivot] / row[pivot]) * row;
  }
  return result;
}

}  // namespace

std::vector<double> free_values(const Wavevector& family, const Vector3& k) {
  // Rows of `along` are in echelon form up to a rotation: solve the normal equations of the rest.
  std::vector<Vector3> rows;
  for (const FractionVector& row : family.along)
    if (row != FractionVector{}) rows.push_back(to_double(row));
  const Vector3 rest = k - to_double(family.constant);
  const std::size_t n = rows.size();
  std::array<std::array<double, 4>, 3> system{};
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t j = 0; j < n; ++j) system[i][j] = dot(rows[i], rows[j]);
    system[i][3] = dot(rows[i], rest);
  }
  for (std::size_t p = 0; p < n; ++p)  // positive definite: no pivoting needed
    for (std::size_t i = 0; i < n; ++i) {
      if (i == p) continue;
      const double factor = system[i][p] / system[p][p];
      for (std::size_t j = 0; j < 4; ++j) system[i][j] -= factor * system[p][j];
    }
  std::vector<double> values;
  for (std::size_t i = 0; i < n; ++i) values.push_back(system[i][3] / system[i][i]);
  return values;
}

FractionVector nearest_member(const Wavevector& family, const Vector3& k, int denominator) {
  FractionVector member = family.constant;
  const std::vector<double> values = free_values(family, k);
  std::size_t p = 0;
  for (const FractionVector& row : family.along) {
    if (row == FractionVector{}) continue;
    const Fraction value(std::llround(values[p++] * denominator), denominator);
    member = member + value * row;
  }
  return member;
}

LocatedVector presented(const Vector3& k, const FixedSubspace& family,
                        const ReciprocalSpace& space) {
  LocatedVector result;
  result.family = family.k;
  if (family.dimension() == 0) {
    result.k = to_double(family.k.constant);
    result.exact = family.k.constant;
    return result;
  }
  std::vector<Vector3> directions;
  for (const FractionVector& row : family.lattice) directions.push_back(to_double(row));
  std::optional<Readability> best;
  for (const SubspaceMap& map : family.maps) {
    Vector3 image = row_times(k, space.rotations()[map.rotation]) + to_double(map.shift);
    // Near the origin of the family, so that a few steps reach its shortest members.
    Wavevector steps;
    for (std::size_t i = 0; i < family.lattice.size(); ++i) steps.along[i] = family.lattice[i];
    steps.constant = family.k.constant;
    const std::vector<double> away = free_values(steps, image);
    for (std::size_t i = 0; i < away.size(); ++i)
      image = image - std::round(away[i]) * directions[i];
    for_each_step(image, directions, [&](const Vector3& candidate) {
      const Readability reads = readability(candidate, space);
      if (best.has_value() && *best <= reads) return;
      best = reads;
      result.k = candidate;
    });
  }
  result.k = clean(result.k, family.k);
  return result;
}

std::vector<LocatedVector> tied_stars(const LocatedVector& vector, const SpaceGroup& group,
                                      const ReciprocalSpace& space) {
  constexpr double same = 1e-6;  // Å⁻¹, far below any position tolerance
  std::vector<LocatedVector> stars = {vector};
  for (const IntMatrix& R : space.rotations()) {
    const Vector3 image = row_times(vector.k, R);
    bool known = false;
    for (std::size_t s = 0; s < stars.size() && !known; ++s)
      for (const Operation& operation : group.operations()) {
        const Vector3 arm = row_times(stars[s].k, operation.rotation);
        for (const double sign : {1.0, -1.0}) {
          const Vector3 difference = image - sign * arm;
          const Vector3 rest = difference - space.nearest_point(difference);
          known = known || norm(space.cartesian(rest)) < same;
        }
        if (known) break;
      }
    if (known) continue;
    const Vector3 step = -1.0 * space.nearest_point(image);
    LocatedVector star;
    star.family = shifted(row_times(vector.family, R), step);
    star.k = image + step;
    if (vector.exact.has_value()) {
      star.exact = star.family.constant;
      star.k = to_double(*star.exact);
    }
    stars.push_back(star);
  }
  stars.erase(stars.begin());
  return stars;
}

}  // namespace spinsieve
