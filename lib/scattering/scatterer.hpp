#pragma once

#include <array>
#include <optional>
#include <string>

#include "crystal/ion.hpp"
#include "crystal/site.hpp"

namespace spinsieve {

/// Debye-Waller parameters of a site: exp(−B s²), s = sinθ/λ, or the anisotropic U in Å².
struct Displacement {
  double b_iso = 0;                           ///< Å².
  std::optional<std::array<double, 6>> u_ij;  ///< U11 U22 U33 U12 U13 U23 on a*, b*, c* (CIF).
};

/// Coefficients A a B b C c D of one radial integral. Source: International Tables C 4.4.5.
using RadialCoefficients = std::array<double, 7>;

/// What decides the form factor of a site; at most one of lande_g, spin_g and c2 is given.
struct MagneticIon {
  Ion ion;
  std::optional<double> lande_g;  ///< c₂ = 2/g − 1.
  std::optional<double> spin_g;   ///< c₂ = 1 − 2/g.
  std::optional<double> c2;
  std::optional<RadialCoefficients> j0;  ///< The user's own, instead of the table.
  std::optional<RadialCoefficients> j2;
  Place place;
};

struct MagneticSite {
  Site site;
  MagneticIon ion;
  Displacement displacement;
  double occupancy = 1;
  std::optional<double> moment_limit;  ///< µB, largest moment over all cells.
};

struct NuclearSite {
  Site site;
  std::string element;  ///< "O", or an isotope such as "7Li".
  Displacement displacement;
  double occupancy = 1;
};

}  // namespace spinsieve
