#include "scattering/geometry.hpp"

#include <cmath>
#include <numbers>
#include <string>

namespace spinsieve {
namespace {

constexpr double degrees_per_radian = 180 / std::numbers::pi;

Error out_of_reach(const Place& place, double q, double wavelength) {
  return {place, "q = " + std::to_string(q) + " is out of reach at wavelength " +
                     std::to_string(wavelength) + "; the largest q is 4π/λ = " +
                     std::to_string(4 * std::numbers::pi / wavelength)};
}

/// θ in radians. Throws Error when out of reach.
double theta(const Measurement& measurement, double wavelength, double q) {
  const double sine = q * wavelength / (4 * std::numbers::pi);
  if (sine >= 1) throw out_of_reach(measurement.place, q, wavelength);
  return std::asin(sine);
}

double d_spacing(double q) { return 2 * std::numbers::pi / q; }

}  // namespace

std::optional<double> largest_q(const Geometry& geometry) {
  const auto* constant = std::get_if<ConstantWavelength>(&geometry);
  if (constant == nullptr) return std::nullopt;
  return 4 * std::numbers::pi / constant->wavelength_angstrom;
}

std::optional<double> two_theta_degrees(const Geometry& geometry, double q) {
  const std::optional<double> limit = largest_q(geometry);
  if (!limit || q > *limit) return std::nullopt;
  return 2 * std::asin(q / *limit) * degrees_per_radian;
}

double relative_width(const Measurement& measurement, double q) {
  if (const double* width = std::get_if<double>(&measurement.resolution)) return *width;
  const auto& c = std::get<Caglioti>(measurement.resolution);
  const auto* constant = std::get_if<ConstantWavelength>(&measurement.geometry);
  if (constant == nullptr)
    throw Error(measurement.place,
                "resolution {u, v, w} needs a wavelength; give wavelength, or "
                "resolution as Δd/d");
  const double tangent = std::tan(theta(measurement, constant->wavelength_angstrom, q));
  const double h2 = c.u * tangent * tangent + c.v * tangent + c.w;
  if (h2 <= 0)
    throw Error(measurement.place, "resolution {u, v, w} gives a negative H² at q = " +
                                       std::to_string(q) + "; H² = u tan²θ + v tanθ + w");
  // Q = 4π sinθ/λ, so that ΔQ/Q = cotθ Δθ with Δθ = H/2.
  return std::sqrt(h2) / degrees_per_radian / 2 / tangent;
}

double lorentz_factor(const Measurement& measurement, double q) {
  if (measurement.intensity == IntensityKind::lorentz_removed) return 1;
  const bool powder = measurement.sample == Sample::powder;
  if (const auto* constant = std::get_if<ConstantWavelength>(&measurement.geometry)) {
    const double angle = theta(measurement, constant->wavelength_angstrom, q);
    const double sine = std::sin(angle);
    return powder ? 1 / (sine * sine * std::cos(angle)) : 1 / std::sin(2 * angle);
  }
  if (const auto* flight = std::get_if<Flight>(&measurement.geometry)) {
    const double sine = std::sin(flight->two_theta_degrees / 2 / degrees_per_radian);
    const double d = d_spacing(q);
    const double wavelength = 2 * d * sine;
    return powder ? std::pow(d, 4) * sine : std::pow(wavelength, 4) / (sine * sine);
  }
  throw Error(measurement.place,
              "integrated intensities need the geometry for the Lorentz factor; "
              "give wavelength or flight, or intensity: lorentz_removed");
}

}  // namespace spinsieve
