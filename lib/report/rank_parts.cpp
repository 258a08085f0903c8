#include "report/rank_parts.hpp"

#include <algorithm>
#include <cmath>

#include "report/text.hpp"

namespace spinsieve {
namespace {

constexpr double rounding = 1e-9;  // Of a sum that symmetry makes vanish, in units of sigma.

}  // namespace

std::vector<ComparedPoint> compared_points(const ArrangementRanking& ranking,
                                           const RankedArrangement& row) {
  std::vector<ComparedPoint> points;
  const std::vector<MeasuredPoint>& measured = ranking.data.points();
  for (std::size_t plan = 0; plan < ranking.plans.size(); ++plan) {
    for (const ObservationGroup& group : ranking.plans[plan].groups()) {
      const std::size_t i = points.size();
      ComparedPoint point;
      point.label = group.label;
      point.contents = group.contents;
      point.kind = measured[i].kind;
      point.observed = measured[i].observed;
      point.sigma = measured[i].sigma;
      point.computed = row.fit.computed[static_cast<Eigen::Index>(i)];
      if (std::abs(point.computed) < rounding * point.sigma) point.computed = 0;
      point.measurement = plan;
      point.deviation = (point.computed - point.observed) / point.sigma;
      if ((point.kind == PointKind::at_least && point.deviation > 0) ||
          (point.kind == PointKind::at_most && point.deviation < 0))
        point.deviation = 0;
      points.push_back(std::move(point));
    }
  }
  return points;
}

std::string strongest_objection(const ArrangementRanking& ranking, const RankedArrangement& row) {
  constexpr double worth_naming = 2;  // Standard deviations.
  const std::vector<ComparedPoint> points = compared_points(ranking, row);
  const auto worst = std::ranges::max_element(
      points, {}, [](const ComparedPoint& point) { return std::abs(point.deviation); });
  if (worst == points.end() || std::abs(worst->deviation) < worth_naming) return {};
  std::string text = worst->label + ": " + significant(worst->computed, 3) + " computed, ";
  if (worst->kind == PointKind::absence)
    return text + "at most " + significant(limit_per_sigma * worst->sigma, 3) + " seen";
  return text + with_uncertainty(worst->observed, worst->sigma) + " seen";
}

const char* to_string(PointKind kind) {
  switch (kind) {
    case PointKind::line:
      return "line";
    case PointKind::absence:
      return "absence";
    case PointKind::at_least:
      return "at_least";
    case PointKind::at_most:
      return "at_most";
  }
  return "line";
}

}  // namespace spinsieve
