#pragma once

#include <string>
#include <vector>

#include "ranking/arrangement_ranking.hpp"

namespace spinsieve {

/// One point of the data beside what a candidate computes for it.
struct ComparedPoint {
  std::string label;     ///< The entry as the user wrote it.
  std::string contents;  ///< Reflections in its window.
  PointKind kind = PointKind::line;
  double observed = 0;
  double sigma = 0;
  double deviation = 0;  ///< (computed − observed)/sigma; 0 where a one-sided point is met.
  double computed = 0;
  std::size_t measurement = 0;
};

/// All points of the ranking for one of its rows, in the order of the data.
std::vector<ComparedPoint> compared_points(const ArrangementRanking& ranking,
                                           const RankedArrangement& row);

/// The point that speaks most against a row: "q 0.817: 45.2 computed, nothing above 6.0 seen".
/// Empty when every deviation is below 2.
std::string strongest_objection(const ArrangementRanking& ranking, const RankedArrangement& row);

const char* to_string(PointKind kind);  ///< "line", "absence", "at_least", "at_most".

}  // namespace spinsieve
