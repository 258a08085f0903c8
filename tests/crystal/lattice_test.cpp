#include "crystal/lattice.hpp"

#include <algorithm>
#include <set>

#include <gtest/gtest.h>

#include "crystal/closure.hpp"
#include "crystal/space_group.hpp"
#include "crystal/spglib.hpp"

namespace spinsieve {
namespace {

/// Order of the holohedry of the lattice, by crystal system and centring letter.
std::size_t holohedry_order(const SpaceGroup& group) {
  const int number = group.number();
  if (number <= 2) return 2;
  if (number <= 15) return 4;
  if (number <= 74) return 8;
  if (number <= 142) return 16;
  if (number <= 194) return group.symbol()[0] == 'R' ? 12 : 24;
  return 48;
}

TEST(LatticeTest, HolohedriesAreThoseOfTheLatticeSystems) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    SCOPED_TRACE(hall_number);
    const SpaceGroup group = SpaceGroup::from_hall_number(hall_number);
    const std::vector<IntMatrix> rotations = holohedry(group);
    ASSERT_EQ(rotations.size(), holohedry_order(group));
    EXPECT_EQ(rotations[0], Operation{}.rotation);
    const std::set<IntMatrix> all(rotations.begin(), rotations.end());
    EXPECT_EQ(all.size(), rotations.size());
    for (const Operation& operation : group.operations())
      EXPECT_TRUE(all.contains(operation.rotation));
    for (const IntMatrix& a : rotations) {
      EXPECT_TRUE(all.contains(product(a, rotations.back())));
      for (const FractionVector& centring : group.centrings())
        EXPECT_TRUE(group.in_lattice(times(a, centring)));
    }
  }
}

TEST(LatticeTest, TheHolohedryOfAnAccidentalCellIsNotTaken) {
  // P 4 in axes a + b, b: its lattice is tetragonal, whatever the axes look like.
  const FractionMatrix T = to_fractions({{{1, 0, 0}, {-1, 1, 0}, {0, 0, 1}}});
  const OperationSet set = transformed(closure(hall_operations(349)), T, {});
  const SpaceGroup group = SpaceGroup::from_operations(set.representatives);
  EXPECT_EQ(group.number(), 75);
  EXPECT_EQ(holohedry(group).size(), 16U);
}

TEST(LatticeTest, PrimitiveBasesSpanTheLatticeAndNoMore) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    const SpaceGroup group = SpaceGroup::from_hall_number(hall_number);
    const FractionMatrix basis = primitive_basis(group);
    EXPECT_EQ(determinant(basis), Fraction(1, static_cast<std::int64_t>(group.centrings().size())));
    for (const FractionVector& row : basis) EXPECT_TRUE(group.in_lattice(row));
    // Every lattice vector has integer coordinates, columns being the rows of the basis.
    const FractionMatrix back = inverse(transpose(basis));
    for (const FractionVector& centring : group.centrings())
      EXPECT_TRUE(is_integer(times(back, centring)));
    EXPECT_TRUE(to_integers(back));
  }
}

TEST(LatticeTest, BasisByHand) {
  const std::vector<FractionVector> body{{}, {Fraction(1, 2), Fraction(1, 2), Fraction(1, 2)}};
  const FractionMatrix basis = lattice_basis(body);
  EXPECT_EQ(to_string(basis[0]), "1/2, 1/2, 1/2");
  EXPECT_EQ(to_string(basis[1]), "0, 1, 0");
  EXPECT_EQ(to_string(basis[2]), "0, 0, 1");
}

TEST(LatticeTest, ReductionFindsTheShortestVectors) {
  // A cube seen along a long skewed basis.
  const IntMatrix skewed{{{1, 5, 7}, {0, 1, 3}, {0, 0, 1}}};
  IntMetric G{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      for (std::size_t k = 0; k < 3; ++k) G[i][j] += skewed[i][k] * skewed[j][k];
  const IntMatrix reduced = product(reduced_basis(G), skewed);
  for (const IntVector& row : reduced)
    EXPECT_EQ(row[0] * row[0] + row[1] * row[1] + row[2] * row[2], 1);
  EXPECT_EQ(determinant(reduced), 1);
}

}  // namespace
}  // namespace spinsieve
