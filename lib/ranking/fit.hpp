#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <vector>

#include <Eigen/Dense>

#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

struct FitOptions {
  std::uint64_t seed = 1;
  std::size_t least_starts = 16;  ///< Before the stopping rule may end the search.
  std::size_t most_starts = 400;
  std::vector<Eigen::VectorXd> starts;  ///< Tried first: n parameters each.
  /// A certified lower bound: a minimum that meets it is global, and the search ends.
  std::optional<double> lower_bound;
};

enum class FitStop {
  closed_form,  ///< At most one seen parameter: the minimum is unique.
  rule,         ///< The stopping rule expects no further minimum.
  bound,        ///< A minimum met the certified lower bound: it is global.
  limit         ///< `most_starts` were spent before the rule was met.
};

/// The global minimum of χ² of one candidate, as far as a search can tell.
struct Fit {
  double chi2 = 0;             ///< Recomputed from the data and the full forms at `parameters`.
  Eigen::VectorXd parameters;  ///< n values; the sign of c is free, the largest entry is positive.
  std::vector<double> scales;  ///< Factor of every scale group.
  Eigen::VectorXd computed;    ///< Scaled intensity of every point.

  std::size_t starts = 0;
  std::size_t met_best = 0;         ///< Starts that ended in the best minimum.
  std::size_t distinct_minima = 0;  ///< Different values of χ² found.
  FitStop stop = FitStop::rule;

  /// Generic rank of c → (I_s) over lines and absences: the parameters that count.
  std::size_t effective_parameters = 0;

  /// Covariance of the parameters within the determined directions; zero along the others.
  Eigen::MatrixXd covariance;
  /// n × d, orthonormal: directions that χ² does not fix at the minimum, to first order.
  Eigen::MatrixXd undetermined;
  /// n × w, orthonormal: directions whose amplitude sits at zero, where intensities are quadratic.
  Eigen::MatrixXd at_zero;
  /// w values: the step along each that raises χ² by 1, other parameters held.
  std::vector<double> at_zero_width;
};

/// Finds the least χ² over all c and all unknown scales, under the candidate's constraints.
///
/// Starts are seeded random directions, isotropic in intensity, each scaled to the data and run
/// downhill. The search ends when n starts have met w different minima with
/// w(n − 1)/(n − w − 2) ≤ w + 1/2, the expected total number of minima.
/// Source: Boender & Rinnooy Kan (1987), Math. Program. 37, 59 (optimal Bayesian estimate).
/// Throws Error when forms and data do not match.
Fit fit(const FitData& data, const CandidateModel& model, const FitOptions& options = {});

/// χ² of given parameters and scales; scales: one per group. Limits and equalities do not enter.
double chi_squared(const FitData& data, const FormFamily& forms, const Eigen::VectorXd& c,
                   const std::vector<double>& scales);

/// First-order standard error of a function of the parameters; gradient: ∂f/∂c at the minimum.
/// None when the function changes along a direction that the data do not determine.
std::optional<double> standard_error(const Fit& fit, const Eigen::VectorXd& gradient);

}  // namespace spinsieve
