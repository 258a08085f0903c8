#pragma once

#include <optional>
#include <vector>

#include "arrangement/lattice_algebra.hpp"
#include "symmetry/little_group.hpp"

namespace spinsieve {

/// Lattice translations sorted by their phase k·T for a rational k.
class PhaseLattice {
 public:
  PhaseLattice(const SymmetryTables& tables, const FractionVector& k);

  std::int64_t order() const noexcept { return order_; }  ///< Least n with n k ≡ 0.
  /// Translations with k·T ≡ 0: the lattice of the magnetic cell of an arrangement with this k.
  const RationalLattice& kernel() const noexcept { return kernel_; }
  /// A translation with k·T ≡ phase, reduced modulo kernel(); none unless order()·phase ≡ 0.
  std::optional<FractionVector> translation(Phase phase) const;
  /// One translation per class of the lattice modulo kernel(), zero first.
  std::vector<FractionVector> classes() const;

 private:
  std::int64_t order_ = 1;
  FractionVector unit_{};  ///< k·unit ≡ 1/order.
  RationalLattice kernel_;
};

}  // namespace spinsieve
