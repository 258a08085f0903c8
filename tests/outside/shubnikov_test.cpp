#include <map>
#include <memory>
#include <set>

#include <gtest/gtest.h>

#include "arrangement/magnetic_group.hpp"
#include "symmetry/small_irrep.hpp"

namespace spinsieve {
namespace {

/// Every k with 2k ≡ 0: halves of the primitive reciprocal basis, isolated or not, 0 first.
std::vector<Wavevector> halves(const SymmetryTables& tables) {
  std::vector<Wavevector> list;
  for (int n = 0; n < 8; ++n)
    list.emplace_back(tables.conventional(
        FractionVector{Fraction(n & 1, 2), Fraction(n >> 1 & 1, 2), Fraction(n >> 2, 2)}));
  return list;
}

/// Translations with k·T whole: of a primitive basis, vectors or sums of two, or doubles.
std::vector<FractionVector> unprimed_lattice(const SpaceGroup& group, const FractionVector& k) {
  std::vector<FractionVector> even;
  std::vector<FractionVector> odd;
  for (const FractionVector& T : primitive_basis(group))
    (dot(k, T).is_integer() ? even : odd).push_back(T);
  for (std::size_t i = 0; i < odd.size(); ++i)
    even.push_back(i == 0 ? Fraction(2) * odd[0] : odd[0] + odd[i]);
  return even;
}

/// The operations with D = −1 combined with time reversal; of D only ±1 occurs.
std::vector<PrimedOperation> primed(const LittleGroup& little_group, const SmallIrrep& irrep) {
  const SpaceGroup& group = little_group.group();
  const FractionVector& k = little_group.k().constant;
  std::vector<PrimedOperation> result;
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const Phase value = little_group.phase(i) + Phase(irrep.matrices[i].exponent(0), 24);
    EXPECT_LE(value.denominator(), 2) << "a real irrep of dimension 1 is ±1";
    result.push_back({group.operations()[i], !value.is_zero()});
  }
  for (const FractionVector& T : primitive_basis(group))
    if (!dot(k, T).is_integer()) result.push_back({Operation{Operation{}.rotation, T}, true});
  return result;
}

/// The number of homomorphisms of a space group to ±1, from linear equations over two elements: one
/// unknown for each operation and primitive translation, one equation for each product.
std::size_t homomorphism_count(const SpaceGroup& group) {
  const auto basis = primitive_basis(group);
  const std::size_t order = group.order();
  const SymmetryTables tables(group);
  // Parities of a translation on the basis: products with the dual basis are whole numbers.
  const auto translation_bits = [&](const FractionVector& T) {
    std::uint64_t bits = 0;
    for (std::size_t i = 0; i < 3; ++i) {
      FractionVector unit;
      unit[i] = 1;
      const Fraction c = dot(tables.conventional(unit), T);
      EXPECT_TRUE(c.is_integer());
      if (c.numerator() % 2 != 0) bits ^= std::uint64_t{1} << (order + i);
    }
    return bits;
  };
  std::vector<std::uint64_t> equations;
  for (std::size_t i = 0; i < order; ++i) {
    const Operation& a = group.operations()[i];
    for (std::size_t j = 0; j < order; ++j) {
      const Operation ab = a * group.operations()[j];
      const std::size_t p = group.find_rotation(ab.rotation).value();
      equations.push_back((std::uint64_t{1} << i) ^ (std::uint64_t{1} << j) ^
                          (std::uint64_t{1} << p) ^
                          translation_bits(ab.translation - group.operations()[p].translation));
    }
    for (const FractionVector& T : basis)
      equations.push_back(translation_bits(times(a.rotation, T) - T));
  }
  std::size_t rank = 0;
  for (std::size_t bit = 0; bit < order + 3; ++bit) {
    const std::uint64_t mask = std::uint64_t{1} << bit;
    std::size_t pivot = rank;
    while (pivot < equations.size() && (equations[pivot] & mask) == 0) ++pivot;
    if (pivot == equations.size()) continue;
    std::swap(equations[rank], equations[pivot]);
    for (std::size_t e = 0; e < equations.size(); ++e)
      if (e != rank && (equations[e] & mask) != 0) equations[e] ^= equations[rank];
    ++rank;
  }
  return std::size_t{1} << (order + 3 - rank);
}

/// A homomorphism of a space group onto ±1 is a magnetic group of type 3 or 4, and every such group
/// arises: 674 + 517 types, beside the 230 of the homomorphism to 1 alone. Bradley & Cracknell
/// (1972), ch. 7, from memory; the counts after Zamorzaev (1953), Belov, Neronova & Smirnova
/// (1955).
TEST(ShubnikovTest, RealOneDimensionalIrrepsGiveAllTypes) {
  std::map<int, std::set<int>> types;  // Type 1 … 4: UNI numbers found.
  std::size_t all_homomorphisms = 0;
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
    const SpaceGroup& group = tables->group();
    std::size_t homomorphisms = 0;
    for (const Wavevector& k : halves(*tables)) {
      const LittleGroup little_group(tables, k);
      if (little_group.star().size() != 1) continue;
      for (const SmallIrrep& irrep : small_irreps(little_group)) {
        if (irrep.dimension != 1 || irrep.reality != Reality::real) continue;
        const MagneticGroup magnetic = MagneticGroup::from_operations(
            primed(little_group, irrep), unprimed_lattice(group, k.constant));
        const bool at_zero = k == Wavevector();
        const bool trivial = at_zero && irrep.label == "Γ1";
        ASSERT_EQ(magnetic.type(), trivial ? 1 : at_zero ? 3 : 4) << to_string(k) << irrep.label;
        types[magnetic.type()].insert(magnetic.uni_number());
        ++homomorphisms;
      }
    }
    EXPECT_EQ(homomorphisms, homomorphism_count(group)) << "all of them, isolated k or not";
    all_homomorphisms += homomorphisms;
  }
  EXPECT_EQ(types[1].size(), 230U);
  EXPECT_EQ(types[3].size(), 674U);
  EXPECT_EQ(types[4].size(), 517U);
  EXPECT_EQ(types.size(), 3U) << "type 2 holds time reversal itself";
  RecordProperty("homomorphisms", static_cast<int>(all_homomorphisms));
}

}  // namespace
}  // namespace spinsieve
