#pragma once

#include <memory>

#include "arrangement/candidate.hpp"
#include "command_line.hpp"
#include "input/job.hpp"
#include "modes/wavevector_modes.hpp"
#include "ranking/arrangement_ranking.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

/// Reads the job of the call and prints its warnings on standard error, unless --quiet.
Job read_job(const CommandLine& call);

ReportOptions report_options(const CommandLine& call, const Job& job);

/// Throw Error at the job unless it has a propagation vector, sites, a measurement.
void require_propagation(const Job& job, const CommandLine& call);
void require_sites(const Job& job, const CommandLine& call);
void require_measurement(const Job& job, const CommandLine& call);
/// Some measurement has a line or an absence to fit to.
bool has_lines(const Job& job);

std::vector<Site> sites_of(const Job& job);

/// The wavevectors of the job with what symmetry says about its sites.
/// Errors point at the wavevector they concern.
std::vector<WavevectorModes> wavevector_modes(const Job& job,
                                              const std::shared_ptr<const SymmetryTables>& tables);

/// The candidates that the job's search asks for. Throws Error at the job when there are none.
std::vector<Candidate> candidates_of(const Job& job, std::span<const WavevectorModes> wavevectors);

/// The candidate of that id. Throws Error that lists the ids there are.
const Candidate& candidate_of(std::span<const Candidate> candidates, const std::string& id);

/// The candidates against the measurements of the job.
ArrangementRanking rank(const Job& job, std::span<const Candidate> candidates,
                        const CommandLine& call, Executor& executor);

}  // namespace spinsieve
