#pragma once

#include <array>
#include <compare>
#include <cstdint>
#include <string>
#include <string_view>

namespace spinsieve {

/// A rational number, exact.
///
/// Invariant: denominator > 0, lowest terms; equal fractions have equal members. Sums and products
/// take a 64-bit path and, where an intermediate would not fit, a path of unlimited integers;
/// a result that does not fit 64 bits after reduction throws Error.
class Fraction {
 public:
  constexpr Fraction() = default;
  constexpr Fraction(std::int64_t whole)
      : numerator_(whole) {}  // NOLINT(google-explicit-constructor)
  /// Throws Error when the denominator is 0.
  Fraction(std::int64_t numerator, std::int64_t denominator);

  std::int64_t numerator() const noexcept { return numerator_; }
  std::int64_t denominator() const noexcept { return denominator_; }
  bool is_integer() const noexcept { return denominator_ == 1; }
  bool is_zero() const noexcept { return numerator_ == 0; }
  double to_double() const {
    return static_cast<double>(numerator_) / static_cast<double>(denominator_);
  }
  std::int64_t floor() const;
  Fraction modulo_one() const;  ///< The representative in [0, 1).

  Fraction operator-() const;
  friend Fraction operator+(Fraction a, Fraction b);
  friend Fraction operator-(Fraction a, Fraction b);
  friend Fraction operator*(Fraction a, Fraction b);
  /// Throws Error on division by 0.
  friend Fraction operator/(Fraction a, Fraction b);
  Fraction& operator+=(Fraction b) { return *this = *this + b; }
  Fraction& operator-=(Fraction b) { return *this = *this - b; }
  Fraction& operator*=(Fraction b) { return *this = *this * b; }

  friend bool operator==(Fraction a, Fraction b) = default;
  friend std::strong_ordering operator<=>(Fraction a, Fraction b);  ///< By value.

 private:
  std::int64_t numerator_ = 0;
  std::int64_t denominator_ = 1;
};

std::string to_string(Fraction value);  ///< "0", "-1/2", "3".

/// Reads "2", "-1/3", "0.25", "2.5e-1": exactly what is written.
/// Throws Error on anything else, on a zero denominator, and beyond 18 digits.
Fraction parse_fraction(std::string_view text);

/// The fraction of smallest denominator ≤ max_denominator within tolerance of the value; the value
/// itself when there is none. For offering 1/3 where 0.3333 was written, never for deciding.
Fraction nearest_simple(Fraction value, std::int64_t max_denominator, Fraction tolerance);

using FractionVector = std::array<Fraction, 3>;

}  // namespace spinsieve
