#include "symmetry/small_irrep.hpp"

#include <algorithm>
#include <memory>

#include <gtest/gtest.h>

#include "proof.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {
namespace {

Wavevector parse(const std::array<const char*, 3>& texts) {
  Wavevector k;
  for (std::size_t i = 0; i < 3; ++i) parse_component(texts[i], i, k);
  return k;
}

/// Characters of D, printed in the order of given operations; lattice translations are explicit.
std::string character_row(const LittleGroup& g, const SmallIrrep& irrep,
                          const std::vector<const char*>& operations) {
  std::string row;
  for (const char* text : operations) {
    const Operation operation = parse_operation(text);
    const std::size_t index = g.group().find_rotation(operation.rotation).value();
    const std::size_t i = g.position(index).value();
    const FractionVector T = operation.translation - g.group().operations()[index].translation;
    const Cyclotomic value = Cyclotomic::root(g.phase(i) - Phase(dot(g.k().constant, T))) *
                             to_cyclotomic(irrep.characters[i]);
    row += (row.empty() ? "" : " ") + to_string(value);
  }
  return row;
}

TEST(SmallIrrepTest, CharacterTablesByHand) {
  const struct {
    int number;
    std::array<const char*, 3> k;
    std::vector<const char*> operations;
    std::vector<const char*> rows;
    const char* source;
  } cases[] = {
      {4,
       {"0", "1/2", "0"},
       {"x,y,z", "-x,y+1/2,-z"},
       {"1 e(1/4)", "1 -e(1/4)"},
       "by hand: D(screw)^2 = D(0 1 0) = exp(-2 pi i/2) = -1"},
      {4,
       {"0", "0", "0"},
       {"x,y,z", "-x,y+1/2,-z"},
       {"1 1", "1 -1"},
       "by hand: the trivial irrep leads"},
      {168,
       {"0", "0", "0"},
       {"x,y,z", "x-y,x,z"},
       {"1 1", "1 e(1/6)", "1 e(1/3)", "1 -e(1/6)", "1 -e(1/3)", "1 -1"},
       "by hand: sixth roots, larger real part first, then larger imaginary part"},
      {16,
       {"0", "0", "0"},
       {"x,y,z", "-x,-y,z", "-x,y,-z", "x,-y,-z"},
       {"1 1 1 1", "1 1 -1 -1", "1 -1 1 -1", "1 -1 -1 1"},
       "222; any textbook"},
      {89,
       {"0", "0", "0"},
       {"x,y,z", "-y,x,z", "-x,-y,z", "-x,y,-z", "y,x,-z"},
       {"1 1 1 1 1", "1 1 1 -1 -1", "1 -1 1 1 -1", "1 -1 1 -1 1", "2 0 -2 0 0"},
       "422; any textbook"},
      {19,
       {"1/2", "1/2", "1/2"},
       {"x,y,z", "x+1/2,-y+1/2,-z", "-x,y+1/2,-z+1/2"},
       {"2 0 0"},
       "P 21 21 21 at R; Bradley & Cracknell 1972 (from memory)"},
  };
  for (const auto& c : cases) {
    SCOPED_TRACE(c.source);
    const LittleGroup g = little_group_of(SpaceGroup::from_number(c.number), parse(c.k));
    std::vector<std::string> rows;
    for (const SmallIrrep& irrep : small_irreps(g))
      rows.push_back(character_row(g, irrep, c.operations));
    ASSERT_EQ(rows.size(), c.rows.size());
    if (g.k() == Wavevector()) {
      EXPECT_EQ(rows.front(), c.rows.front()) << "the trivial irrep leads";
    }
    // The further order depends on the order of the group's operations.
    std::vector<std::string> expected(c.rows.begin(), c.rows.end());
    std::ranges::sort(rows);
    std::ranges::sort(expected);
    EXPECT_EQ(rows, expected);
  }
}

/// The library compares characters in doubles with a proved gap; here the comparison is exact.
TEST(SmallIrrepTest, OrderIsExactAndTotal) {
  std::size_t compared = 0;
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
    for (const Stratum& stratum : strata(*tables)) {
      const Wavevector canonical = LittleGroup(tables, stratum.k).canonical_k();
      const LittleGroup g(tables, canonical);
      ASSERT_EQ(g.canonical_k(), canonical) << "canonical arms are their own";
      const std::vector<SmallIrrep> irreps = small_irreps(g);
      for (std::size_t n = 1; n < irreps.size(); ++n) {
        const SmallIrrep& a = irreps[n - 1];
        const SmallIrrep& b = irreps[n];
        if (a.dimension != b.dimension) {
          EXPECT_LT(a.dimension, b.dimension);
          continue;
        }
        std::size_t i = 0;
        while (i < a.characters.size() && a.characters[i] == b.characters[i]) ++i;
        ASSERT_LT(i, a.characters.size()) << "two irreps with equal characters";
        EXPECT_TRUE(comes_before(to_cyclotomic(a.characters[i]), to_cyclotomic(b.characters[i])));
        ++compared;
      }
    }
  }
  EXPECT_GT(compared, 1000U);
}

TEST(SmallIrrepTest, AGroupSetUpFromNothingGivesTheSameAnswerTwice) {
  for (const int number : {62, 194, 225, 230}) {
    const Wavevector k = parse({"1/2", "0", "1/2"});
    const auto a = small_irreps(little_group_of(SpaceGroup::from_number(number), k));
    const auto b = small_irreps(little_group_of(SpaceGroup::from_number(number), k));
    ASSERT_EQ(a.size(), b.size());
    for (std::size_t n = 0; n < a.size(); ++n) EXPECT_EQ(a[n].matrices, b[n].matrices);
  }
}

/// Dense matrices exist only at points of (1/2,1/2,1/2) type of nine cubic groups: a feasibility
/// study measured it for all groups; what matters is that the fast form covers the rest.
TEST(SmallIrrepTest, NearlyAllIrrepsAreMonomial) {
  std::vector<int> groups;
  for (int number = 1; number <= 230; ++number) {
    const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
    for (const Stratum& stratum : strata(*tables))
      for (const SmallIrrep& irrep : small_irreps(LittleGroup(tables, stratum.k)))
        if (!std::ranges::all_of(irrep.matrices, [](const auto& m) { return m.is_monomial(); }) &&
            (groups.empty() || groups.back() != number))
          groups.push_back(number);
  }
  EXPECT_EQ(groups, (std::vector<int>{198, 199, 205, 206, 212, 213, 214, 220, 230}));
}

/// 2k ≡ 0: then a real D exists exactly when the reversal is a plain complex conjugation; Pbca at
/// R is the classic pseudoreal case.
TEST(SmallIrrepTest, PseudorealIrrepsReverseToMinusOne) {
  const LittleGroup g = little_group_of(SpaceGroup::from_number(61), parse({"1/2", "1/2", "1/2"}));
  for (const SmallIrrep& irrep : small_irreps(g)) {
    EXPECT_EQ(irrep.reality, Reality::pseudoreal);
    const std::optional<Reversal> reversed = reversal(g, irrep);
    ASSERT_TRUE(reversed.has_value());
    EXPECT_EQ(reversed->sign, -1);
    EXPECT_EQ(reversed->matrix * reversed->matrix.conjugate(),
              IrrepMatrix::identity(2).times_root(12));
  }
}

TEST(SmallIrrepTest, RealitiesHaveNames) {
  EXPECT_STREQ(to_string(Reality::real), "real");
  EXPECT_STREQ(to_string(Reality::pseudoreal), "pseudoreal");
  EXPECT_STREQ(to_string(Reality::complex), "complex");
}

}  // namespace
}  // namespace spinsieve
