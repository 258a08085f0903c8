#pragma once

#include <numbers>

namespace spinsieve {

/// Neutron magnetic moment in nuclear magnetons, without its sign. Source: CODATA 2018.
constexpr double neutron_gamma = 1.91304273;
/// Classical electron radius in fm. Source: CODATA 2018.
constexpr double electron_radius_fm = 2.8179403262;
/// p = γ r_e / 2, the magnetic scattering length of one µB, in fm.
/// Source: Halpern & Johnson (1939), Phys. Rev. 55, 898.
constexpr double magnetic_length_fm = neutron_gamma * electron_radius_fm / 2;
constexpr double fm2_per_barn = 100;
/// p² in barn per µB²: turns |F⊥|² in µB² into a cross section.
constexpr double barn_per_mu_b2 = magnetic_length_fm * magnetic_length_fm / fm2_per_barn;
/// Wavelength of neutrons of 2200 m/s, to which absorption cross sections refer, Å.
constexpr double thermal_wavelength_angstrom = 1.798;

/// s = sinθ/λ in Å⁻¹ from Q in Å⁻¹.
constexpr double s_from_q(double q) { return q / (4 * std::numbers::pi); }

}  // namespace spinsieve
