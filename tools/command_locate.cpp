#include <algorithm>

#include "command.hpp"
#include "job_input.hpp"
#include "report/locate_report.hpp"
#include "search/observed_positions.hpp"

namespace spinsieve {

Outcome run_locate(const CommandLine& call, Executor& executor) {
  const Job job = read_job(call);
  require_measurement(job, call);
  SearchProblem problem;
  problem.cell = job.cell;
  problem.group = job.group;
  problem.options = job.locate;
  problem.lines = search_lines(job.measurements);
  problem.absences = search_absences(job.measurements);
  if (problem.lines.empty())
    throw Error(job.place,
                "locate needs lines with q, d or two_theta; lines: [{q: 1.157}] is an example");
  const SearchResult result = locate(problem, executor);
  const bool cut = std::ranges::any_of(result.coverage.kinds, [](const KindCoverage& kind) {
    return kind.searched && !kind.complete;
  });
  const std::string limit = cut ? "number of boxes examined, see the coverage" : "";
  const LocateReport report{.problem = problem, .result = result, .limit = limit};
  const ReportOptions options = report_options(call, job);
  return {
      call.form == OutputForm::json ? locate_json(report, options) : locate_text(report, options),
      limit};
}

}  // namespace spinsieve
