#include "search/observed_positions.hpp"

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

TEST(ObservedPositionsTest, ToleranceAndZeroShiftFollowTheLine) {
  Measurement measurement;
  measurement.geometry = ConstantWavelength{2};
  measurement.zero_shift_degrees = 0.1;
  ObservedLine wide;
  // 2θ = 60°: q = (4π/2) sin 30° = 3.14159 Å⁻¹.
  wide.position.q = 3.14159265;
  wide.position.q_low = 3.14159265 - 0.0125;
  wide.position.q_high = 3.14159265 + 0.0125;
  wide.foreign = true;
  ObservedLine own = wide;
  own.tolerance_q = 0.002;
  ObservedLine indexed = wide;
  indexed.position.index = ReflectionIndex{{1, 0, 0}, 0, 0};
  measurement.lines = {wide, own, indexed};
  Absence absence;
  absence.position = wide.position;
  measurement.absences = {absence};

  const std::vector<SearchLine> lines = search_lines({&measurement, 1});
  ASSERT_EQ(lines.size(), 2U) << "a line by hkl is no observed position";
  EXPECT_NEAR(lines[0].tolerance, 0.005, 1e-12) << "by hand: 0.025/5";
  EXPECT_TRUE(lines[0].foreign);
  EXPECT_EQ(lines[1].tolerance, 0.002);
  // By hand: the same line at 2θ = 60.1° is at (4π/2) sin 30.05° = 3.146340 Å⁻¹.
  EXPECT_NEAR(lines[0].shift, 3.146340 - 3.141593, 5e-6);
  const std::vector<SearchAbsence> absences = search_absences({&measurement, 1});
  ASSERT_EQ(absences.size(), 1U);
  EXPECT_EQ(absences[0].q_low, wide.position.q_low);

  measurement.geometry = Flight{145};
  EXPECT_EQ(search_lines({&measurement, 1})[0].shift, 0);
}

}  // namespace
}  // namespace spinsieve
