#include "crystal/space_group.hpp"

#include <algorithm>
#include <set>

#include <gtest/gtest.h>

#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

/// Order of the crystal class of a number. Source: International Tables A (2016), Table 2.1.2.1.
std::size_t class_order(int number) {
  const struct {
    int last;
    std::size_t order;
  } classes[] = {{1, 1},    {2, 2},    {5, 2},    {9, 2},    {15, 4},   {24, 4},   {46, 4},
                 {74, 8},   {80, 4},   {82, 4},   {88, 8},   {98, 8},   {110, 8},  {122, 8},
                 {142, 16}, {146, 3},  {148, 6},  {155, 6},  {161, 6},  {167, 12}, {173, 6},
                 {174, 6},  {176, 12}, {182, 12}, {186, 12}, {190, 12}, {194, 24}, {199, 12},
                 {206, 24}, {214, 24}, {220, 24}, {230, 48}};
  for (const auto& [last, order] : classes)
    if (number <= last) return order;
  return 0;
}

std::size_t lattice_points(const SpaceGroup& group) {
  switch (group.symbol()[0]) {
    case 'P':
      return 1;
    case 'F':
      return 4;
    case 'R':
      return group.setting() == "R" ? 1 : 3;
    default:
      return 2;  // A, B, C, I
  }
}

bool holds(const SpaceGroup& group, const char* operation) {
  const Operation wanted = parse_operation(operation);
  const auto index = group.find_rotation(wanted.rotation);
  return index && group.in_lattice(group.operations()[*index].translation - wanted.translation);
}

/// What every group must satisfy, whatever its setting.
void require_laws(const SpaceGroup& group) {
  const auto operations = group.operations();
  ASSERT_EQ(operations[0], Operation{});
  ASSERT_EQ(group.centrings()[0], FractionVector{});
  std::set<IntMatrix> rotations;
  for (std::size_t a = 0; a < group.order(); ++a) {
    ASSERT_TRUE(rotations.insert(operations[a].rotation).second);
    ASSERT_EQ(group.lattice_reduced(operations[a].translation), operations[a].translation);
    ASSERT_EQ(group.product(a, group.inverse(a)), 0U);
    ASSERT_EQ(group.find_rotation(operations[a].rotation), a);
    for (std::size_t b = 0; b < group.order(); ++b) {
      const Operation direct = operations[a] * operations[b];
      const Operation& tabled = operations[group.product(a, b)];
      ASSERT_EQ(direct.rotation, tabled.rotation);
      ASSERT_TRUE(group.in_lattice(direct.translation - tabled.translation));
    }
    for (const FractionVector& centring : group.centrings())
      ASSERT_TRUE(group.in_lattice(times(operations[a].rotation, centring)));
  }
  for (const FractionVector& a : group.centrings())
    for (const FractionVector& b : group.centrings()) ASSERT_TRUE(group.in_lattice(a + b));
}

TEST(SpaceGroupTest, EverySettingIsAGroupOfTheRightOrder) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    SCOPED_TRACE(hall_number);
    const SpaceGroup group = SpaceGroup::from_hall_number(hall_number);
    require_laws(group);
    EXPECT_EQ(group.hall_number(), hall_number);
    EXPECT_EQ(group.order(), class_order(group.number()));
    EXPECT_EQ(group.centrings().size(), lattice_points(group));
    EXPECT_EQ(group.origin_shift(), FractionVector{});
    const std::vector<Operation> all = hall_operations(hall_number);
    EXPECT_EQ(all.size(), group.order() * group.centrings().size());
    for (const Operation& operation : all) {
      const auto index = group.find_rotation(operation.rotation);
      ASSERT_TRUE(index);
      EXPECT_TRUE(group.in_lattice(operation.translation - group.operations()[*index].translation));
    }
  }
}

TEST(SpaceGroupTest, NumbersMeanTheStandardSetting) {
  const struct {
    int number;
    const char* symbol;
    const char* setting;
  } cases[] = {
      {3, "P 1 2 1", "b"},          {14, "P 1 2_1/c 1", "b1"},       {15, "C 1 2/c 1", "b1"},
      {48, "P 2/n 2/n 2/n", "2"},   {62, "P 2_1/n 2_1/m 2_1/a", ""}, {148, "R -3", "H"},
      {227, "F 4_1/d -3 2/m", "2"}, {230, "I 4_1/a -3 2/d", ""},
  };
  for (const auto& [number, symbol, setting] : cases) {
    const SpaceGroup group = SpaceGroup::from_number(number);
    EXPECT_EQ(group.number(), number);
    EXPECT_EQ(group.symbol(), symbol);
    EXPECT_EQ(group.setting(), setting);
  }
  for (int number = 1; number <= 230; ++number)
    EXPECT_EQ(SpaceGroup::from_number(number).number(), number);
}

TEST(SpaceGroupTest, OperationsAreThoseOfThePrintedTables) {
  const struct {
    int number;
    const char* operation;
  } cases[] = {
      // International Tables A (2016), the numbered general positions.
      {14, "-x,y+1/2,-z+1/2"},  {14, "x,-y+1/2,z+1/2"},       {62, "-x+1/2,-y,z+1/2"},
      {62, "-x,y+1/2,-z"},      {62, "x,-y+1/2,z"},           {136, "-y+1/2,x+1/2,z+1/2"},
      {148, "-y,x-y,z"},        {167, "y,x,-z+1/2"},          {194, "-x,-y,z+1/2"},
      {194, "x-y,x,z+1/2"},     {227, "-x+3/4,-y+1/4,z+1/2"}, {227, "y+3/4,x+1/4,-z+1/2"},
      {230, "-x+1/2,-y,z+1/2"}, {230, "y+3/4,x+1/4,-z+1/4"},
  };
  for (const auto& [number, operation] : cases)
    EXPECT_TRUE(holds(SpaceGroup::from_number(number), operation)) << number << " " << operation;
}

TEST(SpaceGroupTest, LatticesReduceCanonically) {
  const Fraction third(1, 3);
  for (const int number : {5, 14, 22, 23, 38, 148}) {
    const SpaceGroup group = SpaceGroup::from_number(number);
    const FractionVector x{Fraction(5, 7), Fraction(-1, 5), third};
    const FractionVector reduced = group.lattice_reduced(x);
    EXPECT_TRUE(group.in_lattice(reduced - x));
    for (const FractionVector& centring : group.centrings()) {
      EXPECT_EQ(group.lattice_reduced(x + centring + FractionVector{1, -3, 2}), reduced);
      EXPECT_LE(reduced, modulo_one(x + centring));
    }
    EXPECT_FALSE(group.in_lattice(x));
  }
}

TEST(SpaceGroupTest, ReflectionConditionsDefineTheReciprocalLattice) {
  const struct {
    int number;
    FractionVector in, out;
    const char* source;
  } cases[] = {
      {221, {0, 1, 0}, {Fraction(1, 2), 0, 0}, "P: all integers"},
      {229, {1, 1, 0}, {0, 1, 0}, "I: h + k + l even"},
      {225, {1, 1, 1}, {0, 1, 0}, "F: all odd or all even"},
      {63, {1, 1, 1}, {0, 1, 0}, "C: h + k even"},
      {148, {1, 0, 1}, {0, 1, 0}, "R obverse: -h + k + l = 3n, so 10-1... and 101 by 1, 0, 1"},
  };
  for (const auto& [number, in, out, source] : cases) {
    SCOPED_TRACE(source);
    const SpaceGroup group = SpaceGroup::from_number(number);
    EXPECT_TRUE(group.in_reciprocal_lattice(in));
    EXPECT_FALSE(group.in_reciprocal_lattice(out));
  }
}

TEST(SpaceGroupTest, PolarAndCentricClassesAreTheKnownOnes) {
  // International Tables A (2016), Table 3.2.1.3 (Laue classes) and section 3.2.3 (polar classes).
  const auto within = [](int number, std::initializer_list<std::pair<int, int>> ranges) {
    return std::any_of(ranges.begin(), ranges.end(), [number](const std::pair<int, int>& range) {
      return number >= range.first && number <= range.second;
    });
  };
  for (int number = 1; number <= 230; ++number) {
    SCOPED_TRACE(number);
    const SpaceGroup group = SpaceGroup::from_number(number);
    EXPECT_EQ(group.is_polar(), within(number, {{1, 1},
                                                {3, 9},
                                                {25, 46},
                                                {75, 80},
                                                {99, 110},
                                                {143, 146},
                                                {156, 161},
                                                {168, 173},
                                                {183, 186}}));
    EXPECT_EQ(group.is_centrosymmetric(), within(number, {{2, 2},
                                                          {10, 15},
                                                          {47, 74},
                                                          {83, 88},
                                                          {123, 142},
                                                          {147, 148},
                                                          {162, 167},
                                                          {175, 176},
                                                          {191, 194},
                                                          {200, 206},
                                                          {221, 230}}));
  }
}

TEST(SpaceGroupTest, NumbersOutOfRangeAreRefused) {
  for (const int number : {0, 231, -1}) try {
      (void)SpaceGroup::from_number(number);
      FAIL();
    } catch (const Error& error) {
      EXPECT_EQ(error.message(),
                "space-group number " + std::to_string(number) + "; it must lie within 1 to 230");
    }
  for (const int number : {0, 531}) try {
      (void)SpaceGroup::from_hall_number(number);
      FAIL();
    } catch (const Error& error) {
      EXPECT_EQ(error.message(),
                "hall number " + std::to_string(number) + "; it must lie within 1 to 530");
    }
}

}  // namespace
}  // namespace spinsieve
