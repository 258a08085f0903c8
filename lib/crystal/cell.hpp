#pragma once

#include <array>

#include "crystal/operation.hpp"

namespace spinsieve {

using Vector3 = std::array<double, 3>;   ///< Cartesian or fractional, as the name beside it says.
using Matrix3 = std::array<Vector3, 3>;  ///< [row][column].

/// The conventional cell: lengths in Å, angles in degrees, and its metric.
///
/// Cartesian frame: x along a, y in the plane of a and b (b·y > 0), z = x × y.
class Cell {
 public:
  Cell() = default;  ///< A cube of 1 Å.
  /// Throws Error unless lengths are positive and finite and the angles close a cell.
  Cell(double a, double b, double c, double alpha, double beta, double gamma);

  double a() const noexcept { return lengths_[0]; }
  double b() const noexcept { return lengths_[1]; }
  double c() const noexcept { return lengths_[2]; }
  double alpha() const noexcept { return angles_[0]; }
  double beta() const noexcept { return angles_[1]; }
  double gamma() const noexcept { return angles_[2]; }
  double volume() const noexcept { return volume_; }  ///< Å³.

  const Matrix3& metric() const noexcept { return metric_; }  ///< g_ij = a_i · a_j in Å².
  /// Columns are a, b, c in Å: Cartesian = orthogonalization · fractional.
  const Matrix3& orthogonalization() const noexcept { return orthogonalization_; }
  /// Rows are a*, b*, c* in Å⁻¹ without 2π: fractional = fractionalization · Cartesian.
  const Matrix3& fractionalization() const noexcept { return fractionalization_; }

  Vector3 cartesian(const Vector3& fractional) const;  ///< Å.
  /// Q = 2π(h a* + k b* + l c*), Cartesian, Å⁻¹.
  Vector3 scattering_vector(const Vector3& hkl) const;
  double q(const Vector3& hkl) const;                           ///< |Q| in Å⁻¹.
  double distance(const Vector3& fractional_difference) const;  ///< Å.

  /// Lattice-basis components of a moment (m = m1·a + m2·b + m3·c) from crystal-axis components in
  /// µB along the unit vectors a/|a|, b/|b|, c/|c|, and back. Real or imaginary part alike.
  Vector3 lattice_from_crystal_axes(const Vector3& moment) const;
  Vector3 crystal_axes_from_lattice(const Vector3& moment) const;
  /// Cartesian µB from crystal-axis µB.
  Vector3 cartesian_from_crystal_axes(const Vector3& moment) const;

 private:
  Vector3 lengths_{1, 1, 1};
  Vector3 angles_{90, 90, 90};
  double volume_ = 1;
  Matrix3 metric_{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  Matrix3 orthogonalization_{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  Matrix3 fractionalization_{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
};

Vector3 to_double(const FractionVector& v);

class SpaceGroup;

/// Relative tolerance on lengths (and on cosines, absolute) for a cell to fit a group.
constexpr double cell_tolerance = 1e-3;

/// Throws Error, naming the constraint, unless every rotation keeps the metric to cell_tolerance.
/// An R group with a = b = c and α = β = γ ≠ 90° in hexagonal axes is told to take the suffix :R.
void require_cell_fits(const Cell& cell, const SpaceGroup& group);

}  // namespace spinsieve
