#include <algorithm>
#include <optional>
#include <set>
#include <stdexcept>

#include "exact/error.hpp"
#include "symmetry/rotation_set.hpp"
#include "symmetry/strata.hpp"
#include "symmetry/subtorus.hpp"

namespace spinsieve {

namespace {

Fraction magnitude(Fraction value) { return value < Fraction(0) ? -value : value; }

Fraction largest_component(const FractionVector& v) {
  return std::max({magnitude(v[0]), magnitude(v[1]), magnitude(v[2])});
}

/// The projection on the directions of a stratum: the mean over the rotations that keep it.
FractionVector along_torus(const RotationSet& rotations, const std::vector<std::size_t>& keeping,
                           const FractionVector& v) {
  FractionVector sum;
  for (const std::size_t i : keeping) sum = sum + times(rotations.matrix(i), v);
  return Fraction(1, static_cast<std::int64_t>(keeping.size())) * sum;
}

/// The smallest change (conventional components) that takes κ onto the torus. Its defect in each
/// condition is taken on either side of the nearest integer.
FractionVector smallest_change(const SymmetryTables& tables, const RotationSet& rotations,
                               const Subtorus& torus, const FractionVector& kappa) {
  const Parametrization form = parametrization(torus);
  std::vector<std::size_t> keeping;
  for (std::size_t i = 0; i < rotations.order(); ++i)
    if (keeps_pointwise(rotations.matrix(i), form, torus.denominator)) keeping.push_back(i);
  // δ_j: a κ with W δ_j = unit vector j, made orthogonal to the torus.
  std::array<FractionVector, 3> across{};
  for (std::size_t j = 0; j < torus.rank; ++j) {
    Subtorus unit = torus;
    unit.denominator = 1;
    unit.values = {};
    unit.values[j] = 1;
    const IntegerRow point = parametrization(unit).point;
    const FractionVector v{Fraction(point[0]), Fraction(point[1]), Fraction(point[2])};
    // A named point of a polar group has no direction, though its rotations keep one.
    across[j] = torus.dimension() == 0 ? v : v - along_torus(rotations, keeping, v);
  }
  std::optional<FractionVector> best;
  for (unsigned sides = 0; sides < (1U << torus.rank); ++sides) {
    FractionVector change;
    for (std::size_t j = 0; j < torus.rank; ++j) {
      Fraction defect(torus.values[j], torus.denominator);
      for (std::size_t c = 0; c < 3; ++c) defect -= Fraction(torus.conditions[j][c]) * kappa[c];
      defect = defect.modulo_one() - Fraction((sides >> j) & 1U);
      change = change + defect * across[j];
    }
    const FractionVector conventional = tables.conventional(change);
    if (!best || largest_component(conventional) < largest_component(*best)) best = conventional;
  }
  return *best;
}

}  // namespace

StratumPosition stratum_position(const SymmetryTables& tables, const Wavevector& k,
                                 std::span<const Stratum> list, Fraction reach) {
  if (k.is_symbolic())
    throw Error("the wavevector " + to_string(k) + " has free parameters; give them values");
  if (reach < Fraction(0) || reach > Fraction(1, 4))
    throw Error("a reach of " + to_string(reach) + "; it must lie within 0 to 1/4");
  std::vector<IntMatrix> matrices;
  for (const Operation& operation : tables.group().operations())
    matrices.push_back(operation.rotation);
  const RotationSet rotations(tables, matrices);
  const auto cogroup_order = [&](const Wavevector& at) {
    return static_cast<std::size_t>(
        std::ranges::count_if(matrices, [&](const IntMatrix& R) { return tables.keeps(at, R); }));
  };
  const std::size_t order = cogroup_order(k);
  const FractionVector kappa = tables.primitive(k.constant);

  StratumPosition result;
  bool found = false;
  for (std::size_t s = 0; s < list.size(); ++s) {
    const Subtorus torus = subtorus(tables, list[s].k);
    std::set<Subtorus> star;
    for (std::size_t i = 0; i < rotations.order(); ++i)
      star.insert(image(torus, rotations.inverse_matrix(i)));
    std::optional<FractionVector> nearest;
    for (const Subtorus& arm : star) {
      const FractionVector change = smallest_change(tables, rotations, arm, kappa);
      if (!nearest || largest_component(change) < largest_component(*nearest)) nearest = change;
    }
    if (*nearest == FractionVector{}) {
      result.lies_on.push_back(s);
      if (list[s].cogroup_order == order && (!found || list[s].isolated)) {
        result.own = s;
        found = true;
      }
    } else if (list[s].cogroup_order > order && largest_component(*nearest) < reach &&
               cogroup_order(k + *nearest) == list[s].cogroup_order) {
      result.nearby.push_back({s, k + *nearest, *nearest});
    }
  }
  if (!found) throw std::logic_error("a wavevector outside all strata");
  std::ranges::stable_sort(
      result.nearby, {}, [](const NearbyStratum& near) { return largest_component(near.change); });
  return result;
}

}  // namespace spinsieve
