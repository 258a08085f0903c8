#pragma once

#include <vector>

#include <Eigen/Dense>

#include "ranking/chi_square.hpp"

namespace spinsieve {

/// What the data say about each direction around a minimum, in the candidate's own parameters.
struct Uncertainty {
  Eigen::MatrixXd covariance;    ///< n × n, of the determined directions.
  Eigen::MatrixXd undetermined;  ///< n × d, orthonormal.
  Eigen::MatrixXd at_zero;       ///< n × w, unit columns.
  std::vector<double> at_zero_width;
};

/// Sorts the directions at the minimum x of the objective.
///
/// Directions that change intensities to first order have an error from the Jacobian J; scales are
/// profiled out. A direction w with J w = 0 is undetermined when the second-order change
/// wᵀ A_s w can be undone by first-order changes elsewhere (it lies in the range of J: a set of
/// equal intensities passes along w), and sits at zero otherwise; so do directions whose
/// first-order error reaches into the range where intensities grow with the square. Equalities
/// confine the directions; limits are ignored.
Uncertainty uncertainty(const ReducedProblem& problem, ChiSquare& objective,
                        const Eigen::VectorXd& x);

}  // namespace spinsieve
