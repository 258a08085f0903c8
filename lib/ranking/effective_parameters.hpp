#pragma once

#include <cstddef>

#include <Eigen/Dense>

#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

/// Generic rank of (c, unknown scales) → intensities of lines and absences, c within the
/// candidate's equalities.
///
/// One free scale adds none, each further free scale one when the data can tell it; a measured one
/// brings its own datum and adds none. One-sided points fix nothing.
/// Cost: a few pivoted decompositions of N × n.
std::size_t effective_parameters(const FitData& data, const CandidateModel& model);

class RandomDraws;

/// A random parameter vector of normal entries, moved onto the candidate's equalities.
Eigen::VectorXd random_parameters(const CandidateModel& model, RandomDraws& random);

/// Singular values below this part of the largest are rounding: forms carry 1e-12 at worst, and no
/// measurement resolves intensities to 1e-7 of the strongest response.
constexpr double rank_tolerance = 1e-7;

}  // namespace spinsieve
