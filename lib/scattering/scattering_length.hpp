#pragma once

#include <complex>
#include <optional>
#include <string>
#include <string_view>

#include "exact/error.hpp"

namespace spinsieve {

/// Nuclear scattering of a natural element or one isotope.
struct ScatteringLength {
  std::string nuclide;         ///< As tabulated: "Mn", "7Li".
  double length_fm = 0;        ///< Bound coherent length, real part.
  double absorption_barn = 0;  ///< At 1.798 Å.

  /// b' − i b″ with b″ = σ_a/(2λ): absorption takes intensity away. fm.
  std::complex<double> complex_length_fm() const;
};

/// element: "O", or an isotope as "7Li"; D is 2H.
/// Throws Error (at the place) that names the isotopes tabulated for the element.
/// Source: Rauch & Waschkowski (2003), Sears (1992); data/scattering_lengths.csv.
ScatteringLength scattering_length(std::string_view element, const Place& place = {});

/// A sentence to print for Cd, Sm, Eu, Gd, Dy and their isotopes, whose lengths depend strongly on
/// the neutron energy; none for other elements.
std::optional<std::string> absorber_warning(std::string_view element);

}  // namespace spinsieve
