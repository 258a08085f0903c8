#include <algorithm>
#include <cstdio>

#include "command.hpp"
#include "job_input.hpp"
#include "report/rank_report.hpp"

namespace spinsieve {

ArrangementRanking rank(const Job& job, std::span<const Candidate> candidates,
                        const CommandLine& call, Executor& executor) {
  ArrangementRankingOptions options;
  options.seed = call.seed;
  options.equal_moments = job.search.equal_moments;
  return rank_arrangements({.cell = job.cell,
                            .group = job.group,
                            .sites = job.magnetic_sites,
                            .measurements = job.measurements,
                            .candidates = candidates},
                           options, executor);
}

Outcome run_rank(const CommandLine& call, Executor& executor) {
  const Job job = read_job(call);
  require_propagation(job, call);
  require_sites(job, call);
  require_measurement(job, call);
  const std::vector<WavevectorModes> wavevectors =
      wavevector_modes(job, std::make_shared<const SymmetryTables>(job.group));
  const std::vector<Candidate> candidates = candidates_of(job, wavevectors);
  const ArrangementRanking ranking = rank(job, candidates, call, executor);
  if (!call.quiet)
    for (const std::string& warning : ranking.warnings)
      std::fprintf(stderr, "warning: %s\n", warning.c_str());

  std::string limit;
  for (const RankedArrangement& row : ranking.ranking)
    if (row.fit.stop == FitStop::limit)
      limit += (limit.empty() ? "" : ", ") + candidates[row.candidate].id;
  if (!limit.empty()) limit = "random starts of the fit, for " + limit;
  const bool powder = std::ranges::any_of(job.measurements, [](const Measurement& measurement) {
    return measurement.sample == Sample::powder;
  });
  const RankReport report{
      .ranking = ranking,
      .wavevectors = wavevectors,
      .candidates = candidates,
      .sites = job.magnetic_sites,
      .built_in_ties = built_in_ties(powder ? Sample::powder : Sample::single_crystal),
      .limit = limit};
  const ReportOptions options = report_options(call, job);
  return {call.form == OutputForm::json ? rank_json(report, job.group, options)
                                        : rank_text(report, job.group, options),
          limit};
}

}  // namespace spinsieve
