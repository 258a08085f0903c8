#pragma once

#include <array>
#include <memory>
#include <string>
#include <vector>

#include "crystal/site.hpp"
#include "symmetry/small_irrep.hpp"

namespace spinsieve {

/// What sits on the atoms: an axial vector (moments), a number (exchange modes, the permutation
/// representation alone), a polar vector (displacements).
enum class AtomQuantity { axial, scalar, polar };

/// The atoms of an orbit that the little group joins, with the way to each from the first.
struct SubOrbit {
  std::vector<std::size_t> atoms;       ///< Indices into Orbit::atoms(); the first is the base.
  std::vector<std::size_t> operations;  ///< Positions in the little group that lead from the base.
  /// r_i − R_i r_1 (in the origin of the tables): component i carries exp(2πi k·paths[i]).
  std::vector<FractionVector> paths;
};

std::vector<SubOrbit> suborbits(const LittleGroup& little_group, const Orbit& orbit);

/// One copy of a small irrep on a sub-orbit: dimension basis vectors that transform as its rows.
///
/// Basis vector b on atom i of the sub-orbit: S = exp(2πi k·paths[i]) component(b, i), three exact
/// entries on the lattice basis a, b, c. g ψ_b = Σ_c D_cb(g) ψ_c for every g of the little group.
struct ModeCopy {
  std::size_t irrep = 0;
  std::size_t suborbit = 0;
  std::size_t atoms = 0;  ///< Of the sub-orbit.
  std::vector<std::array<Cyclotomic, 3>> components;

  const std::array<Cyclotomic, 3>& component(std::size_t row, std::size_t atom) const {
    return components[row * atoms + atom];
  }
};

/// The representation that one orbit of magnetic atoms carries at a wavevector, decomposed.
///
/// Copies come from the site group of one base atom per sub-orbit: a copy is a 3 × d matrix V with
/// det(R) R V exp(−2πi g_R·r) = V P(R) for all R that fix the base atom at r (the representation is
/// induced from there), spread by Ψ_i = det(R_i) R_i V P(R_i)⁺. V is in reduced echelon form, the
/// first row's components leading, so the basis is unique. Exact throughout.
/// Source: Bertaut (1968), Acta Cryst. A24, 217; induction: Bradley & Cracknell (1972), ch. 4.
class MagneticRepresentation {
 public:
  MagneticRepresentation(const LittleGroup& little_group, const std::vector<SmallIrrep>& irreps,
                         Orbit orbit, AtomQuantity quantity = AtomQuantity::axial);

  const Orbit& orbit() const noexcept { return orbit_; }
  std::span<const SubOrbit> suborbits() const noexcept { return suborbits_; }
  std::span<const ModeCopy> copies() const noexcept { return copies_; }
  std::size_t multiplicity(std::size_t irrep) const;
  std::size_t multiplicity(std::size_t irrep, std::size_t suborbit) const;

 private:
  Orbit orbit_;
  std::vector<SubOrbit> suborbits_;
  std::vector<ModeCopy> copies_;
};

/// Multiplicities of all irreps from characters alone, χ(g) = tr(quantity) Σ_{j fixed} exp(…):
/// an independent route to MagneticRepresentation::multiplicity. Bertaut (1968), Eq. for χ.
std::vector<std::size_t> multiplicities(const LittleGroup& little_group,
                                        const std::vector<SmallIrrep>& irreps, const Orbit& orbit,
                                        AtomQuantity quantity);

/// One printed basis vector: exact entries per atom of the sub-orbit, scaled together with all rows
/// of its copy so that the first non-zero entry of row 1 is 1.
struct PrintedComponent {
  std::array<std::string, 3> exact;           ///< "1", "-e(1/3)", "e(7/50)", "e(1/2*u)".
  std::array<std::complex<double>, 3> value;  ///< Zero phase for free parameters.
};
std::vector<PrintedComponent> printed_row(const LittleGroup& little_group, const SubOrbit& suborbit,
                                          const ModeCopy& copy, std::size_t row);

}  // namespace spinsieve
