#include "scattering/structure_factor.hpp"

#include <cmath>
#include <numbers>

namespace spinsieve {

Vector3 reciprocal_components(const Reflection& reflection, const FractionVector& k) {
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    result[i] = reflection.hkl[i] + reflection.k_sign * k[i].to_double();
  return result;
}

ComplexVector3 magnetic_structure_factor(const MagneticScatterers& scatterers,
                                         const FourierField& field,
                                         std::span<const double> parameters,
                                         const Reflection& reflection) {
  const Vector3 hkl = reciprocal_components(reflection, field.k);
  const bool conjugate = reflection.k_sign > 0 && !field.self_conjugate;
  ComplexVector3 F{};
  for (std::size_t j = 0; j < field.atoms.size(); ++j) {
    const FieldAtom& atom = field.atoms[j];
    Vector3 real{};
    Vector3 imaginary{};
    for (std::size_t p = 0; p < parameters.size(); ++p) {
      const FourierField::Component& component = field.component(p, j);
      for (std::size_t i = 0; i < 3; ++i) {
        real[i] += parameters[p] * component[i].real();
        imaginary[i] += parameters[p] * component[i].imag();
      }
    }
    const Vector3 re = scatterers.cell().cartesian_from_crystal_axes(real);
    const Vector3 im = scatterers.cell().cartesian_from_crystal_axes(imaginary);
    const Vector3 r = to_double(atom.position);
    const std::complex<double> phase =
        std::polar(1.0, 2 * std::numbers::pi * (hkl[0] * r[0] + hkl[1] * r[1] + hkl[2] * r[2]));
    const double weight = scatterers.weight(atom.site, reflection.q_length) *
                          scatterers.displacement(atom).anisotropic_factor(hkl);
    for (std::size_t i = 0; i < 3; ++i)
      F[i] += weight * phase * std::complex<double>(re[i], conjugate ? -im[i] : im[i]);
  }
  // The atoms of each further primitive cell in the conventional one add the same amplitude.
  const double primitive_cells = static_cast<double>(scatterers.group().centrings().size());
  for (std::complex<double>& component : F) component *= primitive_cells;
  return F;
}

ComplexVector3 perpendicular(const ComplexVector3& F, const Vector3& q) {
  const double q2 = q[0] * q[0] + q[1] * q[1] + q[2] * q[2];
  const std::complex<double> along = (F[0] * q[0] + F[1] * q[1] + F[2] * q[2]) / q2;
  return {F[0] - along * q[0], F[1] - along * q[1], F[2] - along * q[2]};
}

double squared_length(const ComplexVector3& F) {
  return std::norm(F[0]) + std::norm(F[1]) + std::norm(F[2]);
}

}  // namespace spinsieve
