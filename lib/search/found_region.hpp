#pragma once

#include <cstddef>
#include <span>
#include <vector>

#include "search/evidence.hpp"
#include "search/line_fit.hpp"
#include "search/reciprocal_space.hpp"
#include "search/search_zone.hpp"

namespace spinsieve {

/// One connected region of k that explains the lines, with its best point.
struct FoundRegion {
  std::size_t dimension = 0;
  std::size_t family = 0;  ///< Index among the fixed subspaces.
  std::vector<int> harmonics = {1};
  std::vector<Box> boxes;
  LineFit fit;
  Vector3 k{};       ///< Components of the best point on a*, b*, c*.
  double reach = 0;  ///< Å⁻¹: no point of the region is farther from k.
  Coincidence evidence;
  std::vector<double> predicted;  ///< Distinct lines, Å⁻¹.
  Vector3 signature{};            ///< The three smallest |τ + k|, Å⁻¹: equal for equivalent k.
};

/// Distance from the best point to the farthest corner of the region, Å⁻¹.
double region_reach(std::span<const Box> boxes, const Vector3& x);

bool region_holds(std::span<const Box> boxes, const Vector3& x, double allowance);

/// The three shortest |τ + k|. A step of length s in k changes each by at most s.
Vector3 signature(const Vector3& k, const ReciprocalSpace& space);

/// Merges regions whose best points are equivalent, and drops a region that contains the best point
/// of one of lower dimension which matches as many lines; the reach of the latter then covers it.
/// `same`: distance in Å⁻¹ below which two best points are one. zones: by family.
std::vector<FoundRegion> without_repetitions(std::vector<FoundRegion> regions,
                                             std::span<const SearchZone> zones,
                                             const ReciprocalSpace& space, double same);

}  // namespace spinsieve
