#pragma once

#include <Eigen/Dense>

#include "ranking/chi_square.hpp"

namespace spinsieve {

/// What a descent ended with.
struct LocalMinimum {
  Eigen::VectorXd x;
  double value = 0;        ///< Of the objective with its constraint terms.
  int iterations = 0;      ///< Evaluations of derivatives.
  bool converged = false;  ///< A point where no direction leads down, to rounding.
};

/// Levenberg–Marquardt descent with exact second derivatives: steps −(H + µ1)⁻¹∇, µ controlled by
/// the ratio of actual to predicted decrease; µ grows until H + µ1 is positive definite, and a
/// saddle is left along its most negative direction.
/// Source: Marquardt (1963), SIAM J. Appl. Math. 11, 431; control of µ after Nielsen (1999),
/// IMM-REP-1999-05, Technical University of Denmark, Eq. (2.4).
LocalMinimum descend(ChiSquare& objective, Eigen::VectorXd start);

}  // namespace spinsieve
