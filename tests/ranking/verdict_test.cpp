#include "ranking/verdict.hpp"

#include <cmath>
#include <limits>

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

TEST(VerdictTest, TailsMatchPrintedTables) {
  const struct {
    double probability;
    std::size_t degrees;
    double quantile;
    const char* source;
  } table[] = {
      {0.05, 1, 3.841, "Abramowitz & Stegun (1964), Table 26.8"},
      {0.001, 1, 10.828, "Abramowitz & Stegun (1964), Table 26.8"},
      {0.001, 10, 29.588, "Abramowitz & Stegun (1964), Table 26.8"},
      {0.05, 30, 43.773, "Abramowitz & Stegun (1964), Table 26.8"},
      {0.5, 2, 1.38629, "closed form 2 ln 2 for two degrees"},
  };
  for (const auto& row : table) {
    SCOPED_TRACE(row.source);
    EXPECT_NEAR(chi_squared_quantile(row.probability, row.degrees), row.quantile, 6e-4);
    EXPECT_NEAR(chi_squared_tail(row.quantile, row.degrees), row.probability, 1e-4);
  }
}

TEST(VerdictTest, EachVerdictHasItsCase) {
  // 10 points: quantile at p = 0.001 is 29.59; 8 degrees: 26.12.
  EXPECT_EQ(verdict(9, 8.9, 10, 2), Verdict::survives);
  EXPECT_EQ(verdict(26.0, std::nullopt, 10, 2), Verdict::survives);
  EXPECT_EQ(verdict(26.3, std::nullopt, 10, 2), Verdict::rejected);
  EXPECT_EQ(verdict(50, 29.5, 10, 2), Verdict::rejected);
  EXPECT_EQ(verdict(50, 29.6, 10, 2), Verdict::excluded);
  EXPECT_EQ(verdict(0, std::nullopt, 3, 3), Verdict::undetermined);
  EXPECT_EQ(verdict(0, std::nullopt, 3, 5), Verdict::undetermined);
  EXPECT_EQ(verdict(40, std::nullopt, 3, 3), Verdict::rejected);
  EXPECT_EQ(verdict(40, 39.0, 3, 3), Verdict::excluded);
  EXPECT_EQ(verdict(0, std::nullopt, 0, 0), Verdict::undetermined);
  EXPECT_FALSE(p_value(1, 2, 2).has_value());
  EXPECT_NEAR(p_value(3.841, 3, 2).value(), 0.05, 1e-4);
}

TEST(VerdictTest, WeightsFollowTheDifferenceOfCriteria) {
  const double criteria[] = {akaike(10, 20, 2), akaike(10, 20, 3)};  // differ by 2
  const std::vector<double> weights = akaike_weights(criteria);
  EXPECT_NEAR(weights[0] / weights[1], std::exp(1.0), 1e-12);
  EXPECT_NEAR(weights[0] + weights[1], 1, 1e-15);
}

TEST(VerdictTest, FittedErrorScaleUsesTheSmallSampleForm) {
  // By hand: N = 10, χ² = 20, p = 2, K = 3: 10 ln 2 + 6 + 24/6.
  EXPECT_NEAR(akaike(20, 10, 2, ErrorScale::fitted), 10 * std::log(2.0) + 10, 1e-12);
  EXPECT_TRUE(std::isinf(akaike(20, 4, 2, ErrorScale::fitted)));
  const double infinite = std::numeric_limits<double>::infinity();
  const double criteria[] = {infinite, infinite};
  EXPECT_EQ(akaike_weights(criteria), (std::vector<double>{0.5, 0.5}));
}

}  // namespace
}  // namespace spinsieve
