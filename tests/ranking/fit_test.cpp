#include "ranking/fit.hpp"

#include <algorithm>
#include <cmath>
#include <string>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "cases.hpp"
#include "exact/error.hpp"
#include "ranking/chi_square.hpp"
#include "ranking/minimise.hpp"

namespace spinsieve {
namespace {

using cases::data_of;
using cases::model_of;
using cases::random_forms;
using cases::simulated;
using ::testing::HasSubstr;
using ::testing::ThrowsMessage;

Eigen::MatrixXd matrix(Eigen::Index n, std::initializer_list<double> entries) {
  Eigen::MatrixXd result(n, n);
  Eigen::Index i = 0;
  for (const double entry : entries) {
    result(i / n, i % n) = entry;
    ++i;
  }
  return result;
}

/// The χ² of the definition, without any of the library's reductions.
double plain_chi2(const FitData& data, const CandidateModel& model, const Eigen::VectorXd& c) {
  double sum = 0;
  for (Eigen::Index s = 0; s < model.forms.size(); ++s) {
    const MeasuredPoint& point = data.points()[static_cast<std::size_t>(s)];
    const double deviation = (c.dot(model.forms.form(s) * c) - point.observed) / point.sigma;
    if (point.kind != PointKind::at_least || deviation < 0) sum += deviation * deviation;
  }
  return sum;
}

TEST(FitTest, OneParameterIsTheWeightedMeanOfSquares) {
  // By hand: I = (c², 2c²), y = (4 ± 1, 10 ± 2): x = c² minimises (x − 4)² + (2x − 10)²/4,
  // 2(x − 4) + 2(x − 5) = 0, x = 4.5, χ² = 0.25 + 0.25.
  const CandidateModel model = model_of({matrix(1, {1}), matrix(1, {2})});
  const Fit result = fit(data_of({4, 10}, {1, 2}), model);
  EXPECT_NEAR(result.parameters(0), std::sqrt(4.5), 1e-12);
  EXPECT_NEAR(result.chi2, 0.5, 1e-12);
  EXPECT_EQ(result.stop, FitStop::closed_form);
  EXPECT_EQ(result.effective_parameters, 1U);
  // var(x) = 1/(1 + 1), dx = 2c dc.
  EXPECT_NEAR(std::sqrt(result.covariance(0, 0)), std::sqrt(0.5) / (2 * std::sqrt(4.5)), 1e-12);
}

TEST(FitTest, NegativeIntensitiesLeaveTheMomentAtZero) {
  const CandidateModel one = model_of({matrix(1, {1})});
  const Fit result = fit(data_of({-3}, {1}), one);
  EXPECT_EQ(result.parameters(0), 0);
  EXPECT_NEAR(result.chi2, 9, 1e-12);
  const CandidateModel two = model_of({matrix(2, {1, 0, 0, 2}), matrix(2, {2, 1, 1, 1})});
  const Fit both = fit(data_of({-3, -4}, {1, 2}), two);
  EXPECT_NEAR(both.chi2, 13, 1e-9);
  EXPECT_LT(both.parameters.norm(), 1e-6);
}

TEST(FitTest, AmplitudesOfTwoSeparateLinesAreSquareRoots) {
  // By hand: line 1 sees only a, line 2 only b, line 3 is an absence that sees both.
  const CandidateModel model =
      model_of({matrix(2, {4, 0, 0, 0}), matrix(2, {0, 0, 0, 9}), matrix(2, {0, 0, 0, 0})});
  const Fit result = fit(data_of({16, 81, 0}, {1, 1, 1}), model);
  EXPECT_NEAR(std::abs(result.parameters(0)), 2, 1e-9);
  EXPECT_NEAR(std::abs(result.parameters(1)), 3, 1e-9);
  EXPECT_NEAR(result.chi2, 0, 1e-12);
  EXPECT_EQ(result.effective_parameters, 2U);
  // dI/da = 8a = 16, so sigma(a) = 1/16.
  EXPECT_NEAR(std::sqrt(result.covariance(0, 0)), 1.0 / 16, 1e-9);
  EXPECT_NEAR(std::sqrt(result.covariance(1, 1)), 1.0 / 54, 1e-9);
  EXPECT_EQ(result.undetermined.cols(), 0);
}

TEST(FitTest, DerivativesAgreeWithFiniteDifferences) {
  RandomDraws random(11);
  for (std::uint64_t trial = 0; trial < 40; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 5);
    const std::size_t points = 3 + trial % 20;
    CandidateModel model = model_of(random_forms(random, n, points));
    model.limits.push_back({cases::random_form(random, n, n), 0.5});
    model.equalities.push_back(cases::random_form(random, n, 1) - cases::random_form(random, n, 1));
    std::vector<MeasuredPoint> list(points);
    for (std::size_t i = 0; i < points; ++i) {
      list[i].observed = 3 + 2 * random.normal();
      list[i].sigma = 0.5 + random.uniform();
      list[i].scale_group = i % 3;
      if (i % 4 == 3) list[i].kind = PointKind::at_least;
    }
    const FitData data(list, {{ScaleKnowledge::fixed, 1.5, 0},
                              {ScaleKnowledge::free, 1, 0},
                              {ScaleKnowledge::measured, 2, 0.3}});
    const ReducedProblem problem(data, model);
    ChiSquare objective(problem);
    objective.reset(2.5);
    Eigen::VectorXd x = random.normal_vector(objective.size());
    objective.update_multipliers(x, 3.5);
    Eigen::VectorXd gradient;
    Eigen::MatrixXd hessian;
    objective.derivatives(x, gradient, hessian);
    const double step = 1e-5;
    Eigen::VectorXd other_gradient;
    Eigen::VectorXd back_gradient;
    Eigen::MatrixXd unused;
    for (Eigen::Index i = 0; i < x.size(); ++i) {
      Eigen::VectorXd up = x;
      Eigen::VectorXd down = x;
      up(i) += step;
      down(i) -= step;
      const double slope = (objective.value(up) - objective.value(down)) / (2 * step);
      EXPECT_NEAR(gradient(i), slope, 1e-5 * (1 + gradient.norm()));
      objective.derivatives(up, other_gradient, unused);
      objective.derivatives(down, back_gradient, unused);
      const Eigen::VectorXd curvature = (other_gradient - back_gradient) / (2 * step);
      EXPECT_LT((hessian.col(i) - curvature).norm(), 1e-4 * (1 + hessian.norm())) << trial;
    }
    // The Jacobian reproduces the gradient: ∇χ² = 2 Jᵀ r, here through χ² itself.
    EXPECT_LT((hessian - hessian.transpose()).norm(), 1e-9 * (1 + hessian.norm()));
  }
}

TEST(FitTest, ReductionKeepsChiSquareOfEveryParameterVector) {
  RandomDraws random(12);
  for (std::uint64_t trial = 0; trial < 60; ++trial) {
    const Eigen::Index n = 1 + static_cast<Eigen::Index>(trial % 4);
    const std::size_t points = 1 + trial;  // below and above the number of products
    const CandidateModel model = model_of(random_forms(random, n, points));
    std::vector<MeasuredPoint> list(points);
    for (MeasuredPoint& point : list) {
      point.observed = random.normal();
      point.sigma = 0.5 + random.uniform();
      if (random.uniform() < 0.2) point.kind = PointKind::at_least;
    }
    const FitData data(list);
    const ReducedProblem problem(data, model);
    ChiSquare objective(problem);
    EXPECT_LE(problem.rows().size(),
              n * (n + 1) / 2 + 1 + std::ranges::count(problem.rows().one_sided, char{1}));
    for (int draw = 0; draw < 5; ++draw) {
      const Eigen::VectorXd z = random.normal_vector(problem.parameters());
      const double expected = plain_chi2(data, model, problem.basis() * z);
      EXPECT_NEAR(objective.plain(z), expected, 1e-9 * (1 + expected));
    }
  }
}

TEST(FitTest, DenseScanFindsNothingBelowTheMinimum) {
  RandomDraws random(13);
  for (std::uint64_t trial = 0; trial < 30; ++trial) {
    const Eigen::Index n = 2 + static_cast<Eigen::Index>(trial % 2);
    const CandidateModel model = model_of(random_forms(random, n, 6));
    // Data of another candidate: large residuals and several minima.
    const CandidateModel truth = model_of(random_forms(random, n, 6));
    const FitData data = simulated(random, truth, random.normal_vector(n), 0.1);
    const Fit result = fit(data, model);
    EXPECT_NEAR(result.chi2, plain_chi2(data, model, result.parameters), 1e-9 * (1 + result.chi2));
    const auto along = [&](double phi, double theta) {
      Eigen::VectorXd u(n);
      if (n == 2) u << std::cos(phi), std::sin(phi);
      if (n == 3)
        u << std::cos(phi) * std::sin(theta), std::sin(phi) * std::sin(theta), std::cos(theta);
      // Along a direction the least χ² is closed.
      double with_data = 0;
      double with_itself = 0;
      for (Eigen::Index s = 0; s < model.forms.size(); ++s) {
        const MeasuredPoint& point = data.points()[static_cast<std::size_t>(s)];
        const double q = u.dot(model.forms.form(s) * u) / point.sigma;
        with_data += q * point.observed / point.sigma;
        with_itself += q * q;
      }
      return plain_chi2(data, model, std::sqrt(std::max(0.0, with_data / with_itself)) * u);
    };
    double best = 1e300;
    double best_phi = 0;
    double best_theta = 0;
    const auto scan = [&](double phi0, double theta0, double half_phi, double half_theta,
                          int steps) {
      for (int a = -steps; a <= steps; ++a)
        for (int b = n == 2 ? 0 : -steps; b <= (n == 2 ? 0 : steps); ++b) {
          const double value = along(phi0 + half_phi * a / steps, theta0 + half_theta * b / steps);
          if (value >= best) continue;
          best = value;
          best_phi = phi0 + half_phi * a / steps;
          best_theta = theta0 + half_theta * b / steps;
        }
    };
    scan(M_PI / 2, M_PI / 2, M_PI / 2, M_PI / 2, n == 2 ? 4000 : 150);
    for (double half = 0.02; half > 1e-6; half /= 4) scan(best_phi, best_theta, half, half, 20);
    EXPECT_LE(result.chi2, best + 1e-9) << trial;
    EXPECT_NEAR(result.chi2, best, 1e-5 * (1 + best)) << trial;
  }
}

TEST(FitTest, DescentLeavesASaddleThatSymmetryHides) {
  // y asks for b² = 4 alone; the start (1, 0) lies on the invariant line b = 0, whose end a = 0 and
  // every point of it has zero slope along b.
  const CandidateModel model = model_of({matrix(2, {1, 0, 0, 0}), matrix(2, {0, 0, 0, 1})});
  const ReducedProblem problem(data_of({1, 4}, {1, 1}), model);
  ChiSquare objective(problem);
  Eigen::VectorXd start(2);
  start << 1, 0;
  start = (problem.basis().inverse() * start).eval();
  const LocalMinimum found = descend(objective, start);
  EXPECT_TRUE(found.converged);
  EXPECT_NEAR(found.value, 0, 1e-9);
}

TEST(FitTest, FreeDirectionInThePlaneIsNamedAndHasNoError) {
  // Lines see only a² + b² and d²: the direction in the (a, b) plane is free.
  const CandidateModel model =
      model_of({matrix(3, {1, 0, 0, 0, 1, 0, 0, 0, 0}), matrix(3, {1, 0, 0, 0, 1, 0, 0, 0, 2}),
                matrix(3, {3, 0, 0, 0, 3, 0, 0, 0, 1})});
  const Fit result = fit(data_of({4, 22, 21}, {1, 1, 1}), model);
  EXPECT_EQ(result.effective_parameters, 2U);
  ASSERT_EQ(result.undetermined.cols(), 1);
  const Eigen::VectorXd& c = result.parameters;
  Eigen::VectorXd turn(3);
  turn << -c(1), c(0), 0;
  EXPECT_NEAR(std::abs(result.undetermined.col(0).dot(turn.normalized())), 1, 1e-6);
  Eigen::VectorXd along(3);
  along << c(0), c(1), 0;
  EXPECT_TRUE(standard_error(result, along.normalized()).has_value());
  EXPECT_FALSE(standard_error(result, Eigen::VectorXd::Unit(3, 0)).has_value());
  EXPECT_TRUE(standard_error(result, Eigen::VectorXd::Unit(3, 2)).has_value());
  EXPECT_EQ(result.at_zero.cols(), 0);
}

TEST(FitTest, ParameterThatNoLineSeesIsUndetermined) {
  const CandidateModel model = model_of({matrix(2, {1, 0, 0, 0}), matrix(2, {2, 0, 0, 0})});
  const Fit result = fit(data_of({4, 8}, {1, 1}), model);
  EXPECT_EQ(result.effective_parameters, 1U);
  ASSERT_EQ(result.undetermined.cols(), 1);
  EXPECT_NEAR(std::abs(result.undetermined(1, 0)), 1, 1e-12);
  EXPECT_EQ(result.parameters(1), 0);
}

TEST(FitTest, AmplitudeAtZeroHasAWidthInsteadOfAnError) {
  // Line 2 is b² = 0 ± 1: χ² = b⁴ along b, so it rises by 1 at b = 1.
  const CandidateModel model = model_of({matrix(2, {1, 0, 0, 0}), matrix(2, {0, 0, 0, 1})});
  const Fit result = fit(data_of({4, 0}, {1, 1}), model);
  EXPECT_EQ(result.effective_parameters, 2U);
  EXPECT_EQ(result.undetermined.cols(), 0);
  ASSERT_EQ(result.at_zero.cols(), 1);
  EXPECT_NEAR(std::abs(result.at_zero(1, 0)), 1, 1e-4);
  EXPECT_NEAR(result.at_zero_width.front(), 1, 1e-3);
}

TEST(FitTest, UndeterminedAndZeroAreToldApartWhereTheyMeet) {
  // Lines: a² + b² = 4 (a circle, free direction) and e² = 0 ± 1.
  Eigen::MatrixXd circle = Eigen::MatrixXd::Zero(3, 3);
  circle(0, 0) = circle(1, 1) = 1;
  Eigen::MatrixXd zero = Eigen::MatrixXd::Zero(3, 3);
  zero(2, 2) = 1;
  const Fit result = fit(data_of({4, 0}, {1, 1}), model_of({circle, zero}));
  ASSERT_EQ(result.undetermined.cols(), 1);
  EXPECT_LT(std::abs(result.undetermined(2, 0)), 1e-3);
  ASSERT_EQ(result.at_zero.cols(), 1);
  EXPECT_NEAR(result.at_zero_width.front(), 1, 1e-3);
}

TEST(FitTest, CovarianceBlocksEnterAsTheInverseMatrix) {
  // By hand: I = (c², c²), y = (1, 3), C = [[2, 1], [1, 2]]: by symmetry x = 2 and the residual
  // (−1, 1)·x has C⁻¹ eigenvalue 1/(2 − 1): χ² = 2.
  MeasuredPoint first;
  first.observed = 1;
  first.sigma = std::sqrt(2);
  MeasuredPoint second = first;
  second.observed = 3;
  const FitData data({first, second}, {ScaleGroup{}}, {{{0, 1}, matrix(2, {2, 1, 1, 2})}});
  const Fit result = fit(data, model_of({matrix(1, {1}), matrix(1, {1})}));
  EXPECT_NEAR(result.parameters(0), std::sqrt(2.0), 1e-12);
  EXPECT_NEAR(result.chi2, 2, 1e-12);
}

TEST(FitTest, SecondListHasItsOwnFactor) {
  // By hand: the same two forms seen in two lists, the second five times stronger.
  std::vector<MeasuredPoint> points(4);
  const double values[] = {4, 9, 20, 45};
  for (std::size_t i = 0; i < 4; ++i) {
    points[i].observed = values[i];
    points[i].sigma = 0.1;
    points[i].scale_group = i / 2;
  }
  const std::vector<Eigen::MatrixXd> forms = {matrix(2, {1, 0, 0, 0}), matrix(2, {0, 0, 0, 1}),
                                              matrix(2, {1, 0, 0, 0}), matrix(2, {0, 0, 0, 1})};
  const Fit result = fit(FitData(points, {ScaleGroup{}, ScaleGroup{}}), model_of(forms));
  EXPECT_NEAR(result.chi2, 0, 1e-9);
  EXPECT_NEAR(result.scales[0], 1, 1e-12);
  EXPECT_NEAR(result.scales[1], 5, 1e-6);
  EXPECT_EQ(result.effective_parameters, 3U);  // two amplitudes and the ratio of the scales
}

TEST(FitTest, MeasuredScalePassesItsErrorOn) {
  // By hand: y = k c² = 8 ± 0.01 with k = 2 ± 0.2: c² = 4, sigma(c²)/c² ≈ 0.1.
  std::vector<MeasuredPoint> points(2);
  for (MeasuredPoint& point : points) {
    point.observed = 8;
    point.sigma = 0.01;
  }
  const FitData data(points, {{ScaleKnowledge::measured, 2, 0.2}});
  const Fit result = fit(data, model_of({matrix(1, {1}), matrix(1, {1})}));
  EXPECT_NEAR(std::abs(result.parameters(0)), 2, 1e-6);
  EXPECT_NEAR(result.scales[0], 2, 1e-6);
  EXPECT_EQ(result.effective_parameters, 1U);
  EXPECT_NEAR(std::sqrt(result.covariance(0, 0)), 0.1, 1e-3);  // dc = c/2 · 0.1
}

TEST(FitTest, MomentLimitHoldsWhenTheScaleIsKnown) {
  // By hand: c² ≤ 2 while the line asks for 4 ± 1: χ² = 4. With a free scale the limit is idle.
  CandidateModel model = model_of({matrix(1, {1})});
  model.limits.push_back({matrix(1, {1}), 2.0});
  const Fit fixed = fit(data_of({4}, {1}, {{ScaleKnowledge::fixed, 1, 0}}), model);
  EXPECT_NEAR(fixed.chi2, 4, 1e-7);
  EXPECT_NEAR(std::abs(fixed.parameters(0)), std::sqrt(2.0), 1e-8);
  EXPECT_NEAR(fit(data_of({4}, {1}), model).chi2, 0, 1e-9);
}

TEST(FitTest, EqualMomentsAreEqual) {
  // By hand: a² = 4 ± 1, b² = 6 ± 1, a² = b²: both 5, χ² = 2.
  CandidateModel model = model_of({matrix(2, {1, 0, 0, 0}), matrix(2, {0, 0, 0, 1})});
  model.equalities.push_back(matrix(2, {1, 0, 0, -1}));
  const Fit result = fit(data_of({4, 6}, {1, 1}), model);
  EXPECT_NEAR(result.chi2, 2, 1e-7);
  EXPECT_NEAR(std::abs(result.parameters(0)), std::sqrt(5.0), 1e-7);
  EXPECT_NEAR(std::abs(result.parameters(1)), std::sqrt(5.0), 1e-7);
  EXPECT_EQ(result.effective_parameters, 1U);
  // Mean of two values ± 1: sigma(a²) = 1/√2, da = d(a²)/(2a).
  EXPECT_NEAR(std::sqrt(result.covariance(0, 0)), std::sqrt(0.5) / (2 * std::sqrt(5.0)), 1e-6);
}

TEST(FitTest, SeenLinesCountOnlyTheirShortfall) {
  std::vector<MeasuredPoint> points(2);
  points[0].observed = 4;
  points[0].sigma = 1;
  points[1].observed = 6;
  points[1].sigma = 1;
  points[1].kind = PointKind::at_least;
  // By hand: I = (c², c²): shortfall 6 − x counts until 6: (x − 4)² + (6 − x)², x = 5, χ² = 2.
  EXPECT_NEAR(fit(FitData(points), model_of({matrix(1, {1}), matrix(1, {1})})).chi2, 2, 1e-9);
  // With I₂ = 3c² the line is seen at x = 4 already.
  EXPECT_NEAR(fit(FitData(points), model_of({matrix(1, {1}), matrix(1, {3})})).chi2, 0, 1e-9);
}

TEST(FitTest, SameSeedSameFit) {
  RandomDraws random(14);
  const CandidateModel model = model_of(random_forms(random, 5, 12));
  const FitData data = simulated(random, model, random.normal_vector(5), 0.05);
  const Fit first = fit(data, model);
  const Fit second = fit(data, model);
  EXPECT_EQ(first.chi2, second.chi2);
  EXPECT_EQ(first.parameters, second.parameters);
  EXPECT_EQ(first.stop, FitStop::rule);
  EXPECT_GE(first.met_best, 1U);
  EXPECT_LE(first.met_best, first.starts);
}

TEST(FitTest, RefusesWhatDoesNotMatch) {
  const CandidateModel model = model_of({matrix(1, {1})});
  EXPECT_THAT(
      [&] {
        fit(data_of({1, 2}, {1, 1}), model);
      },
      ThrowsMessage<Error>(HasSubstr("1 intensity forms for 2 points")));
  EXPECT_THAT([] { data_of({1}, {0}); }, ThrowsMessage<Error>(HasSubstr("of \"line 1\"; it must")));
  EXPECT_THAT([] { data_of({std::nan("")}, {1}); },
              ThrowsMessage<Error>(HasSubstr("is not finite")));
  EXPECT_THAT([] { FormFamily(0, {}); }, ThrowsMessage<Error>(HasSubstr("0 parameters")));
  EXPECT_THAT([] { FormFamily(2, {Eigen::MatrixXd::Identity(3, 3)}); },
              ThrowsMessage<Error>(HasSubstr("form 1 is 3 by 3")));
}

}  // namespace
}  // namespace spinsieve
