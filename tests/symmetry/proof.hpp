#pragma once

#include <span>
#include <string>

#include "symmetry/small_irrep.hpp"

namespace spinsieve {

/// The laws of symmetry, re-derived from operations {R|t} and exact phases alone: no table, factor
/// system or exponent of the library enters. Each function names the first law that is broken,
/// with the operations concerned; an empty text means that all hold.

/// Little group, star, canonical arm and reversing operations against their definitions.
std::string broken_law(const LittleGroup& little_group);

/// D({R|t}) = exp(2πi phase) P(R) is a homomorphism on all pairs, unitary, irreducible, complete;
/// Herring's sum, partners and reversals are as the definitions say. The irreps may come from the
/// whole line or plane on which the k lies. REQUIRES: k without free parameters.
std::string broken_law(const LittleGroup& little_group, std::span<const SmallIrrep> irreps);

/// The irreps of k' = k A⁻¹ + K are, label by label, those of k carried over by the operation a:
/// tr D'(g) = tr D(a⁻¹ g a).
std::string broken_law(const LittleGroup& of_k, std::span<const SmallIrrep> irreps_of_k,
                       const LittleGroup& of_arm, std::span<const SmallIrrep> irreps_of_arm,
                       const Operation& a);

/// k with u, v, w replaced by fractions that meet no higher symmetry.
Wavevector generic_point(const Wavevector& k);
/// k with given values of u, v, w.
Wavevector point(const Wavevector& k, const FractionVector& values);

LittleGroup little_group_of(const SpaceGroup& group, const Wavevector& k);

/// Operations of the group after a change of origin by s: x' = x − s.
SpaceGroup with_origin(const SpaceGroup& group, const FractionVector& s);

}  // namespace spinsieve
