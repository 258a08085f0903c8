#include "exact/fraction.hpp"

#include <limits>
#include <numeric>

#include <boost/multiprecision/cpp_int.hpp>

#include "exact/checked.hpp"

namespace spinsieve {

namespace {

using boost::multiprecision::cpp_int;

Fraction narrowed(cpp_int numerator, cpp_int denominator) {
  const cpp_int common = gcd(numerator, denominator);
  numerator /= common;
  denominator /= common;
  constexpr std::int64_t limit = std::numeric_limits<std::int64_t>::max();
  if (abs(numerator) > limit || denominator > limit)
    throw Error("a fraction exceeds 64 bits; simpler fractions are needed");
  return {static_cast<std::int64_t>(numerator), static_cast<std::int64_t>(denominator)};
}

Fraction sum(Fraction a, Fraction b, int sign) {
  if (a.denominator() == 1 && b.denominator() == 1) {
    std::int64_t result = 0;
    const bool overflow = sign > 0 ? __builtin_add_overflow(a.numerator(), b.numerator(), &result)
                                   : __builtin_sub_overflow(a.numerator(), b.numerator(), &result);
    if (!overflow) return {result};
  }
  const std::int64_t common = std::gcd(a.denominator(), b.denominator());
  const std::int64_t for_a = b.denominator() / common;
  const std::int64_t for_b = sign * (a.denominator() / common);
  std::int64_t left = 0;
  std::int64_t right = 0;
  std::int64_t numerator = 0;
  std::int64_t denominator = 0;
  if (!__builtin_mul_overflow(a.numerator(), for_a, &left) &&
      !__builtin_mul_overflow(b.numerator(), for_b, &right) &&
      !__builtin_add_overflow(left, right, &numerator) &&
      !__builtin_mul_overflow(a.denominator(), for_a, &denominator))
    return {numerator, denominator};
  return narrowed(
      cpp_int(a.numerator()) * b.denominator() + cpp_int(sign) * b.numerator() * a.denominator(),
      cpp_int(a.denominator()) * b.denominator());
}

}  // namespace

Fraction::Fraction(std::int64_t numerator, std::int64_t denominator)
    : numerator_(numerator), denominator_(denominator) {
  if (denominator == 0)
    throw Error("zero denominator in " + std::to_string(numerator) + "/0; it must not be zero");
  if (denominator_ == 1) return;
  if (denominator_ < 0) {
    numerator_ = checked_subtract(0, numerator_);
    denominator_ = checked_subtract(0, denominator_);
  }
  const std::int64_t common = std::gcd(numerator_, denominator_);
  numerator_ /= common;
  denominator_ /= common;
}

std::int64_t Fraction::floor() const {
  const std::int64_t quotient = numerator_ / denominator_;
  return numerator_ % denominator_ < 0 ? quotient - 1 : quotient;
}

Fraction Fraction::modulo_one() const {
  return {positive_modulo(numerator_, denominator_), denominator_};
}

Fraction Fraction::operator-() const { return {checked_subtract(0, numerator_), denominator_}; }

Fraction operator+(Fraction a, Fraction b) { return sum(a, b, 1); }
Fraction operator-(Fraction a, Fraction b) { return sum(a, b, -1); }

Fraction operator*(Fraction a, Fraction b) {
  std::int64_t numerator = 0;
  std::int64_t denominator = 0;
  if (!__builtin_mul_overflow(a.numerator(), b.numerator(), &numerator) &&
      !__builtin_mul_overflow(a.denominator(), b.denominator(), &denominator))
    return {numerator, denominator};
  return narrowed(cpp_int(a.numerator()) * b.numerator(),
                  cpp_int(a.denominator()) * b.denominator());
}

Fraction operator/(Fraction a, Fraction b) {
  if (b.is_zero()) throw Error("division by zero");
  return a * Fraction(b.denominator(), b.numerator());
}

std::strong_ordering operator<=>(Fraction a, Fraction b) {
  std::int64_t left = 0;
  std::int64_t right = 0;
  if (!__builtin_mul_overflow(a.numerator(), b.denominator(), &left) &&
      !__builtin_mul_overflow(b.numerator(), a.denominator(), &right))
    return left <=> right;
  const cpp_int wide_left = cpp_int(a.numerator()) * b.denominator();
  const cpp_int wide_right = cpp_int(b.numerator()) * a.denominator();
  return wide_left.compare(wide_right) <=> 0;
}

std::string to_string(Fraction value) {
  std::string text = std::to_string(value.numerator());
  if (!value.is_integer()) text += "/" + std::to_string(value.denominator());
  return text;
}

namespace {

bool is_digit(char c) { return c >= '0' && c <= '9'; }

/// Reads digits from the front of text into a number; throws Error beyond 18 digits.
std::int64_t take_digits(std::string_view& text, int& count, std::int64_t start) {
  std::int64_t value = start;
  while (!text.empty() && is_digit(text.front())) {
    if (value > (std::numeric_limits<std::int64_t>::max() - 9) / 10)
      throw Error("too many digits in a number; at most 18 are kept exactly");
    value = value * 10 + (text.front() - '0');
    text.remove_prefix(1);
    ++count;
  }
  return value;
}

Fraction power_of_ten(std::int64_t exponent) {
  if (exponent < -18 || exponent > 18)
    throw Error("exponent " + std::to_string(exponent) + " of a number; it must be within ±18");
  std::int64_t power = 1;
  for (std::int64_t i = 0; i < (exponent < 0 ? -exponent : exponent); ++i) power *= 10;
  return exponent < 0 ? Fraction(1, power) : Fraction(power);
}

}  // namespace

Fraction parse_fraction(std::string_view text) {
  const std::string quoted = "'" + std::string(text) + "'";
  const auto bad = [&] { return Error(quoted + " is not a number; accepted are 2, -1/3, 0.25"); };
  bool negative = false;
  if (!text.empty() && (text.front() == '-' || text.front() == '+')) {
    negative = text.front() == '-';
    text.remove_prefix(1);
  }
  int whole_digits = 0;
  int decimals = 0;
  std::int64_t digits = take_digits(text, whole_digits, 0);
  if (!text.empty() && text.front() == '/') {
    text.remove_prefix(1);
    int denominator_digits = 0;
    const std::int64_t denominator = take_digits(text, denominator_digits, 0);
    if (whole_digits == 0 || denominator_digits == 0 || !text.empty()) throw bad();
    if (denominator == 0) throw Error(quoted + " has a zero denominator");
    return {negative ? -digits : digits, denominator};
  }
  if (!text.empty() && text.front() == '.') {
    text.remove_prefix(1);
    digits = take_digits(text, decimals, digits);
  }
  if (whole_digits + decimals == 0) throw bad();
  std::int64_t exponent = -decimals;
  if (!text.empty() && (text.front() == 'e' || text.front() == 'E')) {
    text.remove_prefix(1);
    bool negative_exponent = false;
    if (!text.empty() && (text.front() == '-' || text.front() == '+')) {
      negative_exponent = text.front() == '-';
      text.remove_prefix(1);
    }
    int exponent_digits = 0;
    const std::int64_t written = take_digits(text, exponent_digits, 0);
    if (exponent_digits == 0 || exponent_digits > 4) throw bad();
    exponent += negative_exponent ? -written : written;
  }
  if (!text.empty()) throw bad();
  if (digits == 0) return {};
  return Fraction(negative ? -digits : digits) * power_of_ten(exponent);
}

Fraction nearest_simple(Fraction value, std::int64_t max_denominator, Fraction tolerance) {
  for (std::int64_t n = 1; n <= max_denominator; ++n) {
    const Fraction scaled = value * Fraction(n) + Fraction(1, 2);
    const Fraction candidate(scaled.floor(), n);
    const Fraction difference = candidate - value;
    if (difference <= tolerance && -difference <= tolerance) return candidate;
  }
  return value;
}

}  // namespace spinsieve
