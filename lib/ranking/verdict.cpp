#include "ranking/verdict.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include <boost/math/distributions/chi_squared.hpp>

namespace spinsieve {

std::string_view to_string(Verdict verdict) {
  switch (verdict) {
    case Verdict::survives:
      return "survives";
    case Verdict::undetermined:
      return "undetermined";
    case Verdict::rejected:
      return "rejected";
    case Verdict::excluded:
      return "excluded";
  }
  return "";
}

double chi_squared_tail(double chi2, std::size_t degrees) {
  const boost::math::chi_squared distribution(static_cast<double>(degrees));
  return boost::math::cdf(boost::math::complement(distribution, std::max(0.0, chi2)));
}

double chi_squared_quantile(double probability, std::size_t degrees) {
  const boost::math::chi_squared distribution(static_cast<double>(degrees));
  return boost::math::quantile(boost::math::complement(distribution, probability));
}

std::optional<double> p_value(double chi2, std::size_t points, std::size_t effective_parameters) {
  if (effective_parameters >= points) return std::nullopt;
  return chi_squared_tail(chi2, points - effective_parameters);
}

Verdict verdict(double chi2, std::optional<double> lower_bound, std::size_t points,
                std::size_t effective_parameters, double significance) {
  if (points == 0) return Verdict::undetermined;
  const double limit = chi_squared_quantile(significance, points);
  if (lower_bound && *lower_bound > limit) return Verdict::excluded;
  if (effective_parameters >= points)
    return chi2 > limit ? Verdict::rejected : Verdict::undetermined;
  return chi_squared_tail(chi2, points - effective_parameters) < significance ? Verdict::rejected
                                                                              : Verdict::survives;
}

double akaike(double chi2, std::size_t points, std::size_t effective_parameters,
              ErrorScale errors) {
  const auto N = static_cast<double>(points);
  const auto p = static_cast<double>(effective_parameters);
  if (errors == ErrorScale::known) return chi2 + 2 * p;
  const double K = p + 1;
  if (!(N > K + 1)) return std::numeric_limits<double>::infinity();
  return N * std::log(chi2 / N) + 2 * K + 2 * K * (K + 1) / (N - K - 1);
}

std::vector<double> akaike_weights(std::span<const double> criteria) {
  std::vector<double> weights(criteria.size(), 0.0);
  if (criteria.empty()) return weights;
  const double best = *std::ranges::min_element(criteria);
  double sum = 0;
  for (std::size_t i = 0; i < criteria.size(); ++i) {
    weights[i] = criteria[i] == best ? 1.0 : std::exp(-0.5 * (criteria[i] - best));
    sum += weights[i];
  }
  for (double& weight : weights) weight /= sum;
  return weights;
}

}  // namespace spinsieve
