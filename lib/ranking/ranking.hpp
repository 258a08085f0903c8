#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "exact/executor.hpp"
#include "ranking/bound.hpp"
#include "ranking/fit.hpp"
#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"
#include "ranking/ties.hpp"
#include "ranking/verdict.hpp"

namespace spinsieve {

/// Whether lower bounds are computed.
enum class BoundEffort {
  none,      ///< Nothing is excluded, only rejected.
  relaxed,   ///< One relaxation a candidate.
  branching  ///< Candidates that are rejected but not excluded are branched on.
};

struct RankingOptions {
  double significance = default_significance;
  ErrorScale errors = ErrorScale::known;
  BoundEffort bounds = BoundEffort::branching;
  std::size_t most_cones = 300;     ///< Effort of branching for one candidate.
  std::size_t stability_draws = 0;  ///< Redraws of the data; 0: none.
  std::size_t tie_points = 24;      ///< Random points of a tested tie.
  std::uint64_t seed = 1;
};

struct TieWith {
  std::size_t candidate = 0;  ///< Index in the input.
  /// first: the candidate that lists the tie; second: the other.
  TieRelation relation = TieRelation::equal;
  TieProof proof = TieProof::tested;
};

struct RankedCandidate {
  std::size_t candidate = 0;  ///< Index in the input.
  Fit fit;
  std::optional<Bound> bound;
  std::optional<double> p_value;
  double criterion = 0;  ///< Akaike's.
  double weight = 0;
  Verdict verdict = Verdict::undetermined;
  std::vector<TieWith> ties;  ///< By candidate.
  /// Share of redraws in which the criterion is least, ties sharing the place; none when not asked
  /// for or when the candidate is no contender.
  std::optional<double> stability;
};

struct Ranking {
  std::vector<RankedCandidate> candidates;  ///< Best first.
  std::size_t points = 0;
};

/// Criteria this close (against 1 + |criterion|) are one place in the ranking.
constexpr double same_criterion = 1e-6;

/// Ranks candidates by verdict (survives, undetermined, rejected, excluded), then by Akaike's
/// criterion; equal ones by effective parameters, parameters, place in the input.
///
/// Ties are looked for where χ² and effective parameters agree; containment among those that
/// survive or are undetermined. The result does not depend on the executor.
/// Throws Error when the forms of a candidate do not match the data.
Ranking ranking(const FitData& data, std::span<const CandidateModel> candidates,
                const RankingOptions& options, Executor& executor);

}  // namespace spinsieve
