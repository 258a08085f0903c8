#include "arrangement/primitive_magnetic_group.hpp"

#include <algorithm>
#include <cstdlib>
#include <numeric>
#include <set>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

const IntMatrix identity_matrix = Operation{}.rotation;

IntMatrix proper(const IntMatrix& R) {
  if (determinant(R) > 0) return R;
  IntMatrix result = R;
  for (auto& row : result)
    for (int& x : row) x = -x;
  return result;
}

IntMatrix sum(const IntMatrix& A, const IntMatrix& B) {
  IntMatrix result = A;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i][j] += B[i][j];
  return result;
}

IntVector column(const IntMatrix& A, std::size_t j) { return {A[0][j], A[1][j], A[2][j]}; }

IntVector times_integer(const IntMatrix& A, const IntVector& v) {
  IntVector result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i] += A[i][j] * v[j];
  return result;
}

IntVector cross(const IntVector& a, const IntVector& b) {
  return {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};
}

IntMatrix from_columns(const IntVector& a, const IntVector& b, const IntVector& c) {
  return {{{a[0], b[0], c[0]}, {a[1], b[1], c[1]}, {a[2], b[2], c[2]}}};
}

IntVector negative(const IntVector& v) { return {-v[0], -v[1], -v[2]}; }

/// E + R + R² + … over one period.
IntMatrix power_sum(const IntMatrix& R) {
  IntMatrix result = identity_matrix;
  for (IntMatrix power = R; power != identity_matrix; power = product(power, R))
    result = sum(result, power);
  return result;
}

/// Basis of the lattice vectors in the plane that the rotations about one axis keep.
std::array<IntVector, 2> invariant_plane(const IntMatrix& R) {
  const IntMatrix S = power_sum(proper(R));
  IntVector normal{};
  for (const auto& row : S)
    if (row != IntVector{}) normal = without_common_factor(row);
  // For a primitive row f the vectors f × e_i generate all lattice vectors x with f x = 0.
  std::vector<std::array<std::int64_t, 3>> rows;
  for (std::size_t i = 0; i < 3; ++i) {
    const IntVector v = cross(normal, identity_matrix[i]);
    rows.push_back({v[0], v[1], v[2]});
  }
  rows = integer_row_basis(rows);
  std::array<IntVector, 2> basis{};
  for (std::size_t i = 0; i < 2; ++i)
    for (std::size_t j = 0; j < 3; ++j) basis[i][j] = static_cast<int>(rows.at(i)[j]);
  return basis;
}

using Metric = std::array<std::array<std::int64_t, 3>, 3>;

std::int64_t inner(const Metric& metric, const IntVector& a, const IntVector& b) {
  std::int64_t result = 0;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result += metric[i][j] * a[i] * b[j];
  return result;
}

/// Scalar products of the basis vectors where the coordinate axes are orthonormal, times a number.
Metric integer_metric(const RationalLattice& lattice) {
  std::int64_t denominator = 1;
  FractionMatrix products;
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j) {
      products[i][j] = dot(lattice.basis()[i], lattice.basis()[j]);
      denominator = std::lcm(denominator, products[i][j].denominator());
    }
  }
  Metric result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      result[i][j] = (Fraction(denominator) * products[i][j]).numerator();
  return result;
}

/// Lagrange-Gauss reduction: the first vector becomes a shortest one of the plane.
void reduce_plane(const Metric& metric, std::array<IntVector, 2>& basis) {
  while (true) {
    if (inner(metric, basis[1], basis[1]) < inner(metric, basis[0], basis[0]))
      std::swap(basis[0], basis[1]);
    const Fraction ratio(inner(metric, basis[0], basis[1]), inner(metric, basis[0], basis[0]));
    const std::int64_t n = (ratio + Fraction(1, 2)).floor();
    IntVector shorter = basis[1];
    for (std::size_t i = 0; i < 3; ++i) shorter[i] -= static_cast<int>(n) * basis[0][i];
    if (inner(metric, shorter, shorter) >= inner(metric, basis[1], basis[1])) return;
    basis[1] = shorter;
  }
}

/// Closes a set of matrices, two being taken as equal when congruent modulo n (0: when equal).
std::vector<IntMatrix> closure(const std::vector<IntMatrix>& generators, int n) {
  const auto residue = [n](IntMatrix A) {
    if (n > 0)
      for (auto& row : A)
        for (int& x : row) x = (x % n + n) % n;
    return A;
  };
  std::vector<IntMatrix> result = {identity_matrix};
  std::set<IntMatrix> known = {residue(identity_matrix)};
  for (std::size_t i = 0; i < result.size(); ++i) {
    for (const IntMatrix& g : generators) {
      const IntMatrix next = product(result[i], g);
      if (known.insert(residue(next)).second) result.push_back(next);
    }
  }
  return result;
}

std::vector<IntMatrix> changes_of(AxisSystem system) {
  switch (system) {
    case AxisSystem::triclinic:
      // Only half lattice vectors occur: matrices modulo 2 are enough.
      return closure({{{{0, 0, 1}, {1, 0, 0}, {0, 1, 0}}},
                      {{{0, -1, 0}, {1, 0, 0}, {0, 0, 1}}},
                      {{{1, 1, 0}, {0, 1, 0}, {0, 0, 1}}},
                      {{{1, -1, 0}, {0, 1, 0}, {0, 0, 1}}}},
                     2);
    case AxisSystem::monoclinic:
      // Half vectors of a lattice that may be centred once: modulo 4 in the plane across b.
      return closure({{{{-1, 0, 0}, {0, -1, 0}, {0, 0, 1}}},
                      {{{0, 0, 1}, {0, 1, 0}, {-1, 0, 0}}},
                      {{{1, 0, 1}, {0, 1, 0}, {0, 0, 1}}},
                      {{{1, 0, 0}, {0, 1, 0}, {1, 0, 1}}},
                      {{{1, 0, -1}, {0, 1, 0}, {0, 0, 1}}},
                      {{{1, 0, 0}, {0, 1, 0}, {-1, 0, 1}}}},
                     4);
    case AxisSystem::tetragonal:
      return closure({{{{0, -1, 0}, {1, 0, 0}, {0, 0, 1}}}, {{{1, 0, 0}, {0, -1, 0}, {0, 0, -1}}}},
                     0);
    case AxisSystem::hexagonal:
      return closure({{{{1, -1, 0}, {1, 0, 0}, {0, 0, 1}}}, {{{0, 1, 0}, {1, 0, 0}, {0, 0, -1}}}},
                     0);
    case AxisSystem::orthorhombic:
    case AxisSystem::cubic:
      return closure({{{{0, -1, 0}, {1, 0, 0}, {0, 0, 1}}}, {{{0, 0, 1}, {1, 0, 0}, {0, 1, 0}}}},
                     0);
  }
  return {};
}

/// The least d > 0 for which d times the translation of the full turn (R|t)ⁿ comes from lattice
/// translations put before it: 1 when some operation of the coset has a fixed point.
int screw_order(const PrimitiveMagneticGroup::Element& element) {
  const IntMatrix S = power_sum(element.rotation);
  const FractionVector turn = times(S, element.translation);
  std::vector<std::array<std::int64_t, 3>> rows;
  for (std::size_t j = 0; j < 3; ++j) {
    const IntVector v = column(S, j);
    rows.push_back({v[0], v[1], v[2]});
  }
  rows = integer_row_basis(std::move(rows));
  for (int d = 1; d <= 24; ++d) {
    FractionVector rest = Fraction(d) * turn;
    for (const auto& row : rows) {
      const auto first = static_cast<std::size_t>(
          std::ranges::find_if(row, [](std::int64_t x) { return x != 0; }) - row.begin());
      const Fraction factor = rest[first] / Fraction(row[first]);
      if (!factor.is_integer()) break;
      for (std::size_t i = 0; i < 3; ++i) rest[i] -= factor * Fraction(row[i]);
    }
    if (rest == FractionVector{}) return d;
  }
  return 0;
}

}  // namespace

int rotation_order(const IntMatrix& R) {
  switch (trace(R) * determinant(R)) {
    case -1:
      return 2;
    case 0:
      return 3;
    case 1:
      return 4;
    case 2:
      return 6;
    default:
      return 1;
  }
}

IntVector without_common_factor(IntVector v) {
  const int divisor = std::gcd(std::gcd(v[0], v[1]), v[2]);
  if (divisor > 1)
    for (int& x : v) x /= divisor;
  return v;
}

IntVector axis_direction(const IntMatrix& R) {
  const IntMatrix S = power_sum(proper(R));
  for (std::size_t j = 0; j < 3; ++j)
    if (column(S, j) != IntVector{}) return without_common_factor(column(S, j));
  return {};
}

std::span<const IntMatrix> axis_changes(AxisSystem system) {
  static const std::array<std::vector<IntMatrix>, 6> changes = {
      changes_of(AxisSystem::triclinic),    changes_of(AxisSystem::monoclinic),
      changes_of(AxisSystem::orthorhombic), changes_of(AxisSystem::tetragonal),
      changes_of(AxisSystem::hexagonal),    changes_of(AxisSystem::cubic)};
  return changes.at(static_cast<std::size_t>(system));
}

PrimitiveMagneticGroup::PrimitiveMagneticGroup(std::span<const PrimedOperation> operations,
                                               std::span<const FractionVector> lattice_generators) {
  std::vector<FractionVector> generators(lattice_generators.begin(), lattice_generators.end());
  for (const auto& [operation, primed] : operations)
    if (!primed && operation.rotation == identity_matrix &&
        operation.translation != FractionVector{})
      generators.push_back(operation.translation);
  lattice_ = RationalLattice(generators);

  bool any_primed = false;
  for (const auto& [operation, primed] : operations) {
    any_primed = any_primed || primed;
    if (primed && operation.rotation == identity_matrix)
      antitranslation_ = modulo_one(lattice_.coordinates(operation.translation));
  }
  type_ = !any_primed ? 1 : !antitranslation_ ? 3 : *antitranslation_ == FractionVector{} ? 2 : 4;

  elements_.push_back({identity_matrix, {}, false});
  for (const auto& [operation, primed] : operations) {
    const std::optional<IntMatrix> R = to_integers(lattice_.in_basis(operation.rotation));
    if (!R)
      throw Error("the rotation of " + to_string(operation) +
                  " does not keep the lattice of unprimed translations");
    Element element{*R, lattice_.coordinates(operation.translation), primed};
    if (primed && antitranslation_) {
      element.primed = false;
      element.translation = element.translation + *antitranslation_;
    }
    element.translation = modulo_one(element.translation);
    if (const Element* known = find(element.rotation)) {
      if (known->primed != element.primed || known->translation != element.translation)
        throw Error("operation " + to_string(operation) +
                    " and another with the same rotation do not differ by a translation of the "
                    "group");
    } else {
      elements_.push_back(element);
    }
  }
  choose_axes();
  collect_invariants();
}

const PrimitiveMagneticGroup::Element* PrimitiveMagneticGroup::find(
    const IntMatrix& rotation) const {
  const auto found = std::ranges::find(elements_, rotation, &Element::rotation);
  return found == elements_.end() ? nullptr : &*found;
}

void PrimitiveMagneticGroup::choose_axes() {
  // Rotations without their improper partners, by order.
  std::vector<IntMatrix> turns;
  for (const auto& element : elements_)
    if (const IntMatrix R = proper(element.rotation); std::ranges::find(turns, R) == turns.end())
      turns.push_back(R);
  std::array<std::vector<IntMatrix>, 7> by_order;
  for (const auto& R : turns) by_order.at(static_cast<std::size_t>(rotation_order(R))).push_back(R);

  // Averaged over the rotations, the metric of orthonormal coordinate axes becomes invariant, hence
  // the natural one up to scale in a plane across an axis of order 3 or more.
  const Metric orthonormal = integer_metric(lattice_);
  Metric metric{};
  for (const auto& R : turns)
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j)
        metric[i][j] += inner(orthonormal, column(R, i), column(R, j));

  IntVector a{};
  IntVector b{};
  IntVector c{};
  if (by_order[3].size() == 8) {
    system_ = AxisSystem::cubic;
    std::vector<IntVector> directions;
    for (const auto& R : by_order[4].empty() ? by_order[2] : by_order[4]) {
      const IntVector v = axis_direction(R);
      if (std::ranges::find(directions, v) == directions.end() &&
          std::ranges::find(directions, negative(v)) == directions.end())
        directions.push_back(v);
    }
    a = directions.at(0);
    b = directions.at(1);
    c = directions.at(2);
  } else if (!by_order[3].empty() || !by_order[4].empty()) {
    system_ = by_order[4].empty() ? AxisSystem::hexagonal : AxisSystem::tetragonal;
    const IntMatrix& R = by_order[4].empty() ? by_order[3][0] : by_order[4][0];
    auto plane = invariant_plane(R);
    reduce_plane(metric, plane);
    a = plane[0];
    b = times_integer(R, a);
    c = axis_direction(R);
  } else if (by_order[2].size() == 3) {
    system_ = AxisSystem::orthorhombic;
    a = axis_direction(by_order[2][0]);
    b = axis_direction(by_order[2][1]);
    c = axis_direction(by_order[2][2]);
  } else if (by_order[2].size() == 1) {
    system_ = AxisSystem::monoclinic;
    auto plane = invariant_plane(by_order[2][0]);
    reduce_plane(metric, plane);
    a = plane[0];
    b = axis_direction(by_order[2][0]);
    c = plane[1];
  } else {
    system_ = AxisSystem::triclinic;
    a = identity_matrix[0];
    b = identity_matrix[1];
    c = identity_matrix[2];
  }
  if (determinant(from_columns(a, b, c)) < 0) c = negative(c);
  axes_ = from_columns(a, b, c);
}

void PrimitiveMagneticGroup::collect_invariants() {
  std::vector<int> codes;
  for (const auto& element : elements_) {
    // A primed operation of odd period would make a primed translation: screw_order is defined.
    int code = rotation_order(element.rotation) + (determinant(element.rotation) < 0 ? 10 : 0) +
               (element.primed ? 20 : 0) + 100 * screw_order(element);
    if (type_ == 4) {
      Element primed = element;
      primed.translation = element.translation + *antitranslation_;
      code += 10000 * screw_order(primed);
    }
    codes.push_back(code);
  }
  std::ranges::sort(codes);
  invariants_ = {type_, static_cast<int>(system_), determinant(axes_)};
  invariants_.insert(invariants_.end(), codes.begin(), codes.end());
}

}  // namespace spinsieve
