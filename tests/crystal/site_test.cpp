#include "crystal/site.hpp"

#include <gtest/gtest.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

FractionVector at(const char* x, const char* y, const char* z) {
  return {parse_fraction(x), parse_fraction(y), parse_fraction(z)};
}

TEST(SiteTest, MultiplicitiesAreThoseOfThePrintedTables) {
  const struct {
    const char* group;
    FractionVector position;
    std::size_t multiplicity;  ///< In the conventional cell.
    const char* source;        ///< International Tables A (2016), Wyckoff position.
  } cases[] = {
      {"62", at("0", "0", "0"), 4, "62 a"},
      {"62", at("0.1", "1/4", "0.7"), 4, "62 c"},
      {"62", at("0.1", "0.2", "0.7"), 8, "62 d"},
      {"194", at("0", "0", "0"), 2, "194 a"},
      {"194", at("1/3", "2/3", "1/4"), 2, "194 c"},
      {"194", at("0.1", "0.2", "1/4"), 6, "194 h"},
      {"227", at("1/8", "1/8", "1/8"), 8, "227 a, origin 2"},
      {"227", at("0", "0", "0"), 16, "227 c, origin 2"},
      {"227", at("1/2", "1/2", "1/2"), 16, "227 d, origin 2"},
      {"227:1", at("0", "0", "0"), 8, "227 a, origin 1"},
      {"227", at("0.1", "0.1", "0.1"), 32, "227 e, origin 2"},
      {"230", at("0", "0", "0"), 16, "230 a"},
      {"230", at("1/8", "1/8", "1/8"), 16, "230 b"},
      {"230", at("1/8", "0", "1/4"), 24, "230 c"},
      {"230", at("3/8", "0", "1/4"), 24, "230 d"},
      {"230", at("0.1", "0.2", "0.3"), 96, "230 h"},
      {"167", at("0", "0", "0"), 6, "167 b"},
      {"167", at("0.3", "0", "1/4"), 18, "167 e"},
      {"15", at("0", "0.2", "1/4"), 4, "15 e"},
      {"225", at("1/4", "1/4", "1/4"), 8, "225 c"},
  };
  for (const auto& [name, position, multiplicity, source] : cases) {
    SCOPED_TRACE(source);
    const SpaceGroup group = parse_space_group(name);
    const Orbit orbit(group, position);
    EXPECT_EQ(orbit.atoms().size() * group.centrings().size(), multiplicity);
    EXPECT_EQ(orbit.atoms().size() * orbit.site_group().size(), group.order());
  }
}

TEST(SiteTest, ImagesAreExactInEveryGroup) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    SCOPED_TRACE(hall_number);
    const SpaceGroup group = SpaceGroup::from_hall_number(hall_number);
    for (const FractionVector& position :
         {at("0", "0", "0"), at("-0.25", "5/4", "1/4"), at("0.13", "0.13", "2.37")}) {
      const Orbit orbit(group, position);
      const auto atoms = orbit.atoms();
      ASSERT_EQ(atoms[0].position, position);
      for (std::size_t j = 0; j < atoms.size(); ++j) {
        // The listed operation leads from the first atom to this one.
        ASSERT_TRUE(group.in_lattice(group.operations()[atoms[j].operation].apply(position) -
                                     atoms[j].position));
        if (j > 0) {
          ASSERT_EQ(group.lattice_reduced(atoms[j].position), atoms[j].position);
        }
        for (std::size_t g = 0; g < group.order(); ++g) {
          const Orbit::Image image = orbit.image(group, g, j);
          ASSERT_EQ(group.operations()[g].apply(atoms[j].position),
                    atoms[image.atom].position + image.shift);
          ASSERT_TRUE(group.in_lattice(image.shift));
        }
      }
      for (const std::size_t g : orbit.site_group()) ASSERT_EQ(orbit.image(group, g, 0).atom, 0U);
    }
  }
}

TEST(SiteTest, NearlySpecialPositionsAreMovedExactly) {
  const struct {
    const char* group;
    FractionVector given;
    const char* result;
    bool moved;
  } cases[] = {
      {"194", at("0.3333", "0.6667", "0.25"), "1/3, 2/3, 1/4", true},
      {"194", at("1.33333", "-0.33333", "0.75004"), "4/3, -1/3, 3/4", true},
      {"194", at("0.333", "0.667", "0.1"), "333/1000, 667/1000, 1/10", false},
      {"194", at("0.1667", "0.3333", "0.1"), "3333/20000, 3333/10000, 1/10", true},
      {"194", at("1/3", "2/3", "1/4"), "1/3, 2/3, 1/4", false},
      {"166", at("0.33333", "0.66667", "0.16664"), "1/3, 2/3, 1/6", true},
      {"62", at("0.49", "0.2499", "0.1"), "49/100, 1/4, 1/10", true},
      {"62", at("0.49", "0.2498", "0.1"), "49/100, 1249/5000, 1/10", false},
      {"221", at("0.123", "0.12304", "0.7"), "6151/50000, 6151/50000, 7/10", true},
      {"1", at("0.00001", "0", "0"), "1/100000, 0, 0", false},
      {"227", at("0.12503", "0.1249", "0.125"), "1/8, 1/8, 1/8", true},
  };
  for (const auto& [name, given, result, moved] : cases) {
    const SnappedPosition snap = snapped(parse_space_group(name), given);
    EXPECT_EQ(to_string(snap.position), result) << name;
    EXPECT_EQ(snap.moved, moved) << name;
  }
}

TEST(SiteTest, SnappingTwiceChangesNothing) {
  for (int number = 1; number <= 230; ++number) {
    const SpaceGroup group = SpaceGroup::from_number(number);
    const FractionVector near{Fraction(33337, 100000), Fraction(66662, 100000),
                              Fraction(24996, 100000)};
    const FractionVector once = snapped(group, near).position;
    EXPECT_FALSE(snapped(group, once).moved) << number;
    EXPECT_GE(Orbit(group, near).atoms().size(), Orbit(group, once).atoms().size()) << number;
  }
}

std::string refusal(const char* group, const Cell& cell, const std::vector<Site>& sites) {
  try {
    require_distinct_sites(parse_space_group(group), cell, sites);
  } catch (const Error& error) {
    return error.what();
  }
  return "no error";
}

TEST(SiteTest, AtomsThatAreTooCloseAreRefused) {
  const auto file = std::make_shared<const std::string>("job.yaml");
  const Cell hexagonal(3, 3, 5, 90, 90, 120);
  EXPECT_EQ(refusal("194", hexagonal, {{"M1", at("0.33", "0.66", "0"), Place(file, 4, 7)}}),
            "job.yaml:4:7: error: site M1 at 33/100, 33/50, 0: two of its symmetry-equivalent "
            "atoms are 0.03 Å apart; at least 0.50 Å are needed, write 1/3, 2/3, 0 for the special "
            "position nearby");
  EXPECT_EQ(refusal("194", hexagonal, {{"M1", at("1/3", "2/3", "0"), {}}}), "no error");
  const Cell cube(4, 4, 4, 90, 90, 90);
  EXPECT_EQ(refusal("221", cube, {{"A", at("0", "0", "0"), {}}, {"B", at("1", "0.1", "0"), {}}}),
            "sites A and B are 0.40 Å apart; at least 0.50 Å are needed between two sites");
  EXPECT_EQ(refusal("221", cube, {{"A", at("0", "0", "0"), {}}, {"B", at("1/2", "1/2", "0"), {}}}),
            "no error");
  // Across a face, by a centring vector and by symmetry at once.
  EXPECT_EQ(
      refusal("229", cube, {{"A", at("0", "0", "0"), {}}, {"B", at("1/2", "1/2", "0.41"), {}}}),
      "sites A and B are 0.36 Å apart; at least 0.50 Å are needed between two sites");
}

TEST(SiteTest, FreeDirectionsAreThoseOfThePrintedTables) {
  const struct {
    const char* group;
    FractionVector position;
    std::vector<const char*> directions;
    const char* source;
  } cases[] = {
      {"62", at("0", "0", "0"), {}, "62 a: 0,0,0"},
      {"62", at("0.1", "1/4", "0.7"), {"1, 0, 0", "0, 0, 1"}, "62 c: x,1/4,z"},
      {"194", at("0.1", "0.2", "1/4"), {"1, 2, 0"}, "194 h: x,2x,1/4"},
      {"194", at("1/3", "2/3", "0.1"), {"0, 0, 1"}, "194 f: 1/3,2/3,z"},
      {"227", at("0.1", "0.1", "0.1"), {"1, 1, 1"}, "227 e: x,x,x"},
      {"14", at("0.1", "0.2", "0.3"), {"1, 0, 0", "0, 1, 0", "0, 0, 1"}, "14 e: x,y,z"},
  };
  for (const auto& [name, position, directions, source] : cases) {
    SCOPED_TRACE(source);
    const SpaceGroup group = parse_space_group(name);
    const auto found = free_directions(group, Orbit(group, position));
    ASSERT_EQ(found.size(), directions.size());
    for (std::size_t i = 0; i < found.size(); ++i) EXPECT_EQ(to_string(found[i]), directions[i]);
  }
}

}  // namespace
}  // namespace spinsieve
