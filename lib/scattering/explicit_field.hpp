#pragma once

#include <array>
#include <complex>
#include <span>

#include "crystal/space_group.hpp"
#include "exact/error.hpp"
#include "modes/moment_field.hpp"

namespace spinsieve {

/// The Fourier component of one atom as a person writes it: S at the listed position.
struct ListedComponent {
  FractionVector k;
  std::size_t site = 0;
  FractionVector position;
  std::array<std::complex<double>, 3> moment{};  ///< µB along a/|a|, b/|b|, c/|c|.
  Place place;
};

/// A field of one parameter (its value is 1 for the arrangement as listed), one arm per k.
///
/// Throws Error (at the component's place) when an atom is listed twice for one k, lattice vectors
/// apart or not, and when a component has an imaginary part where 2k is a reciprocal-lattice
/// vector.
MomentField explicit_field(const SpaceGroup& group, std::span<const ListedComponent> components);

}  // namespace spinsieve
