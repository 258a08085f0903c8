#pragma once

#include <optional>
#include <vector>

#include "modes/magnetic_representation.hpp"

namespace spinsieve {

/// All copies of one small irrep on all magnetic sites, with reference phases.
///
/// An arrangement of this irrep is S = Σ z_{b,c} exp(2πi·phase_c) ψ_{c,b} with amplitudes z: row b,
/// copy c. When an operation a takes k to −k (the reversal of the irrep), it acts as
/// z → (U ⊗ M) z*, U on rows and the exact m × m matrix M = reversal_copies on copies. Phases are
/// chosen per sub-orbit so that M is exact, and per copy so that M has 1 wherever a copy is sent to
/// itself alone: amplitudes of candidates that keep a are then real.
/// Source: Schweizer (2005), C. R. Physique 6, 375; Radaelli & Chapon (2007), PRB 76, 054428.
struct IsotypicSpace {
  struct Copy {
    std::size_t site = 0;  ///< Index into the representations.
    std::size_t copy = 0;  ///< Index into their copies().
    Phase phase;
  };

  std::size_t irrep = 0;
  std::vector<Copy> copies;
  std::optional<Reversal> reversal;
  ExactMatrix reversal_copies;  ///< M; empty without reversal.
  Cyclotomic reversal_square;   ///< M M* = this times 1.
};

/// REQUIRES: k without free parameters; representations axial, one per site.
IsotypicSpace isotypic_space(const LittleGroup& little_group, const std::vector<SmallIrrep>& irreps,
                             std::span<const MagneticRepresentation> sites, std::size_t irrep);

}  // namespace spinsieve
