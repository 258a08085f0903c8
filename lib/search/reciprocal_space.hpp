#pragma once

#include <array>
#include <cmath>
#include <span>
#include <vector>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"

namespace spinsieve {

/// A reciprocal-lattice vector: its components and its place in the Cartesian frame, Å⁻¹ with 2π.
struct LatticePoint {
  IntVector hkl{};
  Vector3 q{};
};

/// The reciprocal lattice of a crystal with the rotations of its holohedry.
///
/// The metric is the mean over the holohedry, so that equivalent k give equal |Q| to rounding even
/// for a cell that fits its group only to cell_tolerance.
class ReciprocalSpace {
 public:
  ReciprocalSpace(const Cell& cell, const SpaceGroup& group);

  /// Rows a*, b*, c* times 2π, Cartesian, Å⁻¹.
  const Matrix3& basis() const noexcept { return basis_; }
  std::span<const IntMatrix> rotations() const noexcept { return rotations_; }
  /// Volume of the primitive reciprocal cell, Å⁻³ with (2π)³.
  double cell_volume() const noexcept { return cell_volume_; }
  /// No point of reciprocal space is farther than this from the lattice, Å⁻¹.
  double covering_radius() const noexcept { return covering_radius_; }

  Vector3 cartesian(const Vector3& k) const;   ///< Å⁻¹ from components on a*, b*, c*.
  Vector3 components(const Vector3& q) const;  ///< The inverse of cartesian().

  /// All lattice points with |Q| ≤ radius, by increasing |Q|, then by hkl.
  /// Throws Error when there are more than most_lattice_points.
  std::vector<LatticePoint> points(double radius) const;

  /// The image kR + τ of k nearest to a target, and how far it stays from it in Å⁻¹.
  struct Image {
    Vector3 k{};
    double distance = 0;
  };
  Image nearest_image(const Vector3& k, const Vector3& target) const;

  /// Components of the lattice point nearest to k, so that k minus it is short.
  Vector3 nearest_point(const Vector3& k) const;

  /// Lattice points, Cartesian, among which are the three nearest to any k that nearest_point()
  /// sends to the origin.
  std::span<const Vector3> neighbours() const noexcept { return neighbours_; }

 private:
  double longest_edge() const;

  Matrix3 basis_{};
  Matrix3 inverse_{};
  Matrix3 reduced_{};  // rows: a short basis of the reciprocal lattice, Cartesian
  std::array<IntVector, 3> reduced_hkl_{};
  Matrix3 reduced_inverse_{};
  std::vector<IntMatrix> rotations_;
  std::vector<Vector3> neighbours_;
  double cell_volume_ = 0;
  double covering_radius_ = 0;
};

/// Beyond this number of lattice points a line counts as out of range.
constexpr std::size_t most_lattice_points = 400'000;

Vector3 row_times(const Vector3& k, const IntMatrix& R);

inline Vector3 operator+(const Vector3& a, const Vector3& b) {
  return {a[0] + b[0], a[1] + b[1], a[2] + b[2]};
}
inline Vector3 operator-(const Vector3& a, const Vector3& b) {
  return {a[0] - b[0], a[1] - b[1], a[2] - b[2]};
}
inline Vector3 operator*(double scale, const Vector3& a) {
  return {scale * a[0], scale * a[1], scale * a[2]};
}
inline double dot(const Vector3& a, const Vector3& b) {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}
inline double norm(const Vector3& a) { return std::sqrt(dot(a, a)); }

}  // namespace spinsieve
