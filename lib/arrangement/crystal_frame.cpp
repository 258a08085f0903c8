#include "arrangement/crystal_frame.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "arrangement/primitive_magnetic_group.hpp"
#include "crystal/lattice.hpp"

namespace spinsieve {
namespace {

SurdMatrix product(const SurdMatrix& a, const SurdMatrix& b) {
  SurdMatrix result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      for (std::size_t k = 0; k < 3; ++k)
        if (!a[i][k].is_zero() && !b[k][j].is_zero())
          result[i][j] = result[i][j] + a[i][k] * b[k][j];
  return result;
}

/// Columns: hexagonal axes of equal length in the frame x || a, z || c.
SurdMatrix hexagonal_axes() {
  SurdMatrix result;
  result[0][0] = Fraction(1);
  result[0][1] = Fraction(-1, 2);
  result[1][1] = Surd(Fraction(0), Fraction(1, 2));
  result[2][2] = Fraction(1);
  return result;
}

SurdMatrix inverse_hexagonal_axes() {
  SurdMatrix result;
  result[0][0] = Fraction(1);
  result[0][1] = Surd(Fraction(0), Fraction(1, 3));
  result[1][1] = Surd(Fraction(0), Fraction(2, 3));
  result[2][2] = Fraction(1);
  return result;
}

bool is_diagonal(const IntMatrix& R) {
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      if (i != j && R[i][j] != 0) return false;
  return true;
}

std::string direction(const FractionVector& v) {
  return "[" + to_string(v[0]) + " " + to_string(v[1]) + " " + to_string(v[2]) + "]";
}

}  // namespace

double Surd::to_double() const {
  return rational_.to_double() + root_.to_double() * std::sqrt(3.0);
}

Surd Surd::inverse() const {
  const Fraction scale = Fraction(1) / (rational_ * rational_ - Fraction(3) * root_ * root_);
  return {scale * rational_, -(scale * root_)};
}

Surd operator*(const Surd& a, const Surd& b) {
  if (a.root_.is_zero() && b.root_.is_zero()) return {a.rational_ * b.rational_};
  return {a.rational_ * b.rational_ + Fraction(3) * a.root_ * b.root_,
          a.rational_ * b.root_ + a.root_ * b.rational_};
}

std::string to_string(const Surd& value) {
  if (value.root().is_zero()) return to_string(value.rational());
  std::string result;
  if (!value.rational().is_zero()) {
    result = to_string(value.rational());
    if (value.root() > Fraction(0)) result += '+';
  }
  if (value.root() == Fraction(-1))
    result += '-';
  else if (value.root() != Fraction(1))
    result += to_string(value.root());
  return result + "√3";
}

CrystalFrame::CrystalFrame(std::span<const IntMatrix> rotations) {
  // A metric as general as the rotations allow shows which angles are fixed.
  const IntMetric G = averaged_metric(rotations, generic_metric);
  const bool right_angles = G[0][1] == 0 && G[0][2] == 0 && G[1][2] == 0;
  if (right_angles || std::ranges::all_of(rotations, is_diagonal)) return;
  hexagonal_ = G[0][0] == G[1][1] && 2 * G[0][1] == -G[0][0] && G[0][2] == 0 && G[1][2] == 0;
  if (hexagonal_) return;

  std::vector<PrimedOperation> operations;
  for (const IntMatrix& R : rotations) operations.push_back({Operation{R, {}}, false});
  const PrimitiveMagneticGroup group(operations, RationalLattice().basis());
  hexagonal_ = group.system() == AxisSystem::hexagonal;
  axes_ = product(group.lattice().columns(), to_fractions(group.axes()));
  inverse_axes_ = inverse(axes_);
  const FractionMatrix vectors = transpose(axes_);
  text_ = "x || " + direction(vectors[0]) + (hexagonal_ ? ", z || " : ", y || ") +
          direction(vectors[hexagonal_ ? 2 : 1]);
}

SurdMatrix CrystalFrame::cartesian(const IntMatrix& rotation) const {
  const FractionMatrix R = product(inverse_axes_, product(to_fractions(rotation), axes_));
  SurdMatrix result;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i][j] = R[i][j];
  if (!hexagonal_) return result;
  static const SurdMatrix to_cartesian = hexagonal_axes();
  static const SurdMatrix from_cartesian = inverse_hexagonal_axes();
  return product(to_cartesian, product(result, from_cartesian));
}

}  // namespace spinsieve
