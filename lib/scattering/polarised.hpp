#pragma once

#include <complex>

#include "scattering/structure_factor.hpp"

namespace spinsieve {

/// Intensities of one reflection with the beam polarised along and against a direction, fm².
struct PolarisedIntensities {
  double along = 0;    ///< Neutron spins along the direction.
  double against = 0;  ///< Spins against it.

  double unpolarised() const { return (along + against) / 2; }
  double flipping_ratio() const { return along / against; }
};

/// I± = |F_N|² + p²|F⊥|² ± 2 P p Re(F_N* F⊥·e) without polarisation analysis.
///
/// nuclear: F_N in fm; F_perp: F⊥ in µB, Cartesian, of the same reflection hkl of a collinear k = 0
/// arrangement (no chiral term); direction: of the neutron *spins*, any length > 0;
/// polarisation: degree P, 0 … 1. A moment along the spins adds to a positive length: the
/// magnetic amplitude of spins along e is +p F⊥·e.
/// Source: Moon, Riste & Koehler (1969), Phys. Rev. 181, 920, with moments for spins.
PolarisedIntensities polarised_intensities(std::complex<double> nuclear,
                                           const ComplexVector3& F_perp, const Vector3& direction,
                                           double polarisation);

}  // namespace spinsieve
