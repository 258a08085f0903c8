#pragma once

#include <array>
#include <complex>
#include <cstddef>
#include <vector>

#include "exact/fraction.hpp"

namespace spinsieve {

/// An atom that carries a Fourier component: one of a primitive cell, at its exact listed place.
struct FieldAtom {
  std::size_t site = 0;     ///< Index of the magnetic site it belongs to.
  FractionVector position;  ///< Fractional, conventional cell, exact, not reduced.
};

/// Fourier components of one arm k, linear in real parameters c_1 … c_n.
///
/// The field on atom j in the cell of lattice vector L (counted from the listed atom) is
/// m_j(L) = S_j exp(+2πi k·L), plus the complex conjugate unless 2k is a reciprocal-lattice vector,
/// with S_j = Σ_p c_p component(p, j). This is where exact numbers become µB: components are along
/// the unit vectors a/|a|, b/|b|, c/|c|.
struct FourierField {
  using Component = std::array<std::complex<double>, 3>;

  FractionVector k;
  bool self_conjugate = false;        ///< 2k is a reciprocal-lattice vector; components are real.
  std::vector<FieldAtom> atoms;       ///< Those of one primitive cell that can carry a moment.
  std::vector<Component> components;  ///< Parameter-major: [p * atoms.size() + j], µB.

  const Component& component(std::size_t parameter, std::size_t atom) const {
    return components[parameter * atoms.size() + atom];
  }
};

/// A moment field linear in its parameters: one FourierField per arm (never both k and −k).
struct MomentField {
  std::size_t parameters = 0;
  std::vector<FourierField> arms;
};

}  // namespace spinsieve
