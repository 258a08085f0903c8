#include "search/fixed_subspaces.hpp"

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

TEST(FixedSubspacesTest, MapsKeepTheSubspaceAndItsLatticeIsPrimitive) {
  const char* groups[] = {"P -1",     "C 2/m",     "P m m m",  "F m m m",  "I 4/m m m", "R -3 m",
                          "P -3 m 1", "P 6/m m m", "P m -3 m", "I m -3 m", "F m -3 m"};
  for (const char* symbol : groups) {
    SCOPED_TRACE(symbol);
    const SpaceGroup group = parse_space_group(symbol);
    const std::vector<IntMatrix> rotations = holohedry(group);
    for (const FixedSubspace& subspace : fixed_subspaces(group, rotations)) {
      SCOPED_TRACE(to_string(subspace.k));
      // Orbit and stabiliser: every rotation either keeps the subspace or carries it to one of its
      // other images, equally many for each.
      EXPECT_EQ(rotations.size() % subspace.maps.size(), 0U);
      EXPECT_EQ(subspace.maps.size() % subspace.cogroup.size(), 0U);
      for (const FractionVector& row : subspace.lattice) {
        EXPECT_TRUE(group.in_reciprocal_lattice(row));
        for (const std::size_t g : subspace.cogroup) EXPECT_EQ(row_times(row, rotations[g]), row);
        for (const int part : {2, 3})
          EXPECT_FALSE(group.in_reciprocal_lattice(Fraction(1, part) * row));
      }
      for (const SubspaceMap& map : subspace.maps) {
        EXPECT_TRUE(group.in_reciprocal_lattice(map.shift));
        // The image of a point of the subspace is fixed by the same co-group.
        FractionVector point = subspace.k.constant;
        Fraction value(3, 29);
        for (const FractionVector& row : subspace.lattice) {
          point = point + value * row;
          value += Fraction(5, 31);
        }
        const FractionVector image = row_times(point, rotations[map.rotation]) + map.shift;
        const FractionVector step = image - subspace.k.constant;
        for (const std::size_t g : subspace.cogroup)
          EXPECT_EQ(row_times(step, rotations[g]), step) << "not along the subspace";
      }
    }
  }
}

}  // namespace
}  // namespace spinsieve
