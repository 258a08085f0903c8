#pragma once

#include <span>
#include <vector>

#include "search/line_fit.hpp"

namespace spinsieve {

/// A range without a line, Å⁻¹.
struct LineWindowAbsence {
  double low = 0;
  double high = 0;
};

/// The lines of one wavevector that positions can tell apart: |Q| in Å⁻¹, increasing; lines closer
/// than `merge` to the first of a group count as one.
std::vector<double> distinct_lines(std::vector<double> lengths, double largest_q, double merge);

/// P(at least `least` of independent events happen), from the probability of each.
double at_least(std::size_t least, std::span<const double> probabilities);

/// How easily coincidence does as well as a fit.
struct Coincidence {
  double expected = 0;  ///< Number of vectors of the kind expected to match as well, ≥ 0.
  double chance = 0;    ///< Probability that there is at least one: 1 − exp(−expected).
  std::size_t absences_met = 0;  ///< Absences on which a predicted line falls.
};

/// A vector of the kind with as many predicted lines, placed at random, reaches line i with
/// probability p_i = 1 − exp(−ρ_i · 2·tolerance_i), ρ_i the density of distinct predicted lines
/// near it (|Q| counted in a window about the line). The expected number is
/// trials · P(at least as many lines matched) · P(rms as small) · P(as few absences met), with the
/// first and last from the Poisson-binomial distribution and the second from even deviations within
/// the tolerances.
/// trials: how many distinguishable vectors the kind has. free: components of k fitted.
Coincidence coincidence(const LineFit& fit, std::span<const FitLine> lines,
                        std::span<const double> predicted,
                        std::span<const LineWindowAbsence> absences, double trials,
                        std::size_t free);

}  // namespace spinsieve
