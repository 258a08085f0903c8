#pragma once

#include <span>

#include <Eigen/Core>

#include "scattering/magnetic_scatterers.hpp"

namespace spinsieve {

/// F⊥ of every reflection for each parameter alone (c_p = 1, the others 0), per conventional cell,
/// Cartesian µB: the fast counterpart of magnetic_structure_factor.
///
/// Column p holds six rows per reflection: real x, y, z, then imaginary x, y, z. All reflections
/// must belong to the field's arm and have one k_sign. Phases come from tables of exp(2πi h x) and
/// so on, so that no exponential is taken per atom and reflection; eight reflections are carried at
/// a time.
Eigen::MatrixXd perpendicular_amplitudes(const MagneticScatterers& scatterers,
                                         const FourierField& field,
                                         std::span<const Reflection> reflections);

}  // namespace spinsieve
