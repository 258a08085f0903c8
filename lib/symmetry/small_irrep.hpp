#pragma once

#include <optional>
#include <string>
#include <vector>

#include "symmetry/little_group.hpp"

namespace spinsieve {

/// Outcome of Herring's sum. `complex` also stands for "−k is not in the star".
enum class Reality { real, pseudoreal, complex };

/// A small irrep D({R|t}) = exp(−2πi k·t) P(R) of a little group.
///
/// matrices[i] is P of LittleGroup::operations()[i], the phase LittleGroup::phase(i) completes it.
/// Labels count within one k from 1, by the order stated at small_irreps().
struct SmallIrrep {
  std::string label;  ///< "Γ1", "Γ2", …
  int dimension = 1;
  Reality reality = Reality::real;
  std::optional<std::size_t> partner;  ///< Index of the irrep that joins a complex one over k, −k.
  std::vector<IrrepMatrix> matrices;
  std::vector<IrrepMatrix::Trace> characters;  ///< Of P.
};

/// All small irreps, constructed at the canonical arm of the star and transformed to k.
///
/// Order and labels: by dimension, then by the characters of P at the canonical arm, operation
/// after operation, the larger real part first, then the larger imaginary part, so that the irrep
/// most like the identity leads. The order is total and the same for all arms of a star and all
/// equivalent k.
/// Reality: Herring's sum (1/|co-group|) Σ exp(−2πi (kR + k)·t) tr P(R²) over kR ≡ −k.
/// Source: Herring (1937), Phys. Rev. 52, 361; Bradley & Cracknell (1972), ch. 3-4.
std::vector<SmallIrrep> small_irreps(const LittleGroup& little_group);

/// The antiunitary action of an operation a that takes k to −k on the rows of a small irrep:
/// a ψ_b = Σ_c U_cb ψ_c for one copy, antilinear, so that D(a g a⁻¹) = U D(g)* U⁻¹.
struct Reversal {
  std::size_t operation = 0;  ///< Group index of a.
  IrrepMatrix matrix;         ///< U, unitary; its overall phase is a convention.
  int sign = 0;               ///< U U* = sign · D(a²): +1 real, −1 pseudoreal.
};

/// The reversal by the first operation that takes k to −k.
/// Empty for complex irreps. REQUIRES: the irrep is one of small_irreps(little_group).
std::optional<Reversal> reversal(const LittleGroup& little_group, const SmallIrrep& irrep);

const char* to_string(Reality reality);  ///< "real", "pseudoreal", "complex".

}  // namespace spinsieve
