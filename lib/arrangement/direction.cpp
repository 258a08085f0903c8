#include "arrangement/direction.hpp"

#include <algorithm>
#include <map>
#include <numeric>
#include <set>
#include <stdexcept>

namespace spinsieve {

namespace {

/// One element of {R : kR ≡ ±k} on the row amplitudes: z → e(base) matrix z, or matrix z*.
struct Action {
  std::size_t operation = 0;
  bool reversing = false;
  ExactMatrix matrix;
  Phase base;
};

std::vector<Action> actions(const LittleGroup& little_group, const SmallIrrep& irrep,
                            const IsotypicSpace& space) {
  std::vector<Action> result;
  for (std::size_t i = 0; i < little_group.order(); ++i)
    result.push_back(
        {little_group.operations()[i], false, irrep.matrices[i].to_exact(), little_group.phase(i)});
  if (!space.reversal || little_group.self_conjugate()) return result;
  const ExactMatrix U = space.reversal->matrix.to_exact();
  const SpaceGroup& group = little_group.group();
  const Operation& a = group.operations()[space.reversal->operation];
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    // g a is the listed operation of that rotation up to a lattice vector T: {gR a} = {1|T} listed,
    // so the listed one acts as e(+k·T) times g a.
    const std::size_t g = little_group.operations()[i];
    const std::size_t listed = group.product(g, space.reversal->operation);
    const FractionVector T =
        (group.operations()[g] * a).translation - group.operations()[listed].translation;
    result.push_back({listed, true, irrep.matrices[i].to_exact() * U,
                      little_group.phase(i) + Phase(dot(little_group.k().constant, T))});
  }
  return result;
}

/// Rows x with matrix x = e(exponent/24) x.
ExactMatrix eigenspace(const ExactMatrix& matrix, int exponent) {
  return null_space(matrix - Cyclotomic::root(exponent) * ExactMatrix::identity(matrix.rows()));
}

/// The row space common to two row spaces.
ExactMatrix intersection(const ExactMatrix& a, const ExactMatrix& b) {
  return null_space(stacked(null_space(a), null_space(b)));
}

bool contained(const ExactMatrix& small, const ExactMatrix& large) {
  return row_echelon(stacked(large, small)).rows() == large.rows();
}

/// Images of row vectors under z → matrix z.
ExactMatrix moved(const ExactMatrix& rows, const ExactMatrix& matrix) {
  return rows * matrix.transpose();
}

/// The matrix B with image_s = Σ_r B_rs basis_r, for rows in the space of an echelon basis.
ExactMatrix coordinates(const ExactMatrix& basis, const ExactMatrix& image) {
  ExactMatrix result(basis.rows(), image.rows());
  for (std::size_t r = 0; r < basis.rows(); ++r) {
    std::size_t pivot = 0;
    while (basis(r, pivot).is_zero()) ++pivot;
    for (std::size_t s = 0; s < image.rows(); ++s) result(r, s) = image(s, pivot);
  }
  return result;
}

/// λ when the square matrix is λ times the identity.
std::optional<Cyclotomic> scalar(const ExactMatrix& matrix) {
  if (!(matrix == matrix(0, 0) * ExactMatrix::identity(matrix.rows()))) return std::nullopt;
  return matrix(0, 0);
}

std::string text_key(const ExactMatrix& matrix) {
  std::string key;
  for (std::size_t i = 0; i < matrix.rows(); ++i) {
    for (std::size_t j = 0; j < matrix.columns(); ++j) key += to_string(matrix(i, j)) + ",";
    key += ";";
  }
  return key;
}

/// One subspace: V, and for locked ones the antilinear map on V, z = e(theta) B z*, with B made
/// unique by the root of unity that gives the first text.
struct Member {
  ExactMatrix basis;
  std::optional<ExactMatrix> antilinear;  ///< On all rows.
  ExactMatrix on_basis;                   ///< B, canonical.
  Phase theta;                            ///< Belonging to B.
  Phase antilinear_theta;                 ///< Belonging to antilinear.
  std::string key;
};

class Closure {
 public:
  Closure(const LittleGroup& little_group, const SmallIrrep& irrep, const IsotypicSpace& space,
          PhaseSteps steps)
      : actions_(actions(little_group, irrep, space)),
        space_(space),
        steps_(steps),
        dimension_(static_cast<std::size_t>(irrep.dimension)) {}

  const std::vector<Action>& elements() const { return actions_; }

  /// All complex subspaces kept pointwise, up to reachable phases, by some unitary elements.
  std::vector<ExactMatrix> subspaces() const {
    std::map<std::string, ExactMatrix> known;
    const ExactMatrix whole = ExactMatrix::identity(dimension_);
    known.emplace(text_key(whole), whole);
    std::vector<ExactMatrix> generators;
    std::set<std::string> generator_keys;
    for (const Action& action : actions_) {
      if (action.reversing) continue;
      for (int e = 0; e < Cyclotomic::order; ++e) {
        if (!reachable(action.base + Phase(e, Cyclotomic::order))) continue;
        const ExactMatrix space = eigenspace(action.matrix, e);
        if (space.rows() == 0 || space.rows() == dimension_) continue;
        if (generator_keys.insert(text_key(space)).second) generators.push_back(space);
      }
    }
    std::vector<ExactMatrix> fresh{whole};
    while (!fresh.empty()) {
      std::vector<ExactMatrix> next;
      for (const ExactMatrix& space : fresh)
        for (const ExactMatrix& generator : generators) {
          const ExactMatrix common = intersection(space, generator);
          if (common.rows() == 0) continue;
          if (known.emplace(text_key(common), common).second) next.push_back(common);
        }
      fresh = std::move(next);
    }
    std::vector<ExactMatrix> result;
    for (auto& [key, space] : known) result.push_back(std::move(space));
    return result;
  }

  /// The ways to lock a subspace: by each reversing element that keeps it, with every theta that
  /// differs modulo what translations and time reversal turn it by.
  std::vector<Member> locks(const ExactMatrix& basis) const {
    std::vector<Member> result;
    std::set<std::string> keys;
    for (const Action& action : actions_) {
      if (!action.reversing) continue;
      const ExactMatrix image = moved(basis.conjugate(), action.matrix);
      if (!contained(image, basis)) continue;
      const ExactMatrix B = coordinates(basis, image);
      const std::optional<Cyclotomic> square = scalar(B * B.conjugate());
      if (!square || !(*square * space_.reversal_square == Cyclotomic(1))) continue;
      const int variants = steps_.continuous ? 1 : 2;
      for (int j = 0; j < variants; ++j) {
        const Phase theta = action.base + Phase(j, steps_.continuous ? 1 : steps_.steps);
        Member member = locked(basis, action.matrix, theta);
        if (keys.insert(member.key).second) result.push_back(std::move(member));
      }
    }
    return result;
  }

  Member free(const ExactMatrix& basis) const {
    Member member;
    member.basis = basis;
    member.key = text_key(basis);
    return member;
  }

  /// Images of a member under every element.
  std::vector<Member> orbit(const Member& member) const {
    std::vector<Member> result;
    std::set<std::string> keys;
    for (const Action& action : actions_) {
      const ExactMatrix basis = row_echelon(
          moved(action.reversing ? member.basis.conjugate() : member.basis, action.matrix));
      Member image;
      if (!member.antilinear) {
        image = free(basis);
      } else {
        const ExactMatrix& m = *member.antilinear;
        const ExactMatrix& g = action.matrix;
        if (action.reversing)
          image = locked(basis, g * m.adjoint() * g.transpose(),
                         2 * action.base - member.antilinear_theta);
        else
          image = locked(basis, g * m * g.transpose(), 2 * action.base + member.antilinear_theta);
      }
      if (keys.insert(image.key).second) result.push_back(std::move(image));
    }
    return result;
  }

  std::vector<Stabilizer> stabilizers(const Member& member) const {
    std::vector<Stabilizer> result;
    for (const Action& action : actions_) {
      if (action.reversing && !member.antilinear) continue;
      const ExactMatrix start = action.reversing ? member.basis.conjugate() : member.basis;
      const ExactMatrix image = moved(start, action.matrix);
      if (!contained(image, member.basis)) continue;
      ExactMatrix on_basis = coordinates(member.basis, image);
      // A reversing element is compared with the lock: its quotient is unitary on V.
      Phase own = action.base;
      if (action.reversing) {
        const ExactMatrix lock = coordinates(member.basis, moved(start, *member.antilinear));
        on_basis = on_basis * inverse_of(lock);
        own = own - member.antilinear_theta;
      }
      const std::optional<Cyclotomic> factor = scalar(on_basis);
      if (!factor) continue;
      const std::optional<Phase> phase = factor->phase();
      if (!phase) throw std::logic_error("a symmetry factor that is no root of unity");
      if (!reachable(own + *phase)) continue;
      result.push_back({action.operation, action.reversing, own + *phase});
    }
    return result;
  }

 private:
  bool reachable(Phase phase) const {
    return steps_.continuous || steps_.steps % phase.denominator() == 0;
  }

  static ExactMatrix inverse_of(const ExactMatrix& matrix) {
    const std::size_t n = matrix.rows();
    ExactMatrix wide(n, 2 * n);
    for (std::size_t i = 0; i < n; ++i) {
      for (std::size_t j = 0; j < n; ++j) wide(i, j) = matrix(i, j);
      wide(i, n + i) = 1;
    }
    const ExactMatrix echelon = row_echelon(wide);
    ExactMatrix result(n, n);
    for (std::size_t i = 0; i < n; ++i)
      for (std::size_t j = 0; j < n; ++j) result(i, j) = echelon(i, n + j);
    return result;
  }

  Member locked(const ExactMatrix& basis, const ExactMatrix& antilinear, Phase theta) const {
    Member member;
    member.basis = basis;
    member.antilinear = antilinear;
    member.antilinear_theta = theta;
    const ExactMatrix B = coordinates(basis, moved(basis.conjugate(), antilinear));
    std::string best;
    for (int e = 0; e < Cyclotomic::order; ++e) {
      ExactMatrix turned = Cyclotomic::root(-e) * B;
      std::string key = text_key(turned);
      if (!best.empty() && best <= key) continue;
      best = std::move(key);
      member.on_basis = std::move(turned);
      member.theta = theta + Phase(e, Cyclotomic::order);
    }
    member.key = text_key(basis) + "|" + best;
    if (!steps_.continuous)
      // Modulo 2/steps, by which reachable phases turn it.
      member.key += "|" + to_string(Phase(member.theta.turns() * Fraction(steps_.steps, 2)));
    return member;
  }

  std::vector<Action> actions_;
  const IsotypicSpace& space_;
  PhaseSteps steps_;
  std::size_t dimension_;
};

/// "e(1/3)*a", with parentheses around a sum.
std::string product_text(const Cyclotomic& factor, const std::string& name) {
  const std::string text = to_string(factor);
  const bool sum = text.find('+') != std::string::npos || text.find('-', 1) != std::string::npos;
  return (sum ? "(" + text + ")" : text) + "*" + name;
}

/// "(a,b,-a)": the pattern of amplitudes over the rows.
std::string direction_text(const ExactMatrix& basis, bool complex_amplitudes) {
  std::string text = "(";
  for (std::size_t b = 0; b < basis.columns(); ++b) {
    if (b > 0) text += ",";
    std::string entry;
    for (std::size_t r = 0; r < basis.rows(); ++r) {
      const Cyclotomic& factor = basis(r, b);
      if (factor.is_zero()) continue;
      const std::string name(1, static_cast<char>('a' + r));
      std::string term;
      if (factor == Cyclotomic(1))
        term = name;
      else if (factor == Cyclotomic(-1))
        term = "-" + name;
      else if (factor.is_rational() && factor.rational().is_integer())
        term = to_string(factor) + name;
      else
        term = product_text(factor, name);
      if (!entry.empty() && term.front() != '-') entry += "+";
      entry += term;
    }
    text += entry.empty() ? "0" : entry;
  }
  return text + (complex_amplitudes ? ")*" : ")");
}

struct Class {
  std::vector<Member> members;
  std::size_t dimension = 0;
};

std::size_t zeros(const ExactMatrix& matrix) {
  std::size_t count = 0;
  for (std::size_t i = 0; i < matrix.rows(); ++i)
    for (std::size_t j = 0; j < matrix.columns(); ++j)
      if (matrix(i, j).is_zero()) ++count;
  return count;
}

/// The member that reads best: most zeros, then the first key.
const Member& representative(const Class& c) {
  return *std::ranges::min_element(c.members, [](const Member& a, const Member& b) {
    const std::size_t za = zeros(a.basis);
    const std::size_t zb = zeros(b.basis);
    return za != zb ? za > zb : a.key < b.key;
  });
}

/// True when the smaller subspace lies inside the larger one, phases included.
bool inside(const Member& small, const Member& large, PhaseSteps steps) {
  if (!contained(small.basis, large.basis)) return false;
  if (!large.antilinear) return true;
  if (!small.antilinear) return false;
  const ExactMatrix conjugate = small.basis.conjugate();
  const ExactMatrix own = coordinates(small.basis, moved(conjugate, *small.antilinear));
  const ExactMatrix image = moved(conjugate, *large.antilinear);
  if (!contained(image, small.basis)) return false;
  const ExactMatrix other = coordinates(small.basis, image);
  for (int e = 0; e < Cyclotomic::order; ++e) {
    if (!(other == Cyclotomic::root(e) * own)) continue;
    if (steps.continuous) return true;
    const Phase difference =
        large.antilinear_theta + Phase(e, Cyclotomic::order) - small.antilinear_theta;
    return Phase(difference.turns() * Fraction(steps.steps, 2)).is_zero();
  }
  return false;
}

}  // namespace

PhaseSteps phase_steps(const LittleGroup& little_group, bool incommensurate) {
  PhaseSteps result;
  result.continuous = incommensurate;
  const FractionVector k = little_group.tables().primitive(little_group.k().constant);
  for (const Fraction f : k) result.steps = std::lcm(result.steps, f.denominator());
  return result;
}

std::vector<Direction> directions(const LittleGroup& little_group, const SmallIrrep& irrep,
                                  const IsotypicSpace& space, PhaseSteps steps) {
  const Closure closure(little_group, irrep, space, steps);
  // For 2k ≡ 0 and a real or pseudoreal irrep the conjugation locks everything.
  const bool conjugation = little_group.self_conjugate() && space.reversal.has_value();

  std::vector<Class> classes;
  std::set<std::string> known;
  const auto add = [&](const Member& member, std::size_t dimension) {
    if (known.contains(member.key)) return;
    Class c;
    c.members = closure.orbit(member);
    c.dimension = dimension;
    for (const Member& m : c.members) known.insert(m.key);
    classes.push_back(std::move(c));
  };
  for (const ExactMatrix& basis : closure.subspaces()) {
    const std::size_t size = basis.rows();
    if (conjugation) {
      Member member = closure.free(basis);
      add(member, space.reversal->sign > 0 ? size : 2 * size);
      continue;
    }
    const std::vector<Member> locks = closure.locks(basis);
    for (const Member& lock : locks) add(lock, size);
    if (steps.continuous && !locks.empty() && size * space.copies.size() == 1) continue;
    add(closure.free(basis), 2 * size);
  }

  std::ranges::stable_sort(classes, [](const Class& a, const Class& b) {
    if (a.dimension != b.dimension) return a.dimension > b.dimension;
    const Member& of_a = representative(a);
    const Member& of_b = representative(b);
    const std::size_t za = zeros(of_a.basis);
    const std::size_t zb = zeros(of_b.basis);
    return za != zb ? za > zb : of_a.key < of_b.key;
  });

  std::vector<Direction> result;
  for (const Class& c : classes) {
    const Member& member = representative(c);
    Direction direction;
    direction.basis = member.basis;
    direction.dimension = c.dimension;
    direction.stabilizers = closure.stabilizers(member);
    if (conjugation) {
      direction.antilinear = space.reversal->matrix.to_exact();
    } else if (member.antilinear) {
      direction.antilinear = member.antilinear;
      direction.theta = member.antilinear_theta;
    }
    direction.text = direction_text(member.basis, !direction.antilinear.has_value());
    direction.maximal = std::ranges::none_of(classes, [&](const Class& other) {
      if (&other == &c) return false;
      return std::ranges::any_of(other.members, [&](const Member& m) {
        return (m.basis.rows() < member.basis.rows() || (m.antilinear && !member.antilinear)) &&
               inside(m, member, steps);
      });
    });
    result.push_back(std::move(direction));
  }
  return result;
}

}  // namespace spinsieve
