#pragma once

#include <optional>

#include "scattering/measurement.hpp"

namespace spinsieve {

/// 2θ in degrees of a scattering vector; none by flight or without geometry, and where the
/// wavelength cannot reach (Q > 4π/λ).
std::optional<double> two_theta_degrees(const Geometry& geometry, double q);

/// The largest Q the wavelength reaches, 4π/λ; none by flight or without geometry.
std::optional<double> largest_q(const Geometry& geometry);

/// Full width ΔQ/Q of a line at Q, from Δd/d or from the Caglioti function.
/// Throws Error when a Caglioti function comes without a wavelength, has H² ≤ 0 at Q, or when Q is
/// out of reach. Source: Caglioti, Paoletti & Ricci (1958), Nucl. Instrum. 3, 223.
double relative_width(const Measurement& measurement, double q);

/// What an integrated intensity carries besides |F⊥|², up to a constant: powder 1/(sin²θ cosθ) and
/// by flight d⁴ sinθ (d in Å); single crystal 1/sin2θ and by flight λ⁴/sin²θ. 1 when the list has
/// it removed. Throws Error (at the measurement's place) when the geometry is missing or Q out of
/// reach. Source: International Tables C 6.2; Buras & Gerward (1975), Acta Cryst. A31, 372.
double lorentz_factor(const Measurement& measurement, double q);

}  // namespace spinsieve
