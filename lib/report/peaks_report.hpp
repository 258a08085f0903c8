#pragma once

#include <span>
#include <string>
#include <utility>
#include <vector>

#include "report/conventions.hpp"
#include "scattering/peaks.hpp"
#include "symmetry/wavevector.hpp"

namespace spinsieve {

/// What the reports of `peaks` need.
struct PeaksReport {
  std::span<const Peak> peaks;
  std::span<const Wavevector> propagation;
  std::string arrangement;  ///< "of the job", "candidate 3a".
  std::vector<std::pair<std::string, double>>
      parameters;               ///< Values used; empty for the job's own.
  std::string parameters_from;  ///< "given", "fitted to the lines"; empty without parameters.
  double q_max = 0;             ///< Å⁻¹.
};

/// Reflections and intensities for people.
std::string peaks_text(const PeaksReport& report, const SpaceGroup& group,
                       const ReportOptions& options);
/// The same as a document of schema peaks/1.
std::string peaks_json(const PeaksReport& report, const SpaceGroup& group,
                       const ReportOptions& options);

}  // namespace spinsieve
