#include <map>
#include <random>

#include <gtest/gtest.h>

#include "crystal/closure.hpp"
#include "crystal/space_group.hpp"
#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

std::vector<Operation> parsed(std::initializer_list<const char*> texts) {
  std::vector<Operation> operations;
  for (const char* text : texts) operations.push_back(parse_operation(text));
  return operations;
}

std::vector<Operation> listed(const OperationSet& set) {
  std::vector<Operation> operations = set.representatives;
  for (const FractionVector& centring : set.centrings)
    operations.push_back({Operation{}.rotation, centring});
  return operations;
}

std::string refusal(std::initializer_list<const char*> texts) {
  try {
    return "accepted as " + SpaceGroup::from_operations(parsed(texts)).symbol();
  } catch (const Error& error) {
    return error.message();
  }
}

/// The group in sheared axes, of determinant 1, and about another origin.
OperationSet disguised(const OperationSet& set, std::mt19937& random, int steps) {
  FractionMatrix T = to_fractions(Operation{}.rotation);
  for (int step = 0; step < steps; ++step) {
    IntMatrix shear = Operation{}.rotation;
    const std::size_t i = random() % 3;
    shear[i][(i + 1 + random() % 2) % 3] = random() % 2 == 0 ? 1 : -1;
    T = product(to_fractions(shear), T);
  }
  const FractionVector shift{Fraction(static_cast<std::int64_t>(random() % 97), 97),
                             Fraction(static_cast<std::int64_t>(random() % 7), 7),
                             Fraction(static_cast<std::int64_t>(random() % 10), 10)};
  return transformed(set, T, shift);
}

TEST(IdentifyTest, TabulatedOperationsAreTheirSetting) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    const std::vector<Operation> operations = hall_operations(hall_number);
    const SpaceGroup group = SpaceGroup::from_operations(operations);
    ASSERT_GT(group.hall_number(), 0);
    const SpaceGroup expected = SpaceGroup::from_hall_number(hall_number);
    EXPECT_EQ(group.number(), expected.number());
    // Three settings of No. 68 repeat the operations of others.
    if (hall_number == 324 || hall_number == 328 || hall_number == 332)
      EXPECT_EQ(group.hall_number(), hall_number - 2);
    else
      EXPECT_EQ(group.hall_number(), hall_number);
  }
}

TEST(IdentifyTest, EveryGroupIsFoundInDisguise) {
  std::mt19937 random(20240607);
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    const SpaceGroup expected = SpaceGroup::from_hall_number(hall_number);
    const OperationSet original = closure(hall_operations(hall_number));
    for (int steps = 0; steps <= 3; ++steps) {
      SCOPED_TRACE(std::to_string(hall_number) + ", steps " + std::to_string(steps));
      const OperationSet set = disguised(original, random, steps);
      const SpaceGroup group = SpaceGroup::from_operations(listed(set));
      ASSERT_EQ(group.number(), expected.number());
      ASSERT_EQ(group.order(), expected.order());
      ASSERT_EQ(group.centrings().size(), expected.centrings().size());
      for (const Operation& operation : group.operations()) ASSERT_TRUE(set.contains(operation));
      // About the origin it names, translations are multiples of 1/24 modulo the lattice.
      for (const Operation& operation : group.operations()) {
        const FractionVector& s = group.origin_shift();
        const FractionVector t = operation.translation - (s - times(operation.rotation, s));
        ASSERT_TRUE(group.in_lattice(Fraction(24) * t));
      }
    }
  }
}

TEST(IdentifyTest, InvertedAxesSwapTheElevenEnantiomorphs) {
  // The eleven pairs of International Tables A (2016), section 1.4.1.5.
  const std::map<int, int> partner{{76, 78},   {91, 95},   {92, 96},   {144, 145},
                                   {151, 153}, {152, 154}, {169, 170}, {171, 172},
                                   {178, 179}, {180, 181}, {212, 213}};
  const FractionMatrix inversion = to_fractions({{{-1, 0, 0}, {0, -1, 0}, {0, 0, -1}}});
  for (int number = 1; number <= 230; ++number) {
    int expected = number;
    for (const auto& [left, right] : partner) {
      if (number == left) expected = right;
      if (number == right) expected = left;
    }
    const OperationSet set =
        closure(hall_operations(SpaceGroup::from_number(number).hall_number()));
    EXPECT_EQ(SpaceGroup::from_operations(listed(transformed(set, inversion, {}))).number(),
              expected);
  }
}

TEST(IdentifyTest, TheTransformationLeadsToTheTabulatedSetting) {
  std::mt19937 random(99);
  for (const int hall_number : {2, 82, 228, 294, 366, 437, 525, 530}) {
    SCOPED_TRACE(hall_number);
    const OperationSet set = disguised(closure(hall_operations(hall_number)), random, 2);
    const auto found = identify_setting(listed(set));
    ASSERT_TRUE(found);
    const OperationSet tabulated = closure(hall_operations(found->hall_number));
    const OperationSet moved = transformed(set, found->transformation, found->shift);
    EXPECT_EQ(moved.centrings, tabulated.centrings);
    EXPECT_EQ(moved.representatives.size(), tabulated.representatives.size());
    for (const Operation& operation : moved.representatives)
      EXPECT_TRUE(tabulated.contains(operation));
  }
}

TEST(IdentifyTest, AnotherOriginKeepsTheAxes) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    SCOPED_TRACE(hall_number);
    const FractionVector shift{Fraction(1, 5), Fraction(2, 7), Fraction(5, 11)};
    const OperationSet set = transformed(closure(hall_operations(hall_number)),
                                         to_fractions(Operation{}.rotation), shift);
    const auto found = identify_setting(listed(set));
    ASSERT_TRUE(found);
    EXPECT_EQ(found->transformation, to_fractions(Operation{}.rotation));
    EXPECT_EQ(hall_setting(found->hall_number).number, hall_setting(hall_number).number);
  }
  // By hand: 2p ≡ -1/5 modulo 1, so p is 2/5 or 9/10.
  const std::string setting = SpaceGroup::from_operations(parsed({"-x+1/5,-y,-z"})).setting();
  EXPECT_TRUE(setting == "x+2/5,y,z" || setting == "x+9/10,y,z") << setting;
}

TEST(IdentifyTest, ACellMultipliedAlongItsAxesKeepsItsGroup) {
  // P n m a in a cell doubled along a: the half of it becomes a centring translation.
  const FractionMatrix T{{{Fraction(1, 2), 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  const OperationSet set = transformed(closure(hall_operations(292)), T, {});
  const SpaceGroup group = SpaceGroup::from_operations(listed(set));
  EXPECT_EQ(group.number(), 62);
  EXPECT_EQ(group.hall_number(), 0);
  ASSERT_EQ(group.centrings().size(), 2U);
  EXPECT_EQ(to_string(group.centrings()[1]), "1/2, 0, 0");
  EXPECT_EQ(group.setting(), "2x,y,z");
}

TEST(IdentifyTest, GeneratorsSuffice) {
  EXPECT_EQ(SpaceGroup::from_operations(parsed({"-x,y+1/2,-z+1/2", "-x,-y,-z"})).hall_number(), 81);
  EXPECT_EQ(SpaceGroup::from_operations(parsed({"z,x,y", "y+3/4,x+1/4,-z+1/4", "-x,-y,-z",
                                                "x+1/2,y+1/2,z+1/2", "-x+1/2,-y,z+1/2"}))
                .number(),
            230);
  EXPECT_EQ(SpaceGroup::from_operations({}).number(), 1);
  // Enantiomorphs are told apart: 4_1 and 4_3.
  EXPECT_EQ(SpaceGroup::from_operations(parsed({"-y,x,z+1/4"})).number(), 76);
  EXPECT_EQ(SpaceGroup::from_operations(parsed({"-y,x,z+3/4"})).number(), 78);
  EXPECT_EQ(SpaceGroup::from_operations(parsed({"x+1/4,-z,y"})).number(), 76);
}

TEST(IdentifyTest, ListsThatFormNoGroupAreRefused) {
  EXPECT_EQ(refusal({"x+y,y,z"}).substr(0, 62),
            "operation x+48y,y,z brings more than 48 rotations; the operati");
  EXPECT_EQ(refusal({"2x+y,x+y,z"}),  // Powers hold Fibonacci numbers: 89 + 55 = 144.
            "operation 233x+144y,144x+89y,z has factors beyond 99; the operations form no space "
            "group, or their axes are too skewed");
  EXPECT_EQ(refusal({"x+0.3333,y,z"}),
            "the operations make the translation 3333/10000, 0, 0 a lattice vector, which divides "
            "the cell more than 96-fold; are translations exact, such as 1/3 instead of 0.3333?");
  EXPECT_EQ(refusal({"-y,x-y,z+0.3333"}),
            "the operations make the translation 0, 0, 9999/10000 a lattice vector, which divides "
            "the cell more than 96-fold; are translations exact, such as 1/3 instead of 0.3333?");
  const std::vector<Operation> singular{{{{{1, 0, 0}, {1, 0, 0}, {0, 0, 1}}}, {}}};
  try {
    (void)SpaceGroup::from_operations(singular);
    FAIL();
  } catch (const Error& error) {
    EXPECT_EQ(error.message(),
              "operation x,x,z has the determinant 0; a symmetry operation has 1 or -1");
  }
}

}  // namespace
}  // namespace spinsieve
