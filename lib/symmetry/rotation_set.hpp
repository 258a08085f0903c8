#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "symmetry/little_group.hpp"

namespace spinsieve {

/// A group of rotations acting on k modulo the reciprocal lattice of a space group: κ' = A κ for
/// k' = k R, with κ the components on the primitive reciprocal basis.
class RotationSet {
 public:
  /// Throws std::logic_error when the rotations are no group.
  RotationSet(const SymmetryTables& tables, std::span<const IntMatrix> rotations);

  std::size_t order() const noexcept { return matrices_.size(); }
  const IntMatrix& matrix(std::size_t i) const { return matrices_[i]; }
  const IntMatrix& inverse_matrix(std::size_t i) const { return matrices_[inverse_[i]]; }

  /// A subgroup: its elements as a bit set, and elements that generate it.
  struct Subgroup {
    std::uint64_t elements = 1;
    std::vector<std::size_t> generators;
  };

  /// One subgroup of each conjugacy class, the trivial one first.
  std::vector<Subgroup> subgroup_classes() const;

 private:
  std::size_t product(std::size_t a, std::size_t b) const { return product_[a * order() + b]; }
  void fill_products();
  std::uint64_t generated(std::uint64_t subgroup, std::uint64_t more) const;
  std::uint64_t conjugate(std::uint64_t subgroup, std::size_t by) const;

  std::vector<IntMatrix> matrices_;
  std::vector<std::uint8_t> product_;
  std::vector<std::uint8_t> inverse_;
};

}  // namespace spinsieve
