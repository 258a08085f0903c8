#pragma once

#include <array>
#include <cstddef>
#include <span>
#include <vector>

#include "crystal/space_group.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {

/// k → k R + shift, with R by its index among the rotations and shift a reciprocal-lattice vector.
struct SubspaceMap {
  std::size_t rotation = 0;
  FractionVector shift{};
};

/// A stratum of the lattice holohedry with what a search inside it needs: its own lattice, and the
/// symmetries it inherits.
struct FixedSubspace {
  StratumKind kind = StratumKind::point;
  Wavevector k;                         ///< As the stratum gives it.
  std::vector<FractionVector> lattice;  ///< Basis of the reciprocal vectors along the subspace.
  std::vector<std::size_t> cogroup;     ///< Indices of all rotations that fix it point by point.
  std::vector<SubspaceMap> maps;        ///< One for each rotation that keeps it as a whole.

  std::size_t dimension() const { return lattice.size(); }
};

/// The strata of a group of rotations on the lattice of a space group, by increasing dimension.
///
/// rotations: a group of matrices R acting on rows as k → k R, such as holohedry(group). Exact:
/// with U (1 − R₁ | 1 − R₂ | …) V = D diagonal over the co-group, the fixed k are those whose
/// coordinates y = k U⁻¹ have integer products with the diagonal of D; rows of U where it is 0 span
/// the subspace.
std::vector<FixedSubspace> fixed_subspaces(const SpaceGroup& group,
                                           std::span<const IntMatrix> rotations);

/// Rows dual to a basis: row i times basis row j is 1 for i = j, else 0.
/// Throws Error when the rows are linearly dependent.
std::array<FractionVector, 3> dual_basis(const std::array<FractionVector, 3>& basis);

}  // namespace spinsieve
