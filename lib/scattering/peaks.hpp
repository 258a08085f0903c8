#pragma once

#include <optional>
#include <string>
#include <vector>

#include "scattering/magnetic_scatterers.hpp"
#include "scattering/nuclear.hpp"

namespace spinsieve {

/// One computed powder line of an arrangement; intensities are per conventional parent cell, summed
/// over the line.
struct Peak {
  double q = 0;                             ///< Å⁻¹.
  double d = 0;                             ///< Å.
  std::optional<double> two_theta_degrees;  ///< None by flight, without geometry, out of reach.
  std::size_t multiplicity = 0;             ///< Reflections of one domain.
  std::vector<ReflectionIndex> indices;     ///< All of them, nicest first.
  std::string label;                        ///< "(1 0 1)+k ×8".
  double f_perp_squared = 0;                ///< µB².
  double magnetic_barn = 0;
  std::optional<double> nuclear_barn;  ///< None without nuclei.
};

/// The lines of a moment field with given parameters for 0 < q ≤ q_max, with the nuclear lines when
/// nuclei are given. arms: those of the field, with the job's wavevector each belongs to.
/// Intensities carry no Lorentz factor. REQUIRES: parameters of field.parameters values.
std::vector<Peak> peaks(const MagneticScatterers& scatterers, const NuclearScatterers* nuclei,
                        const MomentField& field, std::span<const double> parameters,
                        std::span<const Arm> arms, const Geometry& geometry, double q_max);

}  // namespace spinsieve
