#pragma once

#include <Eigen/Dense>

#include "ranking/reduced_problem.hpp"

namespace spinsieve {

/// A nearly optimal moment matrix of the convex relaxation and its multipliers.
struct RelaxedMinimum {
  Eigen::MatrixXd X;           ///< r × r, positive definite, in reduced parameters.
  double value = 0;            ///< χ² at X, without scale residuals.
  Eigen::VectorXd limits;      ///< ν ≥ 0, one per limit of the reduced problem.
  Eigen::VectorXd equalities;  ///< η, one per equality.
  Eigen::MatrixXd cone;        ///< N ≥ 0 of the cone, zero diagonal; empty without a cone.
  int iterations = 0;
};

/// Distance to the optimum at which the relaxation stops, against 1 + value: below what any verdict
/// or table shows.
constexpr double relaxation_gap = 1e-6;

/// Minimises χ² over moment matrices X ⪰ 0 in place of z zᵀ, for one common scale.
///
/// cone: empty, or r generators G as columns; then X = G T Gᵀ with T ⪰ 0 and T ≥ 0 entrywise, which
/// holds for z zᵀ when z = G t, t ≥ 0. The problem must have no scale slots.
/// Method: logarithmic barrier with Newton steps in the r(r+1)/2 entries of X
/// (Boyd & Vandenberghe 2004, Convex Optimization, section 11.3).
/// Nothing here is trusted: bounds are re-checked from the multipliers alone.
RelaxedMinimum relaxed_minimum(const ReducedProblem& problem,
                               const Eigen::MatrixXd& cone = Eigen::MatrixXd());

}  // namespace spinsieve
