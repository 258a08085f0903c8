#include "scattering/extraction.hpp"

#include <random>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "scattering/explicit_field.hpp"

namespace spinsieve {
namespace {

using testing::ElementsAre;
using testing::HasSubstr;
using testing::ThrowsMessage;

Measurement measurement() {
  Measurement result;
  result.geometry = ConstantWavelength{2.4};
  result.resolution = Caglioti{0.1, -0.05, 0.09};
  return result;
}

ObservedPattern pattern(const std::vector<ProfileLine>& lines, double from, double to) {
  ObservedPattern result;
  for (double x = from; x < to; x += 0.05) result.x.push_back(x);
  result.y = profile(measurement(), lines, result.x, 0.3);
  for (std::size_t i = 0; i < result.x.size(); ++i) {
    result.y[i] += 20 + 0.1 * result.x[i];
    result.sigma.push_back(std::sqrt(result.y[i]));
  }
  return result;
}

ExtractionOptions options() {
  ExtractionOptions result;
  result.eta = 0.3;
  return result;
}

TEST(ExtractionTest, OverlappingLinesComeBack) {
  const std::vector<ProfileLine> lines = {{1.2, 40}, {1.215, 25}, {2.0, 0}, {2.4, 300}};
  const std::vector<double> q = {1.2, 1.215, 2.0, 2.4};
  const auto result = extract_intensities(measurement(), pattern(lines, 15, 80), q, options());
  ASSERT_EQ(result.groups.size(), 4U);
  for (Eigen::Index i = 0; i < 4; ++i)
    EXPECT_NEAR(result.intensity(i), lines[static_cast<std::size_t>(i)].intensity, 1e-8);
  EXPECT_NEAR(result.chi2, 0, 1e-12);
  EXPECT_NEAR(result.background.front(), 20 + 0.1 * 15, 1e-9);
  // Overlapping neighbours are anticorrelated, distant lines hardly.
  const auto correlation = [&](Eigen::Index i, Eigen::Index j) {
    return result.covariance(i, j) / std::sqrt(result.covariance(i, i) * result.covariance(j, j));
  };
  EXPECT_LT(correlation(0, 1), -0.2);
  EXPECT_NEAR(correlation(0, 3), 0, 0.05);
}

TEST(ExtractionTest, CovarianceIsTheSpreadOfRepeatedMeasurements) {
  const std::vector<ProfileLine> lines = {{1.2, 400}, {1.215, 250}};
  const std::vector<double> q = {1.2, 1.215};
  const ObservedPattern exact = pattern(lines, 22, 32);
  std::mt19937 random(5);
  std::normal_distribution<double> normal;
  Eigen::Matrix2d spread = Eigen::Matrix2d::Zero();
  ExtractedIntensities last;
  const int repeats = 2000;
  for (int r = 0; r < repeats; ++r) {
    ObservedPattern noisy = exact;
    for (std::size_t i = 0; i < noisy.y.size(); ++i) noisy.y[i] += noisy.sigma[i] * normal(random);
    last = extract_intensities(measurement(), noisy, q, options());
    const Eigen::Vector2d off = last.intensity - Eigen::Vector2d(400, 250);
    spread += off * off.transpose() / repeats;
  }
  EXPECT_NEAR(spread(0, 0) / last.covariance(0, 0), 1, 0.15);
  EXPECT_NEAR(spread(1, 1) / last.covariance(1, 1), 1, 0.15);
  const double unit = std::sqrt(last.covariance(0, 0) * last.covariance(1, 1));
  EXPECT_NEAR(spread(0, 1) / unit, last.covariance(0, 1) / unit, 0.07);
}

TEST(ExtractionTest, UnresolvedLinesShareAnIntensityAndGapsAreSaid) {
  const std::vector<ProfileLine> lines = {{1.2, 40}, {1.2001, 25}, {2.4, 300}};
  const std::vector<double> q = {1.2, 1.2001, 2.4, 3.9, 5.3};  // 5.3 is out of reach at 2.4 Å
  const auto result = extract_intensities(measurement(), pattern(lines, 15, 80), q, options());
  ASSERT_EQ(result.groups.size(), 2U);
  EXPECT_THAT(result.groups[0].lines, ElementsAre(0, 1));
  EXPECT_NEAR(result.intensity(0), 65, 0.05);
  EXPECT_THAT(result.unmeasured, ElementsAre(3, 4));
}

TEST(ExtractionTest, UnusablePatternsAreErrors) {
  ObservedPattern good = pattern({{1.2, 40}}, 20, 40);
  const std::vector<double> q = {1.2};
  const auto run = [&q](const ObservedPattern& p) {
    return [&q, p] { extract_intensities(measurement(), p, q, options()); };
  };
  ObservedPattern bad = good;
  bad.sigma[3] = 0;
  EXPECT_THAT(run(bad), ThrowsMessage<Error>(HasSubstr("point 4 of a pattern has sigma 0")));
  bad = good;
  bad.x[7] = bad.x[6];
  EXPECT_THAT(run(bad),
              ThrowsMessage<Error>(HasSubstr("point 8 of a pattern does not lie beyond")));
  bad = good;
  bad.sigma.pop_back();
  EXPECT_THAT(run(bad), ThrowsMessage<Error>(HasSubstr("columns of unequal length")));
  bad = good;
  bad.x.resize(4);
  bad.y.resize(4);
  bad.sigma.resize(4);
  bad.x = {26.4, 26.5, 26.55, 26.6};
  EXPECT_THAT(run(bad), ThrowsMessage<Error>(HasSubstr("4 points of a pattern for 4 unknowns")));
  ExtractionOptions never;
  never.merge_fraction = 0;
  const std::vector<double> twins = {1.2, 1.2 + 1e-12};
  EXPECT_THAT([&] { extract_intensities(measurement(), good, twins, never); },
              ThrowsMessage<Error>(HasSubstr("cannot tell some of its lines apart")));
}

TEST(ExplicitFieldTest, GroupsByWavevectorAndRefusesWhatHasNoMeaning) {
  const SpaceGroup group = parse_space_group("I 4/m m m");
  const FractionVector q = {0, 0, Fraction(2, 7)};
  const Fraction half(1, 2);
  std::vector<ListedComponent> listed(2);
  listed[0].k = q;
  listed[0].moment = {1, {0, 1}, 0};
  listed[1].moment = {0, 0, 2};
  const MomentField field = explicit_field(group, listed);
  ASSERT_EQ(field.arms.size(), 2U);
  EXPECT_FALSE(field.arms[0].self_conjugate);
  EXPECT_TRUE(field.arms[1].self_conjugate);
  EXPECT_EQ(field.arms[0].component(0, 0)[1], std::complex<double>(0, 1));
  std::vector<ListedComponent> twice = listed;
  twice.push_back(listed[0]);
  twice.back().position = {half, half, half};  // the centring vector away: the same atom
  EXPECT_THAT([&] { explicit_field(group, twice); },
              ThrowsMessage<Error>(HasSubstr("listed twice for one wavevector")));
  listed[1].moment = {0, 0, {2, 1}};
  EXPECT_THAT([&] { explicit_field(group, listed); },
              ThrowsMessage<Error>(HasSubstr("imaginary part")));
}

}  // namespace
}  // namespace spinsieve
