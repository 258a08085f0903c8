#include "symmetry/strata.hpp"

#include <algorithm>
#include <cstdlib>
#include <numeric>
#include <optional>
#include <set>

#include "symmetry/rotation_set.hpp"
#include "symmetry/subtorus.hpp"

namespace spinsieve {

namespace {

/// A wavevector in conventional components, in integers: constant/denominator + Σ u_p along[p].
struct Candidate {
  IntegerRow constant{};
  std::int64_t denominator = 1;
  std::array<IntegerRow, 3> along{};
};

/// How inviting a representative reads: few parameters, small, positive, ascending.
struct Neatness {
  std::size_t parameters = 0;
  Fraction size;
  std::size_t negatives = 0;
  std::array<FractionVector, 4> rows;

  friend bool operator<(const Neatness& a, const Neatness& b) {
    if (a.parameters != b.parameters) return a.parameters < b.parameters;
    if (a.size != b.size) return a.size < b.size;
    if (a.negatives != b.negatives) return a.negatives < b.negatives;
    return a.rows < b.rows;
  }
};

Neatness neatness(const Wavevector& k) {
  Neatness result;
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t p = 0; p < 3; ++p) {
      if (k.along[p][i].is_zero()) continue;
      ++result.parameters;
      if (k.along[p][i] < Fraction(0)) ++result.negatives;
    }
    const Fraction c = k.constant[i];
    result.size += c < Fraction(0) ? -c : c;
    if (c < Fraction(0)) ++result.negatives;
  }
  result.rows = {k.along[0], k.along[1], k.along[2], k.constant};
  return result;
}

std::size_t first_entry(const IntegerRow& row) {
  std::size_t i = 0;
  while (i < 3 && row[i] == 0) ++i;
  return i;
}

/// Directions in conventional components: echelon form, integers without common factor, first
/// entry positive. Returns their number of non-zero entries.
std::size_t echelon(std::array<IntegerRow, 3>& rows, std::size_t count) {
  std::size_t rank = 0;
  for (std::size_t column = 0; column < 3 && rank < count; ++column) {
    std::size_t pivot = rank;
    while (pivot < count && rows[pivot][column] == 0) ++pivot;
    if (pivot == count) continue;
    std::swap(rows[rank], rows[pivot]);
    for (std::size_t r = 0; r < count; ++r) {
      if (r == rank || rows[r][column] == 0) continue;
      const std::int64_t a = rows[rank][column];
      const std::int64_t b = rows[r][column];
      for (std::size_t c = 0; c < 3; ++c) rows[r][c] = rows[r][c] * a - rows[rank][c] * b;
    }
    ++rank;
  }
  std::size_t entries = 0;
  for (std::size_t r = 0; r < count; ++r) {
    std::int64_t common = std::gcd(std::gcd(rows[r][0], rows[r][1]), rows[r][2]);
    if (rows[r][first_entry(rows[r])] < 0) common = -common;
    for (std::int64_t& entry : rows[r]) {
      entry /= common;
      if (entry != 0) ++entries;
    }
  }
  return entries;
}

/// Moves the offset along the directions until it has no component at their first entries.
void without_pivots(Candidate& k) {
  for (const IntegerRow& row : k.along) {
    const std::size_t pivot = first_entry(row);
    if (pivot == 3) continue;
    const std::int64_t steps = k.constant[pivot] / row[pivot];  // Exact, see readable().
    for (std::size_t c = 0; c < 3; ++c) k.constant[c] -= steps * row[c];
  }
}

struct OffsetOrder {
  std::int64_t size = 0;
  std::size_t negatives = 0;
  IntegerRow constant{};
  friend auto operator<=>(const OffsetOrder& a, const OffsetOrder& b) = default;
};

OffsetOrder offset_order(const Candidate& k) {
  OffsetOrder result;
  for (const std::int64_t c : k.constant) {
    result.size += std::abs(c);
    if (c < 0) ++result.negatives;
  }
  result.constant = k.constant;
  return result;
}

/// Directions of the torus in conventional components and a first offset.
Candidate conventional(const SymmetryTables& tables, const Parametrization& form,
                       std::int64_t denominator, std::size_t& parameters) {
  const IntMatrix& M = tables.reciprocal_basis();
  const auto turned = [&M](const IntegerRow& v) {
    IntegerRow result{};
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t r = 0; r < 3; ++r) result[i] += M[i][r] * v[r];
    return result;
  };
  Candidate k;
  for (std::size_t p = 0; p < form.directions.size(); ++p) k.along[p] = turned(form.directions[p]);
  parameters = echelon(k.along, form.directions.size());
  k.constant = turned(form.point);
  k.denominator = denominator;
  return k;
}

/// The most readable offset: moved along the directions and by reciprocal-lattice vectors to the
/// smallest entries.
Wavevector readable(const SymmetryTables& tables, Candidate k) {
  // With the product of first entries in the denominator every move along a direction is whole.
  for (const IntegerRow& row : k.along) {
    const std::size_t pivot = first_entry(row);
    if (pivot == 3) continue;
    k.denominator *= row[pivot];
    for (std::int64_t& c : k.constant) c *= row[pivot];
  }
  without_pivots(k);
  IntVector whole{};
  for (std::size_t i = 0; i < 3; ++i)
    whole[i] = static_cast<int>(Fraction(k.constant[i], k.denominator).floor());
  std::optional<OffsetOrder> best_order;
  Candidate best;
  for (int x = -2; x <= 2; ++x)
    for (int y = -2; y <= 2; ++y)
      for (int z = -2; z <= 2; ++z) {
        const IntVector K{x - whole[0], y - whole[1], z - whole[2]};
        if (!tables.in_reciprocal_lattice(K)) continue;
        Candidate moved = k;
        for (std::size_t i = 0; i < 3; ++i) moved.constant[i] += K[i] * k.denominator;
        without_pivots(moved);
        const OffsetOrder order = offset_order(moved);
        if (best_order && !(order < *best_order)) continue;
        best_order = order;
        best = moved;
      }
  Wavevector result;
  for (std::size_t i = 0; i < 3; ++i) {
    result.constant[i] = Fraction(best.constant[i], best.denominator);
    for (std::size_t p = 0; p < 3; ++p) result.along[p][i] = Fraction(best.along[p][i]);
  }
  return result;
}

using Star = std::set<Subtorus>;

Star star_of(const RotationSet& rotations, const Subtorus& torus) {
  Star star;
  for (std::size_t i = 0; i < rotations.order(); ++i)
    star.insert(image(torus, rotations.inverse_matrix(i)));
  return star;
}

Stratum make_stratum(const SymmetryTables& tables, const RotationSet& rotations, const Star& star) {
  Stratum stratum;
  constexpr std::array<StratumKind, 4> kinds{StratumKind::point, StratumKind::line,
                                             StratumKind::plane, StratumKind::general};
  stratum.kind = kinds[star.begin()->dimension()];
  std::vector<Candidate> candidates;
  std::size_t fewest = 10;
  stratum.cogroup_order = 0;
  for (const Subtorus& torus : star) {
    const Parametrization form = parametrization(torus);
    if (stratum.cogroup_order == 0)  // Equal for all arms.
      for (std::size_t i = 0; i < rotations.order(); ++i)
        if (keeps_pointwise(rotations.matrix(i), form, torus.denominator)) ++stratum.cogroup_order;
    std::size_t parameters = 0;
    const Candidate k = conventional(tables, form, torus.denominator, parameters);
    if (parameters > fewest) continue;
    if (parameters < fewest) candidates.clear();
    fewest = parameters;
    candidates.push_back(k);
  }
  std::optional<Neatness> best;
  for (const Candidate& candidate : candidates) {
    const Wavevector k = readable(tables, candidate);
    const Neatness order = neatness(k);
    if (best && !(order < *best)) continue;
    best = order;
    stratum.k = k;
  }
  stratum.arms = rotations.order() / stratum.cogroup_order;
  return stratum;
}

std::vector<IntMatrix> rotations_of(const SpaceGroup& group) {
  std::vector<IntMatrix> rotations;
  for (const Operation& operation : group.operations()) rotations.push_back(operation.rotation);
  return rotations;
}

void sort_strata(std::vector<Stratum>& list) {
  std::ranges::stable_sort(list, [](const Stratum& a, const Stratum& b) {
    if (a.kind != b.kind) return a.kind < b.kind;
    if (a.cogroup_order != b.cogroup_order) return a.cogroup_order > b.cogroup_order;
    return neatness(a.k) < neatness(b.k);
  });
}

/// Calls visit(torus) for every component of the fixed sets of all subgroups, up to conjugacy.
///
/// A component belongs to the set of rotations that keep it pointwise; every stratum is the
/// component of its own co-group, so all subgroups give all strata.
template <typename Visit>
void for_each_component(const RotationSet& rotations, const Visit& visit) {
  for (const RotationSet::Subgroup& subgroup : rotations.subgroup_classes()) {
    std::vector<IntegerRow> N;
    for (const std::size_t g : subgroup.generators) {
      const IntMatrix& A = rotations.matrix(g);
      for (std::size_t r = 0; r < 3; ++r) {
        IntegerRow row{A[r][0], A[r][1], A[r][2]};
        row[r] -= 1;
        if (row != IntegerRow{}) N.push_back(row);
      }
    }
    for (const Subtorus& torus : components(N)) visit(torus);
  }
}

}  // namespace

const char* to_string(StratumKind kind) {
  switch (kind) {
    case StratumKind::point:
      return "point";
    case StratumKind::line:
      return "line";
    case StratumKind::plane:
      return "plane";
    case StratumKind::general:
      break;
  }
  return "general";
}

std::vector<Stratum> strata(const SymmetryTables& tables, std::span<const IntMatrix> rotations) {
  const RotationSet set(tables, rotations);
  std::set<Subtorus> known;
  std::vector<Stratum> result;
  for_each_component(set, [&](const Subtorus& torus) {
    if (known.contains(torus)) return;
    const Star star = star_of(set, torus);
    known.insert(star.begin(), star.end());
    result.push_back(make_stratum(tables, set, star));
  });
  sort_strata(result);
  return result;
}

std::vector<Stratum> strata(const SymmetryTables& tables) {
  const std::vector<IntMatrix> rotations = rotations_of(tables.group());
  std::vector<Stratum> result = strata(tables, rotations);
  if (!tables.group().is_polar()) return result;
  const RotationSet set(tables, rotations);
  const RotationSet lattice(tables, holohedry(tables.group()));
  std::set<Subtorus> known;
  for_each_component(lattice, [&](const Subtorus& torus) {
    if (torus.dimension() != 0 || known.contains(torus)) return;
    for (const Subtorus& point : star_of(lattice, torus)) {
      if (known.contains(point)) continue;
      const Star star = star_of(set, point);
      known.insert(star.begin(), star.end());
      Stratum stratum = make_stratum(tables, set, star);
      stratum.isolated = false;
      result.push_back(std::move(stratum));
    }
  });
  sort_strata(result);
  return result;
}

bool lies_on(const SymmetryTables& tables, const Wavevector& k, const Stratum& stratum) {
  const Subtorus large = subtorus(tables, stratum.k);
  const RotationSet set(tables, rotations_of(tables.group()));
  const Subtorus small = subtorus(tables, k);
  for (std::size_t i = 0; i < set.order(); ++i)
    if (inside(small, image(large, set.inverse_matrix(i)))) return true;
  return false;
}

}  // namespace spinsieve
