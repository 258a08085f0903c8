#include "ranking/fit.hpp"

#include <algorithm>
#include <cmath>
#include <string>
#include <utility>

#include "exact/error.hpp"
#include "ranking/chi_square.hpp"
#include "ranking/effective_parameters.hpp"
#include "ranking/minimise.hpp"
#include "ranking/random_draws.hpp"
#include "ranking/reduced_problem.hpp"
#include "ranking/uncertainty.hpp"

namespace spinsieve {
namespace {

/// Two descents found the same minimum when their χ² agree to this: descents end with a predicted
/// decrease of 1e-13, quartic minima an order or two above.
constexpr double same_minimum = 1e-7;

/// A minimum this close to a certified bound, against 1 + χ², cannot be improved by anything that
/// shows: the relaxation itself stops at 1e-6.
constexpr double met_bound = 1e-5;

/// A constraint is met when it is violated by less than this part of its limit.
constexpr double constraint_tolerance = 1e-9;
constexpr int constraint_rounds = 40;

bool same_value(double a, double b) {
  return std::abs(a - b) <= same_minimum * (1 + std::min(std::abs(a), std::abs(b)));
}

/// Source: Boender & Rinnooy Kan (1987), the estimate in fit.hpp.
bool nothing_left(std::size_t starts, std::size_t minima) {
  const auto n = static_cast<double>(starts);
  const auto w = static_cast<double>(minima);
  return n > w + 2 && w * (n - 1) / (n - w - 2) <= w + 0.5;
}

/// Descends under the constraints, raising multipliers until they hold.
LocalMinimum constrained_minimum(ChiSquare& objective, Eigen::VectorXd start,
                                 const ReducedProblem& problem) {
  if (problem.constraints().size() == 0) return descend(objective, std::move(start));
  // A violation of 10 % should cost about as much as a poor fit.
  double weight = 1 + objective.plain(start);
  objective.reset(weight);
  LocalMinimum found = descend(objective, std::move(start));
  double violation = objective.violation(found.x);
  for (int round = 0; round < constraint_rounds && violation > constraint_tolerance; ++round) {
    objective.update_multipliers(found.x, weight);
    found = descend(objective, found.x);
    const double after = objective.violation(found.x);
    if (after > 0.25 * violation) weight *= 10;
    violation = after;
  }
  found.converged = found.converged && violation <= constraint_tolerance;
  found.value = objective.plain(found.x);
  return found;
}

/// Keeps the different minima of a search and counts how often each was met.
class Minima {
 public:
  void add(const LocalMinimum& found) {
    ++starts_;
    for (std::size_t i = 0; i < values_.size(); ++i)
      if (same_value(values_[i], found.value)) {
        ++met_[i];
        if (found.value < values_[i] && i == best_) {
          values_[i] = found.value;
          x_ = found.x;
        }
        return;
      }
    values_.push_back(found.value);
    met_.push_back(1);
    if (values_.size() == 1 || found.value < values_[best_]) {
      best_ = values_.size() - 1;
      x_ = found.x;
    }
  }

  std::size_t starts() const noexcept { return starts_; }
  std::size_t distinct() const noexcept { return values_.size(); }
  std::size_t met_best() const { return met_[best_]; }
  const Eigen::VectorXd& x() const noexcept { return x_; }

 private:
  std::size_t starts_ = 0;
  std::vector<double> values_;
  std::vector<std::size_t> met_;
  std::size_t best_ = 0;
  Eigen::VectorXd x_;
};

/// Without unknown factors, constraints or one-sided rows χ² is (A z² − b)² for one parameter.
bool is_closed_form(const ReducedProblem& problem) {
  if (problem.parameters() == 0) return problem.slots().empty();
  return problem.parameters() == 1 && problem.slots().empty() &&
         problem.constraints().size() == 0 &&
         std::ranges::count(problem.rows().one_sided, char{1}) == 0;
}

Eigen::VectorXd closed_form(const ReducedProblem& problem) {
  Eigen::VectorXd z = Eigen::VectorXd::Zero(problem.parameters());
  if (z.size() == 0) return z;
  const Eigen::VectorXd a = problem.rows().packed.row(0).transpose();
  z(0) = std::sqrt(std::max(0.0, a.dot(problem.rows().target) / a.squaredNorm()));
  return z;
}

/// c → −c changes nothing; the largest entry is made positive.
void fix_sign(Eigen::VectorXd& c) {
  Eigen::Index largest = 0;
  if (c.size() > 0) c.cwiseAbs().maxCoeff(&largest);
  if (c.size() > 0 && c(largest) < 0) c = -c;
}

Minima search(ChiSquare& objective, const ReducedProblem& problem, const FitOptions& options,
              FitStop& stop) {
  Minima minima;
  RandomDraws random(options.seed);
  const Eigen::Index r = problem.parameters();
  const Eigen::MatrixXd to_reduced =
      options.starts.empty()
          ? Eigen::MatrixXd()
          : Eigen::MatrixXd(problem.basis().completeOrthogonalDecomposition().pseudoInverse());
  stop = FitStop::limit;
  const std::size_t most = std::max<std::size_t>(options.most_starts, 1);
  while (minima.starts() < most) {
    Eigen::VectorXd x = Eigen::VectorXd::Ones(objective.size());
    if (minima.starts() < options.starts.size()) {
      const Eigen::VectorXd& given = options.starts[minima.starts()];
      if (given.size() != problem.basis().rows())
        throw Error("a start of " + std::to_string(given.size()) + " values; the candidate has " +
                    std::to_string(problem.basis().rows()) + " parameters");
      x.head(r) = to_reduced * given;
    } else {
      x.head(r) = random.normal_vector(r);
    }
    objective.scale_to_data(x);
    const LocalMinimum found = constrained_minimum(objective, std::move(x), problem);
    minima.add(found);
    if (options.lower_bound &&
        found.value <= *options.lower_bound + met_bound * (1 + *options.lower_bound)) {
      stop = FitStop::bound;
      break;
    }
    if (minima.starts() >= options.least_starts &&
        nothing_left(minima.starts(), minima.distinct())) {
      stop = FitStop::rule;
      break;
    }
  }
  return minima;
}

}  // namespace

double chi_squared(const FitData& data, const FormFamily& forms, const Eigen::VectorXd& c,
                   const std::vector<double>& scales) {
  Eigen::VectorXd residual = forms.intensities(c);
  std::vector<char> in_block(data.points().size(), 0);
  for (Eigen::Index s = 0; s < residual.size(); ++s) {
    const MeasuredPoint& point = data.points()[static_cast<std::size_t>(s)];
    residual(s) = residual(s) * scales[point.scale_group] - point.observed;
  }
  double result = 0;
  for (const CovarianceBlock& block : data.blocks()) {
    const std::vector<Eigen::Index> index(block.points.begin(), block.points.end());
    const Eigen::VectorXd part = residual(index);
    result += part.dot(Eigen::LLT<Eigen::MatrixXd>(block.covariance).solve(part));
    for (const std::size_t p : block.points) in_block[p] = 1;
  }
  for (std::size_t i = 0; i < data.points().size(); ++i) {
    if (in_block[i] != 0) continue;
    const MeasuredPoint& point = data.points()[i];
    const double deviation = residual(static_cast<Eigen::Index>(i)) / point.sigma;
    if (point.kind == PointKind::at_least && deviation > 0) continue;
    if (point.kind == PointKind::at_most && deviation < 0) continue;
    result += deviation * deviation;
  }
  for (std::size_t g = 0; g < data.scales().size(); ++g) {
    const ScaleGroup& scale = data.scales()[g];
    if (scale.knowledge != ScaleKnowledge::measured) continue;
    const double deviation = (scales[g] - scale.value) / scale.sigma;
    result += deviation * deviation;
  }
  return result;
}

Fit fit(const FitData& data, const CandidateModel& model, const FitOptions& options) {
  const ReducedProblem problem(data, model);
  ChiSquare objective(problem);
  Fit result;
  const Eigen::Index r = problem.parameters();
  Eigen::VectorXd x;
  if (is_closed_form(problem)) {
    x = closed_form(problem);
    result.starts = result.met_best = result.distinct_minima = 1;
    result.stop = FitStop::closed_form;
  } else {
    const Minima minima = search(objective, problem, options, result.stop);
    x = minima.x();
    result.starts = minima.starts();
    result.met_best = minima.met_best();
    result.distinct_minima = minima.distinct();
  }
  result.parameters = problem.basis() * x.head(r);
  fix_sign(result.parameters);
  result.scales.assign(data.scales().size(), 1.0);
  for (std::size_t g = 0; g < data.scales().size(); ++g)
    if (data.scales()[g].knowledge == ScaleKnowledge::fixed)
      result.scales[g] = data.scales()[g].value;
  for (std::size_t k = 0; k < problem.slots().size(); ++k) {
    const double kappa = x(r + static_cast<Eigen::Index>(k));
    result.scales[problem.slots()[k].group] = kappa * kappa;
  }
  result.computed = model.forms.intensities(result.parameters);
  for (Eigen::Index s = 0; s < result.computed.size(); ++s)
    result.computed(s) *= result.scales[data.points()[static_cast<std::size_t>(s)].scale_group];
  result.chi2 = chi_squared(data, model.forms, result.parameters, result.scales);
  result.effective_parameters = effective_parameters(data, model);
  Uncertainty spread = uncertainty(problem, objective, x);
  result.covariance = std::move(spread.covariance);
  result.undetermined = std::move(spread.undetermined);
  result.at_zero = std::move(spread.at_zero);
  result.at_zero_width = std::move(spread.at_zero_width);
  return result;
}

std::optional<double> standard_error(const Fit& fit, const Eigen::VectorXd& gradient) {
  // Directions come from decompositions that leave 1e-12 or so; a part of 1e-6 changes no figure.
  constexpr double aligned = 1e-6;
  const double norm = gradient.norm();
  if (fit.undetermined.cols() > 0 &&
      (fit.undetermined.transpose() * gradient).norm() > aligned * norm)
    return std::nullopt;
  if (fit.at_zero.cols() > 0 && (fit.at_zero.transpose() * gradient).norm() > aligned * norm)
    return std::nullopt;
  return std::sqrt(std::max(0.0, gradient.dot(fit.covariance * gradient)));
}

}  // namespace spinsieve
