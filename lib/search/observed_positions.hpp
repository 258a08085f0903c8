#pragma once

#include <span>
#include <vector>

#include "scattering/measurement.hpp"
#include "search/wavevector_search.hpp"

namespace spinsieve {

/// The positions of a job's measurements as the search takes them.
///
/// Tolerance: the line's own, else a fifth of the window it owns (resolution/5). Zero shift: the
/// bound in degrees of 2θ, turned into Å⁻¹ at the line for a constant wavelength; none by flight.
/// Lines given by hkl are left out: their positions are computed, not observed.
std::vector<SearchLine> search_lines(std::span<const Measurement> measurements);

/// The windows of the listed absences, those given by hkl left out.
std::vector<SearchAbsence> search_absences(std::span<const Measurement> measurements);

}  // namespace spinsieve
