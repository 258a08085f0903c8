#pragma once

#include <complex>
#include <cstdint>
#include <string>

#include "exact/fraction.hpp"

namespace spinsieve {

/// A rational number of turns modulo 1, kept exactly: the exponent of a root of unity.
///
/// Invariant: 0 ≤ numerator < denominator, lowest terms; equal phases have equal members.
/// There is no operator<: phases lie on a circle.
class Phase {
 public:
  constexpr Phase() = default;  ///< No turn; factor() is 1.

  /// Any numerator will do: Phase(-1, 3) is 2/3. Throws Error unless denominator > 0.
  Phase(std::int64_t numerator, std::int64_t denominator);
  explicit Phase(Fraction turns);  ///< The fraction modulo 1.

  std::int64_t numerator() const noexcept { return turns_.numerator(); }
  /// Also the order of the root of unity: the least n > 0 with n·phase = 0.
  std::int64_t denominator() const noexcept { return turns_.denominator(); }
  Fraction turns() const noexcept { return turns_; }  ///< In [0, 1).
  bool is_zero() const noexcept { return turns_.is_zero(); }

  /// exp(+2πi·phase), exact at quarter turns. The only way from here to floating point.
  std::complex<double> factor() const;

  Phase operator-() const;
  /// Throw Error when the result does not fit in 64 bits.
  friend Phase operator+(Phase a, Phase b);
  friend Phase operator-(Phase a, Phase b);
  friend Phase operator*(std::int64_t n, Phase a);
  friend bool operator==(Phase a, Phase b) = default;

 private:
  Fraction turns_;
};

std::string to_string(Phase phase);  ///< "0", "1/2", "2/3".

}  // namespace spinsieve
