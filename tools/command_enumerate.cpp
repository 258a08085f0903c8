#include "command.hpp"
#include "job_input.hpp"
#include "report/enumerate_report.hpp"

namespace spinsieve {

Outcome run_enumerate(const CommandLine& call, Executor& /*executor*/) {
  const Job job = read_job(call);
  require_propagation(job, call);
  require_sites(job, call);
  const std::vector<WavevectorModes> wavevectors =
      wavevector_modes(job, std::make_shared<const SymmetryTables>(job.group));
  const std::vector<Candidate> candidates = candidates_of(job, wavevectors);
  const std::vector<Site> sites = sites_of(job);
  EnumerateReport report;
  report.wavevectors = wavevectors;
  report.candidates = candidates;
  report.sites = sites;
  report.cell = job.cell;
  const ReportOptions options = report_options(call, job);
  return {call.form == OutputForm::json ? enumerate_json(report, options)
                                        : enumerate_text(report, options),
          {}};
}

}  // namespace spinsieve
