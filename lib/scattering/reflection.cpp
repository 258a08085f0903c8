#include "scattering/reflection.hpp"

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <numbers>
#include <numeric>
#include <tuple>

namespace spinsieve {
namespace {

constexpr std::size_t most_reflections = 5'000'000;
constexpr const char* too_many = "more than 5000000 reflections up to the largest Q";

/// Integer test of hkl · T for the centring vectors.
class ReciprocalLattice {
 public:
  explicit ReciprocalLattice(const SpaceGroup& group) {
    for (const FractionVector& centring : group.centrings()) {
      if (is_integer(centring)) continue;
      Row row;
      for (const Fraction& t : centring) row.modulus = std::lcm(row.modulus, t.denominator());
      for (std::size_t i = 0; i < 3; ++i)
        row.factors[i] = centring[i].numerator() * (row.modulus / centring[i].denominator());
      rows_.push_back(row);
    }
  }

  bool contains(std::int64_t h, std::int64_t k, std::int64_t l) const {
    return std::ranges::all_of(rows_, [&](const Row& row) {
      return (h * row.factors[0] + k * row.factors[1] + l * row.factors[2]) % row.modulus == 0;
    });
  }

 private:
  struct Row {
    std::array<std::int64_t, 3> factors{};
    std::int64_t modulus = 1;
  };
  std::vector<Row> rows_;
};

/// a*_i · a*_j without 2π, averaged over the rotations, which makes it exactly invariant: what the
/// group makes equal stays equal for a cell that fits the group only within its tolerance.
Matrix3 averaged_reciprocal_metric(const Cell& cell, const SpaceGroup& group) {
  const Matrix3& rows = cell.fractionalization();
  Matrix3 metric{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      metric[i][j] = rows[i][0] * rows[j][0] + rows[i][1] * rows[j][1] + rows[i][2] * rows[j][2];
  Matrix3 sum{};
  for (const Operation& operation : group.operations()) {
    const IntMatrix& R = operation.rotation;
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j)
        for (std::size_t m = 0; m < 3; ++m)
          for (std::size_t n = 0; n < 3; ++n) sum[i][j] += R[i][m] * metric[m][n] * R[j][n];
  }
  for (Vector3& row : sum)
    for (double& entry : row) entry /= static_cast<double>(group.order());
  return sum;
}

double quadratic_form(const Matrix3& metric, const Vector3& h) {
  double sum = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) sum += h[i] * metric[i][j] * h[j];
  return sum;
}

/// Smaller sorts first: few negative entries, then large ones in order.
auto nicety(const Reflection& r) {
  const auto negative = std::ranges::count_if(r.hkl, [](int h) { return h < 0; });
  const int size = std::abs(r.hkl[0]) + std::abs(r.hkl[1]) + std::abs(r.hkl[2]);
  return std::make_tuple(r.arm, negative, size, -r.hkl[0], -r.hkl[1], -r.hkl[2], -r.k_sign);
}

void collect(const Cell& cell, const ReciprocalLattice& lattice, const Matrix3& metric,
             const FractionVector& k, ArmKind kind, std::size_t arm, double q_min, double q_max,
             std::vector<Reflection>& out) {
  const double turn = 2 * std::numbers::pi;
  const FractionVector offset = kind == ArmKind::fundamental ? FractionVector{} : k;
  const int k_sign = kind == ArmKind::fundamental ? 0 : 1;
  const double low = std::pow(q_min * (1 - same_q_tolerance) / turn, 2);
  const double high = std::pow(q_max * (1 + same_q_tolerance) / turn, 2);
  const Vector3 lengths = {cell.a(), cell.b(), cell.c()};
  // One reflection in each reciprocal cell of the integer lattice, were there no centrings.
  const double expected = 4 * std::numbers::pi / 3 * std::pow(q_max / turn, 3) * cell.volume();
  if (expected > 8.0 * most_reflections) throw LimitReached(too_many);
  std::array<int, 3> first{};
  std::array<int, 3> last{};
  for (std::size_t i = 0; i < 3; ++i) {
    // h + k_i = Q·a_i/2π, so that |h + k_i| ≤ |Q||a_i|/2π; one more for a cell off symmetry.
    const double reach = q_max * lengths[i] / turn * 1.01 + 1;
    first[i] = static_cast<int>(std::floor(-reach - offset[i].to_double()));
    last[i] = static_cast<int>(std::ceil(reach - offset[i].to_double()));
  }
  for (int h = first[0]; h <= last[0]; ++h) {
    for (int hk = first[1]; hk <= last[1]; ++hk) {
      for (int l = first[2]; l <= last[2]; ++l) {
        if (!lattice.contains(h, hk, l)) continue;
        const Vector3 position = {h + offset[0].to_double(), hk + offset[1].to_double(),
                                  l + offset[2].to_double()};
        const double squared = quadratic_form(metric, position);
        if (squared > high || squared < low) continue;
        if (kind != ArmKind::pair) {
          // Exact also in floating point: a component that is 0 has an integer offset.
          const auto* const leading =
              std::ranges::find_if(position, [](double x) { return x != 0; });
          if (leading == position.end() || *leading < 0)
            continue;  // The mate at −Q is kept, and Q = 0 is none.
        }
        Reflection& reflection = out.emplace_back();
        reflection.hkl = {h, hk, l};
        reflection.k_sign = k_sign;
        reflection.arm = arm;
        reflection.q = cell.scattering_vector(position);
        reflection.q_length = turn * std::sqrt(squared);
        if (out.size() > most_reflections) throw LimitReached(too_many);
      }
    }
  }
}

}  // namespace

ArmKind arm_kind(const SpaceGroup& group, const FractionVector& k) {
  if (group.in_reciprocal_lattice(k)) return ArmKind::fundamental;
  return group.in_reciprocal_lattice(k + k) ? ArmKind::self_conjugate : ArmKind::pair;
}

ReflectionTable::ReflectionTable(const Cell& cell, const SpaceGroup& group,
                                 std::span<const Arm> arms, double q_min, double q_max)
    : arms_(arms.begin(), arms.end()) {
  const ReciprocalLattice lattice(group);
  const Matrix3 metric = averaged_reciprocal_metric(cell, group);
  for (std::size_t arm = 0; arm < arms_.size(); ++arm) {
    kinds_.push_back(arm_kind(group, arms_[arm].k));
    collect(cell, lattice, metric, arms_[arm].k, kinds_[arm], arm, q_min, q_max, reflections_);
  }
  std::ranges::stable_sort(reflections_, {}, &Reflection::q_length);
  for (std::size_t i = 0; i < reflections_.size();) {
    PowderLine line;
    line.q = reflections_[i].q_length;
    line.first = i;
    while (i < reflections_.size() &&
           reflections_[i].q_length - line.q <= same_q_tolerance * line.q)
      ++i;
    line.count = i - line.first;
    line.multiplicity = 2 * line.count;
    const auto begin = reflections_.begin() + static_cast<std::ptrdiff_t>(line.first);
    // Rounding may have ordered equal |Q| at will; a fixed order inside the line undoes that.
    std::sort(begin, begin + static_cast<std::ptrdiff_t>(line.count),
              [](const Reflection& a, const Reflection& b) { return nicety(a) < nicety(b); });
    lines_.push_back(line);
  }
}

Reflection ReflectionTable::opposite(const Reflection& reflection) const {
  Reflection mate = reflection;
  const bool self_conjugate = kinds_[reflection.arm] == ArmKind::self_conjugate;
  for (std::size_t i = 0; i < 3; ++i) {
    mate.hkl[i] = -reflection.hkl[i];
    mate.q[i] = -reflection.q[i];
    // −(τ + k) = (−τ − 2k) + k
    if (self_conjugate)
      mate.hkl[i] -= static_cast<int>((Fraction(2) * arms_[reflection.arm].k[i]).numerator());
  }
  if (!self_conjugate) mate.k_sign = -reflection.k_sign;
  return mate;
}

std::vector<Reflection> ReflectionTable::all_reflections(const PowderLine& line) const {
  std::vector<Reflection> all;
  all.reserve(line.multiplicity);
  for (const Reflection& reflection : reflections(line)) {
    all.push_back(reflection);
    all.push_back(opposite(reflection));
  }
  std::ranges::sort(all, {}, [](const Reflection& r) { return nicety(r); });
  return all;
}

std::string ReflectionTable::label(const Reflection& reflection) const {
  std::string text = "(" + std::to_string(reflection.hkl[0]) + " " +
                     std::to_string(reflection.hkl[1]) + " " + std::to_string(reflection.hkl[2]) +
                     ")";
  if (reflection.k_sign == 0) return text;
  text += reflection.k_sign > 0 ? "+k" : "-k";
  const bool several =
      std::ranges::any_of(arms_, [](const Arm& arm) { return arm.wavevector > 0; });
  if (several) text += std::to_string(arms_[reflection.arm].wavevector + 1);
  return text;
}

std::string ReflectionTable::label(const PowderLine& line) const {
  return label(all_reflections(line).front()) + " ×" + std::to_string(line.multiplicity);
}

}  // namespace spinsieve
