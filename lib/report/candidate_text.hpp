#pragma once

#include <complex>
#include <span>
#include <string>
#include <vector>

#include "arrangement/bulk_properties.hpp"
#include "arrangement/candidate.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

/// "u", "-2u", "u/2", "0.866u", "e(1/3)u", "0.866e(1/8)u": a factor before a parameter's name.
/// Empty when the factor is zero (below 1e-9).
std::string factor_text(std::complex<double> factor, const std::string& name);

/// "(u,2u,w)": the Fourier component of one atom (the moment where it is real), linear in the
/// parameters, in the sign of the report.
std::string moment_form(const FourierField& arm, std::size_t atom,
                        const std::vector<std::string>& parameters, PhaseSign sign);

/// "Γ3"; "Γ2 + Γ5" for complex pairs and mixtures.
std::string irreps_text(const Candidate& candidate, std::span<const WavevectorModes> wavevectors);
std::vector<std::string> irrep_labels(const Candidate& candidate,
                                      std::span<const WavevectorModes> wavevectors);

/// "(a,0,a)", joined by "; " for mixtures.
std::string direction_text(const Candidate& candidate);

/// What the symmetry of the candidate lets a crystal show.
BulkProperties candidate_bulk(const Candidate& candidate,
                              std::span<const WavevectorModes> wavevectors);

/// "x,y,z; θ+1/2", "-x,-y,-z; -θ; primed".
std::string superspace_text(const SuperspaceOperation& operation);

}  // namespace spinsieve
