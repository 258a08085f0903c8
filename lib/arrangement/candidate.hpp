#pragma once

#include <optional>
#include <string>
#include <vector>

#include "arrangement/direction.hpp"
#include "arrangement/exact_field.hpp"
#include "arrangement/magnetic_group.hpp"
#include "arrangement/options.hpp"
#include "modes/wavevector_modes.hpp"

namespace spinsieve {

/// One irrep's share of a candidate.
struct CandidatePart {
  std::size_t wavevector = 0;          ///< Index into the enumeration's wavevectors.
  std::size_t irrep = 0;               ///< Index into their irreps.
  std::optional<std::size_t> partner;  ///< Joined irrep over k, −k, for complex ones.
  Direction direction;
};

/// A symmetry operation of a modulated arrangement: {R|t}, possibly primed, taking the phase θ of
/// the modulation (k·r) to ±θ; the field returns when θ is moved by `phase` besides.
struct SuperspaceOperation {
  Operation operation;
  bool primed = false;
  bool reversing = false;  ///< θ → −θ.
  Phase phase;
};

/// Number of domains: the index of the symmetry in G × {1, 1′} and its factors.
struct DomainCount {
  std::size_t k = 1;                     ///< Arms, k and −k counted once.
  std::size_t orientation = 1;           ///< Of one arm.
  std::size_t translation_reversal = 1;  ///< Shifts of the phase and time reversal.
  std::size_t total() const { return k * orientation * translation_reversal; }
};

/// One allowed arrangement: a direction of one (later several) physically irreducible
/// representations, with free parameters.
///
/// Every real parameter multiplies one fixed field; a candidate is always a real structure.
struct Candidate {
  std::string id;  ///< "3a"; "k2:3a" when there are several wavevectors.
  std::vector<CandidatePart> parts;
  Arms arms = Arms::single;
  bool maximal = false;
  std::vector<std::string> parameters;  ///< Names: u, v, w, p, q, …
  ExactField field;
  std::optional<MagneticGroup> group;           ///< Commensurate.
  std::vector<SuperspaceOperation> superspace;  ///< Incommensurate.
  DomainCount domains;
};

/// All single-arm candidates of the given wavevectors, each irrep that some site carries with all
/// its directions; ids are given before any filter. Complex pairs are listed under the lower
/// number.
///
/// Throws Error for a wavevector with free parameters.
std::vector<Candidate> enumerate_candidates(std::span<const WavevectorModes> wavevectors,
                                            const EnumerationOptions& options);

/// Whether a wavevector counts as incommensurate under the option: `automatic` takes a common
/// denominator above commensurate_denominator as incommensurate.
bool is_incommensurate(const Wavevector& k, Modulation modulation);

/// "u", "v", "w", "p", …; "u2", … after the letters are used up.
std::string parameter_name(std::size_t index);

/// "a" … "z", "aa", …
std::string direction_letter(std::size_t index);

}  // namespace spinsieve
