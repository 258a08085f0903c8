#include "report/exact_text.hpp"

#include <gtest/gtest.h>

#include "report/candidate_text.hpp"

namespace spinsieve {
namespace {

TEST(ExactTextTest, PhasesOutsideTheFieldStandAsFactors) {
  EXPECT_EQ(exact_text(Phase(1, 2), Cyclotomic(1)), "-1");
  EXPECT_EQ(exact_text(Phase(1, 3), Cyclotomic(1)), "e(1/3)");
  EXPECT_EQ(exact_text(Phase(1, 5), Cyclotomic(1)), "e(1/5)");
  EXPECT_EQ(exact_text(Phase(1, 5), Cyclotomic(-1)), "e(7/10)");  // 1/5 + 1/2
  EXPECT_EQ(exact_text(Phase(1, 5), Cyclotomic(2)), "2*e(1/5)");
  EXPECT_EQ(exact_text(Phase(1, 5), Cyclotomic(0)), "0");
  EXPECT_EQ(exact_text(Phase(1, 5), Cyclotomic(1) + Cyclotomic::root(3)), "e(1/5)*(1+e(1/8))");
}

TEST(ExactTextTest, ConjugationTurnsEveryPhase) {
  EXPECT_EQ(conjugated("1"), "1");
  EXPECT_EQ(conjugated("-e(1/3)"), "-e(-1/3)");
  EXPECT_EQ(conjugated("2*e(-1/6)"), "2*e(1/6)");
  EXPECT_EQ(conjugated("e(1/2-1/2*u)"), "e(-1/2+1/2*u)");
  EXPECT_EQ(conjugated("e(1/5)*(1+e(1/8))"), "e(-1/5)*(1+e(-1/8))");
}

TEST(ExactTextTest, PositionsAreFractionsWhereThatSaysMore) {
  EXPECT_EQ(position_text({Fraction(3, 4), Fraction(1, 3), Fraction(0)}), "3/4, 1/3, 0");
  EXPECT_EQ(position_text({Fraction(2097, 2500), Fraction(-1, 24), Fraction(1, 25)}),
            "0.8388, -1/24, 0.04");
}

TEST(FactorTextTest, WritesFactorsAsAReaderWould) {
  const std::complex<double> i(0, 1);
  EXPECT_EQ(factor_text(0, "u"), "");
  EXPECT_EQ(factor_text(1, "u"), "u");
  EXPECT_EQ(factor_text(-2, "u"), "-2u");
  EXPECT_EQ(factor_text(0.5, "v"), "v/2");
  EXPECT_EQ(factor_text(-1.5, "v"), "-3v/2");
  EXPECT_EQ(factor_text(0.8660254037844386, "w"), "0.866w");
  EXPECT_EQ(factor_text(i, "u"), "e(1/4)u");
  EXPECT_EQ(factor_text(-i, "u"), "e(3/4)u");
  EXPECT_EQ(factor_text(2.0 * Phase(3, 14).factor(), "u"), "2e(3/14)u");
}

TEST(MomentFormTest, SumsParametersAndFollowsTheSignOfThePhase) {
  FourierField arm;
  arm.atoms = {{0, {}}};
  const std::complex<double> turn = Phase(1, 3).factor();
  arm.components = {{1.0, 2.0, 0.0}, {turn, -1.0, 0.0}};
  EXPECT_EQ(moment_form(arm, 0, {"u", "v"}, PhaseSign::plus), "(u+e(1/3)v,2u-v,0)");
  EXPECT_EQ(moment_form(arm, 0, {"u", "v"}, PhaseSign::minus), "(u+e(2/3)v,2u-v,0)");
}

}  // namespace
}  // namespace spinsieve
