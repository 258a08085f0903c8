#include "exact/cyclotomic.hpp"

#include <limits>
#include <numeric>
#include <stdexcept>

#include <boost/multiprecision/cpp_int.hpp>

#include "exact/checked.hpp"

namespace spinsieve {

namespace {

using boost::multiprecision::cpp_int;
using Coefficients = Cyclotomic::Coefficients;

/// ζ^(8+k) = ζ^(4+k) − ζ^k brings fifteen coefficients back to eight.
template <typename Integer>
std::array<Integer, 8> reduced(std::array<Integer, 15> power) {
  for (std::size_t k = 14; k >= 8; --k) {
    power[k - 4] += power[k];
    power[k - 8] -= power[k];
  }
  std::array<Integer, 8> result;
  std::copy(power.begin(), power.begin() + 8, result.begin());
  return result;
}

Cyclotomic narrowed(const std::array<cpp_int, 8>& numerators, const cpp_int& denominator) {
  cpp_int common = denominator;
  for (const cpp_int& n : numerators) common = gcd(common, n);
  constexpr std::int64_t limit = std::numeric_limits<std::int64_t>::max();
  Coefficients narrow{};
  for (std::size_t i = 0; i < 8; ++i) {
    const cpp_int value = numerators[i] / common;
    if (abs(value) > limit) throw Error("exact arithmetic exceeds 64 bits");
    narrow[i] = static_cast<std::int64_t>(value);
  }
  const cpp_int value = denominator / common;
  if (value > limit) throw Error("exact arithmetic exceeds 64 bits");
  return {narrow, static_cast<std::int64_t>(value)};
}

Cyclotomic wide_product(const Cyclotomic& a, const Cyclotomic& b) {
  std::array<cpp_int, 15> power;
  for (std::size_t i = 0; i < 8; ++i)
    for (std::size_t j = 0; j < 8; ++j)
      power[i + j] += cpp_int(a.coefficients()[i]) * b.coefficients()[j];
  return narrowed(reduced(power), cpp_int(a.denominator()) * b.denominator());
}

Cyclotomic wide_sum(const Cyclotomic& a, const Cyclotomic& b, int sign) {
  std::array<cpp_int, 8> sum;
  for (std::size_t i = 0; i < 8; ++i)
    sum[i] = cpp_int(a.coefficients()[i]) * b.denominator() +
             cpp_int(sign) * b.coefficients()[i] * a.denominator();
  return narrowed(sum, cpp_int(a.denominator()) * b.denominator());
}

/// Below this magnitude eight products and their reduction stay within 64 bits.
constexpr std::int64_t small = 1 << 28;

bool is_small(const Cyclotomic& a) {
  if (a.denominator() > small) return false;
  for (const std::int64_t c : a.coefficients())
    if (c > small || c < -small) return false;
  return true;
}

Cyclotomic sum(const Cyclotomic& a, const Cyclotomic& b, int sign) {
  if (!is_small(a) || !is_small(b)) return wide_sum(a, b, sign);
  Coefficients sum{};
  if (a.denominator() == b.denominator()) {
    for (std::size_t i = 0; i < 8; ++i) sum[i] = a.coefficients()[i] + sign * b.coefficients()[i];
    return {sum, a.denominator()};
  }
  for (std::size_t i = 0; i < 8; ++i)
    sum[i] = a.coefficients()[i] * b.denominator() + sign * b.coefficients()[i] * a.denominator();
  return {sum, a.denominator() * b.denominator()};
}

/// ζ^k on the basis, for 0 ≤ k < 24.
Coefficients root_coefficients(int k) {
  Coefficients c{};
  const int sign = k < 12 ? 1 : -1;  // ζ¹² = −1
  k %= 12;
  if (k < 8) {
    c[static_cast<std::size_t>(k)] = sign;
  } else {
    c[static_cast<std::size_t>(k - 4)] = sign;
    c[static_cast<std::size_t>(k - 8)] = -sign;
  }
  return c;
}

/// Sign of x + y√n for integers.
int sign_with_root(const cpp_int& x, const cpp_int& y, int n) {
  const int of_x = x.sign();
  const int of_y = y.sign();
  if (of_y == 0) return of_x;
  if (of_x == 0 || of_x == of_y) return of_y;
  return cpp_int(x * x).compare(cpp_int(n * y * y)) > 0 ? of_x : of_y;
}

}  // namespace

Cyclotomic::Cyclotomic(std::int64_t whole) { coefficients_[0] = whole; }

Cyclotomic::Cyclotomic(Fraction value) : denominator_(value.denominator()) {
  coefficients_[0] = value.numerator();
}

Cyclotomic::Cyclotomic(const Coefficients& numerators, std::int64_t denominator)
    : coefficients_(numerators), denominator_(denominator) {
  if (denominator_ == 1) return;
  if (denominator_ == 0) throw Error("zero denominator of a cyclotomic number");
  std::int64_t common = denominator_;
  for (const std::int64_t c : coefficients_) common = std::gcd(common, c);
  if (denominator_ < 0) common = -common;
  for (std::int64_t& c : coefficients_) c /= common;
  denominator_ /= common;
}

Cyclotomic Cyclotomic::root(int exponent) {
  return {root_coefficients(static_cast<int>(positive_modulo(exponent, order))), 1};
}

Cyclotomic Cyclotomic::root(Phase phase) {
  if (!holds(phase)) throw std::logic_error("phase " + to_string(phase) + " is outside Q(e(1/24))");
  return root(static_cast<int>(phase.numerator() * (order / phase.denominator())));
}

bool Cyclotomic::is_zero() const noexcept { return coefficients_ == Coefficients{}; }

bool Cyclotomic::is_rational() const noexcept {
  for (std::size_t i = 1; i < 8; ++i)
    if (coefficients_[i] != 0) return false;
  return true;
}

Fraction Cyclotomic::rational() const { return {coefficients_[0], denominator_}; }

Cyclotomic Cyclotomic::conjugate() const { return automorphism(-1); }

Cyclotomic Cyclotomic::automorphism(int power) const {
  Coefficients image{};
  for (int i = 0; i < 8; ++i) {
    const std::int64_t c = coefficients_[static_cast<std::size_t>(i)];
    if (c == 0) continue;
    const Coefficients basis =
        root_coefficients(static_cast<int>(positive_modulo(i * power, order)));
    for (std::size_t j = 0; j < 8; ++j)
      image[j] = checked_add(image[j], checked_multiply(c, basis[j]));
  }
  return {image, denominator_};
}

Cyclotomic Cyclotomic::inverse() const {
  if (is_zero()) throw Error("division by zero");
  if (is_rational()) return Cyclotomic(Fraction(denominator_, coefficients_[0]));
  // The norm, the product over all automorphisms, is rational.
  Cyclotomic others(1);
  for (const int power : {5, 7, 11, 13, 17, 19, 23}) others = others * automorphism(power);
  const Fraction norm = (*this * others).rational();
  return others * Cyclotomic(Fraction(1) / norm);
}

Cyclotomic Cyclotomic::real_part() const {
  return (*this + conjugate()) * Cyclotomic(Fraction(1, 2));
}

Cyclotomic Cyclotomic::imaginary_part() const {
  return (*this - conjugate()) * root(-6) * Cyclotomic(Fraction(1, 2));
}

int Cyclotomic::sign() const {
  // A real number is a + b√2 + c√3 + d√6; its coefficients of 1, ζ, ζ², ζ⁵ give a, b, c, d, since
  // only √2 and √6 have ζ and ζ⁵, and only √3 has ζ².
  static const Cyclotomic root2 = root(3) + root(-3);
  static const Cyclotomic root3 = root(2) + root(-2);
  static const Cyclotomic root6 = root2 * root3;
  if (!is_real()) throw std::logic_error("the sign of a number that is not real");
  const Coefficients& r2 = root2.coefficients_;
  const Coefficients& r6 = root6.coefficients_;
  const cpp_int a = coefficients_[0];
  const cpp_int determinant = cpp_int(r2[1]) * r6[5] - cpp_int(r2[5]) * r6[1];
  cpp_int b = cpp_int(coefficients_[1]) * r6[5] - cpp_int(coefficients_[5]) * r6[1];
  cpp_int d = cpp_int(r2[1]) * coefficients_[5] - cpp_int(r2[5]) * coefficients_[1];
  cpp_int c = cpp_int(coefficients_[2]) * determinant;
  // Clear the denominators det and coefficient of ζ² in √3 by a common positive factor.
  const cpp_int of_root3 = root3.coefficients_[2];
  cpp_int scaled_a = a * determinant * of_root3;
  b *= of_root3;
  d *= of_root3;
  if (determinant * of_root3 < 0) {
    scaled_a = -scaled_a;
    b = -b;
    c = -c;
    d = -d;
  }
  // x + y√3 with x = a + b√2 and y = c + d√2.
  const int of_x = sign_with_root(scaled_a, b, 2);
  const int of_y = sign_with_root(c, d, 2);
  if (of_y == 0) return of_x;
  if (of_x == 0 || of_x == of_y) return of_y;
  // Opposite signs: compare x² with 3y², again a number p + q√2.
  const cpp_int p = scaled_a * scaled_a + 2 * b * b - 3 * (c * c + 2 * d * d);
  const cpp_int q = 2 * scaled_a * b - 6 * c * d;
  return sign_with_root(p, q, 2) > 0 ? of_x : of_y;
}

std::optional<Phase> Cyclotomic::phase() const {
  if (denominator_ != 1) return std::nullopt;
  for (int k = 0; k < order; ++k)
    if (coefficients_ == root_coefficients(k)) return Phase(k, order);
  return std::nullopt;
}

std::complex<double> Cyclotomic::to_complex() const {
  std::complex<double> sum = 0;
  for (int k = 0; k < 8; ++k) {
    const std::int64_t c = coefficients_[static_cast<std::size_t>(k)];
    if (c != 0) sum += static_cast<double>(c) * Phase(k, order).factor();
  }
  return sum / static_cast<double>(denominator_);
}

Cyclotomic Cyclotomic::operator-() const {
  Cyclotomic result = *this;
  for (std::int64_t& c : result.coefficients_) c = checked_subtract(0, c);
  return result;
}

Cyclotomic operator+(const Cyclotomic& a, const Cyclotomic& b) { return sum(a, b, 1); }
Cyclotomic operator-(const Cyclotomic& a, const Cyclotomic& b) { return sum(a, b, -1); }

Cyclotomic operator*(const Cyclotomic& a, const Cyclotomic& b) {
  if (!is_small(a) || !is_small(b)) return wide_product(a, b);
  std::array<std::int64_t, 15> power{};
  for (std::size_t i = 0; i < 8; ++i) {
    const std::int64_t c = a.coefficients_[i];
    if (c == 0) continue;
    for (std::size_t j = 0; j < 8; ++j) power[i + j] += c * b.coefficients_[j];
  }
  return {reduced(power), a.denominator_ * b.denominator_};
}

namespace {

/// value = rational × root of unity, with the root's phase in [0, 1/2).
std::optional<std::pair<Fraction, Phase>> as_scaled_root(const Cyclotomic& value) {
  for (int k = 0; k < Cyclotomic::order / 2; ++k) {
    const Cyclotomic rest = value * Cyclotomic::root(-k);
    if (rest.is_rational()) return std::pair(rest.rational(), Phase(k, Cyclotomic::order));
  }
  return std::nullopt;
}

std::string scaled_root_text(Fraction scale, Phase phase) {
  if (phase.is_zero()) return to_string(scale);
  std::string text;
  if (scale == Fraction(-1))
    text = "-";
  else if (scale != Fraction(1))
    text = to_string(scale) + "*";
  return text + "e(" + to_string(phase) + ")";
}

}  // namespace

std::string to_string(const Cyclotomic& value) {
  if (value.is_zero()) return "0";
  if (const auto scaled = as_scaled_root(value))
    return scaled_root_text(scaled->first, scaled->second);
  std::string text;
  for (int k = 0; k < 8; ++k) {
    const std::int64_t c = value.coefficients()[static_cast<std::size_t>(k)];
    if (c == 0) continue;
    if (c > 0 && !text.empty()) text += "+";
    text += scaled_root_text(Fraction(c, value.denominator()), Phase(k, Cyclotomic::order));
  }
  return text;
}

bool comes_before(const Cyclotomic& a, const Cyclotomic& b) {
  const Cyclotomic difference = a - b;
  const int real = difference.real_part().sign();
  if (real != 0) return real > 0;
  return difference.imaginary_part().sign() > 0;
}

}  // namespace spinsieve
