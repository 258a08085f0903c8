#include "search/evidence.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace spinsieve {

namespace {

// Distinct predicted lines per Å⁻¹ around a position, from those within a third of it.
double line_density(double q, std::span<const double> predicted) {
  const double low = q * 2 / 3;
  const double high = q * 4 / 3;
  const auto first = std::ranges::lower_bound(predicted, low);
  const auto last = std::ranges::upper_bound(predicted, high);
  // One line more than counted: an empty window does not make a match certain evidence.
  return (static_cast<double>(last - first) + 1) / (high - low);
}

// P(Σ u² ≤ n r²) for even u_i in [−1, 1], by the ball inside the cube, in n − free dimensions.
double small_deviation(std::size_t matched, std::size_t free, double rms) {
  if (matched <= free) return 1;
  const auto n = static_cast<double>(matched - free);
  const double radius = rms * std::sqrt(static_cast<double>(matched));
  if (radius <= 0) return 0;
  const double log_ball = n / 2 * std::log(std::numbers::pi) + n * std::log(radius) -
                          std::lgamma(n / 2 + 1) - n * std::numbers::ln2;
  return std::min(1.0, std::exp(log_ball));
}

}  // namespace

double at_least(std::size_t least, std::span<const double> probabilities) {
  std::vector<double> exactly(probabilities.size() + 1);
  exactly[0] = 1;
  std::size_t seen = 0;
  for (const double p : probabilities) {
    ++seen;
    for (std::size_t n = seen; n > 0; --n) exactly[n] = exactly[n] * (1 - p) + exactly[n - 1] * p;
    exactly[0] *= 1 - p;
  }
  double sum = 0;
  for (std::size_t n = exactly.size(); n-- > least;) sum += exactly[n];
  return std::min(sum, 1.0);
}

std::vector<double> distinct_lines(std::vector<double> lengths, double largest_q, double merge) {
  std::erase_if(lengths, [largest_q](double q) { return q > largest_q; });
  std::ranges::sort(lengths);
  std::vector<double> distinct;
  for (const double q : lengths)
    if (distinct.empty() || q > distinct.back() + merge) distinct.push_back(q);
  return distinct;
}

Coincidence coincidence(const LineFit& fit, std::span<const FitLine> lines,
                        std::span<const double> predicted,
                        std::span<const LineWindowAbsence> absences, double trials,
                        std::size_t free) {
  // Deviations below a hundredth of the tolerance carry no further evidence.
  constexpr double least_rms = 0.01;
  std::vector<double> matches;
  for (const FitLine& line : lines)
    matches.push_back(-std::expm1(-line_density(line.q, predicted) * 2 * line.tolerance));
  Coincidence result;
  std::vector<double> avoided;
  std::size_t avoids = 0;
  for (const LineWindowAbsence& absence : absences) {
    const double middle = (absence.low + absence.high) / 2;
    avoided.push_back(std::exp(-line_density(middle, predicted) * (absence.high - absence.low)));
    const auto first = std::ranges::lower_bound(predicted, absence.low);
    const bool met = first != predicted.end() && *first <= absence.high;
    result.absences_met += met ? 1 : 0;
    avoids += met ? 0 : 1;
  }
  result.expected = trials * at_least(fit.matched, matches) *
                    small_deviation(fit.matched, free, std::max(fit.rms_in_tolerances, least_rms)) *
                    at_least(avoids, avoided);
  result.chance = -std::expm1(-result.expected);
  return result;
}

}  // namespace spinsieve
