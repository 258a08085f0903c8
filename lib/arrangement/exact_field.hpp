#pragma once

#include <vector>

#include "crystal/cell.hpp"
#include "exact/cyclotomic.hpp"
#include "modes/moment_field.hpp"

namespace spinsieve {

/// e(phase) times three cyclotomic entries on the lattice basis a, b, c.
struct ExactTerm {
  Phase phase;
  std::array<Cyclotomic, 3> moment;
};
/// A sum of such terms: one Fourier component, exact whatever the denominators of k.
using ExactComponent = std::vector<ExactTerm>;

/// Fourier components of one arm, linear in real parameters, before any rounding.
struct ExactArm {
  FractionVector k;
  bool self_conjugate = false;  ///< 2k ≡ 0: the component is the real part of the sum.
  std::vector<FieldAtom> atoms;
  std::vector<ExactComponent> components;  ///< Parameter-major: [p * atoms.size() + j].
};

/// An arrangement linear in its parameters, exact.
struct ExactField {
  std::size_t parameters = 0;
  std::vector<ExactArm> arms;
};

std::array<std::complex<double>, 3> value(const ExactComponent& component);

/// The one step from exact numbers to µB: lattice-basis entries become components along the unit
/// vectors a/|a|, b/|b|, c/|c|, each parameter scaled so that its first non-zero component keeps
/// its exact value (a parameter is then a moment in µB along one axis).
MomentField to_moment_field(const ExactField& field, const Cell& cell);

}  // namespace spinsieve
