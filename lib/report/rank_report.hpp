#pragma once

#include <span>
#include <string>

#include "arrangement/candidate.hpp"
#include "ranking/arrangement_ranking.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

/// What the reports of `rank` need.
struct RankReport {
  const ArrangementRanking& ranking;
  std::span<const WavevectorModes> wavevectors;
  std::span<const Candidate> candidates;
  std::span<const MagneticSite> sites;
  std::vector<std::string> built_in_ties;
  std::string limit;  ///< Empty when the work is complete.
};

/// The candidates in order, with verdicts and reasons, for people.
std::string rank_text(const RankReport& report, const SpaceGroup& group,
                      const ReportOptions& options);
/// The same as a document of schema rank/1.
std::string rank_json(const RankReport& report, const SpaceGroup& group,
                      const ReportOptions& options);

}  // namespace spinsieve
