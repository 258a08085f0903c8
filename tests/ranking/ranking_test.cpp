#include "ranking/ranking.hpp"

#include <algorithm>
#include <cmath>

#include <gtest/gtest.h>

#include "cases.hpp"
#include "ranking/stability.hpp"

namespace spinsieve {
namespace {

using cases::model_of;
using cases::random_forms;
using cases::simulated;

struct Case {
  FitData data;
  std::vector<CandidateModel> candidates;  ///< The first is the truth.
};

Case random_case(std::uint64_t seed, std::size_t candidates, std::size_t points, double error) {
  RandomDraws random(seed);
  Case result;
  for (std::size_t i = 0; i < candidates; ++i)
    result.candidates.push_back(
        model_of(random_forms(random, 1 + static_cast<Eigen::Index>(i % 3), points)));
  const Eigen::Index n = result.candidates[0].forms.parameters();
  result.data = simulated(random, result.candidates[0], random.normal_vector(n), error);
  return result;
}

TEST(RankingTest, TruthComesOutOnTop) {
  for (std::uint64_t seed = 1; seed <= 20; ++seed) {
    const Case c = random_case(seed, 8, 12, 0.03);
    Executor executor;
    const Ranking result = ranking(c.data, c.candidates, {}, executor);
    EXPECT_EQ(result.candidates[0].candidate, 0U) << seed;
    EXPECT_EQ(result.candidates[0].verdict, Verdict::survives) << seed;
    EXPECT_EQ(result.points, 12U);
    double sum = 0;
    for (const RankedCandidate& r : result.candidates) {
      sum += r.weight;
      ASSERT_TRUE(r.bound.has_value());
      EXPECT_LE(r.bound->value, r.fit.chi2);
    }
    EXPECT_NEAR(sum, 1, 1e-12);
  }
}

TEST(RankingTest, DoesNotDependOnTheExecutor) {
  const Case c = random_case(5, 30, 10, 0.2);
  RankingOptions options;
  options.stability_draws = 20;
  Executor serial;
  const Ranking reference = ranking(c.data, c.candidates, options, serial);
  for (const std::size_t threads : {2U, 3U}) {
    cases::ThreadedExecutor executor(threads);
    const Ranking other = ranking(c.data, c.candidates, options, executor);
    ASSERT_EQ(other.candidates.size(), reference.candidates.size());
    for (std::size_t i = 0; i < other.candidates.size(); ++i) {
      const RankedCandidate& a = reference.candidates[i];
      const RankedCandidate& b = other.candidates[i];
      EXPECT_EQ(a.candidate, b.candidate);
      EXPECT_EQ(a.fit.chi2, b.fit.chi2);
      EXPECT_EQ(a.bound->value, b.bound->value);
      EXPECT_EQ(a.weight, b.weight);
      EXPECT_EQ(a.stability, b.stability);
      EXPECT_EQ(a.ties.size(), b.ties.size());
    }
  }
}

TEST(RankingTest, TiedAndContainedCandidatesSaySo) {
  Case c = random_case(9, 3, 12, 0.03);  // candidates of 1, 2, 3 parameters
  RandomDraws random(10);
  const auto wider = random_forms(random, 3, 12);
  std::vector<Eigen::MatrixXd> forms;
  for (const Eigen::MatrixXd& M : wider) forms.emplace_back(M.topLeftCorner(2, 2));
  const CandidateModel truth = model_of(forms);
  c.candidates[1] = truth;
  c.data = simulated(random, truth, random.normal_vector(2), 0.03, 0);  // no noise: fits are exact
  Eigen::MatrixXd turn(2, 2);
  turn << 2, 1, 0, -1;
  CandidateModel twin;
  twin.forms = truth.forms.pulled_back(turn);
  c.candidates.push_back(twin);             // 3: equal to 1
  c.candidates.push_back(model_of(wider));  // 4: contains 1 and 3
  Executor executor;
  const Ranking result = ranking(c.data, c.candidates, {}, executor);
  // Equal criteria: the place in the input decides.
  EXPECT_EQ(result.candidates[0].candidate, 1U);
  EXPECT_EQ(result.candidates[1].candidate, 3U);
  ASSERT_EQ(result.candidates[0].ties.size(), 2U);
  EXPECT_EQ(result.candidates[0].ties[0].candidate, 3U);
  EXPECT_EQ(result.candidates[0].ties[0].relation, TieRelation::equal);
  EXPECT_EQ(result.candidates[0].ties[0].proof, TieProof::proved);
  EXPECT_EQ(result.candidates[0].ties[1].candidate, 4U);
  EXPECT_EQ(result.candidates[0].ties[1].relation, TieRelation::first_within_second);
  const auto outer = std::ranges::find(result.candidates, 4U, &RankedCandidate::candidate);
  ASSERT_EQ(outer->ties.size(), 2U);
  EXPECT_EQ(outer->ties[0].relation, TieRelation::second_within_first);
}

TEST(RankingTest, WithoutBoundsNothingIsExcluded) {
  const Case c = random_case(3, 12, 10, 0.02);
  RankingOptions options;
  Executor executor;
  const auto count = [](const Ranking& r, Verdict v) {
    return std::ranges::count(r.candidates, v, &RankedCandidate::verdict);
  };
  const Ranking full = ranking(c.data, c.candidates, options, executor);
  EXPECT_GT(count(full, Verdict::excluded), 5);
  options.bounds = BoundEffort::none;
  const Ranking plain = ranking(c.data, c.candidates, options, executor);
  EXPECT_EQ(count(plain, Verdict::excluded), 0);
  EXPECT_EQ(count(plain, Verdict::rejected),
            count(full, Verdict::excluded) + count(full, Verdict::rejected));
  EXPECT_FALSE(plain.candidates[0].bound.has_value());
}

TEST(RankingTest, ClearWinnerIsStable) {
  const Case c = random_case(4, 6, 12, 0.02);
  RankingOptions options;
  options.stability_draws = 40;
  Executor executor;
  const Ranking result = ranking(c.data, c.candidates, options, executor);
  EXPECT_EQ(result.candidates[0].stability, 1.0);
}

TEST(RankingTest, RedrawsHaveTheirCovariance) {
  MeasuredPoint first;
  first.observed = 10;
  first.sigma = 5;
  MeasuredPoint second = first;
  MeasuredPoint third;
  third.observed = 7;
  third.sigma = 2;
  Eigen::MatrixXd C(2, 2);
  C << 2, 1.5, 1.5, 3;
  const FitData data({first, second, third}, {ScaleGroup{}}, {{{0, 1}, C}});
  Eigen::MatrixXd sum = Eigen::MatrixXd::Zero(3, 3);
  const int draws = 20000;
  for (int i = 0; i < draws; ++i) {
    const Eigen::VectorXd d =
        redrawn(data, data.observed(), 3, static_cast<std::uint64_t>(i)).observed() -
        data.observed();
    sum += d * d.transpose();
  }
  EXPECT_LT((sum / draws - data.covariance()).cwiseAbs().maxCoeff(), 0.15);
}

TEST(RankingTest, BootstrapTellsChanceFromNeed) {
  RandomDraws random(61);
  const auto wide_forms = random_forms(random, 3, 12);
  std::vector<Eigen::MatrixXd> small_forms;
  for (const Eigen::MatrixXd& M : wide_forms) small_forms.emplace_back(M.topLeftCorner(2, 2));
  const CandidateModel outer = model_of(wide_forms);
  const CandidateModel inner = model_of(small_forms);
  Executor executor;
  // Truth in the inner model: p is not small; in the outer one: it is.
  const FitData inside = simulated(random, inner, random.normal_vector(2), 0.05);
  const NestedComparison chance = nested_comparison(inside, inner, outer, 100, 1, executor);
  EXPECT_GE(chance.improvement, -1e-6);
  EXPECT_GT(chance.p_value, 0.01);
  Eigen::VectorXd c(3);
  c << 1, 0.5, 1.5;
  const FitData outside = simulated(random, outer, c, 0.05);
  const NestedComparison need = nested_comparison(outside, inner, outer, 100, 1, executor);
  EXPECT_NEAR(need.p_value, 1.0 / 101, 1e-12);
}

TEST(RankingTest, SlowPValuesOfTheTruthAreUniform) {
  // Kolmogorov–Smirnov on 600 seeded cases with amplitudes away from zero.
  std::vector<double> p;
  RandomDraws random(62);
  for (std::size_t trial = 0; trial < 600; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 3);
    const CandidateModel truth = model_of(random_forms(random, n, 8 + trial % 6));
    Eigen::VectorXd c = random.normal_vector(n);
    for (double& value : c) value += value > 0 ? 1 : -1;
    const FitData data = simulated(random, truth, c, 0.01);
    const Fit best = fit(data, truth);
    p.push_back(p_value(best.chi2, data.points().size(), best.effective_parameters).value());
  }
  std::ranges::sort(p);
  double distance = 0;
  const auto count = static_cast<double>(p.size());
  for (std::size_t i = 0; i < p.size(); ++i) {
    const auto rank = static_cast<double>(i);
    distance = std::max({distance, p[i] - rank / count, (rank + 1) / count - p[i]});
  }
  EXPECT_LT(distance,
            1.95 / std::sqrt(count));  // p = 0.001; Smirnov (1948), Ann. Math. Stat. 19, 279
}

}  // namespace
}  // namespace spinsieve
