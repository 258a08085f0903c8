#pragma once

#include <array>
#include <string>
#include <string_view>

#include "exact/fraction.hpp"

namespace spinsieve {

using IntVector = std::array<int, 3>;
using IntMatrix = std::array<IntVector, 3>;  ///< [row][column].

/// A space-group operation {R|t}: fractional coordinates go to x' = R x + t.
///
/// R acts on columns of fractional coordinates and is an integer matrix of determinant ±1; t is
/// exact and not reduced. A row k of reciprocal components goes to k R⁻¹.
struct Operation {
  IntMatrix rotation = {{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  FractionVector translation{};

  /// First b, then a: {R_a R_b | R_a t_b + t_a}.
  friend Operation operator*(const Operation& a, const Operation& b);
  friend bool operator==(const Operation& a, const Operation& b) = default;

  Operation inverse() const;
  FractionVector apply(const FractionVector& position) const;
};

int determinant(const IntMatrix& R);
int trace(const IntMatrix& R);
IntMatrix product(const IntMatrix& A, const IntMatrix& B);
IntMatrix inverse(const IntMatrix& R);  ///< REQUIRES: determinant ±1.
IntVector row_times(const IntVector& row, const IntMatrix& R);
FractionVector row_times(const FractionVector& row, const IntMatrix& R);
FractionVector times(const IntMatrix& R, const FractionVector& column);
FractionVector operator+(const FractionVector& a, const FractionVector& b);
FractionVector operator-(const FractionVector& a, const FractionVector& b);
FractionVector operator*(Fraction scale, const FractionVector& a);
Fraction dot(const FractionVector& a, const FractionVector& b);
bool is_integer(const FractionVector& v);
FractionVector modulo_one(const FractionVector& v);  ///< Each component in [0, 1).

/// "x,y,z", "-y+1/2,x-y,z+1/3": International Tables style, no blanks.
std::string to_string(const Operation& operation);
std::string to_string(const FractionVector& v);  ///< "1/2, 0, 1/3".

/// Reads "x, y+1/2, -z", "1/2-x,y,z", "0.25+z"; letters of either case; decimals exact.
/// Throws Error that quotes the part which is wrong, and on a determinant other than ±1.
Operation parse_operation(std::string_view text);

}  // namespace spinsieve
