#include "scattering/displacement.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <stdexcept>
#include <string>

#include <Eigen/Eigenvalues>

namespace spinsieve {
namespace {

constexpr double u_symmetry_tolerance = 0.01;  // of the largest component: printed U are rounded

Matrix3 congruent(const IntMatrix& R, const Matrix3& beta) {
  Matrix3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      for (std::size_t m = 0; m < 3; ++m)
        for (std::size_t n = 0; n < 3; ++n) result[i][j] += R[i][m] * beta[m][n] * R[j][n];
  return result;
}

/// Sum over the site group, divided by its order; the largest change goes to `change`.
Matrix3 site_average(const SpaceGroup& group, const FractionVector& position, const Matrix3& beta,
                     double& change) {
  Matrix3 sum{};
  int count = 0;
  for (const Operation& operation : group.operations()) {
    if (!group.in_lattice(operation.apply(position) - position)) continue;
    const Matrix3 image = congruent(operation.rotation, beta);
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j) sum[i][j] += image[i][j];
    ++count;
  }
  change = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      sum[i][j] /= count;
      change = std::max(change, std::abs(sum[i][j] - beta[i][j]));
    }
  return sum;
}

}  // namespace

DebyeWaller::DebyeWaller(const Displacement& displacement, const Cell& cell,
                         const SpaceGroup& group, const Site& site)
    : b_iso_(displacement.b_iso) {
  if (!std::isfinite(b_iso_) || b_iso_ < 0)
    throw Error(site.place, "b_iso " + std::to_string(b_iso_) + " of " + site.label +
                                "; it must be zero or positive");
  if (!displacement.u_ij) return;
  if (b_iso_ != 0) throw Error(site.place, "both b_iso and u_ij for " + site.label + "; give one");
  const std::array<double, 6>& u = *displacement.u_ij;
  const Matrix3 tensor = {{{u[0], u[3], u[4]}, {u[3], u[1], u[5]}, {u[4], u[5], u[2]}}};
  const Matrix3& reciprocal = cell.fractionalization();
  Vector3 length{};
  for (std::size_t i = 0; i < 3; ++i)
    length[i] = std::hypot(reciprocal[i][0], reciprocal[i][1], reciprocal[i][2]);
  Matrix3 beta{};
  Eigen::Matrix3d checked;
  double largest = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) {
      if (!std::isfinite(tensor[i][j]))
        throw Error(site.place, "u_ij of " + site.label + " is not finite");
      beta[i][j] = 2 * std::numbers::pi * std::numbers::pi * length[i] * length[j] * tensor[i][j];
      checked(static_cast<Eigen::Index>(i), static_cast<Eigen::Index>(j)) = tensor[i][j];
      largest = std::max(largest, std::abs(beta[i][j]));
    }
  const Eigen::Vector3d eigenvalues =
      Eigen::SelfAdjointEigenSolver<Eigen::Matrix3d>(checked).eigenvalues();
  if (eigenvalues.minCoeff() < -1e-9)
    throw Error(site.place, "u_ij of " + site.label +
                                " is not positive definite; U11 U22 U33 U12 U13 U23 in Å²");
  double change = 0;
  beta_ = site_average(group, site.position, beta, change);
  if (change > u_symmetry_tolerance * largest)
    throw Error(site.place, "u_ij of " + site.label +
                                " breaks the symmetry of the site; give values that its "
                                "operations leave unchanged");
}

double DebyeWaller::isotropic_factor(double s) const { return std::exp(-b_iso_ * s * s); }

double DebyeWaller::anisotropic_factor(const Vector3& hkl) const {
  if (!beta_) return 1;
  double exponent = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) exponent += hkl[i] * (*beta_)[i][j] * hkl[j];
  return std::exp(-exponent);
}

DebyeWaller DebyeWaller::moved(const IntMatrix& R) const {
  DebyeWaller result = *this;
  if (beta_) result.beta_ = congruent(R, *beta_);
  return result;
}

double checked_occupancy(double occupancy, const Site& site) {
  if (std::isfinite(occupancy) && occupancy > 0 && occupancy <= 1) return occupancy;
  throw Error(site.place, "occupancy " + std::to_string(occupancy) + " of " + site.label +
                              "; it must be above 0 and at most 1");
}

std::size_t operation_leading_to(const SpaceGroup& group, const FractionVector& first,
                                 const FractionVector& position) {
  for (std::size_t i = 0; i < group.order(); ++i)
    if (group.in_lattice(group.operations()[i].apply(first) - position)) return i;
  throw std::logic_error("an atom at " + to_string(position) + " is not of the orbit of " +
                         to_string(first));
}

}  // namespace spinsieve
