#include <algorithm>
#include <memory>
#include <random>

#include <gtest/gtest.h>

#include "proof.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {
namespace {

using Tables = std::shared_ptr<const SymmetryTables>;

Tables tables_of(int number) {
  return std::make_shared<const SymmetryTables>(SpaceGroup::from_number(number));
}

using CharacterSet = std::vector<std::vector<IrrepMatrix::Trace>>;

CharacterSet character_set(std::span<const SmallIrrep> irreps) {
  CharacterSet result;
  for (const SmallIrrep& irrep : irreps) result.push_back(irrep.characters);
  std::ranges::sort(result);
  return result;
}

/// Proves one point, line or plane: with parameters, its irreps serve a generic point of it.
void prove(const Tables& tables, const Wavevector& k) {
  SCOPED_TRACE("k = " + to_string(k));
  const LittleGroup little_group(tables, k);
  ASSERT_EQ(broken_law(little_group), "");
  const std::vector<SmallIrrep> irreps = small_irreps(little_group);
  if (!k.is_symbolic()) {
    ASSERT_EQ(broken_law(little_group, irreps), "");
    return;
  }
  const LittleGroup at_point(tables, generic_point(k));
  ASSERT_EQ(broken_law(at_point), "");
  ASSERT_TRUE(std::ranges::equal(at_point.operations(), little_group.operations()));
  ASSERT_TRUE(std::ranges::equal(at_point.reversing(), little_group.reversing()));
  ASSERT_EQ(broken_law(at_point, irreps), "");
  ASSERT_EQ(character_set(small_irreps(at_point)), character_set(irreps));
}

TEST(BatteryTest, SmallIrrepsAreProvedAtAllStrataOfAllGroups) {
  std::size_t pairs = 0;
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const Tables tables = tables_of(number);
    for (const Stratum& stratum : strata(*tables)) {
      ASSERT_NO_FATAL_FAILURE(prove(tables, stratum.k));
      ++pairs;
    }
  }
  RecordProperty("pairs", static_cast<int>(pairs));
  EXPECT_GE(pairs, 230U * 8);
}

Fraction random_fraction(std::mt19937& random, unsigned largest) {
  const auto denominator = static_cast<std::int64_t>(1 + random() % largest);
  const auto numerator = static_cast<std::int64_t>(random() % 1000);
  return {numerator % (6 * denominator) - 3 * denominator, denominator};
}

TEST(BatteryTest, SmallIrrepsAreProvedAtASpreadOfGeneralVectors) {
  std::mt19937 random(4127);
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const Tables tables = tables_of(number);
    for (const unsigned largest : {2U, 4U, 6U, 99U})
      ASSERT_NO_FATAL_FAILURE(prove(
          tables, Wavevector({random_fraction(random, largest), random_fraction(random, largest),
                              random_fraction(random, largest)})));
  }
}

/// Some reciprocal-lattice vector other than 0 of any centring.
FractionVector random_reciprocal(const SpaceGroup& group, std::mt19937& random) {
  for (;;) {
    FractionVector K;
    for (Fraction& c : K) c = static_cast<std::int64_t>(random() % 9) - 4;
    if (K != FractionVector{} && group.in_reciprocal_lattice(K)) return K;
  }
}

/// Labels stay attached to the same irrep on all arms and on equivalent k.
void prove_arms(const Tables& tables, const Wavevector& k, std::mt19937& random,
                std::size_t most_arms) {
  SCOPED_TRACE("k = " + to_string(k));
  const SpaceGroup& group = tables->group();
  const LittleGroup of_k(tables, k);
  const std::vector<SmallIrrep> irreps = small_irreps(of_k);
  for (std::size_t arm = 0; arm < of_k.star().size() && arm < most_arms; ++arm) {
    const LittleGroup of_arm(tables, of_k.star()[arm] + random_reciprocal(group, random));
    SCOPED_TRACE("arm " + to_string(of_arm.k()));
    ASSERT_EQ(broken_law(of_arm), "");
    ASSERT_EQ(broken_law(of_k, irreps, of_arm, small_irreps(of_arm),
                         group.operations()[of_k.arm_operation(arm)]),
              "");
  }
}

TEST(BatteryTest, LabelsFollowTheirIrrepToAnArmAndAnEquivalentK) {
  std::mt19937 random(977);
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const Tables tables = tables_of(number);
    for (const Stratum& stratum : strata(*tables))
      ASSERT_NO_FATAL_FAILURE(prove_arms(tables, generic_point(stratum.k), random, 2));
  }
}

TEST(BatterySlowTest, LabelsFollowTheirIrrepToAllArms) {
  std::mt19937 random(978);
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const Tables tables = tables_of(number);
    for (const Stratum& stratum : strata(*tables))
      ASSERT_NO_FATAL_FAILURE(prove_arms(tables, generic_point(stratum.k), random, 48));
  }
}

/// One P serves a whole line or plane; where a special point of it has more symmetry, P restricted
/// to the operations of the line is still a representation, which the factor system decides.
TEST(BatteryTest, FactorSystemIsConstantAlongLinesAndPlanes) {
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE("group " + std::to_string(number));
    const Tables tables = tables_of(number);
    for (const Stratum& stratum : strata(*tables)) {
      if (stratum.kind == StratumKind::point || stratum.kind == StratumKind::general) continue;
      SCOPED_TRACE("k = " + to_string(stratum.k));
      const LittleGroup whole(tables, stratum.k);
      const CharacterSet expected = character_set(small_irreps(whole));
      for (const FractionVector& values : {FractionVector{Fraction(1, 7), Fraction(2, 13), 0},
                                           FractionVector{Fraction(-3, 11), Fraction(5, 17), 0}}) {
        const LittleGroup at(tables, point(stratum.k, values));
        if (at.order() != whole.order()) continue;  // A point of higher symmetry.
        ASSERT_EQ(broken_law(at, small_irreps(whole)), "");
        ASSERT_EQ(character_set(small_irreps(at)), expected);
      }
    }
  }
}

}  // namespace
}  // namespace spinsieve
