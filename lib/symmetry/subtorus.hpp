#pragma once

#include <array>
#include <compare>
#include <cstdint>
#include <span>
#include <vector>

#include "symmetry/little_group.hpp"

namespace spinsieve {

/// A row of integers, checked against overflow wherever a user's wavevector enters.
using IntegerRow = std::array<std::int64_t, 3>;

/// A point, line or plane of wavevectors, closed on the torus of k modulo the reciprocal lattice:
/// {κ : W κ ≡ v mod 1}, with κ the components of k on the primitive reciprocal basis.
///
/// Invariant: the rows of W span a saturated lattice and are in Hermite normal form; v is
/// numerators in 0 … denominator − 1 over the least denominator. Equal sets have equal members.
struct Subtorus {
  std::size_t rank = 0;  ///< Number of conditions: 3 for a point, 0 for all k.
  std::array<IntegerRow, 3> conditions{};
  IntegerRow values{};
  std::int64_t denominator = 1;

  std::size_t dimension() const { return 3 - rank; }
  friend auto operator<=>(const Subtorus& a, const Subtorus& b) = default;
};

/// Brings rank independent rows to the normal form of Subtorus.
Subtorus normalized(std::array<IntegerRow, 3> conditions, IntegerRow values, std::size_t rank,
                    std::int64_t denominator);

/// Every component of {κ : N κ ∈ Z³}, by the diagonal (Smith) form of N.
std::vector<Subtorus> components(std::span<const IntegerRow> N);

/// All k of a wavevector's parameters. Throws Error when its fractions exceed 64 bits on the way.
Subtorus subtorus(const SymmetryTables& tables, const Wavevector& k);

/// The image under κ' = A κ, given A⁻¹.
Subtorus image(const Subtorus& torus, const IntMatrix& inverse_A);

/// True when the smaller torus lies in the larger one.
bool inside(const Subtorus& small, const Subtorus& large);

/// One κ of the torus as numerators over torus.denominator, then a basis of its directions.
struct Parametrization {
  IntegerRow point{};
  std::vector<IntegerRow> directions;
};

Parametrization parametrization(const Subtorus& torus);

/// True when κ' = A κ equals κ modulo 1 for every κ of the torus.
bool keeps_pointwise(const IntMatrix& A, const Parametrization& form, std::int64_t denominator);

}  // namespace spinsieve
