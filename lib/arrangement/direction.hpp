#pragma once

#include <optional>
#include <string>
#include <vector>

#include "modes/isotypic_space.hpp"

namespace spinsieve {

/// Which multiples e(φ) of a mode the translations and time reversal reach.
///
/// Commensurate: φ runs over the multiples of 1/steps, steps being the least common multiple of 2
/// and the order of k modulo the reciprocal lattice. Incommensurate: every φ, as a limit.
struct PhaseSteps {
  bool continuous = false;
  std::int64_t steps = 2;
};

PhaseSteps phase_steps(const LittleGroup& little_group, bool incommensurate);

/// An operation that keeps a direction up to a phase: on its amplitudes {R|t} (composed with
/// complex conjugation when it takes k to −k) is multiplication by e(phase). Together with a
/// translation T, and time reversal when primed, it is a symmetry if phase − k·T + primed/2 ≡ 0.
struct Stabilizer {
  std::size_t operation = 0;  ///< Group index.
  bool reversing = false;
  Phase phase;
};

/// A class of order-parameter directions of one physically irreducible representation: the subspace
/// of row amplitudes kept by an isotropy subgroup, one representative per conjugacy class.
///
/// basis: rows span the complex subspace V of row amplitudes. Locked directions obey in addition
/// z = e(theta) (antilinear ⊗ M) z* with M of IsotypicSpace: they keep an operation that takes k to
/// −k (for 2k ≡ 0 with a real irrep the conjugation itself, always) and have real amplitudes.
struct Direction {
  ExactMatrix basis;
  std::optional<ExactMatrix> antilinear;
  Phase theta;
  std::string text;           ///< "(a,0,a)"; with "*" where amplitudes stay complex.
  std::size_t dimension = 0;  ///< Real dimension of the subspace for one copy.
  bool maximal = false;       ///< No direction of higher symmetry lies inside it.
  std::vector<Stabilizer> stabilizers;
};

/// All directions: fixed subspaces of single elements, closed under intersection, one per class
/// under the group of {R : kR ≡ ±k} with translations and time reversal; by decreasing dimension,
/// then by the canonical basis. Source: Ascher (1977), J. Phys. C 10, 1365; Stokes & Hatch (1988),
/// Isotropy Subgroups of the 230 Crystallographic Space Groups, ch. 2-3; with a continuous phase:
/// Perez-Mato et al. (2012), J. Phys.: Condens. Matter 24, 163201.
///
/// A direction without lock is left out when a lock costs it nothing: incommensurate k and one
/// complex amplitude in all, whose phase is free.
std::vector<Direction> directions(const LittleGroup& little_group, const SmallIrrep& irrep,
                                  const IsotypicSpace& space, PhaseSteps steps);

}  // namespace spinsieve
