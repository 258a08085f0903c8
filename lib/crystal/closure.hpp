#pragma once

#include <span>
#include <vector>

#include "crystal/fraction_matrix.hpp"
#include "crystal/operation.hpp"

namespace spinsieve {

/// A space group as bare exact data: one operation a rotation, and the translation lattice.
struct OperationSet {
  std::vector<Operation> representatives;  ///< Distinct rotations, identity first.
  std::vector<FractionVector> centrings;   ///< In [0, 1), sorted, 0 first.

  bool in_lattice(const FractionVector& v) const;
  bool has_rotation(const IntMatrix& R) const;
  /// True when the operation, modulo the lattice, belongs to the set.
  bool contains(const Operation& operation) const;
};

/// Everything the operations generate together with the integer translations.
///
/// Throws Error when there are more than 48 rotations, a determinant other than ±1, or a lattice
/// more than finest_lattice times finer than the integers (a decimal such as 0.3333 for 1/3).
OperationSet closure(std::span<const Operation> operations);

/// Most centring translations a list of operations may have: a 4 × 4 × 4 cell with room to spare.
constexpr std::size_t finest_lattice = 96;

/// The set in coordinates x' = transformation · x + shift. Throws std::logic_error unless rotations
/// stay integer and the integers of the new axes are lattice vectors.
OperationSet transformed(const OperationSet& set, const FractionMatrix& transformation,
                         const FractionVector& shift);

}  // namespace spinsieve
