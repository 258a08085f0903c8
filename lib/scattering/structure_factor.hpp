#pragma once

#include <array>
#include <complex>
#include <span>

#include "scattering/magnetic_scatterers.hpp"

namespace spinsieve {

using ComplexVector3 = std::array<std::complex<double>, 3>;

/// Magnetic structure factor F = Σ_j f_j m_j exp(2πi Q·r_j) over the atoms of one conventional
/// parent cell, Cartesian, µB (times p: fm), by the plain sum.
///
/// field: the arm of the reflection; parameters: c_1 … c_n. The satellite hkl − k carries S_j,
/// hkl + k carries its conjugate, since m_j(L) = S_j exp(+2πi k·L) + c.c. (where 2k is a
/// reciprocal-lattice vector both are S_j). REQUIRES: the reflection belongs to the arm.
/// Source: Halpern & Johnson (1939), Phys. Rev. 55, 898, for the interaction.
ComplexVector3 magnetic_structure_factor(const MagneticScatterers& scatterers,
                                         const FourierField& field,
                                         std::span<const double> parameters,
                                         const Reflection& reflection);

/// F⊥ = e × (F × e) = F − e (e·F), e along q.
ComplexVector3 perpendicular(const ComplexVector3& F, const Vector3& q);

double squared_length(const ComplexVector3& F);  ///< F*·F.

/// The components hkl + k_sign·k on a*, b*, c*.
Vector3 reciprocal_components(const Reflection& reflection, const FractionVector& k);

}  // namespace spinsieve
