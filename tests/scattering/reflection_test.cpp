#include "scattering/reflection.hpp"

#include <numbers>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

namespace spinsieve {
namespace {

/// Number of reflections in the line that holds Q = hkl + k, and of lines below it.
const PowderLine* line_at(const ReflectionTable& table, double q) {
  for (const PowderLine& line : table.lines())
    if (std::abs(line.q - q) < 1e-6) return &line;
  return nullptr;
}

TEST(ReflectionTableTest, MultiplicitiesOfOneDomain) {
  const Fraction half(1, 2);
  const double turn = 2 * std::numbers::pi;
  // Shull, Strauser & Wollan (1951): indices of MnO in the doubled cube; of the 24 planes {311} six
  // belong to one arm, of the 8 planes {111} two, of {511} and {333} together 6 + 2.
  const Cell cell(4.4365, 4.4365, 4.4365, 90, 90, 90);
  const SpaceGroup group = parse_space_group("F m -3 m");
  const std::vector<Arm> arms = {{{half, half, half}, 0}};
  const ReflectionTable table(cell, group, arms, 0, 4);
  const struct {
    int squares;
    std::size_t multiplicity;
  } cases[] = {{3, 2}, {11, 6}, {19, 6}, {27, 8}};
  for (const auto& [squares, multiplicity] : cases) {
    SCOPED_TRACE(squares);
    const PowderLine* line = line_at(table, turn * std::sqrt(squares) / (2 * 4.4365));
    ASSERT_NE(line, nullptr);
    EXPECT_EQ(line->multiplicity, multiplicity);
    EXPECT_EQ(table.all_reflections(*line).size(), multiplicity);
  }
  EXPECT_EQ(table.label(table.lines()[0]), "(0 0 0)+k ×2");
}

TEST(ReflectionTableTest, PairsListBothSigns) {
  const Cell cell(3.3, 3.3, 8.8, 90, 90, 90);
  const SpaceGroup group = parse_space_group("I 4/m m m");
  const std::vector<Arm> arms = {{{0, 0, Fraction(7, 25)}, 0}};
  EXPECT_EQ(arm_kind(group, arms[0].k), ArmKind::pair);
  const ReflectionTable table(cell, group, arms, 0, 2.5);
  const PowderLine& first = table.lines()[0];
  EXPECT_EQ(first.multiplicity, 2U);  // ±k itself
  const auto all = table.all_reflections(first);
  EXPECT_EQ(table.label(all[0]), "(0 0 0)+k");
  EXPECT_EQ(table.label(all[1]), "(0 0 0)-k");
  // (1 0 1): h + k + l even; satellites (101)-k 8 planes and (101)+k 8 planes at different Q.
  const double minus = 2 * std::numbers::pi * std::hypot(1 / 3.3, 0.72 / 8.8);
  ASSERT_NE(line_at(table, minus), nullptr);
  EXPECT_EQ(line_at(table, minus)->multiplicity, 8U);
  EXPECT_EQ(line_at(table, 2 * std::numbers::pi * 1 / 3.3), nullptr);  // no (1 0 0) ± 0
}

TEST(ReflectionTableTest, CentringsDecideWhatIsSelfConjugate) {
  const Fraction half(1, 2);
  const SpaceGroup fcc = parse_space_group("F m -3 m");
  const SpaceGroup bcc = parse_space_group("I m -3 m");
  EXPECT_EQ(arm_kind(fcc, {half, 0, 1}), ArmKind::pair);                  // W
  EXPECT_EQ(arm_kind(fcc, {half, half, half}), ArmKind::self_conjugate);  // L
  EXPECT_EQ(arm_kind(fcc, {0, 0, 1}), ArmKind::self_conjugate);           // X
  EXPECT_EQ(arm_kind(bcc, {half, half, half}), ArmKind::pair);            // P
  EXPECT_EQ(arm_kind(bcc, {0, 0, 1}), ArmKind::self_conjugate);           // H
  EXPECT_EQ(arm_kind(bcc, {1, 1, 0}), ArmKind::fundamental);
}

TEST(ReflectionTableTest, CellsOffSymmetryKeepTheirLinesTogether) {
  // A cell that fits the group only within its tolerance must not split lines symmetry makes one.
  const Cell exact(4, 4, 5, 90, 90, 90);
  const Cell off(4.0005, 3.9995, 5, 90, 90.005, 90);
  const SpaceGroup group = parse_space_group("P 4/m m m");
  const std::vector<Arm> arms = {{FractionVector{}, 0}};
  const ReflectionTable a(exact, group, arms, 0, 3);
  const ReflectionTable b(off, group, arms, 0, 3);
  ASSERT_EQ(a.lines().size(), b.lines().size());
  for (std::size_t i = 0; i < a.lines().size(); ++i)
    EXPECT_EQ(a.lines()[i].multiplicity, b.lines()[i].multiplicity);
}

TEST(ReflectionTableTest, OppositeOfASelfConjugateReflectionKeepsItsSign) {
  const Cell cell(5, 6, 7, 90, 100, 90);
  const SpaceGroup group = parse_space_group("P 2/m");
  const std::vector<Arm> arms = {{{Fraction(1, 2), 0, Fraction(1, 2)}, 0}};
  const ReflectionTable table(cell, group, arms, 0, 2);
  for (const Reflection& reflection : table.reflections()) {
    const Reflection mate = table.opposite(reflection);
    EXPECT_EQ(mate.k_sign, 1);
    for (std::size_t i = 0; i < 3; ++i)
      EXPECT_NEAR(mate.hkl[i] + arms[0].k[i].to_double(),
                  -(reflection.hkl[i] + arms[0].k[i].to_double()), 1e-15);
  }
}

TEST(ReflectionTableTest, TooManyReflectionsAreALimit) {
  const SpaceGroup group = parse_space_group("P 1");
  const std::vector<Arm> arms = {{FractionVector{}, 0}};
  EXPECT_THROW(ReflectionTable(Cell(50, 50, 50, 90, 90, 90), group, arms, 0, 60), LimitReached);
}

}  // namespace
}  // namespace spinsieve
