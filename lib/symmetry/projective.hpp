#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "symmetry/irrep_matrix.hpp"

namespace spinsieve {

/// A finite group with a factor system: P(a) P(b) = ζ^factor(a,b) P(ab), ζ = exp(2πi/24).
///
/// Element 0 is the identity, factor(0, ·) = factor(·, 0) = 0, order ≤ 48.
class FactorSystem {
 public:
  explicit FactorSystem(std::size_t order)
      : order_(order), product_(order * order), factor_(order * order) {}

  std::size_t order() const noexcept { return order_; }
  std::size_t product(std::size_t a, std::size_t b) const { return product_[a * order_ + b]; }
  int factor(std::size_t a, std::size_t b) const { return factor_[a * order_ + b]; }
  void set(std::size_t a, std::size_t b, std::size_t product, int factor) {
    product_[a * order_ + b] = static_cast<std::uint8_t>(product);
    factor_[a * order_ + b] = static_cast<std::uint8_t>(root_exponent(factor));
  }

 private:
  std::size_t order_;
  std::vector<std::uint8_t> product_, factor_;
};

/// One unitary matrix per group element.
using ProjectiveIrrep = std::vector<IrrepMatrix>;

/// All inequivalent unitary irreducible projective representations of a solvable group for its
/// factor system, in the order of their construction.
///
/// Along a chain of subgroups, each normal of prime index in the next: an irrep equivalent to its
/// conjugate is extended in p ways, p conjugate ones are induced together (Clifford theory).
/// Source: Zak (1960), J. Math. Phys. 1, 165; Bradley & Cracknell (1972), ch. 3-4.
/// Throws std::logic_error when the group is not solvable or Q(ζ) does not suffice.
std::vector<ProjectiveIrrep> projective_irreps(const FactorSystem& group);

}  // namespace spinsieve
