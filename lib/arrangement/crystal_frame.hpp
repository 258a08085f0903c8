#pragma once

#include <array>
#include <span>
#include <string>

#include "arrangement/lattice_algebra.hpp"
#include "crystal/operation.hpp"
#include "exact/fraction.hpp"

namespace spinsieve {

/// A number p + q√3 with rational p and q: what rotations of crystals need in Cartesian axes.
class Surd {
 public:
  constexpr Surd() = default;
  Surd(Fraction rational) : rational_(rational) {}  // NOLINT(google-explicit-constructor)
  Surd(Fraction rational, Fraction root) : rational_(rational), root_(root) {}

  Fraction rational() const noexcept { return rational_; }
  Fraction root() const noexcept { return root_; }  ///< The factor of √3.
  bool is_zero() const noexcept { return rational_.is_zero() && root_.is_zero(); }
  double to_double() const;
  Surd inverse() const;  ///< Throws Error for 0.

  Surd operator-() const { return {-rational_, -root_}; }
  friend Surd operator+(const Surd& a, const Surd& b) {
    return {a.rational_ + b.rational_, a.root_ + b.root_};
  }
  friend Surd operator-(const Surd& a, const Surd& b) {
    return {a.rational_ - b.rational_, a.root_ - b.root_};
  }
  friend Surd operator*(const Surd& a, const Surd& b);
  friend bool operator==(const Surd& a, const Surd& b) = default;

 private:
  Fraction rational_, root_;
};

std::string to_string(const Surd& value);  ///< "-1/2", "√3", "1+2√3", "-1/3√3".

using SurdMatrix = std::array<std::array<Surd, 3>, 3>;  ///< [row][column].

/// An orthonormal frame tied to the crystal axes, in which all rotations of a crystal class are
/// exact.
///
/// Where the cell allows it is that of Cell: x along a, z along c* (y completes it), which is so
/// for orthogonal, hexagonal, monoclinic and triclinic axes. For others, such as rhombohedral
/// axes, x and z lie along lattice vectors that text() names.
class CrystalFrame {
 public:
  /// For the rotations of the parent group on its axes.
  explicit CrystalFrame(std::span<const IntMatrix> rotations);

  const std::string& text() const noexcept { return text_; }  ///< "x || a, z || c*".
  SurdMatrix cartesian(const IntMatrix& rotation) const;

 private:
  FractionMatrix axes_ = to_fractions(Operation{}.rotation);  ///< Columns on a, b, c.
  FractionMatrix inverse_axes_ = to_fractions(Operation{}.rotation);
  bool hexagonal_ = false;  ///< The axes stand at 120° instead of at right angles.
  std::string text_ = "x || a, z || c*";
};

}  // namespace spinsieve
