#include "exact/phase.hpp"

#include <cmath>
#include <limits>
#include <random>

#include <gtest/gtest.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

TEST(PhaseTest, SumsWrapAtOneTurn) {
  const struct {
    Phase a, b;
    const char* sum;
    const char* source;
  } cases[] = {
      {{1, 2}, {1, 2}, "0", "2_1 twice is a lattice translation; ITA (2016), No. 4"},
      {{2, 3}, {2, 3}, "1/3", "3_2 twice advances by 4/3; ITA (2016), No. 145"},
      {{1, 4}, {-5, 12}, "5/6", "by hand: 3/12 - 5/12 = -2/12"},
  };
  for (const auto& [a, b, sum, source] : cases) {
    SCOPED_TRACE(source);
    EXPECT_EQ(to_string(a + b), sum);
    EXPECT_EQ(a + b - b, a);
  }
}

TEST(PhaseTest, FactorTurnsSumsIntoProducts) {
  std::mt19937 random(20240601);
  const auto draw = [&random] {
    const auto numerator = static_cast<std::int64_t>(random() % 48);
    return Phase(numerator, static_cast<std::int64_t>(1 + random() % 48));
  };
  for (int i = 0; i < 1000; ++i) {
    const Phase a = draw();
    const Phase b = draw();
    SCOPED_TRACE(to_string(a) + " + " + to_string(b));
    EXPECT_LT(std::abs((a + b).factor() - a.factor() * b.factor()), 4e-15);
    EXPECT_LT(std::abs((-a).factor() - std::conj(a.factor())), 4e-15);
    EXPECT_LT(std::abs((3 * a).factor() - std::pow(a.factor(), 3)), 8e-15);
  }
}

TEST(PhaseTest, QuarterTurnsAreExact) {
  EXPECT_EQ(Phase(0, 1).factor(), std::complex<double>(1, 0));
  EXPECT_EQ(Phase(1, 4).factor(), std::complex<double>(0, 1));
  EXPECT_EQ(Phase(1, 2).factor(), std::complex<double>(-1, 0));
  EXPECT_EQ(Phase(3, 4).factor(), std::complex<double>(0, -1));
  EXPECT_LT(std::abs(Phase(1, 3).factor() - std::complex<double>(-0.5, std::sqrt(0.75))), 1e-15);
}

TEST(PhaseTest, TheDenominatorIsTheOrderOfTheRoot) {
  for (std::int64_t n = 1; n < 30; ++n)
    for (std::int64_t m = -n; m <= n; ++m) {
      const Phase phase(m, n);
      std::int64_t order = 1;
      while (!(order * phase).is_zero()) ++order;
      EXPECT_EQ(order, phase.denominator()) << m << "/" << n;
    }
}

TEST(PhaseTest, EveryIntegerMultipleIsTakenModuloOne) {
  constexpr std::int64_t most = std::numeric_limits<std::int64_t>::max();  // 2⁶³ − 1 ≡ 1 mod 6.
  EXPECT_EQ(most * Phase(1, 6), Phase(1, 6));
  EXPECT_EQ(-1 * Phase(1, 6), Phase(5, 6));
  EXPECT_EQ(Phase(Fraction(-7, 3)), Phase(2, 3));
}

TEST(PhaseTest, ADenominatorThatIsNotPositiveIsRefused) {
  for (const std::int64_t denominator : {0, -3}) try {
      const Phase phase(1, denominator);
      FAIL() << to_string(phase);
    } catch (const Error& error) {
      EXPECT_EQ(error.message(),
                "denominator " + std::to_string(denominator) + " of a phase; it must be positive");
    }
}

TEST(PhaseTest, SumsBeyondSixtyFourBitsAreRefused) {
  const Phase a(1, 3'037'000'507);  // Coprime denominators whose product exceeds 2⁶³.
  const Phase b(1, 3'037'000'493);
  EXPECT_THROW(a + b, Error);
}

}  // namespace
}  // namespace spinsieve
