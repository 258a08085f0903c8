#include "report/rank_parts.hpp"

#include <gtest/gtest.h>

#include "crystal/space_group.hpp"

namespace spinsieve {
namespace {

/// A cubic crystal of 4 Å with k = (0, 0, 1/2) and three entries: two lines and an absence.
ArrangementRanking small_ranking() {
  const Cell cell(4, 4, 4, 90, 90, 90);
  const SpaceGroup group = SpaceGroup::from_number(47);
  const std::vector<Arm> arms = {{{Fraction(0), Fraction(0), Fraction(1, 2)}, 0}};
  Measurement measurement;
  const auto position = [](double q, const char* text) {
    LinePosition result;
    result.q = q;
    result.q_low = q * 0.995;
    result.q_high = q * 1.005;
    result.text = text;
    return result;
  };
  ObservedLine strong;
  strong.position = position(0.7854, "q 0.785");  // (0 0 1/2)
  strong.intensity = 100;
  strong.sigma = 4;
  ObservedLine weak = strong;
  weak.position = position(1.7562, "q 1.756");  // (1 0 1/2)
  weak.intensity = 30;
  weak.sigma = 2;
  Absence absence;
  absence.position = position(2.3562, "q 2.356");  // (0 0 3/2), (1 1 1/2)
  absence.below = 16.45;
  measurement.lines = {strong, weak};
  measurement.absences = {absence};
  ArrangementRanking ranking;
  ranking.plans.emplace_back(cell, group, arms, measurement);
  ranking.data = FitData({{100, 4, PointKind::line, 0, "q 0.785"},
                          {30, 2, PointKind::line, 0, "q 1.756"},
                          {0, 10, PointKind::absence, 0, "q 2.356"}});
  return ranking;
}

RankedArrangement row_with(double a, double b, double c) {
  RankedArrangement row;
  row.fit.computed = Eigen::Vector3d(a, b, c);
  return row;
}

TEST(RankPartsTest, DeviationsCountInStandardDeviations) {
  const ArrangementRanking ranking = small_ranking();
  const auto points = compared_points(ranking, row_with(108, 25, 1e-12));
  ASSERT_EQ(points.size(), 3U);
  EXPECT_DOUBLE_EQ(points[0].deviation, 2);
  EXPECT_DOUBLE_EQ(points[1].deviation, -2.5);
  EXPECT_EQ(points[0].label, "q 0.785");
  EXPECT_EQ(points[2].computed, 0);  // Rounding is not an intensity.
}

TEST(RankPartsTest, TheStrongestObjectionIsNamed) {
  const ArrangementRanking ranking = small_ranking();
  EXPECT_EQ(strongest_objection(ranking, row_with(101, 31, 2)), "");
  EXPECT_EQ(strongest_objection(ranking, row_with(108, 25, 2)), "q 1.756: 25 computed, 30(2) seen");
  EXPECT_EQ(strongest_objection(ranking, row_with(108, 25, 45)),
            "q 2.356: 45 computed, at most 16.4 seen");
}

}  // namespace
}  // namespace spinsieve
