#pragma once

#include <Eigen/Dense>

#include "ranking/reduced_problem.hpp"

namespace spinsieve {

/// χ² of a reduced problem with exact first and second derivatives.
///
/// Variables x = (z, κ): the reduced parameters, then one κ per scale slot, the factor being κ².
/// Constraints enter by an augmented Lagrangian, Σ w (g + λ/w)² with g = zᵀ A z − target, for
/// limits only while positive (Nocedal & Wright 2006, Numerical Optimization, section 17.3).
class ChiSquare {
 public:
  explicit ChiSquare(const ReducedProblem& problem);

  Eigen::Index size() const noexcept { return parameters_ + slots_; }

  /// Without the constraint terms: the χ² that is reported.
  double plain(const Eigen::VectorXd& x);

  /// With the constraint terms.
  double value(const Eigen::VectorXd& x);

  /// Returns value(x); fills the gradient and the symmetric Hessian of size().
  double derivatives(const Eigen::VectorXd& x, Eigen::VectorXd& gradient, Eigen::MatrixXd& hessian);

  /// The whitened Jacobian of rows and measured scales with respect to x.
  Eigen::MatrixXd jacobian(const Eigen::VectorXd& x);

  /// Largest violation of a constraint or of complementarity (a limit with a multiplier that is
  /// not reached), in units of the limit.
  double violation(const Eigen::VectorXd& x);

  /// λ ← λ + w g for the solution of the last round, then w ← weight. Starts over with reset().
  void update_multipliers(const Eigen::VectorXd& x, double weight);
  void reset(double weight);

  /// Scales a direction so that χ² is least along it, and finds the scale slots by linear least
  /// squares. z: in and out through x.
  void scale_to_data(Eigen::VectorXd& x);

 private:
  void evaluate(const Eigen::VectorXd& x);
  double constraint_terms(const Eigen::VectorXd& x);

  const ReducedProblem* problem_;
  Eigen::Index parameters_;
  Eigen::Index slots_;
  Eigen::VectorXd multipliers_;
  double weight_ = 1;
  // Work space of one evaluation; kept to avoid allocation in the innermost loop.
  Eigen::MatrixXd products_;  ///< A_s z as columns.
  Eigen::VectorXd q_;         ///< zᵀ A_s z.
  Eigen::VectorXd factor_;    ///< 1 or κ².
  Eigen::VectorXd residual_;  ///< 0 where a one-sided row is met.
  Eigen::VectorXd active_;    ///< 0 or 1.
  Eigen::VectorXd weights_;
  Eigen::MatrixXd weighted_;
};

}  // namespace spinsieve
