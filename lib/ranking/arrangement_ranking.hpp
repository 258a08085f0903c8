#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "arrangement/candidate.hpp"
#include "exact/executor.hpp"
#include "ranking/moments.hpp"
#include "ranking/ranking.hpp"
#include "scattering/observation.hpp"

namespace spinsieve {

/// What is ranked: candidates of one crystal against its measurements.
struct ArrangementData {
  const Cell& cell;
  const SpaceGroup& group;
  std::span<const MagneticSite> sites;
  std::span<const Measurement> measurements;
  std::span<const Candidate> candidates;
};

struct ArrangementRankingOptions {
  double significance = default_significance;
  std::uint64_t seed = 1;
  bool equal_moments = false;
};

struct RankedArrangement {
  std::size_t candidate = 0;  ///< Index into the candidates given.
  Fit fit;
  std::optional<double> lower_bound;  ///< Certified: no parameters reach a smaller χ².
  Verdict verdict = Verdict::survives;
  std::optional<double> p_value;
  double weight = 0;          ///< Akaike weight.
  std::vector<TieWith> ties;  ///< Indices into the candidates given.
  std::vector<AtomMoment> moments;
  std::vector<std::string> undetermined;  ///< In words.
};

/// Candidates in the order of ranking().
struct ArrangementRanking {
  ScaleMeaning scale = ScaleMeaning::relative;
  std::size_t points = 0;              ///< Lines and absences, windows merged.
  std::vector<ObservationPlan> plans;  ///< One per measurement.
  FitData data;
  std::vector<RankedArrangement> ranking;
  std::vector<std::string> warnings;
};

/// Fits every candidate to all measurements and judges it.
///
/// Throws Error, at the place of the input, when no measurement has a line or absence, or a site
/// has no form factor.
ArrangementRanking rank_arrangements(const ArrangementData& input,
                                     const ArrangementRankingOptions& options, Executor& executor);

/// The ties that unpolarised intensities cannot break, in words; powder tells whether to name the
/// averages that only a powder makes.
std::vector<std::string> built_in_ties(Sample sample);

}  // namespace spinsieve
