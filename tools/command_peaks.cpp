#include <algorithm>

#include "command.hpp"
#include "job_input.hpp"
#include "report/peaks_report.hpp"
#include "scattering/explicit_field.hpp"
#include "scattering/geometry.hpp"

namespace spinsieve {
namespace {

constexpr double default_q_max = 4;  // Å⁻¹, when neither lines nor a wavelength say more.

/// An arrangement with all its parameters given.
struct Arrangement {
  MomentField field;
  std::vector<double> parameters;
  std::vector<Arm> arms;
};

/// The largest Q of the job's entries with a margin, else what the wavelength reaches.
double q_max(const Job& job) {
  double largest = 0;
  std::optional<double> reach;
  for (const Measurement& measurement : job.measurements) {
    for (const ObservedLine& line : measurement.lines)
      largest = std::max(largest, line.position.q_high);
    for (const Absence& absence : measurement.absences)
      largest = std::max(largest, absence.position.q_high);
    for (const ScannedRange& range : measurement.scanned) largest = std::max(largest, range.q_max);
    if (const std::optional<double> wavelength_limit = spinsieve::largest_q(measurement.geometry))
      reach = std::max(reach.value_or(0), *wavelength_limit);
  }
  if (largest > 0) return largest;
  return reach ? std::min(*reach, default_q_max) : default_q_max;
}

/// The arrangement of the job, its arms with the wavevector each belongs to.
Arrangement given_arrangement(const Job& job) {
  std::vector<ListedComponent> components;
  for (const ArrangementEntry& entry : job.arrangement) {
    const Wavevector& k = job.propagation[entry.wavevector];
    if (k.is_symbolic())
      throw Error(job.propagation_places[entry.wavevector],
                  "the wavevector has free parameters; peaks needs numbers");
    components.push_back({.k = k.constant,
                          .site = entry.site,
                          .position = entry.position,
                          .moment = entry.moment,
                          .place = entry.place});
  }
  Arrangement result;
  result.field = explicit_field(job.group, components);
  result.parameters = {1.0};
  for (const FourierField& arm : result.field.arms) {
    const auto wavevector = std::ranges::find(job.propagation, arm.k, &Wavevector::constant);
    result.arms.push_back({arm.k, static_cast<std::size_t>(wavevector - job.propagation.begin())});
  }
  return result;
}

[[noreturn]] void refuse_parameter(const Candidate& candidate, const std::string& name) {
  std::string known;
  for (const std::string& parameter : candidate.parameters)
    known += (known.empty() ? "" : ", ") + parameter;
  throw Error("candidate " + candidate.id + " has no parameter '" + name + "'; " + known +
              " are accepted");
}

std::vector<double> given_parameters(const Candidate& candidate, const CommandLine& call) {
  std::vector<double> values(candidate.parameters.size(), 0.0);
  for (const auto& [name, value] : call.parameters) {
    const auto found = std::ranges::find(candidate.parameters, name);
    if (found == candidate.parameters.end()) refuse_parameter(candidate, name);
    values[static_cast<std::size_t>(found - candidate.parameters.begin())] = value;
  }
  return values;
}

}  // namespace

Outcome run_peaks(const CommandLine& call, Executor& executor) {
  const Job job = read_job(call);
  require_propagation(job, call);
  require_sites(job, call);
  PeaksReport report;
  Arrangement arrangement;
  if (call.candidate) {
    const std::vector<WavevectorModes> wavevectors =
        wavevector_modes(job, std::make_shared<const SymmetryTables>(job.group));
    const std::vector<Candidate> candidates = candidates_of(job, wavevectors);
    const Candidate& candidate = candidate_of(candidates, *call.candidate);
    arrangement.field = to_moment_field(candidate.field, job.cell);
    for (const FourierField& arm : arrangement.field.arms)
      arrangement.arms.push_back({arm.k, candidate.parts.front().wavevector});
    report.arrangement = "candidate " + candidate.id;
    if (!call.parameters.empty()) {
      arrangement.parameters = given_parameters(candidate, call);
      report.parameters_from = "given";
    } else if (has_lines(job)) {
      const ArrangementRanking ranking = rank(job, {&candidate, 1}, call, executor);
      const Eigen::VectorXd& fitted = ranking.ranking.front().fit.parameters;
      arrangement.parameters.assign(fitted.begin(), fitted.end());
      report.parameters_from = ranking.scale == ScaleMeaning::absolute
                                   ? "fitted to the lines"
                                   : "fitted to the lines, scale free: intensities of the list";
    } else {
      throw Error("candidate " + candidate.id + " has free parameters; --set " +
                  candidate.parameters.front() + "=3 is accepted, or lines to fit in the job");
    }
    for (std::size_t p = 0; p < candidate.parameters.size(); ++p)
      report.parameters.emplace_back(candidate.parameters[p], arrangement.parameters[p]);
  } else {
    if (!call.parameters.empty())
      throw Error("--set needs --candidate ID; enumerate lists the ids");
    if (job.arrangement.empty())
      throw Error(
          job.place,
          "peaks needs an arrangement in the job, or --candidate ID; enumerate lists the ids");
    arrangement = given_arrangement(job);
    report.arrangement = "of the job";
  }

  const MagneticScatterers scatterers(job.cell, job.group, job.magnetic_sites);
  std::optional<NuclearScatterers> nuclei;
  if (!job.other_sites.empty())
    nuclei.emplace(job.cell, job.group, job.magnetic_sites, job.other_sites);
  const Geometry geometry =
      job.measurements.empty() ? Geometry() : job.measurements.front().geometry;
  report.q_max = q_max(job);
  const std::vector<Peak> computed =
      peaks(scatterers, nuclei ? &*nuclei : nullptr, arrangement.field, arrangement.parameters,
            arrangement.arms, geometry, report.q_max);
  report.peaks = computed;
  report.propagation = job.propagation;
  const ReportOptions options = report_options(call, job);
  return {call.form == OutputForm::json ? peaks_json(report, job.group, options)
                                        : peaks_text(report, job.group, options),
          {}};
}

}  // namespace spinsieve
