#include "symmetry/little_group.hpp"

#include <memory>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "exact/error.hpp"
#include "proof.hpp"

namespace spinsieve {
namespace {

using ::testing::HasSubstr;
using ::testing::ThrowsMessage;

Wavevector parse(const std::array<const char*, 3>& texts) {
  Wavevector k;
  for (std::size_t i = 0; i < 3; ++i) parse_component(texts[i], i, k);
  return k;
}

TEST(LittleGroupTest, StarsAndCoGroupsByHand) {
  const struct {
    const char* group;
    std::array<const char*, 3> k;
    std::size_t arms, order;
    bool self_conjugate, minus_k_in_star;
    const char* why;
  } cases[] = {
      {"1", {"0.123", "u", "v"}, 1, 1, false, false, "nothing turns k"},
      {"2", {"0.123", "u", "v"}, 2, 1, false, true, "inversion"},
      {"2", {"1/2", "0", "5/2"}, 1, 2, true, true, "2k is reciprocal, k not reduced"},
      {"225", {"0", "1", "0"}, 3, 16, true, true, "X of the face-centred lattice"},
      {"225", {"1", "1", "1"}, 1, 48, true, true, "a reciprocal-lattice vector, hence Gamma"},
      {"225", {"1/2", "1/2", "1/2"}, 4, 12, true, true, "L"},
      {"225", {"1/2", "0", "1"}, 6, 8, false, true, "W: 2k = (1,0,2) is not reciprocal"},
      {"229", {"0", "0", "1"}, 1, 48, true, true, "H"},
      {"229", {"1/2", "1/2", "1/2"}, 2, 24, false, true, "P"},
      {"220", {"1/2", "1/2", "1/2"}, 1, 24, false, false, "P without inversion"},
      {"166", {"0", "0", "3/2"}, 1, 12, true, true, "obverse hexagonal axes"},
      {"166", {"0", "0", "1/2"}, 2, 6, false, true, "2k = (0,0,1) is not reciprocal"},
      {"166", {"0", "0", "1"}, 2, 6, false, true, "(0,0,1) is not reciprocal for R"},
      {"191", {"1/3", "1/3", "0"}, 2, 12, false, true, "K"},
      {"75", {"0", "0", "u"}, 1, 4, false, false, "along the polar axis"},
      {"99", {"u", "0", "1/2"}, 4, 2, false, true, "2 takes u to -u, 1/2 = -1/2"},
  };
  for (const auto& c : cases) {
    SCOPED_TRACE(std::string(c.group) + " " + c.why);
    const LittleGroup g = little_group_of(parse_space_group(c.group), parse(c.k));
    EXPECT_EQ(g.star().size(), c.arms);
    EXPECT_EQ(g.order(), c.order);
    EXPECT_EQ(g.self_conjugate(), c.self_conjugate);
    EXPECT_EQ(g.minus_k_in_star(), c.minus_k_in_star);
    EXPECT_EQ(broken_law(g), "");
  }
}

TEST(LittleGroupTest, PhasesAreThoseOfMinusKDotT) {
  // By hand, P 1 21 1: the screw axis {2|0 1/2 0} at k = (0, v, 0) has exp(-2πi v/2).
  const SpaceGroup group = SpaceGroup::from_number(4);
  const LittleGroup line = little_group_of(group, parse({"0", "v", "0"}));
  ASSERT_EQ(line.order(), 2U);
  EXPECT_EQ(line.phase_text(0), "0");
  EXPECT_EQ(line.phase_text(1), "-1/2*v");
  EXPECT_THROW(static_cast<void>(line.phase(1)), std::logic_error);
  const LittleGroup at = little_group_of(group, parse({"0", "2/7", "0"}));
  EXPECT_EQ(to_string(at.phase(1)), "6/7");
  EXPECT_EQ(at.phase_text(1), "6/7");
}

TEST(LittleGroupTest, EquivalentWavevectorsAndArmsShareTheCanonicalOne) {
  const SpaceGroup group = SpaceGroup::from_number(227);
  const Wavevector a = little_group_of(group, parse({"0", "0", "1"})).canonical_k();
  for (const auto& k :
       {std::array{"1", "0", "0"}, std::array{"0", "-1", "0"}, std::array{"1", "1", "0"},
        std::array{"3", "5", "1"}, std::array{"-2", "0", "1"}, std::array{"2", "4", "3"}}) {
    const Wavevector parsed = parse(k);
    SCOPED_TRACE(to_string(parsed));
    EXPECT_EQ(little_group_of(group, parsed).canonical_k() == a,
              !group.in_reciprocal_lattice(parsed.constant));
  }
}

TEST(LittleGroupTest, LargeDenominatorsAreExactOrRefused) {
  const SpaceGroup group = SpaceGroup::from_number(230);
  Wavevector k({Fraction(499'999, 999'983), Fraction(1, 999'983), Fraction(-7, 999'983)});
  const LittleGroup g = little_group_of(group, k);
  EXPECT_EQ(g.order(), 1U);
  EXPECT_EQ(broken_law(g), "");
  EXPECT_EQ(broken_law(g, small_irreps(g)), "");
  k.constant = {Fraction(1, 999'983), Fraction(1, 7), 0};
  EXPECT_THAT(([&] { little_group_of(group, k); }),
              ThrowsMessage<Error>(HasSubstr("at most 1000000 is accepted")));
}

TEST(LittleGroupTest, LargeComponentsStayExact) {
  // 900 + 1/2 is an odd half; products with rotations must not wrap.
  const SpaceGroup group = SpaceGroup::from_number(225);
  const Wavevector near({Fraction(1, 2), Fraction(1, 2), Fraction(1, 2)});
  const Wavevector far({Fraction(1801, 2), Fraction(-1799, 2), Fraction(1, 2)});
  EXPECT_EQ(little_group_of(group, far).order(), little_group_of(group, near).order());
  const LittleGroup g = little_group_of(group, far);
  EXPECT_EQ(broken_law(g), "");
  EXPECT_EQ(broken_law(g, small_irreps(g)), "");
  // Once g_R of such a k wrapped around without a word.
  const Wavevector wrapped(
      {Fraction(2'147'483'000), Fraction(-2'147'483'000), Fraction(1'999'999'999)});
  EXPECT_THAT(([&] { little_group_of(group, wrapped); }),
              ThrowsMessage<Error>(HasSubstr("has the component 2147483000; take a reciprocal")));
  EXPECT_THROW(little_group_of(group, Wavevector({Fraction(3'000'000'000), Fraction(1, 3), 0})),
               Error);
}

TEST(LittleGroupTest, RefusesParametersWithoutDirection) {
  const SpaceGroup group = SpaceGroup::from_number(47);
  EXPECT_THAT(([&] {
                little_group_of(group, parse({"u+v", "1/2", "2u+2v"}));
              }),
              ThrowsMessage<Error>("the wavevector u+v, 1/2, 2u+2v has 2 free parameters along 1 "
                                   "direction; as many parameters as directions are accepted"));
  EXPECT_THROW(little_group_of(group, parse({"u+v+w", "v", "u+w"})), Error);
  EXPECT_NO_THROW(little_group_of(group, parse({"u+v", "u-v", "w"})));
}

TEST(LittleGroupTest, SymbolicWavevectorsWithSeveralParameters) {
  const SpaceGroup group = SpaceGroup::from_number(221);
  const struct {
    std::array<const char*, 3> k;
    std::size_t order;
    const char* why;
  } cases[] = {
      {{"u", "u", "u"}, 6, "3m"},
      {{"u", "v", "0"}, 2, "the mirror normal to c"},
      {{"u", "u", "v"}, 2, "a diagonal mirror"},
      {{"u", "v", "w"}, 1, "general"},
      {{"u", "1/2-u", "0"}, 2, "a line in a plane, with no symmetry of its own"},
      {{"u+v", "u-v", "1/2"}, 2, "the zone face in other parameters"},
      {{"u", "u", "1/2"}, 4, "mm2 on the zone face"},
      {{"0", "0", "w"}, 8, "4mm, third parameter alone"},
  };
  for (const auto& [k, order, why] : cases) {
    SCOPED_TRACE(why);
    const LittleGroup g = little_group_of(group, parse(k));
    EXPECT_EQ(g.order(), order);
    EXPECT_EQ(broken_law(g), "");
    const LittleGroup at = little_group_of(group, generic_point(parse(k)));
    EXPECT_EQ(at.order(), order);
    EXPECT_EQ(broken_law(at, small_irreps(g)), "");
  }
}

}  // namespace
}  // namespace spinsieve
