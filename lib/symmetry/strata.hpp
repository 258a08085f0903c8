#pragma once

#include <span>
#include <vector>

#include "symmetry/little_group.hpp"

namespace spinsieve {

enum class StratumKind { point, line, plane, general };

/// A connected component of the set of k whose little co-group holds at least a given group, not
/// cut where higher-symmetry points lie on it; one representative of its star.
struct Stratum {
  StratumKind kind = StratumKind::general;
  Wavevector k;                   ///< With free parameters u, v, w as its dimension says.
  std::size_t arms = 1;           ///< Components in the star.
  std::size_t cogroup_order = 1;  ///< Rotations that keep a generic k of it modulo the lattice.
  bool isolated = true;           ///< False for a named point that lies on a line, see strata().
};

/// All strata of a group of rotations acting on k modulo the reciprocal lattice of the tables,
/// one per star: points, lines, planes, then the general stratum; within a kind by decreasing
/// co-group order, then by k. Computed exactly from the normal form of {k : k(R − 1) ∈ L*}.
std::vector<Stratum> strata(const SymmetryTables& tables, std::span<const IntMatrix> rotations);

/// Those of the group itself. Polar groups have no isolated point: the points of the lattice
/// holohedry are added for them with isolated = false and the star and co-group of the group.
std::vector<Stratum> strata(const SymmetryTables& tables);

/// True when some k of the stratum, for some arm, is equivalent to the given k (or, with free
/// parameters, all of its k).
bool lies_on(const SymmetryTables& tables, const Wavevector& k, const Stratum& stratum);

const char* to_string(StratumKind kind);  ///< "point", "line", "plane", "general".

}  // namespace spinsieve
