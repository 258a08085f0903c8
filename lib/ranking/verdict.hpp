#pragma once

#include <cstddef>
#include <optional>
#include <span>
#include <string_view>
#include <vector>

namespace spinsieve {

/// What the data say about a candidate.
enum class Verdict {
  survives,
  undetermined,  ///< As many effective parameters as points, or more: nothing was tested.
  rejected,      ///< The best fit found fails, no bound certifies it.
  excluded       ///< The certified bound fails: no parameter values can fit.
};

std::string_view to_string(Verdict verdict);

/// A true candidate is turned down once in a thousand.
constexpr double default_significance = 0.001;

/// Probability that χ² of that many degrees of freedom exceeds the value. degrees ≥ 1.
double chi_squared_tail(double chi2, std::size_t degrees);

/// The value exceeded with that probability. degrees ≥ 1, 0 < probability < 1.
double chi_squared_quantile(double probability, std::size_t degrees);

/// p-value of a fit with N − effective parameters degrees of freedom; none when there are none.
std::optional<double> p_value(double chi2, std::size_t points, std::size_t effective_parameters);

/// The verdict on a candidate.
///
/// lower_bound: certified, if there is one. Excluded: it exceeds the quantile with `points` degrees
/// of freedom, no parameters subtracted (χ²min is never above χ² of the truth). Rejected: the fit
/// fails at points − effective parameters degrees; without any, at `points` degrees.
Verdict verdict(double chi2, std::optional<double> lower_bound, std::size_t points,
                std::size_t effective_parameters, double significance = default_significance);

enum class ErrorScale {
  known,  ///< Sigmas are what they say.
  fitted  ///< Only their ratios are: AICc with the error scale as one more parameter.
};

/// Akaike's criterion: χ² + 2p for known errors; with a fitted error scale
/// N ln(χ²/N) + 2K + 2K(K + 1)/(N − K − 1), K = p + 1, infinite when N ≤ K + 1.
/// Source: Burnham & Anderson (2002), Model Selection and Multimodel Inference, sections 2.2, 2.4.
double akaike(double chi2, std::size_t points, std::size_t effective_parameters,
              ErrorScale errors = ErrorScale::known);

/// Akaike weights exp(−Δ/2)/Σ; they sum to 1. All equal when every criterion is infinite.
std::vector<double> akaike_weights(std::span<const double> criteria);

}  // namespace spinsieve
