#include "job_input.hpp"

#include <algorithm>
#include <array>
#include <cstdio>

#include "exact/error.hpp"
#include "input/text.hpp"

namespace spinsieve {
namespace {

std::string standard_input() {
  std::string text;
  std::array<char, 65536> buffer{};
  while (const std::size_t count = std::fread(buffer.data(), 1, buffer.size(), stdin)) {
    text.append(buffer.data(), count);
    if (text.size() > largest_input)
      throw Error("standard input is longer than " + std::to_string(largest_input >> 20U) +
                  " MiB; a job file is accepted");
  }
  if (std::ferror(stdin) != 0) throw Error("cannot read standard input");
  return text;
}

}  // namespace

Job read_job(const CommandLine& call) {
  Job job = call.job == "-" ? parse_job(standard_input(), "<stdin>") : read_job(call.job);
  if (!call.quiet)
    for (const Remark& warning : job.warnings)
      std::fprintf(stderr, "warning: %s\n", to_string(warning).c_str());
  return job;
}

ReportOptions report_options(const CommandLine& call, const Job& job) {
  ReportOptions options;
  options.title = job.title;
  options.letters = call.ascii ? Letters::plain : Letters::trade;
  options.phase = call.phase;
  for (const Remark& note : job.notes) options.notes.push_back(to_string(note));
  for (const Remark& warning : job.warnings) options.warnings.push_back(to_string(warning));
  return options;
}

void require_propagation(const Job& job, const CommandLine& call) {
  if (job.locate_propagation)
    throw Error(job.place, "'propagation: locate' has no wavevector yet, which " + call.command +
                               " needs; spinsieve locate finds it");
  if (job.propagation.empty())
    throw Error(job.place,
                call.command + " needs a wavevector; propagation: [[0, 0, 1/2]] is an example");
}

void require_sites(const Job& job, const CommandLine& call) {
  if (job.magnetic_sites.empty())
    throw Error(job.place, call.command +
                               " needs magnetic_sites; an example is {label: M1, ion: Mn3+, "
                               "position: [0, 0, 1/2]}");
}

void require_measurement(const Job& job, const CommandLine& call) {
  if (job.measurements.empty())
    throw Error(job.place, call.command + " needs a measurement with lines or absences");
}

bool has_lines(const Job& job) {
  return std::ranges::any_of(job.measurements, [](const Measurement& measurement) {
    return !measurement.lines.empty() || !measurement.absences.empty() ||
           !measurement.scanned.empty();
  });
}

std::vector<Site> sites_of(const Job& job) {
  std::vector<Site> sites;
  for (const MagneticSite& site : job.magnetic_sites) sites.push_back(site.site);
  return sites;
}

std::vector<WavevectorModes> wavevector_modes(const Job& job,
                                              const std::shared_ptr<const SymmetryTables>& tables) {
  const std::vector<Site> sites = sites_of(job);
  std::vector<WavevectorModes> modes;
  for (std::size_t i = 0; i < job.propagation.size(); ++i) {
    try {
      modes.push_back(wavevector_modes(tables, job.propagation[i], sites));
    } catch (const Error& error) {
      throw error.at(job.propagation_places[i]);
    }
  }
  return modes;
}

std::vector<Candidate> candidates_of(const Job& job, std::span<const WavevectorModes> wavevectors) {
  // Read by the job file, and refused here rather than ignored.
  if (job.search.arms == Arms::all)
    throw Error(job.place, "'arms: all' in search is not acted on yet; accepted is single");
  if (job.search.combine > 1)
    throw Error(job.place, "'combine: " + std::to_string(job.search.combine) +
                               "' in search is not acted on yet; accepted is 1");
  for (std::size_t i = 0; i < job.propagation.size(); ++i)
    if (job.propagation[i].is_symbolic())
      throw Error(job.propagation_places[i], "the wavevector " + to_string(job.propagation[i]) +
                                                 " has free parameters; arrangements need numbers, "
                                                 "such as 1/4 for u");
  std::vector<Candidate> candidates = enumerate_candidates(wavevectors, job.search);
  if (candidates.empty())
    throw Error(job.place, "symmetry allows no ordered moments on these sites at this wavevector");
  return candidates;
}

const Candidate& candidate_of(std::span<const Candidate> candidates, const std::string& id) {
  const auto found = std::ranges::find(candidates, id, &Candidate::id);
  if (found != candidates.end()) return *found;
  std::string known;
  for (const Candidate& candidate : candidates) known += (known.empty() ? "" : ", ") + candidate.id;
  throw Error("no candidate is called '" + id + "'; " + known + " are accepted");
}

}  // namespace spinsieve
