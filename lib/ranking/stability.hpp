#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "exact/executor.hpp"
#include "ranking/fit.hpp"
#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

/// Candidates whose criterion is farther than this from the best are no contenders: a redraw would
/// have to lift them by more than nine standard deviations of a difference of this size.
constexpr double contender_range = 30;

/// Values drawn from a Gaussian around `centre` with the covariance of the data, seeded.
FitData redrawn(const FitData& data, const Eigen::VectorXd& centre, std::uint64_t seed,
                std::uint64_t stream);

/// How often each candidate has the least Akaike criterion when the data are redrawn within their
/// errors around the observed values; candidates that share the first place share the count.
///
/// fits: the best fits to the data, one per candidate. None for candidates that are no contenders.
std::vector<std::optional<double>> stability(const FitData& data,
                                             std::span<const CandidateModel> candidates,
                                             std::span<const Fit> fits, std::size_t draws,
                                             std::uint64_t seed, Executor& executor);

/// Comparison of a candidate with one that contains it.
struct NestedComparison {
  double improvement = 0;  ///< χ² of the inner fit minus that of the outer one.
  double p_value = 1;      ///< (1 + redraws that improve at least as much) / (1 + redraws).
};

/// Parametric bootstrap of the likelihood-ratio test: data are simulated from the best fit of the
/// inner candidate and both are fitted to them.
/// Source: Davison & Hinkley (1997), Bootstrap Methods and their Application, section 4.4;
/// Hamilton (1965), Acta Cryst. 18, 502 is the classical approximation.
NestedComparison nested_comparison(const FitData& data, const CandidateModel& inner,
                                   const CandidateModel& outer, std::size_t draws,
                                   std::uint64_t seed, Executor& executor);

}  // namespace spinsieve
