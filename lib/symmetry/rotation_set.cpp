#include "symmetry/rotation_set.hpp"

#include <algorithm>
#include <bit>
#include <stdexcept>

namespace spinsieve {

namespace {

std::uint64_t bit(std::size_t element) { return std::uint64_t{1} << element; }

template <typename Visit>
void for_each_element(std::uint64_t set, const Visit& visit) {
  for (; set != 0; set &= set - 1) visit(static_cast<std::size_t>(std::countr_zero(set)));
}

}  // namespace

RotationSet::RotationSet(const SymmetryTables& tables, std::span<const IntMatrix> rotations) {
  // k = M κ as columns, so κ' = M⁻¹ Rᵀ M κ; both factors have integers over one denominator.
  const IntMatrix& M = tables.reciprocal_basis();
  const std::array<IntVector, 3>& B = tables.primitive_rows();
  const int denominator = tables.primitive_denominator();
  matrices_.reserve(rotations.size());
  for (const IntMatrix& R : rotations) {
    IntMatrix& A = matrices_.emplace_back();
    for (std::size_t c = 0; c < 3; ++c) {
      const IntVector turned = row_times(IntVector{M[0][c], M[1][c], M[2][c]}, R);
      for (std::size_t r = 0; r < 3; ++r)
        A[r][c] = (B[r][0] * turned[0] + B[r][1] * turned[1] + B[r][2] * turned[2]) / denominator;
    }
  }
  fill_products();
}

/// Products with a few generators by matrices; all others follow from a·(b·g) = (a·b)·g.
void RotationSet::fill_products() {
  const std::size_t n = order();
  if (n == 0 || n > 48) throw std::logic_error("a set of rotations that is no point group");
  const auto index_of = [this](const IntMatrix& A) {
    const auto found = std::ranges::find(matrices_, A);
    if (found == matrices_.end()) throw std::logic_error("rotations that do not form a group");
    return static_cast<std::uint8_t>(found - matrices_.begin());
  };
  product_.assign(n * n, 0);
  const std::size_t identity = index_of({{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}});
  if (identity != 0) throw std::logic_error("the identity must be the first rotation");
  for (std::size_t a = 0; a < n; ++a) product_[a * n] = static_cast<std::uint8_t>(a);
  std::vector<std::uint8_t> reached{0};
  std::uint64_t known = 1;
  std::vector<std::vector<std::uint8_t>> times_generator;
  for (std::size_t candidate = 1; candidate < n; ++candidate) {
    if ((known & bit(candidate)) != 0) continue;
    std::vector<std::uint8_t>& images = times_generator.emplace_back(n);
    for (std::size_t a = 0; a < n; ++a)
      images[a] = index_of(spinsieve::product(matrices_[a], matrices_[candidate]));
    for (std::size_t i = 0; i < reached.size(); ++i)
      for (const std::vector<std::uint8_t>& times : times_generator) {
        const std::uint8_t next = times[reached[i]];
        if ((known & bit(next)) != 0) continue;
        known |= bit(next);
        for (std::size_t a = 0; a < n; ++a)
          product_[a * n + next] = times[product_[a * n + reached[i]]];
        reached.push_back(next);
      }
  }
  inverse_.assign(n, 0);
  for (std::size_t a = 0; a < n; ++a)
    for (std::size_t b = 0; b < n; ++b)
      if (product(a, b) == 0) inverse_[a] = static_cast<std::uint8_t>(b);
}

std::uint64_t RotationSet::generated(std::uint64_t subgroup, std::uint64_t more) const {
  // A union of cosets g·H that is closed under the generators from the left.
  const std::uint64_t generators = subgroup | more;
  std::uint64_t result = subgroup;
  std::uint64_t fresh = more & ~result;
  while (fresh != 0) {
    const auto g = static_cast<std::size_t>(std::countr_zero(fresh));
    for_each_element(subgroup, [&](std::size_t h) { result |= bit(product(g, h)); });
    for_each_element(generators, [&](std::size_t b) { fresh |= bit(product(b, g)); });
    fresh &= ~result;
  }
  return result;
}

std::uint64_t RotationSet::conjugate(std::uint64_t subgroup, std::size_t by) const {
  std::uint64_t result = 0;
  for_each_element(subgroup,
                   [&](std::size_t h) { result |= bit(product(product(by, h), inverse_[by])); });
  return result;
}

std::vector<RotationSet::Subgroup> RotationSet::subgroup_classes() const {
  std::vector<std::uint64_t> cyclic;
  std::vector<std::size_t> generator;
  for (std::size_t i = 1; i < order(); ++i) {
    const std::uint64_t group = generated(1, bit(i));
    if (std::ranges::find(cyclic, group) != cyclic.end()) continue;
    cyclic.push_back(group);
    generator.push_back(i);
  }
  // Every subgroup is a join of cyclic ones, and joins of representatives reach every class.
  std::vector<Subgroup> classes{Subgroup{}};
  std::vector<std::uint64_t> known{1};
  for (std::size_t i = 0; i < classes.size(); ++i) {
    for (std::size_t c = 0; c < cyclic.size(); ++c) {
      const std::uint64_t H = classes[i].elements;
      if ((H & cyclic[c]) == cyclic[c]) continue;
      const std::uint64_t joined = generated(H, bit(generator[c]));
      if (std::ranges::find(known, joined) != known.end()) continue;
      for (std::size_t by = 0; by < order(); ++by) {
        const std::uint64_t other = conjugate(joined, by);
        if (std::ranges::find(known, other) == known.end()) known.push_back(other);
      }
      Subgroup next{joined, classes[i].generators};
      next.generators.push_back(generator[c]);
      classes.push_back(std::move(next));
    }
  }
  return classes;
}

}  // namespace spinsieve
