#include "exact/fraction.hpp"

#include <limits>
#include <random>

#include <gtest/gtest.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

template <typename Body>
std::string message_of(Body body) {
  try {
    body();
  } catch (const Error& error) {
    return error.what();
  }
  return "no error";
}

constexpr std::int64_t most = std::numeric_limits<std::int64_t>::max();

TEST(FractionTest, TextIsReadExactlyAsWritten) {
  const struct {
    const char* text;
    std::int64_t numerator, denominator;
  } cases[] = {
      {"2", 2, 1},      {"-1/3", -1, 3},
      {"+4/6", 2, 3},   {"0.25", 1, 4},
      {".5", 1, 2},     {"-0.3333", -3333, 10000},
      {"2.5e-1", 1, 4}, {"1E2", 100, 1},
      {"007", 7, 1},    {"0e9999", 0, 1},
      {"1.", 1, 1},     {"0.000000000000000001", 1, 1'000'000'000'000'000'000},
      {"-0", 0, 1},     {"123456789012345678", 123456789012345678, 1},
  };
  for (const auto& [text, numerator, denominator] : cases) {
    SCOPED_TRACE(text);
    const Fraction value = parse_fraction(text);
    EXPECT_EQ(value.numerator(), numerator);
    EXPECT_EQ(value.denominator(), denominator);
  }
}

TEST(FractionTest, OtherTextIsRefusedWithTheTextQuoted) {
  for (const char* text : {"", "-", "x", "1/2/3", "1/", "/2", "1 /2", " 1", "1.2.3", "1e", "1e+",
                           "e5", ".", "0x10", "1/-2", "nan", "1,5", "1e12345"}) {
    EXPECT_EQ(message_of([text] { parse_fraction(text); }),
              "'" + std::string(text) + "' is not a number; accepted are 2, -1/3, 0.25");
  }
  EXPECT_EQ(message_of([] { parse_fraction("3/0"); }), "'3/0' has a zero denominator");
  EXPECT_EQ(message_of([] { parse_fraction("12345678901234567890"); }),
            "too many digits in a number; at most 18 are kept exactly");
  EXPECT_EQ(message_of([] { parse_fraction("1e19"); }),
            "exponent 19 of a number; it must be within ±18");
}

TEST(FractionTest, EqualValuesHaveOneForm) {
  EXPECT_EQ(Fraction(2, -4), Fraction(-1, 2));
  EXPECT_EQ(Fraction(0, -7), Fraction());
  EXPECT_EQ(to_string(Fraction(6, -4)), "-3/2");
  EXPECT_EQ(to_string(Fraction(8, 4)), "2");
}

TEST(FractionTest, FloorAndRemainderAgreeForNegativeValues) {
  const struct {
    Fraction value;
    std::int64_t floor;
    Fraction rest;
  } cases[] = {
      {{7, 2}, 3, {1, 2}},   {{-7, 2}, -4, {1, 2}}, {{-1, 3}, -1, {2, 3}},
      {{-3, 1}, -3, {0, 1}}, {{5, 1}, 5, {0, 1}},   {{0, 1}, 0, {0, 1}},
  };
  for (const auto& [value, floor, rest] : cases) {
    SCOPED_TRACE(to_string(value));
    EXPECT_EQ(value.floor(), floor);
    EXPECT_EQ(value.modulo_one(), rest);
    EXPECT_EQ(Fraction(value.floor()) + value.modulo_one(), value);
  }
}

TEST(FractionTest, ArithmeticAgreesWithCrossMultiplication) {
  std::mt19937_64 random(11);
  const auto draw = [&random] {
    return Fraction(static_cast<std::int64_t>(random() % 2001) - 1000,
                    static_cast<std::int64_t>(1 + random() % 999));
  };
  for (int i = 0; i < 2000; ++i) {
    const Fraction a = draw();
    const Fraction b = draw();
    SCOPED_TRACE(to_string(a) + " and " + to_string(b));
    const std::int64_t an = a.numerator();
    const std::int64_t ad = a.denominator();
    const std::int64_t bn = b.numerator();
    const std::int64_t bd = b.denominator();
    const auto is = [](Fraction value, std::int64_t numerator, std::int64_t denominator) {
      return value.numerator() * denominator == numerator * value.denominator();
    };
    EXPECT_TRUE(is(a + b, an * bd + bn * ad, ad * bd));
    EXPECT_TRUE(is(a - b, an * bd - bn * ad, ad * bd));
    EXPECT_TRUE(is(a * b, an * bn, ad * bd));
    if (!b.is_zero()) {
      EXPECT_TRUE(is(a / b, an * bd, ad * bn));
    }
    EXPECT_EQ(a < b, an * bd < bn * ad);
    EXPECT_EQ(a == b, an * bd == bn * ad);
  }
}

TEST(FractionTest, IntermediatesBeyondSixtyFourBitsDoNotMatter) {
  const Fraction large(most, 3);
  const Fraction small(3, most);
  EXPECT_EQ(large * small, Fraction(1));
  EXPECT_EQ(large - large, Fraction(0));
  EXPECT_EQ(large / large, Fraction(1));
  // Denominators 2³¹ and 3·2³¹ have a product beyond 64 bits times the numerators.
  const Fraction a(most - 6, std::int64_t{1} << 31);
  const Fraction b(most - 6, 3 * (std::int64_t{1} << 31));
  EXPECT_EQ(a - b, Fraction(2) * b);
  EXPECT_LT(Fraction(most - 1, most), Fraction(1));
  EXPECT_LT(Fraction(most - 2, most - 1), Fraction(most - 1, most));  // 1 − 1/n grows with n.
  EXPECT_GT(Fraction(most - 1, most), Fraction(most - 2, most - 1));
}

TEST(FractionTest, ResultsBeyondSixtyFourBitsAreRefused) {
  const char* const message = "a fraction exceeds 64 bits; simpler fractions are needed";
  EXPECT_EQ(message_of([] { Fraction(most) + Fraction(1); }), message);
  EXPECT_EQ(message_of([] { Fraction(-most) - Fraction(most); }), message);
  EXPECT_EQ(message_of([] { Fraction(most) * Fraction(2); }), message);
  EXPECT_EQ(message_of([] { Fraction(1, most) * Fraction(1, 2); }), message);
  EXPECT_EQ(message_of([] { Fraction(1, most) + Fraction(1, most - 1); }), message);
  EXPECT_EQ(message_of([] { Fraction(1, std::numeric_limits<std::int64_t>::min()); }),
            "exact arithmetic exceeds 64 bits");
  EXPECT_EQ(message_of([] { -Fraction(std::numeric_limits<std::int64_t>::min()); }),
            "exact arithmetic exceeds 64 bits");
}

TEST(FractionTest, ZeroDenominatorsAreRefused) {
  EXPECT_EQ(message_of([] { Fraction(5, 0); }), "zero denominator in 5/0; it must not be zero");
  EXPECT_EQ(message_of([] { Fraction(1) / Fraction(0); }), "division by zero");
}

TEST(FractionTest, TheSimplestNearFractionIsOffered) {
  const struct {
    const char* value;
    std::int64_t largest;
    const char* tolerance;
    const char* nearest;
  } cases[] = {
      {"0.3333", 12, "0.001", "1/3"},       {"0.66", 12, "0.01", "2/3"},
      {"-0.3333", 12, "0.001", "-1/3"},     {"0.126", 12, "0.002", "1/8"},
      {"0.17", 5, "0.001", "17/100"},       {"0.999", 12, "0.001", "1"},
      {"0.3333", 2, "0.001", "3333/10000"},
  };
  for (const auto& [value, largest, tolerance, nearest] : cases)
    EXPECT_EQ(to_string(nearest_simple(parse_fraction(value), largest, parse_fraction(tolerance))),
              nearest);
}

}  // namespace
}  // namespace spinsieve
