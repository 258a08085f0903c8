#pragma once

#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

#include "exact/executor.hpp"
#include "search/evidence.hpp"
#include "search/found_region.hpp"

namespace spinsieve {

/// What is asked of one family: the lines, how many may stay unexplained, and which multiples of k
/// carry satellites.
struct FamilyQuestion {
  std::vector<FitLine> lines;
  std::size_t missing = 0;
  std::vector<int> harmonics = {1};
  double cell_tolerance = 0;
  std::uint64_t box_limit = 0;
};

struct FamilyAnswer {
  std::vector<FoundRegion> regions;  ///< Evidence, prediction and family index are left unset.
  bool complete = true;
  double surviving_volume = 0;  ///< (Å⁻¹)^dimension, 1 for a surviving point.
  std::uint64_t boxes = 0;
  std::uint64_t distances = 0;
};

/// The windows of the required lines: tolerance, zero shift and cell tolerance together.
std::vector<LineWindow> line_windows(const FamilyQuestion& question, const ReciprocalSpace& space);

/// Satellites of a zone that reach some |Q| ≤ largest_q.
std::vector<Satellite> satellites_of(const SearchZone& zone, std::span<const LatticePoint> points,
                                     std::span<const int> harmonics, double largest_q);

/// All regions of one zone that explain the lines, each with its best point. A region is dropped
/// after all when boxes a tenth as large show that it holds no point.
FamilyAnswer family_search(const SearchZone& zone, const ReciprocalSpace& space,
                           std::span<const LatticePoint> points, const FamilyQuestion& question,
                           Executor& executor);

}  // namespace spinsieve
