#include "symmetry/strata.hpp"

#include <algorithm>
#include <map>
#include <memory>
#include <random>
#include <set>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "exact/error.hpp"
#include "proof.hpp"

namespace spinsieve {
namespace {

using ::testing::HasSubstr;
using ::testing::ThrowsMessage;

/// One group per arithmetic class: strata depend on the point group and the lattice alone.
constexpr int symmorphic[] = {
    1,   2,   3,   5,   6,   8,   10,  12,  16,  21,  22,  23,  25,  35,  38,  42,  44,  47,  65,
    69,  71,  75,  79,  81,  82,  83,  87,  89,  97,  99,  107, 111, 115, 119, 121, 123, 139, 143,
    146, 147, 148, 149, 150, 155, 156, 157, 160, 162, 164, 166, 168, 174, 175, 177, 183, 187, 189,
    191, 195, 196, 197, 200, 202, 204, 207, 209, 211, 215, 216, 217, 221, 225, 229};

SymmetryTables tables_of(int number) { return SymmetryTables(SpaceGroup::from_number(number)); }

Wavevector parse(const std::array<const char*, 3>& texts) {
  Wavevector k;
  for (std::size_t i = 0; i < 3; ++i) parse_component(texts[i], i, k);
  return k;
}

/// "4 points, 6 lines, 3 planes" of the isolated strata.
std::string counts(const std::vector<Stratum>& list) {
  std::array<int, 3> n{};
  for (const Stratum& s : list)
    if (s.isolated && s.kind != StratumKind::general) ++n[static_cast<std::size_t>(s.kind)];
  return std::to_string(n[0]) + " points, " + std::to_string(n[1]) + " lines, " +
         std::to_string(n[2]) + " planes";
}

TEST(StrataTest, CountsByHand) {
  const struct {
    int number;
    const char* counts;
    const char* why;
  } cases[] = {
      {1, "0 points, 0 lines, 0 planes", "nothing is special"},
      {2, "8 points, 0 lines, 0 planes", "2k = 0: eight halves"},
      {3, "0 points, 4 lines, 0 planes", "twofold lines through four halves"},
      {5, "0 points, 2 lines, 0 planes", "C: (0,u,0) = (1,u,0) and (0,u,1/2)"},
      {6, "0 points, 0 lines, 2 planes", "two mirror planes"},
      {10, "8 points, 4 lines, 2 planes", "2/m"},
      {25, "0 points, 4 lines, 4 planes", "mm2: four lines along c, two planes each way"},
      {47, "8 points, 12 lines, 6 planes", "the box: corners, edges, faces"},
      {221, "4 points, 6 lines, 3 planes",
       "Gamma X M R; Delta Lambda Sigma S T Z; kz = 0, kz = 1/2, kx = ky"},
      {225, "4 points, 5 lines, 2 planes",
       "Gamma X L W; Delta Lambda Sigma Z Q; kz = 0 (= kz = 1), kx = ky; K and U lie on Sigma"},
      {229, "4 points, 5 lines, 2 planes",
       "Gamma H N P; Delta Lambda Sigma G D; kz = 0, kx = ky; F continues Lambda"},
      {191, "6 points, 7 lines, 4 planes",
       "Gamma A K H M L; Delta P U T S Sigma R, T and S going on through K and H; two faces, kx = "
       "ky, kx = 0"},
  };
  for (const auto& [number, expected, why] : cases) {
    SCOPED_TRACE(std::to_string(number) + ": " + why);
    EXPECT_EQ(counts(strata(tables_of(number))), expected);
  }
}

TEST(StrataTest, EntriesAreConsistent) {
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
    const std::vector<Stratum> list = strata(*tables);
    ASSERT_EQ(list.back().kind, StratumKind::general);
    for (const Stratum& s : list) {
      SCOPED_TRACE(to_string(s.k));
      const LittleGroup g(tables, s.k);
      EXPECT_EQ(static_cast<int>(s.kind), s.k.free_parameters());
      EXPECT_EQ(g.order(), s.cogroup_order);
      EXPECT_EQ(g.star().size(), s.arms);
      EXPECT_TRUE(lies_on(*tables, s.k, s));
      EXPECT_TRUE(s.isolated || s.kind == StratumKind::point);
    }
  }
}

/// Every k of a grid lies on exactly one isolated stratum with its own co-group order, and all
/// others that hold it have less symmetry. n divides the primitive reciprocal basis.
void prove_complete(int number, int n) {
  SCOPED_TRACE("group " + std::to_string(number));
  const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
  const std::vector<Stratum> list = strata(*tables);
  std::set<IntVector> seen;
  for (int x = 0; x < n; ++x)
    for (int y = 0; y < n; ++y)
      for (int z = 0; z < n; ++z) {
        if (!seen.insert({x, y, z}).second) continue;
        const Wavevector k(
            tables->conventional(FractionVector{Fraction(x, n), Fraction(y, n), Fraction(z, n)}));
        SCOPED_TRACE("k = " + to_string(k));
        std::size_t order = 0;
        for (const Operation& g : tables->group().operations()) {
          const Wavevector image = row_times(k, g.rotation);
          if (tables->group().in_reciprocal_lattice((image - k).constant)) ++order;
          const FractionVector primitive = tables->primitive(image.constant);
          IntVector on_grid{};
          for (std::size_t c = 0; c < 3; ++c)
            on_grid[c] = static_cast<int>((Fraction(n) * primitive[c].modulo_one()).numerator());
          seen.insert(on_grid);  // One arm of each star is enough.
        }
        std::size_t own = 0;
        for (const Stratum& s : list) {
          if (!s.isolated || !lies_on(*tables, k, s)) continue;
          ASSERT_LE(s.cogroup_order, order);
          if (s.cogroup_order == order) ++own;
        }
        ASSERT_EQ(own, 1U);
      }
}

TEST(StrataTest, EveryGridPointHasItsStratum) {
  for (const int number : symmorphic) ASSERT_NO_FATAL_FAILURE(prove_complete(number, 4));
}

TEST(StrataSlowTest, EveryPointOfAFineGridHasItsStratum) {
  for (const int number : symmorphic) ASSERT_NO_FATAL_FAILURE(prove_complete(number, 12));
  for (const int number : {14, 62, 167, 194, 205, 220, 227, 230})
    ASSERT_NO_FATAL_FAILURE(prove_complete(number, 10));
}

TEST(StrataTest, LiesOnFollowsArmsAndLatticeVectors) {
  const SymmetryTables tables = tables_of(225);
  const struct {
    std::array<const char*, 3> k, stratum;
    bool expected;
    const char* why;
  } cases[] = {
      {{"3/4", "3/4", "0"}, {"u", "u", "0"}, true, "K"},
      {{"1", "1/4", "1/4"}, {"u", "u", "0"}, true, "U = K plus a reciprocal-lattice vector"},
      {{"-3/4", "0", "11/4"}, {"u", "u", "0"}, true, "an arm of K, 2 reciprocal vectors away"},
      {{"1/2", "0", "1"}, {"u", "u", "0"}, false, "W"},
      {{"u", "-u", "0"}, {"u", "u", "0"}, true, "the whole of another arm"},
      {{"u", "v", "1"}, {"u", "v", "0"}, true, "the square face is kz = 0 again"},
      {{"u", "v", "0"}, {"u", "u", "0"}, false, "a plane in a line"},
      {{"0", "0", "1"}, {"0", "0", "0"}, false, "X is not Gamma"},
      {{"1/4", "1/4", "1/2"}, {"u", "u", "0"}, false, "Sigma has a whole component on all arms"},
  };
  for (const auto& [k, stratum, expected, why] : cases) {
    SCOPED_TRACE(why);
    Stratum s;
    s.k = parse(stratum);
    EXPECT_EQ(lies_on(tables, parse(k), s), expected);
  }
}

TEST(StrataTest, NearbyStrataByHand) {
  const struct {
    int number;
    std::array<const char*, 3> k;
    const char* own;
    const char* nearby;  ///< Kind, nearest k and change of each.
    const char* why;
  } cases[] = {
      {221, {"0.49", "0", "1/2"}, "line", "point 1/2, 0, 1/2 by 1/100, 0, 0; ", "M from X-M"},
      {191, {"0.33", "0.33", "0"}, "line", "point 1/3, 1/3, 0 by 1/300, 1/300, 0; ", "0.33 for K"},
      {225, {"0", "0", "0.98"}, "line", "point 0, 0, 1 by 0, 0, 1/50; ", "X of the F lattice"},
      {225, {"0", "0", "1"}, "point", "", "X itself"},
      {2, {"0.51", "0.01", "0"}, "general", "point 1/2, 0, 0 by -1/100, -1/100, 0; ", "half"},
      {75, {"0.02", "0", "0.3"}, "general", "line 0, 0, 3/10 by -1/50, 0, 0; ", "polar axis"},
      {168,
       {"0.34", "0.33", "0.2"},
       "general",
       "line 1/3, 1/3, 1/5 by -1/150, 1/300, 0; ",
       "a threefold line"},
  };
  for (const auto& [number, k, own, nearby, why] : cases) {
    SCOPED_TRACE(why);
    const SymmetryTables tables = tables_of(number);
    const std::vector<Stratum> list = strata(tables);
    const StratumPosition at = stratum_position(tables, parse(k), list, Fraction(1, 20));
    EXPECT_STREQ(to_string(list[at.own].kind), own);
    std::string text;
    for (const NearbyStratum& near : at.nearby) {
      if (!list[near.stratum].isolated) continue;
      text += std::string(to_string(list[near.stratum].kind)) + " " + to_string(near.k) + " by " +
              to_string(near.change) + "; ";
    }
    EXPECT_EQ(text, nearby);
  }
}

/// In a cubic group the metric is the unit matrix: no k of the stratum on a fine grid is nearer.
TEST(StrataTest, NearestKIsNearestInTheMetric) {
  std::mt19937 random(5);
  const auto squared = [](const FractionVector& v) { return dot(v, v); };
  std::size_t checked = 0;
  for (const int number : {195, 196, 204, 221, 225, 229}) {
    const SymmetryTables tables = tables_of(number);
    const std::vector<Stratum> list = strata(tables);
    for (int n = 0; n < 12; ++n) {
      Wavevector k;
      for (Fraction& c : k.constant) c = Fraction(static_cast<std::int64_t>(random() % 41), 20);
      const StratumPosition at = stratum_position(tables, k, list, Fraction(1, 4));
      for (const NearbyStratum& near : at.nearby) {
        const Stratum& s = list[near.stratum];
        SCOPED_TRACE(to_string(k) + " to " + to_string(s.k));
        ASSERT_TRUE(lies_on(tables, near.k, s));
        ASSERT_EQ((near.k - k).constant, near.change);
        // Every k on the grid of 1/20 that lies on the stratum is at least as far.
        for (int x = -6; x <= 6; x += 1)
          for (int y = -6; y <= 6; y += 1) {
            const Wavevector other =
                k + FractionVector{Fraction(x, 20), Fraction(y, 20),
                                   Fraction(static_cast<int>(random() % 13) - 6, 20)};
            ++checked;
            if (!lies_on(tables, other, s)) continue;
            ASSERT_GE(squared((other - k).constant), squared(near.change));
          }
      }
    }
  }
  EXPECT_GT(checked, 1000U);
}

TEST(StrataTest, PositionAgreesWithLiesOn) {
  std::mt19937 random(8);
  for (int number = 1; number <= 230; number += 3) {
    SCOPED_TRACE("group " + std::to_string(number));
    const SymmetryTables tables = tables_of(number);
    const std::vector<Stratum> list = strata(tables);
    Wavevector k;
    for (Fraction& c : k.constant) c = Fraction(static_cast<std::int64_t>(random() % 7), 4);
    const StratumPosition at = stratum_position(tables, k, list, 0);
    EXPECT_TRUE(at.nearby.empty());
    for (std::size_t s = 0; s < list.size(); ++s)
      EXPECT_EQ(std::ranges::find(at.lies_on, s) != at.lies_on.end(), lies_on(tables, k, list[s]));
    EXPECT_EQ(list[at.own].cogroup_order,
              LittleGroup(std::make_shared<const SymmetryTables>(tables), k).order());
  }
}

TEST(StrataTest, PositionRefusesWhatHasNone) {
  const SymmetryTables tables = tables_of(47);
  const std::vector<Stratum> list = strata(tables);
  EXPECT_THAT(([&] {
                stratum_position(tables, parse({"u", "0", "0"}), list, 0);
              }),
              ThrowsMessage<Error>(HasSubstr("u, 0, 0 has free parameters")));
  EXPECT_THAT(([&] { stratum_position(tables, Wavevector(), list, Fraction(1, 2)); }),
              ThrowsMessage<Error>(HasSubstr("a reach of 1/2")));
}

}  // namespace
}  // namespace spinsieve
