#include "scattering/profile.hpp"

#include <cmath>
#include <numbers>

#include "scattering/geometry.hpp"

namespace spinsieve {

PlacedLine placed_line(const Measurement& measurement, double q) {
  const double pi = std::numbers::pi;
  const double relative = relative_width(measurement, q);
  const Abscissa axis = abscissa(measurement.geometry);
  if (axis == Abscissa::q) return {q, q * relative};
  const double d = 2 * pi / q;
  if (axis == Abscissa::d) return {d, d * relative};
  const double two_theta = two_theta_degrees(measurement.geometry, q).value();
  // Δ2θ = 2 tanθ ΔQ/Q, in degrees.
  return {two_theta, 2 * std::tan(two_theta / 2 * pi / 180) * relative * 180 / pi};
}

double pseudo_voigt(double x, double centre, double fwhm, double eta) {
  const double pi = std::numbers::pi;
  const double t = (x - centre) / fwhm;
  const double lorentzian = 2 / (pi * fwhm) / (1 + 4 * t * t);
  const double gaussian =
      2 / fwhm * std::sqrt(std::numbers::ln2 / pi) * std::exp(-4 * std::numbers::ln2 * t * t);
  return eta * lorentzian + (1 - eta) * gaussian;
}

Abscissa abscissa(const Geometry& geometry) {
  if (std::holds_alternative<ConstantWavelength>(geometry)) return Abscissa::two_theta;
  if (std::holds_alternative<Flight>(geometry)) return Abscissa::d;
  return Abscissa::q;
}

std::vector<double> profile(const Measurement& measurement, std::span<const ProfileLine> lines,
                            std::span<const double> x, double eta) {
  const Abscissa axis = abscissa(measurement.geometry);
  std::vector<double> y(x.size());
  for (const ProfileLine& line : lines) {
    if (axis == Abscissa::two_theta && line.q >= largest_q(measurement.geometry).value()) continue;
    const PlacedLine placed = placed_line(measurement, line.q);
    for (std::size_t i = 0; i < x.size(); ++i)
      y[i] += line.intensity * pseudo_voigt(x[i], placed.centre, placed.fwhm, eta);
  }
  return y;
}

}  // namespace spinsieve
