#pragma once

#include <array>
#include <cstdint>
#include <span>

#include "crystal/fraction_matrix.hpp"

namespace spinsieve {

using IntMetric = std::array<std::array<std::int64_t, 3>, 3>;  ///< Symmetric; any unit.

/// A positive metric without any symmetry, to be averaged over a group.
inline constexpr IntMetric generic_metric{{{1009, 57, 83}, {57, 1187, 131}, {83, 131, 1399}}};

/// Σ Rᵀ G R over the rotations: invariant under them when they form a group.
IntMetric averaged_metric(std::span<const IntMatrix> rotations, const IntMetric& start);

/// Rows: a basis of the lattice of integers and centrings, in Hermite normal form; right-handed.
/// Throws Error when the denominators have no common multiple in 64 bits.
FractionMatrix lattice_basis(std::span<const FractionVector> centrings);

/// Rows: short vectors of the integer lattice under a positive metric; determinant 1.
IntMatrix reduced_basis(const IntMetric& G);

}  // namespace spinsieve
