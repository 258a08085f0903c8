#include "arrangement/candidate.hpp"
#include "command.hpp"
#include "job_input.hpp"
#include "report/modes_report.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {

Outcome run_modes(const CommandLine& call, Executor& /*executor*/) {
  const Job job = read_job(call);
  const ReportOptions options = report_options(call, job);
  const auto tables = std::make_shared<const SymmetryTables>(job.group);
  if (job.propagation.empty() && !job.locate_propagation) {
    const std::vector<Stratum> types = strata(*tables);
    return {call.form == OutputForm::json ? wavevector_types_json(*tables, types, options)
                                          : wavevector_types_text(*tables, types, options),
            {}};
  }
  require_propagation(job, call);
  const std::vector<WavevectorModes> wavevectors = wavevector_modes(job, tables);
  const std::vector<Site> sites = sites_of(job);
  ModesReport report;
  report.wavevectors = wavevectors;
  report.sites = sites;
  if (job.cell_given) report.cell = job.cell;
  for (const WavevectorModes& modes : wavevectors)
    report.modulation.emplace_back(is_incommensurate(modes.little_group.k(), job.search.modulation)
                                       ? "incommensurate"
                                       : "commensurate");
  return {call.form == OutputForm::json ? modes_json(report, options) : modes_text(report, options),
          {}};
}

}  // namespace spinsieve
