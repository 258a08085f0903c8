#include "search/reciprocal_space.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <string>
#include <tuple>

#include "exact/error.hpp"
#include "search/fixed_subspaces.hpp"

namespace spinsieve {

namespace {

Vector3 cross(const Vector3& a, const Vector3& b) {
  return {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};
}

Vector3 in_rows(const Vector3& row, const Matrix3& matrix) {
  return row[0] * matrix[0] + row[1] * matrix[1] + row[2] * matrix[2];
}

Matrix3 inverse(const Matrix3& M) {
  const Vector3 normal = cross(M[0], M[1]);
  const double scale = 1 / dot(normal, M[2]);
  const Matrix3 dual = {scale * cross(M[1], M[2]), scale * cross(M[2], M[0]), scale * normal};
  Matrix3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i][j] = dual[j][i];
  return result;
}

// Lower triangular L with L Lᵀ = metric; its rows are the basis vectors.
Matrix3 cholesky(const Matrix3& metric) {
  Matrix3 L{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j <= i; ++j) {
      double rest = metric[i][j];
      for (std::size_t k = 0; k < j; ++k) rest -= L[i][k] * L[j][k];
      L[i][j] = i == j ? std::sqrt(rest) : rest / L[j][j];
    }
  return L;
}

Matrix3 mean_reciprocal_metric(const Cell& cell, std::span<const IntMatrix> rotations) {
  const Matrix3& rows = cell.fractionalization();
  Matrix3 metric{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) metric[i][j] = dot(rows[i], rows[j]);
  const double scale =
      4 * std::numbers::pi * std::numbers::pi / static_cast<double>(rotations.size());
  Matrix3 mean{};
  for (const IntMatrix& R : rotations)
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j)
        for (std::size_t a = 0; a < 3; ++a)
          for (std::size_t b = 0; b < 3; ++b)
            mean[i][j] += scale * R[i][a] * metric[a][b] * R[j][b];
  return mean;
}

}  // namespace

Vector3 row_times(const Vector3& k, const IntMatrix& R) {
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[j] += k[i] * R[i][j];
  return result;
}

ReciprocalSpace::ReciprocalSpace(const Cell& cell, const SpaceGroup& group)
    : rotations_(holohedry(group)) {
  basis_ = cholesky(mean_reciprocal_metric(cell, rotations_));
  inverse_ = inverse(basis_);

  const std::array<FractionVector, 3> reciprocal = dual_basis(primitive_basis(group));
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j)
      reduced_hkl_[i][j] = static_cast<int>(reciprocal[i][j].numerator());
    reduced_[i] = cartesian(to_double(reciprocal[i]));
  }
  // Pairwise reduction; each step shortens a vector, so it ends.
  for (bool shorter = true; shorter;) {
    shorter = false;
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j) {
        if (i == j) continue;
        const double steps =
            std::round(dot(reduced_[i], reduced_[j]) / dot(reduced_[j], reduced_[j]));
        const Vector3 candidate = reduced_[i] - steps * reduced_[j];
        if (!(norm(candidate) < norm(reduced_[i]) * (1 - 1e-9))) continue;
        reduced_[i] = candidate;
        for (std::size_t a = 0; a < 3; ++a)
          reduced_hkl_[i][a] -= static_cast<int>(steps) * reduced_hkl_[j][a];
        shorter = true;
      }
  }
  reduced_inverse_ = inverse(reduced_);
  cell_volume_ = std::abs(dot(cross(reduced_[0], reduced_[1]), reduced_[2]));
  // Rounding in the Gram-Schmidt frame stays within half of each of its edges.
  covering_radius_ = std::sqrt(dot(reduced_[0], reduced_[0]) + dot(reduced_[1], reduced_[1]) +
                               dot(reduced_[2], reduced_[2])) /
                     2;
  for (const LatticePoint& point : points(2 * covering_radius_ + longest_edge()))
    neighbours_.push_back(point.q);
}

double ReciprocalSpace::longest_edge() const {
  return std::max({norm(reduced_[0]), norm(reduced_[1]), norm(reduced_[2])});
}

Vector3 ReciprocalSpace::cartesian(const Vector3& k) const { return in_rows(k, basis_); }

Vector3 ReciprocalSpace::components(const Vector3& q) const { return in_rows(q, inverse_); }

std::vector<LatticePoint> ReciprocalSpace::points(double radius) const {
  constexpr double pi = std::numbers::pi;
  const double expected = 4 * pi / 3 * radius * radius * radius / cell_volume_;
  if (expected > static_cast<double>(most_lattice_points))
    throw Error("|Q| up to " + std::to_string(radius) + " Å⁻¹ holds " +
                std::to_string(std::llround(expected)) +
                " reciprocal-lattice vectors; accepted are up to " +
                std::to_string(most_lattice_points));
  // |n_i| ≤ radius · |dual vector i|, and the columns of the inverse are the dual vectors.
  std::array<int, 3> reach{};
  for (std::size_t i = 0; i < 3; ++i)
    reach[i] = static_cast<int>(
        radius * 1.000001 *
        norm({reduced_inverse_[0][i], reduced_inverse_[1][i], reduced_inverse_[2][i]}));
  std::vector<LatticePoint> result;
  for (int a = -reach[0]; a <= reach[0]; ++a)
    for (int b = -reach[1]; b <= reach[1]; ++b)
      for (int c = -reach[2]; c <= reach[2]; ++c) {
        LatticePoint point;
        for (std::size_t i = 0; i < 3; ++i)
          point.hkl[i] = a * reduced_hkl_[0][i] + b * reduced_hkl_[1][i] + c * reduced_hkl_[2][i];
        point.q = cartesian({static_cast<double>(point.hkl[0]), static_cast<double>(point.hkl[1]),
                             static_cast<double>(point.hkl[2])});
        if (norm(point.q) <= radius * 1.000001) result.push_back(point);
      }
  std::ranges::sort(result, [](const LatticePoint& a, const LatticePoint& b) {
    return std::make_tuple(dot(a.q, a.q), a.hkl) < std::make_tuple(dot(b.q, b.q), b.hkl);
  });
  return result;
}

Vector3 ReciprocalSpace::nearest_point(const Vector3& k) const {
  const Vector3 q = cartesian(k);
  const Vector3 n = in_rows(q, reduced_inverse_);
  Vector3 best{};
  double least = -1;
  for (int a = -1; a <= 1; ++a)
    for (int b = -1; b <= 1; ++b)
      for (int c = -1; c <= 1; ++c) {
        const Vector3 steps = {std::round(n[0]) + a, std::round(n[1]) + b, std::round(n[2]) + c};
        const double distance = norm(q - in_rows(steps, reduced_));
        if (least >= 0 && !(distance < least - 1e-12)) continue;
        least = distance;
        for (std::size_t i = 0; i < 3; ++i)
          best[i] = steps[0] * reduced_hkl_[0][i] + steps[1] * reduced_hkl_[1][i] +
                    steps[2] * reduced_hkl_[2][i];
      }
  return best;
}

ReciprocalSpace::Image ReciprocalSpace::nearest_image(const Vector3& k,
                                                      const Vector3& target) const {
  Image best{{}, -1};
  for (const IntMatrix& R : rotations_) {
    const Vector3 image = row_times(k, R);
    const Vector3 shifted = image - nearest_point(image - target);
    const double distance = norm(cartesian(shifted - target));
    if (best.distance < 0 || distance < best.distance - 1e-12) best = {shifted, distance};
  }
  return best;
}

}  // namespace spinsieve
