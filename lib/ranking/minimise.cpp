#include "ranking/minimise.hpp"

#include <algorithm>
#include <cmath>
#include <utility>

namespace spinsieve {
namespace {

/// Newton steps converge in about ten iterations; a minimum with amplitudes at zero is quartic
/// there and gains a factor 2/3 a step: 300 steps reach any precision asked for.
constexpr int most_iterations = 300;

/// A predicted decrease this small against 1 + value is below the rounding of the sums.
constexpr double negligible_decrease = 1e-13;

/// Start of µ against the largest curvature: nearly a Newton step.
constexpr double first_damping = 1e-3;

/// Negative curvature below this part of the largest is rounding of the Hessian.
constexpr double flat_curvature = 1e-9;

class Descent {
 public:
  Descent(ChiSquare& objective, Eigen::VectorXd start)
      : objective_(objective), x_(std::move(start)) {}

  LocalMinimum run() {
    LocalMinimum result;
    value_ = objective_.derivatives(x_, gradient_, hessian_);
    damping_ = first_damping * hessian_.diagonal().cwiseAbs().maxCoeff();
    if (!(damping_ > 0)) damping_ = first_damping;
    for (result.iterations = 1; result.iterations < most_iterations; ++result.iterations) {
      if (!step()) {
        if (!leave_saddle()) {
          result.converged = true;
          break;
        }
      }
      value_ = objective_.derivatives(x_, gradient_, hessian_);
    }
    result.x = x_;
    result.value = value_;
    return result;
  }

 private:
  /// One accepted step; false when none is worth taking.
  bool step() {
    const double top = hessian_.diagonal().cwiseAbs().maxCoeff();
    if (!(top > 0)) return false;
    for (int attempt = 0; attempt < most_iterations; ++attempt) {
      damped_ = hessian_;
      damped_.diagonal().array() += damping_;
      factor_.compute(damped_);
      if (factor_.info() != Eigen::Success) {
        raise_damping();
        continue;
      }
      move_ = factor_.solve(-gradient_);
      const double predicted = -gradient_.dot(move_) - 0.5 * move_.dot(hessian_ * move_);
      if (!(predicted > negligible_decrease * (1 + value_))) return false;
      trial_ = x_ + move_;
      const double ratio = (value_ - objective_.value(trial_)) / predicted;
      if (ratio > 1e-4) {
        x_.swap(trial_);
        const double t = 2 * ratio - 1;
        damping_ = std::max(damping_ * std::max(0.1, 1 - t * t * t), 1e-15 * top);
        growth_ = 2;
        return true;
      }
      raise_damping();
    }
    return false;
  }

  /// Steps off a stationary point that is no minimum; false at a minimum.
  bool leave_saddle() {
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> eigen(hessian_);
    const Eigen::VectorXd& curvatures = eigen.eigenvalues();
    const double top = curvatures.cwiseAbs().maxCoeff();
    if (!(curvatures(0) < -flat_curvature * top)) return false;
    Eigen::VectorXd direction = eigen.eigenvectors().col(0);
    if (direction.dot(gradient_) > 0) direction = -direction;
    for (double length = std::max(x_.norm(), 1e-6); length > 1e-12; length /= 4) {
      trial_ = x_ + length * direction;
      if (objective_.value(trial_) < value_ - negligible_decrease * (1 + value_)) {
        x_.swap(trial_);
        damping_ = first_damping * top;
        return true;
      }
    }
    return false;
  }

  void raise_damping() {
    damping_ *= growth_;
    growth_ *= 2;
  }

  ChiSquare& objective_;
  Eigen::VectorXd x_;
  double value_ = 0;
  double damping_ = 0;
  double growth_ = 2;
  Eigen::VectorXd gradient_;
  Eigen::MatrixXd hessian_;
  Eigen::MatrixXd damped_;
  Eigen::LLT<Eigen::MatrixXd> factor_;
  Eigen::VectorXd move_;
  Eigen::VectorXd trial_;
};

}  // namespace

LocalMinimum descend(ChiSquare& objective, Eigen::VectorXd start) {
  return Descent(objective, std::move(start)).run();
}

}  // namespace spinsieve
