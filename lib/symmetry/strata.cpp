#include "symmetry/strata.hpp"

#include <algorithm>
#include <bit>
#include <cstdint>
#include <map>
#include <numeric>
#include <set>
#include <stdexcept>

#include "exact/checked.hpp"

namespace spinsieve {

namespace {

using Row = std::array<std::int64_t, 3>;
using Rows = std::vector<Row>;

/// A subtorus {κ : W κ ≡ v mod 1} of wavevectors κ on the primitive reciprocal basis. W is an
/// integer matrix whose rows span a saturated lattice, in Hermite normal form, so that equal sets
/// have equal members.
struct Torus {
  Rows conditions;
  std::vector<Fraction> values;

  friend bool operator==(const Torus& a, const Torus& b) = default;
  friend bool operator<(const Torus& a, const Torus& b) {
    if (a.conditions != b.conditions) return a.conditions < b.conditions;
    return std::ranges::lexicographical_compare(a.values, b.values);
  }
};

/// Row operations that bring (W | v) to Hermite normal form with v modulo 1; zero rows vanish.
Torus hermite(Rows W, std::vector<Fraction> v) {
  std::size_t rank = 0;
  for (std::size_t column = 0; column < 3 && rank < W.size(); ++column) {
    for (;;) {
      std::size_t best = W.size();
      for (std::size_t i = rank; i < W.size(); ++i)
        if (W[i][column] != 0 &&
            (best == W.size() || std::abs(W[i][column]) < std::abs(W[best][column])))
          best = i;
      if (best == W.size()) break;
      std::swap(W[rank], W[best]);
      std::swap(v[rank], v[best]);
      bool clean = true;
      for (std::size_t i = rank + 1; i < W.size(); ++i) {
        const std::int64_t q = W[i][column] / W[rank][column];
        for (std::size_t c = 0; c < 3; ++c) W[i][c] -= q * W[rank][c];
        v[i] -= Fraction(q) * v[rank];
        clean = clean && W[i][column] == 0;
      }
      if (clean) break;
    }
    if (rank == W.size() || W[rank][column] == 0) continue;
    if (W[rank][column] < 0) {
      for (std::int64_t& entry : W[rank]) entry = -entry;
      v[rank] = -v[rank];
    }
    for (std::size_t i = 0; i < rank; ++i) {
      const std::int64_t q = Fraction(W[i][column], W[rank][column]).floor();
      for (std::size_t c = 0; c < 3; ++c) W[i][c] -= q * W[rank][c];
      v[i] -= Fraction(q) * v[rank];
    }
    ++rank;
  }
  W.resize(rank);
  v.resize(rank);
  for (Fraction& value : v) value = value.modulo_one();
  return {W, v};
}

/// Diagonal form U N V = D of an integer matrix with three columns; only V (unimodular, its
/// columns a basis) and the diagonal are kept.
struct Diagonal {
  std::array<Row, 3> V{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};
  Row d{};
};

Diagonal diagonalized(Rows N) {
  Diagonal result;
  const auto swap_columns = [&](std::size_t a, std::size_t b) {
    for (Row& row : N) std::swap(row[a], row[b]);
    for (Row& row : result.V) std::swap(row[a], row[b]);
  };
  for (std::size_t step = 0; step < 3; ++step) {
    for (;;) {
      // Smallest entry of the remaining block to the corner.
      std::size_t row = N.size();
      std::size_t column = 0;
      for (std::size_t i = step; i < N.size(); ++i)
        for (std::size_t c = step; c < 3; ++c)
          if (N[i][c] != 0 && (row == N.size() || std::abs(N[i][c]) < std::abs(N[row][column]))) {
            row = i;
            column = c;
          }
      if (row == N.size()) return result;
      std::swap(N[step], N[row]);
      swap_columns(step, column);
      bool clean = true;
      for (std::size_t i = step + 1; i < N.size(); ++i) {
        const std::int64_t q = N[i][step] / N[step][step];
        for (std::size_t c = step; c < 3; ++c) N[i][c] -= q * N[step][c];
        clean = clean && N[i][step] == 0;
      }
      for (std::size_t c = step + 1; c < 3; ++c) {
        const std::int64_t q = N[step][c] / N[step][step];
        for (Row& r : N) r[c] -= q * r[step];
        for (Row& r : result.V) r[c] -= q * r[step];
        clean = clean && N[step][c] == 0;
      }
      if (!clean) continue;
      result.d[step] = std::abs(N[step][step]);
      break;
    }
  }
  return result;
}

/// Inverse of a unimodular matrix.
std::array<Row, 3> unimodular_inverse(const std::array<Row, 3>& m) {
  IntMatrix narrow{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) narrow[i][j] = static_cast<int>(m[i][j]);
  const IntMatrix back = inverse(narrow);
  std::array<Row, 3> result{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result[i][j] = back[i][j];
  return result;
}

/// Rotations as matrices on columns κ of primitive reciprocal components: κ' = A κ for k' = k R.
class RotationSet {
 public:
  RotationSet(const SymmetryTables& tables, std::span<const IntMatrix> rotations) {
    for (const IntMatrix& R : rotations) {
      IntMatrix A{};
      for (std::size_t c = 0; c < 3; ++c) {
        // Unit vectors of the primitive reciprocal basis, through conventional components.
        FractionVector unit;
        unit[c] = 1;
        const FractionVector image = row_times(tables.conventional(unit), R);
        const FractionVector back = tables.primitive(image);
        for (std::size_t r = 0; r < 3; ++r) A[r][c] = static_cast<int>(back[r].numerator());
      }
      matrices_.push_back(A);
    }
    std::map<IntMatrix, std::size_t> index;
    for (std::size_t i = 0; i < matrices_.size(); ++i) index[matrices_[i]] = i;
    for (const IntMatrix& A : matrices_)
      for (const IntMatrix& B : matrices_) {
        const auto found = index.find(product(A, B));
        if (found == index.end()) throw std::logic_error("rotations that do not form a group");
        product_.push_back(found->second);
      }
  }

  std::size_t order() const { return matrices_.size(); }
  const IntMatrix& matrix(std::size_t i) const { return matrices_[i]; }

  std::uint64_t generated(std::uint64_t set) const {
    for (;;) {
      std::uint64_t larger = set;
      for (std::uint64_t a = set; a != 0; a &= a - 1)
        for (std::uint64_t b = set; b != 0; b &= b - 1)
          larger |= std::uint64_t{1}
                    << product_[static_cast<std::size_t>(std::countr_zero(a)) * order() +
                                static_cast<std::size_t>(std::countr_zero(b))];
      if (larger == set) return set;
      set = larger;
    }
  }

  /// Every subgroup, as a bit set of elements.
  std::set<std::uint64_t> subgroups() const {
    std::vector<std::uint64_t> cyclic;
    for (std::size_t i = 0; i < order(); ++i) cyclic.push_back(generated(std::uint64_t{1} << i));
    std::set<std::uint64_t> all(cyclic.begin(), cyclic.end());
    std::vector<std::uint64_t> fresh(all.begin(), all.end());
    while (!fresh.empty()) {
      std::vector<std::uint64_t> next;
      for (const std::uint64_t H : fresh)
        for (const std::uint64_t C : cyclic) {
          if ((H & C) == C) continue;
          const std::uint64_t joined = generated(H | C);
          if (all.insert(joined).second) next.push_back(joined);
        }
      fresh = std::move(next);
    }
    return all;
  }

  /// The image of a torus under rotation i: W κ ≡ v becomes (W A⁻¹) κ' ≡ v.
  Torus image(const Torus& torus, std::size_t i) const {
    const IntMatrix back = inverse(matrices_[i]);
    Rows W(torus.conditions.size());
    for (std::size_t r = 0; r < W.size(); ++r)
      for (std::size_t c = 0; c < 3; ++c)
        for (std::size_t m = 0; m < 3; ++m) W[r][c] += torus.conditions[r][m] * back[m][c];
    return hermite(W, torus.values);
  }

 private:
  std::vector<IntMatrix> matrices_;
  std::vector<std::size_t> product_;
};

/// All components of {κ : (A − 1) κ ∈ Z³ for A in the set}.
std::vector<Torus> components(const RotationSet& rotations, std::uint64_t set) {
  Rows N;
  for (std::uint64_t rest = set; rest != 0; rest &= rest - 1) {
    const IntMatrix& A = rotations.matrix(static_cast<std::size_t>(std::countr_zero(rest)));
    for (std::size_t r = 0; r < 3; ++r) {
      Row row{A[r][0], A[r][1], A[r][2]};
      row[r] -= 1;
      if (row != Row{}) N.push_back(row);
    }
  }
  const Diagonal form = diagonalized(N);
  // κ = V y with d_i y_i ∈ Z; the conditions are the rows of V⁻¹ with d_i ≠ 0.
  const std::array<Row, 3> rows = unimodular_inverse(form.V);
  std::vector<std::size_t> bound;
  for (std::size_t i = 0; i < 3; ++i)
    if (form.d[i] != 0) bound.push_back(i);
  std::vector<Torus> result;
  std::vector<std::int64_t> n(bound.size());
  for (;;) {
    Rows W;
    std::vector<Fraction> v;
    for (std::size_t b = 0; b < bound.size(); ++b) {
      W.push_back(rows[bound[b]]);
      v.emplace_back(n[b], form.d[bound[b]]);
    }
    result.push_back(hermite(W, v));
    std::size_t b = 0;
    while (b < bound.size() && ++n[b] == form.d[bound[b]]) n[b++] = 0;
    if (b == bound.size()) return result;
  }
}

/// A point of the torus and integer directions along it, on the primitive reciprocal basis.
struct Parametrized {
  FractionVector point;
  Rows directions;
};

Parametrized parametrized(const Torus& torus) {
  const Diagonal form = diagonalized(torus.conditions);
  // Saturated conditions: W V = (unimodular | 0); solve for y by elimination over fractions.
  Parametrized result;
  const std::size_t rank = torus.conditions.size();
  std::vector<std::array<Fraction, 4>> system(rank);
  for (std::size_t r = 0; r < rank; ++r) {
    for (std::size_t c = 0; c < rank; ++c) {
      Fraction sum;
      for (std::size_t m = 0; m < 3; ++m) sum += Fraction(torus.conditions[r][m] * form.V[m][c]);
      system[r][c] = sum;
    }
    system[r][3] = torus.values[r];
  }
  for (std::size_t c = 0; c < rank; ++c) {
    std::size_t pivot = c;
    while (system[pivot][c].is_zero()) ++pivot;
    std::swap(system[c], system[pivot]);
    const Fraction scale = Fraction(1) / system[c][c];
    for (Fraction& entry : system[c]) entry *= scale;
    for (std::size_t r = 0; r < rank; ++r) {
      if (r == c) continue;
      const Fraction factor = system[r][c];
      for (std::size_t m = 0; m < 4; ++m) system[r][m] -= factor * system[c][m];
    }
  }
  for (std::size_t m = 0; m < 3; ++m)
    for (std::size_t c = 0; c < rank; ++c) result.point[m] += Fraction(form.V[m][c]) * system[c][3];
  for (std::size_t c = rank; c < 3; ++c)
    result.directions.push_back({form.V[0][c], form.V[1][c], form.V[2][c]});
  return result;
}

/// Directions in conventional components: echelon form, integers without common factor, first
/// entry positive.
std::array<FractionVector, 3> neat_directions(const SymmetryTables& tables,
                                              const Rows& directions) {
  std::array<FractionVector, 3> rows{};
  for (std::size_t i = 0; i < directions.size(); ++i) {
    const Row& d = directions[i];
    rows[i] = tables.conventional(FractionVector{Fraction(d[0]), Fraction(d[1]), Fraction(d[2])});
  }
  std::size_t rank = 0;
  for (std::size_t column = 0; column < 3 && rank < directions.size(); ++column) {
    std::size_t pivot = rank;
    while (pivot < directions.size() && rows[pivot][column].is_zero()) ++pivot;
    if (pivot == directions.size()) continue;
    std::swap(rows[rank], rows[pivot]);
    rows[rank] = (Fraction(1) / rows[rank][column]) * rows[rank];
    for (std::size_t r = 0; r < directions.size(); ++r)
      if (r != rank) rows[r] = rows[r] - rows[r][column] * rows[rank];
    ++rank;
  }
  for (FractionVector& row : rows) {
    std::int64_t denominator = 1;
    for (const Fraction f : row) denominator = std::lcm(denominator, f.denominator());
    row = Fraction(denominator) * row;
  }
  return rows;
}

/// How inviting a representative reads: few non-zero entries, small, positive, ascending.
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

/// A readable k of the torus: directions reduced, offset moved along them and by reciprocal-lattice
/// vectors to the smallest entries.
Wavevector readable(const SymmetryTables& tables, const Torus& torus) {
  const Parametrized form = parametrized(torus);
  Wavevector k(tables.conventional(form.point));
  k.along = neat_directions(tables, form.directions);
  const auto without_pivots = [](Wavevector w) {
    for (const FractionVector& row : w.along) {
      std::size_t pivot = 0;
      while (pivot < 3 && row[pivot].is_zero()) ++pivot;
      if (pivot < 3) w.constant = w.constant - (w.constant[pivot] / row[pivot]) * row;
    }
    return w;
  };
  k = without_pivots(k);
  std::optional<Wavevector> best;
  const FractionVector whole{k.constant[0].floor(), k.constant[1].floor(), k.constant[2].floor()};
  for (int x = -2; x <= 2; ++x)
    for (int y = -2; y <= 2; ++y)
      for (int z = -2; z <= 2; ++z) {
        const FractionVector K = FractionVector{Fraction(x), Fraction(y), Fraction(z)} - whole;
        if (!tables.group().in_reciprocal_lattice(K)) continue;
        const Wavevector moved = without_pivots(k + K);
        if (!best || neatness(moved) < neatness(*best)) best = moved;
      }
  return *best;
}

Stratum make_stratum(const SymmetryTables& tables, std::span<const IntMatrix> rotations,
                     const std::set<Torus>& star) {
  Stratum stratum;
  const std::size_t dimension = 3 - star.begin()->conditions.size();
  constexpr std::array<StratumKind, 4> kinds{StratumKind::point, StratumKind::line,
                                             StratumKind::plane, StratumKind::general};
  stratum.kind = kinds[dimension];
  std::optional<Wavevector> best;
  for (const Torus& torus : star) {
    const Wavevector k = readable(tables, torus);
    if (!best || neatness(k) < neatness(*best)) best = k;
  }
  stratum.k = *best;
  stratum.cogroup_order = static_cast<std::size_t>(std::ranges::count_if(
      rotations, [&](const IntMatrix& R) { return tables.keeps(stratum.k, R); }));
  stratum.arms = rotations.size() / stratum.cogroup_order;
  return stratum;
}

std::set<Torus> star_of(const RotationSet& rotations, const Torus& torus) {
  std::set<Torus> star;
  for (std::size_t i = 0; i < rotations.order(); ++i) star.insert(rotations.image(torus, i));
  return star;
}

/// The torus of a wavevector: all values of its parameters, on the primitive reciprocal basis.
Torus torus_of(const SymmetryTables& tables, const Wavevector& k) {
  Rows directions;
  for (const FractionVector& row : k.along) {
    if (row == FractionVector{}) continue;
    const FractionVector primitive = tables.primitive(row);
    std::int64_t denominator = 1;
    for (const Fraction f : primitive) denominator = std::lcm(denominator, f.denominator());
    Row d{};
    for (std::size_t i = 0; i < 3; ++i)
      d[i] = checked_multiply(primitive[i].numerator(), denominator / primitive[i].denominator());
    directions.push_back(d);
  }
  // Conditions: integer rows orthogonal to all directions, from the diagonal form.
  const Diagonal form = diagonalized(directions);
  Rows W;
  for (std::size_t c = 0; c < 3; ++c)
    if (form.d[c] == 0) W.push_back({form.V[0][c], form.V[1][c], form.V[2][c]});
  const FractionVector point = tables.primitive(k.constant);
  std::vector<Fraction> v;
  for (const Row& w : W)
    v.push_back(Fraction(w[0]) * point[0] + Fraction(w[1]) * point[1] + Fraction(w[2]) * point[2]);
  return hermite(W, v);
}

/// True when the smaller torus lies in the larger one.
bool inside(const Torus& small, const Torus& large) {
  // Each condition of the larger one must be an integer combination of those of the smaller.
  for (std::size_t r = 0; r < large.conditions.size(); ++r) {
    Fraction value = large.values[r];
    Row rest = large.conditions[r];
    for (std::size_t s = 0; s < small.conditions.size(); ++s) {
      std::size_t pivot = 0;
      while (small.conditions[s][pivot] == 0) ++pivot;
      const std::int64_t q = rest[pivot] / small.conditions[s][pivot];
      for (std::size_t c = 0; c < 3; ++c) rest[c] -= q * small.conditions[s][c];
      value -= Fraction(q) * small.values[s];
    }
    if (rest != Row{} || !value.is_integer()) return false;
  }
  return true;
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
  // A component belongs to the set of rotations that keep it pointwise; every stratum is the
  // component of its own co-group, so all subgroups give all strata. Equal tori appear once.
  std::set<Torus> known;
  std::vector<Stratum> result;
  for (const std::uint64_t subgroup : set.subgroups()) {
    for (const Torus& torus : components(set, subgroup)) {
      if (known.contains(torus)) continue;
      const std::set<Torus> star = star_of(set, torus);
      known.insert(star.begin(), star.end());
      result.push_back(make_stratum(tables, rotations, star));
    }
  }
  sort_strata(result);
  return result;
}

std::vector<Stratum> strata(const SymmetryTables& tables) {
  const std::vector<IntMatrix> rotations = rotations_of(tables.group());
  std::vector<Stratum> result = strata(tables, rotations);
  if (!tables.group().is_polar()) return result;
  const RotationSet set(tables, rotations);
  std::set<Torus> known;
  const std::vector<IntMatrix> lattice = holohedry(tables.group());
  const RotationSet lattice_set(tables, lattice);
  for (const Stratum& point : strata(tables, lattice)) {
    if (point.kind != StratumKind::point) break;
    for (const Torus& torus : star_of(lattice_set, torus_of(tables, point.k))) {
      if (known.contains(torus)) continue;
      const std::set<Torus> star = star_of(set, torus);
      known.insert(star.begin(), star.end());
      Stratum stratum = make_stratum(tables, rotations, star);
      stratum.isolated = false;
      result.push_back(std::move(stratum));
    }
  }
  sort_strata(result);
  return result;
}

bool lies_on(const SymmetryTables& tables, const Wavevector& k, const Stratum& stratum) {
  const std::vector<IntMatrix> rotations = rotations_of(tables.group());
  const RotationSet set(tables, rotations);
  const Torus small = torus_of(tables, k);
  const std::set<Torus> star = star_of(set, torus_of(tables, stratum.k));
  return std::ranges::any_of(star, [&](const Torus& large) { return inside(small, large); });
}

}  // namespace spinsieve
