#pragma once

#include <span>
#include <vector>

#include "scattering/measurement.hpp"

namespace spinsieve {

/// A pseudo-Voigt line of unit area: eta · Lorentzian + (1 − eta) · Gaussian of one full width.
///
/// x, centre and fwhm in one unit; fwhm > 0; 0 ≤ eta ≤ 1. Result per that unit.
/// Source: Wertheim, Butler, West & Buchanan (1974), Rev. Sci. Instrum. 45, 1369.
double pseudo_voigt(double x, double centre, double fwhm, double eta);

/// A computed line on a pattern.
struct ProfileLine {
  double q = 0;          ///< Å⁻¹.
  double intensity = 0;  ///< Area.
};

/// Abscissa of a pattern: 2θ in degrees with a wavelength, else d in Å by flight, else Q in Å⁻¹.
enum class Abscissa { two_theta, d, q };
Abscissa abscissa(const Geometry& geometry);

/// Where a line at q falls on the abscissa, and its full width there.
struct PlacedLine {
  double centre = 0;
  double fwhm = 0;
};

/// Throws Error as relative_width. REQUIRES: q within reach of the wavelength.
PlacedLine placed_line(const Measurement& measurement, double q);

/// Sum of pseudo-Voigt lines at the points x, widths from the measurement's resolution; lines out
/// of reach of the wavelength are left out. Throws Error as relative_width.
/// eta: 0 for the Gaussian lines of most constant-wavelength instruments.
std::vector<double> profile(const Measurement& measurement, std::span<const ProfileLine> lines,
                            std::span<const double> x, double eta);

}  // namespace spinsieve
