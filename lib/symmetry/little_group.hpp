#pragma once

#include <memory>
#include <optional>
#include <span>
#include <vector>

#include "crystal/space_group.hpp"
#include "symmetry/projective.hpp"
#include "symmetry/wavevector.hpp"

namespace spinsieve {

/// A space group with the integer tables that every wavevector needs: set up once per group.
///
/// Translations are kept in the origin of SpaceGroup::origin_shift(), modulo the lattice, in 24ths.
/// Products K·t with a reciprocal-lattice vector K are then exact exponents modulo 24.
class SymmetryTables {
 public:
  explicit SymmetryTables(SpaceGroup group);

  const SpaceGroup& group() const noexcept { return group_; }
  const IntVector& translation_24ths(std::size_t operation) const {
    return translation_[operation];
  }
  /// The exponent of exp(2πi K·t) for an operation's t; REQUIRES: K in the reciprocal lattice.
  int exponent(const IntVector& K, std::size_t operation) const;
  bool in_reciprocal_lattice(const IntVector& K) const;
  /// k on the primitive reciprocal basis, reduced to [0, 1), as integers over k_denominator ·
  /// primitive_denominator(): equal exactly for equivalent k.
  IntVector reduced(const IntVector& k, int k_denominator) const;
  int primitive_denominator() const noexcept { return primitive_denominator_; }
  /// Rows: a basis of the primitive lattice times primitive_denominator().
  const std::array<IntVector, 3>& primitive_rows() const noexcept { return primitive_; }
  /// Columns: the reciprocal basis dual to it, in conventional reciprocal components.
  const IntMatrix& reciprocal_basis() const noexcept { return inverse_primitive_; }
  /// Inverse of reduced(): a k in the conventional reciprocal basis, exact.
  FractionVector conventional(const IntVector& reduced_k, int k_denominator) const;
  /// Between components on the primitive and the conventional reciprocal basis, not reduced.
  FractionVector conventional(const FractionVector& primitive_k) const;
  FractionVector primitive(const FractionVector& k) const;
  /// True when kR ≡ k, for all values of free parameters.
  bool keeps(const Wavevector& k, const IntMatrix& R) const;

 private:
  SpaceGroup group_;
  std::vector<IntVector> translation_;
  std::vector<IntVector> centrings_;  ///< Over centring_denominator_.
  int centring_denominator_ = 1;
  std::array<IntVector, 3>
      primitive_{};  ///< Rows: primitive lattice vectors times the denominator.
  int primitive_denominator_ = 1;
  IntMatrix inverse_primitive_{};  ///< Of primitive_/denominator, an integer matrix.
};

/// The little group of a wavevector: the operations {R|t} of G with k R⁻¹ ≡ k, its star and the
/// operations that take k to −k. All decided exactly; with free parameters, for generic values.
class LittleGroup {
 public:
  /// Throws Error when k has more parameters than directions, a common denominator above 1000000,
  /// or components so large that exact products would not fit.
  LittleGroup(std::shared_ptr<const SymmetryTables> tables, const Wavevector& k);

  const SymmetryTables& tables() const noexcept { return *tables_; }
  const SpaceGroup& group() const noexcept { return tables_->group(); }
  const Wavevector& k() const noexcept { return k_; }

  /// Indices into group().operations() of coset representatives, identity first, increasing.
  std::span<const std::size_t> operations() const noexcept { return operations_; }
  std::size_t order() const noexcept { return operations_.size(); }  ///< Of the little co-group.
  /// Position of a group operation in operations().
  std::optional<std::size_t> position(std::size_t group_operation) const;

  /// g_R = kR − k of the i-th operation: a reciprocal-lattice vector.
  const IntVector& g(std::size_t i) const { return g_[i]; }
  /// Factor system of P: P(R)P(S) = exp(−2πi g_R·t_S) P(RS).
  FactorSystem factor_system() const;

  /// exp(2πi·phase(i)) P(R) = D({R|t}) for the i-th operation: phase = −k·t − g_R·s with s the
  /// origin shift. REQUIRES: k without free parameters (std::logic_error).
  Phase phase(std::size_t i) const;
  /// The same as text for any k: "1/2", "-1/2*u".
  std::string phase_text(std::size_t i) const;

  /// Operations (group indices) with kR ≡ −k; all of operations() when 2k ≡ 0; empty when −k is
  /// not in the star.
  std::span<const std::size_t> reversing() const noexcept { return reversing_; }
  /// kR + k of the i-th of reversing(): a reciprocal-lattice vector.
  const IntVector& reversal_vector(std::size_t i) const { return reversal_vectors_[i]; }
  bool self_conjugate() const noexcept { return self_conjugate_; }  ///< 2k ≡ 0.
  bool minus_k_in_star() const noexcept { return !reversing_.empty(); }

  /// One arm per coset, k first; arm i = k R⁻¹ with R = group operation arm_operation(i).
  std::span<const Wavevector> star() const noexcept { return star_; }
  std::size_t arm_operation(std::size_t i) const { return arm_operation_[i]; }

  /// The representative under which irreps are named: the least arm of the star, reduced, in the
  /// order of its components on the primitive reciprocal basis.
  const Wavevector& canonical_k() const noexcept { return canonical_k_; }
  /// k = canonical_k · R_r⁻¹ + K.
  std::size_t canonical_operation() const noexcept { return canonical_operation_; }
  const IntVector& canonical_shift() const noexcept { return canonical_shift_; }

 private:
  std::shared_ptr<const SymmetryTables> tables_;
  Wavevector k_;
  std::vector<std::size_t> operations_;
  std::vector<IntVector> g_;
  std::vector<std::size_t> reversing_;
  std::vector<IntVector> reversal_vectors_;
  bool self_conjugate_ = false;
  std::vector<Wavevector> star_;
  std::vector<std::size_t> arm_operation_;
  Wavevector canonical_k_;
  std::size_t canonical_operation_ = 0;
  IntVector canonical_shift_{};
};

}  // namespace spinsieve
