#pragma once

#include <array>
#include <complex>
#include <cstdint>
#include <optional>
#include <string>

#include "exact/fraction.hpp"
#include "exact/phase.hpp"

namespace spinsieve {

/// A number of the cyclotomic field Q(ζ), ζ = exp(2πi/24), exact.
///
/// Written on the basis 1, ζ, …, ζ⁷ with ζ⁸ = ζ⁴ − 1, the 24th cyclotomic polynomial being
/// x⁸ − x⁴ + 1 (irreducible, so the form is unique). Eight integers stand over one positive
/// denominator in lowest terms: equality is memberwise. Example: √2 = ζ³ + ζ⁻³ = ζ + ζ³ − ζ⁵.
/// The field holds i = ζ⁶, exp(2πi/3) = ζ⁸, √2 and √3, which suffices for the small irreps of
/// every space group. 64-bit coefficients; intermediates that do not fit take a path of unlimited
/// integers, and a result that does not fit throws Error.
class Cyclotomic {
 public:
  static constexpr int order = 24;
  using Coefficients = std::array<std::int64_t, 8>;

  constexpr Cyclotomic() = default;
  Cyclotomic(std::int64_t whole);  // NOLINT(google-explicit-constructor)
  explicit Cyclotomic(Fraction value);
  /// Throws Error when the denominator is 0.
  Cyclotomic(const Coefficients& numerators, std::int64_t denominator);

  static Cyclotomic root(int exponent);  ///< ζ^exponent, any integer.
  static bool holds(Phase phase) { return order % phase.denominator() == 0; }
  /// exp(2πi·phase); throws std::logic_error unless holds(phase).
  static Cyclotomic root(Phase phase);

  const Coefficients& coefficients() const noexcept { return coefficients_; }
  std::int64_t denominator() const noexcept { return denominator_; }
  bool is_zero() const noexcept;
  bool is_real() const { return *this == conjugate(); }
  bool is_rational() const noexcept;
  Fraction rational() const;  ///< REQUIRES: is_rational().

  Cyclotomic conjugate() const;              ///< Complex conjugate.
  Cyclotomic automorphism(int power) const;  ///< ζ → ζ^power; REQUIRES: power prime to 24.
  Cyclotomic inverse() const;                ///< Throws Error for 0.
  Cyclotomic real_part() const;
  Cyclotomic imaginary_part() const;   ///< A real number.
  int sign() const;                    ///< Of a real number, decided exactly. REQUIRES: is_real().
  std::optional<Phase> phase() const;  ///< When it is a root of unity of the field.
  std::complex<double> to_complex() const;

  Cyclotomic operator-() const;
  friend Cyclotomic operator+(const Cyclotomic& a, const Cyclotomic& b);
  friend Cyclotomic operator-(const Cyclotomic& a, const Cyclotomic& b);
  friend Cyclotomic operator*(const Cyclotomic& a, const Cyclotomic& b);
  friend Cyclotomic operator/(const Cyclotomic& a, const Cyclotomic& b) { return a * b.inverse(); }
  Cyclotomic& operator+=(const Cyclotomic& b) { return *this = *this + b; }
  Cyclotomic& operator-=(const Cyclotomic& b) { return *this = *this - b; }
  Cyclotomic& operator*=(const Cyclotomic& b) { return *this = *this * b; }
  friend bool operator==(const Cyclotomic& a, const Cyclotomic& b) = default;

 private:
  Coefficients coefficients_{};
  std::int64_t denominator_ = 1;
};

/// "0", "-1/2", "e(1/3)", "-e(1/8)", "2*e(1/6)"; sums in lowest powers: "1+e(1/8)". e(x) = exp(2πi
/// x).
std::string to_string(const Cyclotomic& value);

/// A total order for sorting and printing: larger real part first, then larger imaginary part.
/// Decided exactly. True when a comes before b.
bool comes_before(const Cyclotomic& a, const Cyclotomic& b);

}  // namespace spinsieve
