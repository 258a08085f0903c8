#include "search/search_zone.hpp"

#include <algorithm>
#include <cmath>

namespace spinsieve {

namespace {

// Far above the rounding of a scalar product of Å⁻¹ vectors, far below any tolerance.
constexpr double face_allowance = 1e-9;
constexpr std::size_t most_faces = 40;

// Orthonormal rows, the first ones spanning the given directions.
Matrix3 frame_of(const std::vector<Vector3>& directions) {
  Matrix3 axes{};
  std::size_t done = 0;
  std::vector<Vector3> tried = directions;
  tried.insert(tried.end(), {{1, 0, 0}, {0, 1, 0}, {0, 0, 1}});
  for (const Vector3& direction : tried) {
    if (done == 3) break;
    Vector3 rest = direction;
    for (int pass = 0; pass < 2; ++pass)  // twice is enough for full precision
      for (std::size_t i = 0; i < done; ++i) rest = rest - dot(rest, axes[i]) * axes[i];
    const double length = norm(rest);
    if (length > 1e-3 * norm(direction)) axes[done++] = (1 / length) * rest;
  }
  return axes;
}

// A short basis of the same lattice in d ≤ 3 dimensions.
std::vector<Vector3> reduced(std::vector<Vector3> basis) {
  for (bool shorter = true; shorter;) {
    shorter = false;
    for (std::size_t i = 0; i < basis.size(); ++i)
      for (std::size_t j = 0; j < basis.size(); ++j) {
        if (i == j) continue;
        const double steps = std::round(dot(basis[i], basis[j]) / dot(basis[j], basis[j]));
        const Vector3 candidate = basis[i] - steps * basis[j];
        if (!(norm(candidate) < norm(basis[i]) * (1 - 1e-9))) continue;
        basis[i] = candidate;
        shorter = true;
      }
  }
  return basis;
}

double covolume(const std::vector<Vector3>& frame_basis) {
  const auto& b = frame_basis;
  if (b.empty()) return 1;
  if (b.size() == 1) return std::abs(b[0][0]);
  if (b.size() == 2) return std::abs(b[0][0] * b[1][1] - b[0][1] * b[1][0]);
  return std::abs(b[0][0] * (b[1][1] * b[2][2] - b[1][2] * b[2][1]) -
                  b[0][1] * (b[1][0] * b[2][2] - b[1][2] * b[2][0]) +
                  b[0][2] * (b[1][0] * b[2][1] - b[1][1] * b[2][0]));
}

// All lattice steps a n_a + … with small n; more than enough faces for a short basis.
std::vector<Vector3> lattice_steps(const std::vector<Vector3>& basis) {
  constexpr int reach = 2;
  std::vector<Vector3> steps = {Vector3{}};
  for (const Vector3& b : basis) {
    std::vector<Vector3> longer;
    for (const Vector3& step : steps)
      for (int n = -reach; n <= reach; ++n) longer.push_back(step + static_cast<double>(n) * b);
    steps = std::move(longer);
  }
  return steps;
}

// Images of a point of the subspace under the maps that keep it, in the frame, modulo the lattice.
std::vector<Vector3> images_of(const Vector3& k, const FixedSubspace& subspace,
                               const ReciprocalSpace& space, const SearchZone& zone) {
  std::vector<Vector3> images;
  for (const SubspaceMap& map : subspace.maps) {
    const Vector3 image = row_times(k, space.rotations()[map.rotation]) + to_double(map.shift);
    images.push_back(zone.to_frame(space.cartesian(image) - zone.origin));
  }
  return images;
}

}  // namespace

Vector3 SearchZone::to_frame(const Vector3& q) const {
  return {dot(q, axes[0]), dot(q, axes[1]), dot(q, axes[2])};
}

Vector3 SearchZone::from_frame(const Vector3& x) const {
  return origin + x[0] * axes[0] + x[1] * axes[1] + x[2] * axes[2];
}

bool SearchZone::excludes(const Box& box) const {
  return std::ranges::any_of(faces, [&box](const HalfSpace& face) {
    double least = 0;
    for (std::size_t i = 0; i < 3; ++i)
      least += face.normal[i] * box.centre[i] - std::abs(face.normal[i]) * box.half[i];
    return least > face.bound + face_allowance;
  });
}

SearchZone search_zone(const FixedSubspace& subspace, const ReciprocalSpace& space) {
  SearchZone zone;
  zone.dimension = subspace.dimension();
  const Vector3 k0 = to_double(subspace.k.constant);
  zone.origin = space.cartesian(k0);
  std::vector<Vector3> directions;
  for (const FractionVector& row : subspace.lattice)
    directions.push_back(space.cartesian(to_double(row)));
  directions = reduced(directions);
  zone.axes = frame_of(directions);
  if (zone.dimension == 0) return zone;

  std::vector<Vector3> frame_basis;
  double reach = 0;
  for (const Vector3& direction : directions) {
    frame_basis.push_back(zone.to_frame(direction));
    reach += dot(direction, direction);
  }
  reach = std::sqrt(reach) / 2;
  zone.volume = covolume(frame_basis) * static_cast<double>(subspace.cogroup.size()) /
                static_cast<double>(subspace.maps.size());

  // The generic point that keeps farthest from its images, of a fixed additive sequence.
  const std::vector<Vector3> steps = lattice_steps(frame_basis);
  constexpr Vector3 generators = {0.8191725133961645, 0.6710436067037893, 0.5497004779019703};
  std::vector<Vector3> others;
  Vector3 point{};
  double farthest = -1;
  for (int trial = 1; trial <= 60; ++trial) {
    Vector3 k = k0;
    for (std::size_t i = 0; i < zone.dimension; ++i) {
      const double y = std::fmod(trial * generators[i], 1.0) / 2;
      k = k + y * space.components(directions[i]);
    }
    const Vector3 x = zone.to_frame(space.cartesian(k) - zone.origin);
    std::vector<Vector3> found;
    double nearest = 2 * reach;
    for (const Vector3& image : images_of(k, subspace, space, zone))
      for (const Vector3& step : steps) {
        const Vector3 other = image + step;
        const double distance = norm(other - x);
        // An image this near is the point itself under its own co-group.
        if (distance < 1e-7 * reach || distance > 2 * reach) continue;
        nearest = std::min(nearest, distance);
        found.push_back(other);
      }
    if (nearest <= farthest) continue;
    farthest = nearest;
    point = x;
    others = std::move(found);
  }
  std::ranges::sort(others, [&point](const Vector3& a, const Vector3& b) {
    const double da = norm(a - point);
    const double db = norm(b - point);
    return da != db ? da < db : a < b;
  });
  for (const Vector3& other : others) {
    if (zone.faces.size() == most_faces) break;
    const double distance = norm(other - point);
    const Vector3 normal = (1 / distance) * (other - point);
    const double bound = dot(normal, other + point) / 2;
    const bool repeated = std::ranges::any_of(zone.faces, [&](const HalfSpace& face) {
      return std::abs(face.bound - bound) < 1e-9 && norm(face.normal - normal) < 1e-9;
    });
    if (!repeated) zone.faces.push_back({normal, bound});
  }
  zone.bounds.centre = point;
  for (std::size_t i = 0; i < zone.dimension; ++i) zone.bounds.half[i] = reach;
  return zone;
}

}  // namespace spinsieve
