#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

#include "exact/executor.hpp"
#include "search/search_zone.hpp"

namespace spinsieve {

/// A satellite as a function of the point x of a zone: |start + factor · x| is its |Q|, Å⁻¹.
///
/// start = τ + factor · origin in the frame of the zone; factor is 1 for k, 3 for the harmonic 3k,
/// 0 for a reflection of the lattice itself. ±k need no separate satellites: the set of τ is even.
struct Satellite {
  Vector3 start{};
  double factor = 1;
};

/// The |Q| that explain one line: low ≤ |Q| ≤ high, Å⁻¹, low ≥ 0.
struct LineWindow {
  double low = 0;
  double high = 0;
};

/// The range of |Q|² of a satellite over a box, Å⁻².
struct SquaredRange {
  double low = 0;
  double high = 0;
};

/// Exact up to rounding: a sum of one range per axis.
inline SquaredRange squared_range(const Satellite& satellite, const Box& box) {
  SquaredRange range;
  for (std::size_t i = 0; i < 3; ++i) {
    const double middle = std::abs(satellite.start[i] + satellite.factor * box.centre[i]);
    const double spread = satellite.factor * box.half[i];
    const double far = middle + spread;
    const double near = std::max(middle - spread, 0.0);
    range.low += near * near;
    range.high += far * far;
  }
  return range;
}

struct BranchLimits {
  std::size_t missing = 0;        ///< Windows that may stay empty.
  double leaf_fraction = 0.5;     ///< Boxes end at this part of an undecided window's half-width.
  std::uint64_t boxes = 1 << 28;  ///< Boxes examined at most, over the whole zone.
};

struct BranchResult {
  std::vector<Box> boxes;  ///< Where a solution may lie; all else of the zone holds none.
  bool complete = true;    ///< False when the limit of boxes left some of them coarse.
  std::uint64_t examined = 0;
  std::uint64_t distances = 0;  ///< Distance bounds evaluated, one for each box and satellite.
};

/// Encloses every point of a zone of dimension 1 to 3 at which at most `missing` windows stay
/// empty.
///
/// A box is dropped only when more than that many windows cannot be reached by any satellite from
/// any point of the box. The range of |Q|² over a box is a sum of one exact range per axis; windows
/// are widened by more than its rounding error (rounding_allowance), so that dropping is rigorous.
/// A box in which enough windows are certainly reached is kept whole. The result does not depend on
/// the executor.
BranchResult enclosed(const SearchZone& zone, std::span<const Satellite> satellites,
                      std::span<const LineWindow> windows, const BranchLimits& limits,
                      Executor& executor);

/// The same within one box, serially.
BranchResult enclosed_in(const Box& box, const SearchZone& zone,
                         std::span<const Satellite> satellites, std::span<const LineWindow> windows,
                         const BranchLimits& limits);

/// Allowance on |Q|² relative to the largest |Q|² in play. The computed range passes through fewer
/// than a hundred roundings of 2⁻⁵³ each, 1.2e-14 together.
constexpr double rounding_allowance = 1e-12;

/// Boxes grouped into connected regions; boxes that touch belong together. Regions and their
/// members keep the order of the boxes.
std::vector<std::vector<Box>> connected_regions(std::span<const Box> boxes, std::size_t dimension);

}  // namespace spinsieve
