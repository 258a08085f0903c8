#include <random>

#include <gtest/gtest.h>

#include "modes/magnetic_representation.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {
namespace {

/// A k of the stratum with rational values for its parameters that no higher symmetry shares.
Wavevector generic_value(const Stratum& stratum) {
  const std::array<Fraction, 3> values{Fraction(2, 11), Fraction(3, 13), Fraction(5, 17)};
  FractionVector k = stratum.k.constant;
  for (std::size_t p = 0; p < 3; ++p) k = k + values[p] * stratum.k.along[p];
  return Wavevector(k);
}

/// Sites of every kind: a general one, and random ones on coordinates that symmetry likes.
std::vector<FractionVector> random_sites(std::mt19937& random) {
  const std::array<Fraction, 8> special{Fraction(0),    Fraction(1, 2), Fraction(1, 4),
                                        Fraction(3, 4), Fraction(1, 8), Fraction(1, 3),
                                        Fraction(2, 3), Fraction(5, 8)};
  const auto pick = [&] { return special[random() % special.size()]; };
  const Fraction x(17, 100);
  std::vector<FractionVector> sites{{x, Fraction(23, 100), Fraction(39, 100)}, {x, x, x}};
  sites.push_back({pick(), pick(), pick()});
  sites.push_back({x, pick(), pick()});
  sites.push_back({x, Fraction(2) * x, pick()});
  return sites;
}

// All 230 groups × all their points, lines, planes and a general k × sites of every kind: the
// copies that are built are as many as characters count, and together they span all moments.
TEST(AllGroupsSlowTest, CopiesAgreeWithCharactersAndSpanAllMoments) {
  std::mt19937 random(230);
  std::size_t pairs = 0;
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE(number);
    const auto tables = std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
    for (const Stratum& stratum : strata(*tables)) {
      const Wavevector k = generic_value(stratum);
      SCOPED_TRACE(to_string(k));
      const LittleGroup little_group(tables, k);
      const std::vector<SmallIrrep> irreps = small_irreps(little_group);
      for (const FractionVector& site : random_sites(random)) {
        const Orbit orbit(tables->group(), site);
        for (const AtomQuantity quantity :
             {AtomQuantity::axial, AtomQuantity::scalar, AtomQuantity::polar}) {
          const MagneticRepresentation built(little_group, irreps, orbit, quantity);
          const std::vector<std::size_t> counted =
              multiplicities(little_group, irreps, orbit, quantity);
          std::size_t total = 0;
          for (std::size_t n = 0; n < irreps.size(); ++n) {
            ASSERT_EQ(built.multiplicity(n), counted[n]) << to_string(site);
            total += counted[n] * static_cast<std::size_t>(irreps[n].dimension);
          }
          ASSERT_EQ(total, orbit.atoms().size() * (quantity == AtomQuantity::scalar ? 1 : 3));
        }
        ++pairs;
      }
    }
  }
  EXPECT_GT(pairs, 10000U);
}

}  // namespace
}  // namespace spinsieve
