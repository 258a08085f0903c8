#include "ranking/bound.hpp"

#include <algorithm>
#include <cmath>
#include <set>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "cases.hpp"
#include "ranking/fit.hpp"
#include "ranking/verdict.hpp"

namespace spinsieve {
namespace {

using cases::data_of;
using cases::model_of;
using cases::random_forms;
using cases::simulated;
using ::testing::HasSubstr;

/// Twice-differently made data: those of another candidate, so that fits are bad.
struct Case {
  FitData data;
  CandidateModel model;
};

Case random_case(RandomDraws& random, Eigen::Index n, std::size_t points, double error) {
  Case result;
  result.model = model_of(random_forms(random, n, points));
  const CandidateModel truth = model_of(random_forms(random, n, points));
  result.data = simulated(random, truth, random.normal_vector(n), error);
  return result;
}

TEST(BoundTest, IsNeverAboveChiSquareOfSampledParameters) {
  RandomDraws random(31);
  for (std::uint64_t trial = 0; trial < 60; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 6);
    const Case c = random_case(random, n, 4 + trial % 13, 0.05);
    const Bound bound = lower_bound(c.data, c.model);
    const Fit best = fit(c.data, c.model);
    EXPECT_LE(bound.value, best.chi2) << trial;
    EXPECT_GE(bound.value, 0);
    for (int draw = 0; draw < 1000; ++draw) {
      // Around the minimum as well as anywhere.
      const double spread = std::pow(10.0, -4 + draw % 5);
      const Eigen::VectorXd at = best.parameters + spread * random.normal_vector(n);
      EXPECT_LE(bound.value, chi_squared(c.data, c.model.forms, at, {1.0}));
    }
  }
}

TEST(BoundTest, EqualsTheMinimumForOneParameter) {
  RandomDraws random(32);
  for (std::size_t trial = 0; trial < 100; ++trial) {
    const Case c = random_case(random, 1, 2 + trial % 9, 0.1);
    const double minimum = fit(c.data, c.model).chi2;
    EXPECT_NEAR(lower_bound(c.data, c.model).value, minimum, 1e-9 * (1 + minimum));
  }
  // By hand: the case of FitTest, χ² = 0.5; a negative line leaves χ² = 9 at zero.
  const CandidateModel two =
      model_of({Eigen::MatrixXd::Identity(1, 1), 2 * Eigen::MatrixXd::Identity(1, 1)});
  EXPECT_NEAR(lower_bound(data_of({4, 10}, {1, 2}), two).value, 0.5, 1e-12);
  const CandidateModel one = model_of({Eigen::MatrixXd::Identity(1, 1)});
  EXPECT_NEAR(lower_bound(data_of({-3}, {1}), one).value, 9, 1e-6);
}

TEST(BoundTest, IntensityOfExtinctLinesCannotBeExplained) {
  // The line is extinct for this candidate: χ² = (30/2)² whatever the moments.
  Eigen::MatrixXd seen = Eigen::MatrixXd::Identity(2, 2);
  const CandidateModel model = model_of({Eigen::MatrixXd::Zero(2, 2), seen});
  const Bound bound = lower_bound(data_of({30, 5}, {2, 1}), model);
  EXPECT_NEAR(bound.value, 225, 1e-3);
  EXPECT_LE(bound.value, 225);
  EXPECT_EQ(bound.carriers.front().point, 0U);
  EXPECT_NEAR(bound.carriers.front().share, 1, 1e-6);
  // Even a candidate without any intensity at all has a bound.
  const CandidateModel dark = model_of({Eigen::MatrixXd::Zero(2, 2), Eigen::MatrixXd::Zero(2, 2)});
  EXPECT_NEAR(lower_bound(data_of({30, 5}, {2, 1}), dark).value, 250, 1e-9);
}

TEST(BoundTest, RatioOfTwoLinesIsCertified) {
  // By hand: I = (a² + b², a² + 2b²): the ratio I₂/I₁ lies in [1, 2]. Data 10 ± 1 and 40 ± 1 ask
  // for 4; the nearest point of the edge I₂ = 2 I₁ has χ² = (40 − 20)²/5 = 80.
  Eigen::MatrixXd second = Eigen::MatrixXd::Identity(2, 2);
  second(1, 1) = 2;
  const CandidateModel model = model_of({Eigen::MatrixXd::Identity(2, 2), second});
  const FitData data = data_of({10, 40}, {1, 1});
  EXPECT_NEAR(lower_bound(data, model).value, 80, 1e-3);
  EXPECT_LE(lower_bound(data, model).value, 80);
  EXPECT_NEAR(fit(data, model).chi2, 80, 1e-6);
}

TEST(BoundTest, BranchingMeetsTheMinimum) {
  RandomDraws random(33);
  int improved = 0;
  for (std::uint64_t trial = 0; trial < 24; ++trial) {
    const Eigen::Index n = 2 + static_cast<Eigen::Index>(trial % 2);
    const Case c = random_case(random, n, 4 + trial % 3, 0.03);
    FitOptions thorough;
    thorough.least_starts = 60;
    const double minimum = fit(c.data, c.model, thorough).chi2;
    const double plain = lower_bound(c.data, c.model).value;
    BoundOptions options;
    options.most_cones = 3000;
    options.minimum = minimum;
    const Bound bound = lower_bound(c.data, c.model, options);
    EXPECT_LE(bound.value, minimum);
    EXPECT_NEAR(bound.value, minimum, 2 * closed_gap * (1 + minimum)) << trial;
    if (plain < minimum - 10 * closed_gap * (1 + minimum)) ++improved;
    const CertificateCheck again = check_certificate(bound.certificate, c.data, c.model);
    EXPECT_TRUE(again.valid) << again.failure;
    EXPECT_EQ(again.bound, bound.value);
  }
  EXPECT_GT(improved, 3);  // otherwise the cases are too easy to test branching
}

TEST(BoundTest, BranchingStopsAtTheTargetAndAtTheLimitOfEffort) {
  RandomDraws random(34);
  Case c = random_case(random, 3, 5, 0.02);
  for (int i = 0; i < 100; ++i) {
    c = random_case(random, 3, 5, 0.02);
    const double minimum = fit(c.data, c.model).chi2;
    if (lower_bound(c.data, c.model).value < 0.5 * minimum && minimum > 30) break;
  }
  const double minimum = fit(c.data, c.model).chi2;
  BoundOptions options;
  options.most_cones = 5000;
  options.minimum = minimum;
  const Bound full = lower_bound(c.data, c.model, options);
  options.target = 0.8 * minimum;
  const Bound enough = lower_bound(c.data, c.model, options);
  EXPECT_GT(enough.value, options.target);
  EXPECT_LT(enough.cones, full.cones);
  options.target = 0;
  options.most_cones = 12;
  EXPECT_LE(lower_bound(c.data, c.model, options).cones, 13U);
}

TEST(BoundTest, EveryTamperedCertificateIsCaught) {
  RandomDraws random(35);
  for (std::uint64_t trial = 0; trial < 20; ++trial) {
    const Eigen::Index n = 2 + static_cast<Eigen::Index>(trial % 4);
    const Case c = random_case(random, n, 8, 0.03);
    const Bound bound = lower_bound(c.data, c.model);
    ASSERT_GT(bound.value, 0);
    ASSERT_TRUE(check_certificate(bound.certificate, c.data, c.model).valid);
    const double minimum = fit(c.data, c.model).chi2;
    // A larger multiplier of any line would claim more than the line can carry, or breaks S ⪯ 0.
    for (std::size_t s = 0; s < 8; ++s)
      for (const double change : {0.5, -0.5, 3.0}) {
        BoundCertificate forged = bound.certificate;
        double& lambda = forged.blocks[0].multipliers[0].lambda[s];
        lambda += change * std::abs(lambda) + 1e-3 * change;
        const CertificateCheck check = check_certificate(forged, c.data, c.model);
        EXPECT_LE(check.bound, minimum);
      }
    BoundCertificate forged = bound.certificate;
    for (double& lambda : forged.blocks[0].multipliers[0].lambda) lambda = -lambda;
    EXPECT_FALSE(check_certificate(forged, c.data, c.model).valid);
    forged = bound.certificate;
    forged.blocks[0].multipliers[0].lambda.pop_back();
    EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("missing"));
    forged = bound.certificate;
    forged.blocks[0].basis.col(0) = forged.blocks[0].basis.col(1);
    EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("dependent"));
    forged = bound.certificate;
    forged.blocks.push_back(forged.blocks[0]);
    EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("two blocks"));
    forged = bound.certificate;
    forged.blocks[0].unseen = forged.blocks[0].basis.rightCols(1);
    forged.blocks[0].basis = forged.blocks[0].basis.leftCols(n - 1).eval();
    EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("unseen"));
    forged = bound.certificate;
    forged.blocks[0].multipliers[0].cone = Eigen::MatrixXd::Zero(n, n);
    EXPECT_FALSE(check_certificate(forged, c.data, c.model).valid);
  }
}

TEST(BoundTest, TamperedConesAreCaught) {
  RandomDraws random(36);
  Case c = random_case(random, 3, 5, 0.02);
  BoundOptions options;
  options.most_cones = 60;
  Bound bound = lower_bound(c.data, c.model, options);
  for (int i = 0; i < 100 && bound.certificate.blocks[0].splits.empty(); ++i) {
    c = random_case(random, 3, 5, 0.02);
    bound = lower_bound(c.data, c.model, options);
  }
  ASSERT_FALSE(bound.certificate.blocks[0].splits.empty());
  ASSERT_TRUE(check_certificate(bound.certificate, c.data, c.model).valid);
  BoundCertificate forged = bound.certificate;
  forged.blocks[0].splits[0].multiple = -1;  // the parts would not cover the cone
  EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("not one"));
  forged = bound.certificate;
  forged.blocks[0].multipliers.pop_back();
  EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("cones"));
  forged = bound.certificate;
  forged.blocks[0].multipliers[0].cone(0, 1) = -1;
  EXPECT_THAT(check_certificate(forged, c.data, c.model).failure, HasSubstr("non-negative"));
}

TEST(BoundTest, ListsWithScalesOfTheirOwnAddUp) {
  // By hand: list 1 asks for the ratio of RatioOfTwoLinesIsCertified, list 2 fits.
  Eigen::MatrixXd second = Eigen::MatrixXd::Identity(2, 2);
  second(1, 1) = 2;
  const Eigen::MatrixXd one = Eigen::MatrixXd::Identity(2, 2);
  std::vector<MeasuredPoint> points(4);
  const double values[] = {10, 40, 10, 15};
  for (std::size_t i = 0; i < 4; ++i) {
    points[i].observed = values[i];
    points[i].sigma = 1;
    points[i].scale_group = i / 2;
  }
  const FitData data(points, {ScaleGroup{}, ScaleGroup{}});
  const CandidateModel model = model_of({one, second, one, second});
  const Bound bound = lower_bound(data, model);
  EXPECT_EQ(bound.certificate.blocks.size(), 2U);
  EXPECT_NEAR(bound.value, 80, 1e-3);
  EXPECT_LE(bound.value, fit(data, model).chi2);
}

TEST(BoundTest, LimitsAndEqualitiesRaiseTheBound) {
  // By hand: FitTest.MomentLimitHoldsWhenTheScaleIsKnown and FitTest.EqualMomentsAreEqual.
  CandidateModel limited = model_of({Eigen::MatrixXd::Identity(1, 1)});
  limited.limits.push_back({Eigen::MatrixXd::Identity(1, 1), 2.0});
  EXPECT_NEAR(lower_bound(data_of({4}, {1}, {{ScaleKnowledge::fixed, 1, 0}}), limited).value, 4,
              1e-4);
  Eigen::MatrixXd a = Eigen::MatrixXd::Zero(2, 2);
  a(0, 0) = 1;
  Eigen::MatrixXd b = Eigen::MatrixXd::Zero(2, 2);
  b(1, 1) = 1;
  CandidateModel equal = model_of({a, b});
  equal.equalities.emplace_back(a - b);
  const double bound = lower_bound(data_of({4, 6}, {1, 1}), equal).value;
  EXPECT_NEAR(bound, 2, 1e-3);
  EXPECT_LE(bound, 2);
}

TEST(BoundTest, OneSidedPointsKeepTheirSide) {
  std::vector<MeasuredPoint> points(2);
  points[0].observed = 4;
  points[0].sigma = 1;
  points[1].observed = 6;
  points[1].sigma = 1;
  points[1].kind = PointKind::at_least;
  const Eigen::MatrixXd one = Eigen::MatrixXd::Identity(1, 1);
  const CandidateModel model = model_of({one, one});
  EXPECT_NEAR(lower_bound(FitData(points), model).value, 2, 1e-4);  // as in FitTest
  points[1].kind = PointKind::at_most;
  EXPECT_NEAR(lower_bound(FitData(points), model).value, 0, 1e-4);
  points[1].observed = 2;  // (x − 4)² + (x − 2)²: 2
  EXPECT_NEAR(lower_bound(FitData(points), model).value, 2, 1e-4);
  // A direction that only an "at least" line sees costs no proof.
  points[1].kind = PointKind::at_least;
  Eigen::MatrixXd a = Eigen::MatrixXd::Zero(2, 2);
  a(0, 0) = 1;
  Eigen::MatrixXd b = Eigen::MatrixXd::Zero(2, 2);
  b(1, 1) = 1;
  points[0].observed = -4;
  EXPECT_NEAR(lower_bound(FitData(points), model_of({a, b})).value, 16, 1e-4);
}

TEST(BoundTest, CovarianceEntersTheProof) {
  MeasuredPoint first;
  first.observed = 1;
  first.sigma = std::sqrt(2);
  MeasuredPoint second = first;
  second.observed = 3;
  Eigen::MatrixXd C(2, 2);
  C << 2, 1, 1, 2;
  const FitData data({first, second}, {ScaleGroup{}}, {{{0, 1}, C}});
  const Eigen::MatrixXd one = Eigen::MatrixXd::Identity(1, 1);
  EXPECT_NEAR(lower_bound(data, model_of({one, one})).value, 2, 1e-9);  // as in FitTest
}

TEST(BoundTest, SlowTruthIsNotExcluded) {
  // 2,000 seeded cases: at most 8 truths beyond the quantile at 0.001 (expected 2 or fewer: the
  // bound is below the minimum, which is below χ² of the truth).
  RandomDraws random(37);
  int excluded = 0;
  double bounded = 0;
  for (std::uint64_t trial = 0; trial < 2000; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 5);
    const std::size_t points = 4 + trial % 12;
    const CandidateModel truth = model_of(random_forms(random, n, points));
    const FitData data = simulated(random, truth, random.normal_vector(n), 0.05);
    const double value = lower_bound(data, truth).value;
    bounded += value > 0 ? 1 : 0;
    if (value > chi_squared_quantile(default_significance, points)) ++excluded;
  }
  EXPECT_LE(excluded, 8);
  EXPECT_GT(bounded, 1500);
}

}  // namespace
}  // namespace spinsieve
