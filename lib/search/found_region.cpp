#include "search/found_region.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace spinsieve {

double region_reach(std::span<const Box> boxes, const Vector3& x) {
  double reach = 0;
  for (const Box& box : boxes) {
    Vector3 far{};
    for (std::size_t i = 0; i < 3; ++i) far[i] = std::abs(box.centre[i] - x[i]) + box.half[i];
    reach = std::max(reach, norm(far));
  }
  return reach;
}

bool region_holds(std::span<const Box> boxes, const Vector3& x, double allowance) {
  return std::ranges::any_of(boxes, [&](const Box& box) {
    for (std::size_t i = 0; i < 3; ++i)
      if (std::abs(x[i] - box.centre[i]) > box.half[i] + allowance) return false;
    return true;
  });
}

Vector3 signature(const Vector3& k, const ReciprocalSpace& space) {
  const Vector3 rest = space.cartesian(k - space.nearest_point(k));
  Vector3 least = {1e9, 1e9, 1e9};
  // Points this near the origin hold the three nearest to any point of the zone.
  for (const Vector3& point : space.neighbours()) {
    double length = norm(point + rest);
    for (double& slot : least)
      if (length < slot) std::swap(length, slot);
  }
  return least;
}

namespace {

// A point of another region, in the frame of this one, when the region may hold an image of it.
bool holds_image(const FoundRegion& region, const SearchZone& zone, const Vector3& k,
                 const Vector3& its_signature, const ReciprocalSpace& space, double same,
                 Vector3& x) {
  for (std::size_t i = 0; i < 3; ++i)
    if (std::abs(its_signature[i] - region.signature[i]) > region.reach + same) return false;
  const ReciprocalSpace::Image image = space.nearest_image(k, region.k);
  if (image.distance > region.reach + same) return false;
  x = zone.to_frame(space.cartesian(image.k) - zone.origin);
  return region_holds(region.boxes, x, same);
}

}  // namespace

std::vector<FoundRegion> without_repetitions(std::vector<FoundRegion> regions,
                                             std::span<const SearchZone> zones,
                                             const ReciprocalSpace& space, double same) {
  std::vector<std::size_t> order(regions.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::ranges::stable_sort(order, [&regions](std::size_t a, std::size_t b) {
    if (regions[a].dimension != regions[b].dimension)
      return regions[a].dimension < regions[b].dimension;
    return regions[a].signature[0] < regions[b].signature[0];
  });
  std::vector<std::size_t> kept;
  for (const std::size_t index : order) {
    FoundRegion& region = regions[index];
    bool repeated = false;
    for (std::size_t i = kept.size(); i-- > 0 && !repeated;) {
      FoundRegion& other = regions[kept[i]];
      if (other.dimension == region.dimension) {
        if (region.signature[0] - other.signature[0] > same) {
          // Sorted: no earlier one of this dimension is nearer.
          while (i > 0 && regions[kept[i - 1]].dimension == region.dimension) --i;
          continue;
        }
        if (std::abs(region.signature[1] - other.signature[1]) > same ||
            std::abs(region.signature[2] - other.signature[2]) > same ||
            space.nearest_image(other.k, region.k).distance > same)
          continue;
        other.reach = std::max(other.reach, region.reach + same);
        repeated = true;
      } else if (other.fit.matched >= region.fit.matched) {
        Vector3 x{};
        if (!holds_image(region, zones[region.family], other.k, other.signature, space, same, x))
          continue;
        other.reach = std::max(other.reach, region_reach(region.boxes, x));
        repeated = true;
      }
    }
    if (!repeated) kept.push_back(index);
  }
  std::vector<FoundRegion> result;
  for (const std::size_t index : kept) result.push_back(std::move(regions[index]));
  return result;
}

}  // namespace spinsieve
