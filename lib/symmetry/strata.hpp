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

/// A stratum of higher symmetry that a small change of k would reach.
struct NearbyStratum {
  std::size_t stratum = 0;  ///< Index in the list of strata.
  Wavevector k;             ///< The nearest k of it, no free parameters.
  FractionVector change{};  ///< k of it minus the given one, conventional components.
};

/// Where a k lies among the strata of a group.
struct StratumPosition {
  std::size_t own = 0;                ///< The stratum whose generic symmetry is that of k.
  std::vector<std::size_t> lies_on;   ///< All strata that hold k, its own among them.
  std::vector<NearbyStratum> nearby;  ///< By the largest component of the change, smallest first.
};

/// The strata a k lies on, and those of higher symmetry within reach: whose nearest k differs by
/// less than `reach` in each conventional component. Nearest holds in every metric the group
/// allows, since the change is a projection that commutes with the stratum's rotations.
/// `list` is strata(tables). Throws Error unless k has no free parameters and 0 ≤ reach ≤ 1/4.
StratumPosition stratum_position(const SymmetryTables& tables, const Wavevector& k,
                                 std::span<const Stratum> list, Fraction reach);

const char* to_string(StratumKind kind);  ///< "point", "line", "plane", "general".

}  // namespace spinsieve
