#include "crystal/cell.hpp"

#include <cmath>
#include <cstdio>
#include <numbers>
#include <string>
#include <vector>

#include "crystal/lattice.hpp"
#include "crystal/space_group.hpp"
#include "exact/error.hpp"

namespace spinsieve {

namespace {

/// Cosine of an angle in degrees, exact where the trade needs it exact.
double cosine(double degrees) {
  if (degrees == 90) return 0;
  if (degrees == 60) return 0.5;
  if (degrees == 120) return -0.5;
  return std::cos(degrees * std::numbers::pi / 180);
}

std::string number_text(double value) {
  std::array<char, 32> text{};
  const int length = std::snprintf(text.data(), text.size(), "%.6g", value);
  return {text.data(), static_cast<std::size_t>(length)};
}

Vector3 product(const Matrix3& A, const Vector3& v) {
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i) result[i] = A[i][0] * v[0] + A[i][1] * v[1] + A[i][2] * v[2];
  return result;
}

}  // namespace

Cell::Cell(double a, double b, double c, double alpha, double beta, double gamma)
    : lengths_{a, b, c}, angles_{alpha, beta, gamma} {
  for (std::size_t i = 0; i < 3; ++i)
    if (!(lengths_[i] > 0) || !std::isfinite(lengths_[i]))
      throw Error("cell length " + std::string(1, "abc"[i]) + " = " + number_text(lengths_[i]) +
                  "; it must be positive, in Å");
  for (std::size_t i = 0; i < 3; ++i)
    if (!(angles_[i] > 0 && angles_[i] < 180))
      throw Error("cell angle " + std::array<std::string, 3>{"α", "β", "γ"}[i] + " = " +
                  number_text(angles_[i]) + "; it must lie between 0 and 180 degrees");
  const Vector3 cosines{cosine(alpha), cosine(beta), cosine(gamma)};
  const double square = 1 - cosines[0] * cosines[0] - cosines[1] * cosines[1] -
                        cosines[2] * cosines[2] + 2 * cosines[0] * cosines[1] * cosines[2];
  if (!(square > 1e-12))
    throw Error("cell angles " + number_text(alpha) + ", " + number_text(beta) + ", " +
                number_text(gamma) +
                " close no cell; each must be less than the sum of the others, and the three " +
                "together less than 360 degrees");
  volume_ = a * b * c * std::sqrt(square);
  metric_ = {{{a * a, a * b * cosines[2], a * c * cosines[1]},
              {a * b * cosines[2], b * b, b * c * cosines[0]},
              {a * c * cosines[1], b * c * cosines[0], c * c}}};
  // x along a, y in the plane of a and b (International Tables B, 1.1.3 with this frame).
  const double sine = std::sqrt(1 - cosines[2] * cosines[2]);
  const double c_y = c * (cosines[0] - cosines[1] * cosines[2]) / sine;
  const double c_z = volume_ / (a * b * sine);
  orthogonalization_ = {{{a, b * cosines[2], c * cosines[1]}, {0, b * sine, c_y}, {0, 0, c_z}}};
  const Matrix3& M = orthogonalization_;
  fractionalization_ = {{{1 / M[0][0], -M[0][1] / (M[0][0] * M[1][1]),
                          (M[0][1] * M[1][2] - M[0][2] * M[1][1]) / (M[0][0] * M[1][1] * M[2][2])},
                         {0, 1 / M[1][1], -M[1][2] / (M[1][1] * M[2][2])},
                         {0, 0, 1 / M[2][2]}}};
}

Vector3 Cell::cartesian(const Vector3& fractional) const {
  return product(orthogonalization_, fractional);
}

Vector3 Cell::scattering_vector(const Vector3& hkl) const {
  Vector3 result{};
  for (std::size_t i = 0; i < 3; ++i)
    result[i] = 2 * std::numbers::pi *
                (hkl[0] * fractionalization_[0][i] + hkl[1] * fractionalization_[1][i] +
                 hkl[2] * fractionalization_[2][i]);
  return result;
}

double Cell::q(const Vector3& hkl) const {
  const Vector3 Q = scattering_vector(hkl);
  return std::sqrt(Q[0] * Q[0] + Q[1] * Q[1] + Q[2] * Q[2]);
}

double Cell::distance(const Vector3& fractional_difference) const {
  const Vector3 d = cartesian(fractional_difference);
  return std::sqrt(d[0] * d[0] + d[1] * d[1] + d[2] * d[2]);
}

Vector3 Cell::lattice_from_crystal_axes(const Vector3& moment) const {
  return {moment[0] / lengths_[0], moment[1] / lengths_[1], moment[2] / lengths_[2]};
}

Vector3 Cell::crystal_axes_from_lattice(const Vector3& moment) const {
  return {moment[0] * lengths_[0], moment[1] * lengths_[1], moment[2] * lengths_[2]};
}

Vector3 Cell::cartesian_from_crystal_axes(const Vector3& moment) const {
  return cartesian(lattice_from_crystal_axes(moment));
}

Vector3 to_double(const FractionVector& v) {
  return {v[0].to_double(), v[1].to_double(), v[2].to_double()};
}

namespace {

/// What the group asks of its cell, such as "a = b, α = 90°, β = 90°, γ = 120°".
std::string cell_constraints(const SpaceGroup& group) {
  std::vector<IntMatrix> rotations;
  for (const Operation& operation : group.operations()) rotations.push_back(operation.rotation);
  const IntMetric G = averaged_metric(rotations, generic_metric);
  const std::array<std::string, 3> angle{"α", "β", "γ"};
  std::vector<std::string> parts;
  const bool ab = G[0][0] == G[1][1];
  const bool bc = G[1][1] == G[2][2];
  const bool ac = G[0][0] == G[2][2];
  if (ab && bc)
    parts.emplace_back("a = b = c");
  else if (ab || bc || ac)
    parts.emplace_back(ab ? "a = b" : bc ? "b = c" : "a = c");
  const bool rhombohedral = ab && bc && G[0][1] != 0 && G[0][1] == G[0][2] && G[0][1] == G[1][2];
  if (rhombohedral) parts.emplace_back("α = β = γ");
  for (std::size_t i = 0; i < 3 && !rhombohedral; ++i) {
    const std::size_t j = (i + 1) % 3;
    const std::size_t k = (i + 2) % 3;
    if (G[j][k] == 0)
      parts.push_back(angle[i] + " = 90°");
    else if (G[j][j] == G[k][k] && 2 * G[j][k] == -G[j][j])
      parts.push_back(angle[i] + " = 120°");
    else if (G[j][j] == G[k][k] && 2 * G[j][k] == G[j][j])
      parts.push_back(angle[i] + " = 60°");
  }
  if (parts.empty()) return "a metric that its operations keep";
  std::string text = parts[0];
  for (std::size_t i = 1; i < parts.size(); ++i) text += ", " + parts[i];
  return text;
}

bool keeps_metric(const IntMatrix& R, const Cell& cell) {
  const Matrix3& G = cell.metric();
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = i; j < 3; ++j) {
      double image = 0;
      for (std::size_t p = 0; p < 3; ++p)
        for (std::size_t q = 0; q < 3; ++q) image += R[p][i] * G[p][q] * R[q][j];
      // A diagonal entry is a squared length, hence the factor 2; the others are lengths · cosine.
      const double scale = std::sqrt(G[i][i] * G[j][j]) * (i == j ? 2 : 1);
      if (std::abs(image - G[i][j]) > cell_tolerance * scale) return false;
    }
  return true;
}

bool nearly(double a, double b) { return std::abs(a - b) <= cell_tolerance * std::abs(b); }

}  // namespace

void require_cell_fits(const Cell& cell, const SpaceGroup& group) {
  bool fits = true;
  for (const Operation& operation : group.operations())
    fits = fits && keeps_metric(operation.rotation, cell);
  if (fits) return;
  const std::string given = "cell " + number_text(cell.a()) + ", " + number_text(cell.b()) + ", " +
                            number_text(cell.c()) + ", " + number_text(cell.alpha()) + ", " +
                            number_text(cell.beta()) + ", " + number_text(cell.gamma());
  const bool rhombohedral = nearly(cell.a(), cell.b()) && nearly(cell.b(), cell.c()) &&
                            nearly(cell.alpha(), cell.beta()) && nearly(cell.beta(), cell.gamma());
  if (group.setting() == "H" && rhombohedral)
    throw Error(given + " has rhombohedral axes, but " + group.short_symbol() +
                " without a suffix means hexagonal axes; write '" + group.short_symbol() +
                ":R' for rhombohedral axes");
  throw Error(given + " does not fit " + group.short_symbol() + "; it requires " +
              cell_constraints(group));
}

}  // namespace spinsieve
