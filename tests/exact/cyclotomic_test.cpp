#include "exact/cyclotomic.hpp"

#include <numbers>
#include <random>
#include <vector>

#include <gtest/gtest.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

const Cyclotomic root2 = Cyclotomic::root(3) + Cyclotomic::root(-3);
const Cyclotomic root3 = Cyclotomic::root(2) + Cyclotomic::root(-2);

class Draw {
 public:
  explicit Draw(unsigned seed) : random_(seed) {}
  Cyclotomic operator()() {
    Cyclotomic::Coefficients c{};
    for (std::int64_t& x : c) x = static_cast<std::int64_t>(random_() % 19) - 9;
    return {c, static_cast<std::int64_t>(1 + random_() % 6)};
  }

 private:
  std::mt19937 random_;
};

TEST(CyclotomicTest, RootsLieWhereTheyShould) {
  for (int k = -30; k <= 30; ++k) {
    const std::complex<double> expected = std::polar(1.0, 2 * std::numbers::pi * k / 24);
    EXPECT_LT(std::abs(Cyclotomic::root(k).to_complex() - expected), 1e-14) << k;
    EXPECT_EQ(Cyclotomic::root(Phase(k, 24)), Cyclotomic::root(k)) << k;
    EXPECT_EQ(Cyclotomic::root(k).phase(), Phase(k, 24)) << k;
  }
}

TEST(CyclotomicTest, KnownIdentitiesHoldExactly) {
  EXPECT_EQ(root2 * root2, Cyclotomic(2));
  EXPECT_EQ(root3 * root3, Cyclotomic(3));
  // The square of √2 + √3 is 5 + 2√6.
  EXPECT_EQ((root2 + root3) * (root2 + root3), Cyclotomic(5) + Cyclotomic(2) * root2 * root3);
  Cyclotomic sum;
  for (int k = 0; k < 24; ++k) sum += Cyclotomic::root(k);
  EXPECT_TRUE(sum.is_zero());
  // The 24th cyclotomic polynomial x⁸ − x⁴ + 1 vanishes.
  EXPECT_TRUE((Cyclotomic::root(8) - Cyclotomic::root(4) + Cyclotomic(1)).is_zero());
}

TEST(CyclotomicTest, ArithmeticFollowsTheComplexNumbers) {
  Draw draw(5);
  for (int i = 0; i < 500; ++i) {
    const Cyclotomic a = draw();
    const Cyclotomic b = draw();
    SCOPED_TRACE(to_string(a) + " and " + to_string(b));
    const std::complex<double> x = a.to_complex();
    const std::complex<double> y = b.to_complex();
    const double scale = 1e-12 * (1 + std::abs(x) + std::abs(y)) * (1 + std::abs(x));
    EXPECT_LT(std::abs((a + b).to_complex() - (x + y)), scale);
    EXPECT_LT(std::abs((a - b).to_complex() - (x - y)), scale);
    EXPECT_LT(std::abs((a * b).to_complex() - x * y), 10 * scale);
    EXPECT_LT(std::abs((-a).to_complex() + x), scale);
    EXPECT_LT(std::abs(a.conjugate().to_complex() - std::conj(x)), scale);
    EXPECT_LT(std::abs(a.real_part().to_complex() - x.real()), scale);
    EXPECT_LT(std::abs(a.imaginary_part().to_complex() - x.imag()), scale);
  }
}

TEST(CyclotomicTest, TheFieldLawsHoldExactly) {
  Draw draw(17);
  for (int i = 0; i < 200; ++i) {
    const Cyclotomic a = draw();
    const Cyclotomic b = draw();
    const Cyclotomic c = draw();
    EXPECT_EQ(a * (b + c), a * b + a * c);
    EXPECT_EQ((a * b) * c, a * (b * c));
    EXPECT_EQ(a + b - b, a);
    if (!b.is_zero()) {
      EXPECT_EQ(a / b * b, a);
    }
    for (const int power : {5, 7, 11, 13, 17, 19, 23})
      EXPECT_EQ((a * b).automorphism(power), a.automorphism(power) * b.automorphism(power));
  }
}

TEST(CyclotomicTest, EqualNumbersHaveOneForm) {
  EXPECT_EQ(Cyclotomic({2, 4, 0, 0, 0, 0, 0, 0}, -2), Cyclotomic({-1, -2, 0, 0, 0, 0, 0, 0}, 1));
  EXPECT_EQ(Cyclotomic({0, 0, 0, 0, 0, 0, 0, 0}, 7), Cyclotomic());
  EXPECT_EQ(Cyclotomic(Fraction(2, 4)), Cyclotomic({1, 0, 0, 0, 0, 0, 0, 0}, 2));
}

TEST(CyclotomicTest, SignsAreDecidedExactly) {
  const auto number = [](std::int64_t a, std::int64_t b, std::int64_t c, std::int64_t d) {
    return Cyclotomic(a) + Cyclotomic(b) * root2 + Cyclotomic(c) * root3 +
           Cyclotomic(d) * root2 * root3;
  };
  const struct {
    Cyclotomic value;
    int sign;
    const char* source;
  } cases[] = {
      {number(0, 0, 0, 0), 0, "zero"},
      {number(-1393, 985, 0, 0), 1, "by hand: 2·985² = 1393² + 1"},
      {number(3363, -2378, 0, 0), 1, "by hand: 3363² = 2·2378² + 1"},
      {number(-1351, 0, 780, 0), -1, "by hand: 3·780² = 1351² - 1"},
      {number(485, 0, 0, -198), 1, "by hand: 485² = 6·198² + 1"},
      {number(0, 1, 1, 0), 1, "√2 + √3"},
      {number(0, 11, -9, 0), -1, "by hand: 2·121 < 3·81"},
      {number(-5, 0, 0, 2), -1, "by hand: (√3 - √2)² = 5 - 2√6 > 0"},
      {number(1, -1, -1, 1), 1, "(√2 - 1)(√3 - 1)"},
  };
  for (const auto& [value, sign, source] : cases) {
    SCOPED_TRACE(source);
    EXPECT_EQ(value.sign(), sign);
    EXPECT_EQ((-value).sign(), -sign);
  }
  EXPECT_THROW((void)Cyclotomic::root(6).sign(), std::logic_error);
}

TEST(CyclotomicTest, SignsAgreeWithFloatingPointAwayFromZero) {
  std::mt19937 random(3);
  for (int i = 0; i < 2000; ++i) {
    Cyclotomic value;
    for (const Cyclotomic& root : {Cyclotomic(1), root2, root3, root2 * root3})
      value += Cyclotomic(static_cast<std::int64_t>(random() % 41) - 20) * root;
    const double floating = value.to_complex().real();
    if (std::abs(floating) < 1e-9) continue;
    EXPECT_EQ(value.sign(), floating > 0 ? 1 : -1) << to_string(value);
  }
}

TEST(CyclotomicTest, OnlyRootsOfUnityHaveAPhase) {
  EXPECT_EQ(Cyclotomic(1).phase(), Phase());
  EXPECT_EQ(Cyclotomic(-1).phase(), Phase(1, 2));
  EXPECT_FALSE(Cyclotomic(2).phase());
  EXPECT_FALSE(root2.phase());
  EXPECT_FALSE(Cyclotomic(Fraction(1, 2)).phase());
  EXPECT_TRUE(Cyclotomic::holds(Phase(1, 8)));
  EXPECT_FALSE(Cyclotomic::holds(Phase(1, 5)));
  EXPECT_THROW(Cyclotomic::root(Phase(1, 5)), std::logic_error);
}

TEST(CyclotomicTest, TextIsShort) {
  const struct {
    Cyclotomic value;
    const char* text;
  } cases[] = {
      {Cyclotomic(), "0"},
      {Cyclotomic(Fraction(-1, 2)), "-1/2"},
      {Cyclotomic::root(8), "e(1/3)"},
      {Cyclotomic::root(15), "-e(1/8)"},
      {Cyclotomic(2) * Cyclotomic::root(4), "2*e(1/6)"},
      {Cyclotomic(1) + Cyclotomic::root(3), "1+e(1/8)"},
      {Cyclotomic(1) - Cyclotomic(2) * Cyclotomic::root(3), "1-2*e(1/8)"},
  };
  for (const auto& [value, text] : cases) EXPECT_EQ(to_string(value), text);
}

TEST(CyclotomicTest, TheOrderIsTotalAndPutsLargerFirst) {
  Draw draw(23);
  std::vector<Cyclotomic> values{Cyclotomic(), Cyclotomic(1), Cyclotomic::root(6), root2, -root2};
  for (int i = 0; i < 20; ++i) values.push_back(draw());
  for (const Cyclotomic& a : values)
    for (const Cyclotomic& b : values) {
      EXPECT_EQ(comes_before(a, b) + comes_before(b, a), a == b ? 0 : 1);
      const std::complex<double> gap = a.to_complex() - b.to_complex();
      if (std::abs(gap.real()) > 1e-9) {
        EXPECT_EQ(comes_before(a, b), gap.real() > 0);
      } else if (std::abs(gap.imag()) > 1e-9) {
        EXPECT_EQ(comes_before(a, b), gap.imag() > 0);
      }
    }
}

TEST(CyclotomicTest, LargeIntermediatesAreExactAndLargeResultsRefused) {
  const std::int64_t large = std::int64_t{1} << 40;
  const Cyclotomic a = Cyclotomic(large) * (Cyclotomic(1) + Cyclotomic::root(1));
  const Cyclotomic b = Cyclotomic(Fraction(1, large)) * (Cyclotomic(1) - Cyclotomic::root(1));
  EXPECT_EQ(a * b, Cyclotomic(1) - Cyclotomic::root(2));
  EXPECT_EQ(a - a, Cyclotomic());
  try {
    (void)(a * a);
    FAIL();
  } catch (const Error& error) {
    EXPECT_STREQ(error.what(), "exact arithmetic exceeds 64 bits");
  }
  EXPECT_THROW(Cyclotomic().inverse(), Error);
  EXPECT_THROW(Cyclotomic({1, 0, 0, 0, 0, 0, 0, 0}, 0), Error);
}

}  // namespace
}  // namespace spinsieve
