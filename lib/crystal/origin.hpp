#pragma once

#include <optional>

#include "crystal/closure.hpp"

namespace spinsieve {

/// A shift p for which the set `from`, in coordinates x + p, is the set `to`; none when the
/// rotations or the lattices differ or no shift does it.
///
/// Solves (1 − R) p ≡ τ − t modulo the lattice for all operations at once, exactly, by bringing the
/// integer matrix of the system to diagonal form (Smith). Of several answers one is taken.
std::optional<FractionVector> shift_between(const OperationSet& from, const OperationSet& to);

}  // namespace spinsieve
