#include "proof.hpp"

#include <algorithm>
#include <memory>
#include <set>

namespace spinsieve {

namespace {

bool equivalent(const SpaceGroup& group, const Wavevector& a, const Wavevector& b) {
  const Wavevector difference = a - b;
  return !difference.is_symbolic() && group.in_reciprocal_lattice(difference.constant);
}

/// D of any operation of the little group: exp(2πi·phase) times P of one of its operations.
struct Image {
  Phase phase;
  std::size_t position = 0;
};

class Representation {
 public:
  explicit Representation(const LittleGroup& little_group) : little_group_(little_group) {}

  const Operation& operation(std::size_t i) const {
    return little_group_.group().operations()[little_group_.operations()[i]];
  }

  std::optional<Image> image(const Operation& g) const {
    const SpaceGroup& group = little_group_.group();
    const auto index = group.find_rotation(g.rotation);
    if (!index) return std::nullopt;
    const auto position = little_group_.position(*index);
    if (!position) return std::nullopt;
    const FractionVector T = g.translation - group.operations()[*index].translation;
    if (!group.in_lattice(T)) return std::nullopt;
    return Image{little_group_.phase(*position) - Phase(dot(little_group_.k().constant, T)),
                 *position};
  }

 private:
  const LittleGroup& little_group_;
};

/// The exponent modulo 24 of a phase, if it is one.
std::optional<int> exponent(Phase phase) {
  if (!Cyclotomic::holds(phase)) return std::nullopt;
  return static_cast<int>(phase.numerator() * (24 / phase.denominator()));
}

std::string pair_text(const Operation& a, const Operation& b) {
  return " at " + to_string(a) + " and " + to_string(b);
}

std::string homomorphism_fault(const LittleGroup& little_group,
                               std::span<const SmallIrrep> irreps) {
  const Representation D(little_group);
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    for (std::size_t j = 0; j < little_group.order(); ++j) {
      const Operation& a = D.operation(i);
      const Operation& b = D.operation(j);
      const auto ab = D.image(a * b);
      if (!ab) return "closure" + pair_text(a, b);
      const auto e = exponent(ab->phase - little_group.phase(i) - little_group.phase(j));
      if (!e) return "the factor system is in 24ths" + pair_text(a, b);
      for (const SmallIrrep& irrep : irreps)
        if (irrep.matrices[i] * irrep.matrices[j] != irrep.matrices[ab->position].times_root(*e))
          return irrep.label + " is a homomorphism" + pair_text(a, b);
    }
  }
  return {};
}

std::string completeness_fault(const LittleGroup& little_group,
                               std::span<const SmallIrrep> irreps) {
  const std::size_t order = little_group.order();
  std::size_t squares = 0;
  std::vector<std::vector<Cyclotomic>> characters;
  for (const SmallIrrep& irrep : irreps) {
    squares += static_cast<std::size_t>(irrep.dimension * irrep.dimension);
    if (irrep.matrices.size() != order || irrep.characters.size() != order)
      return irrep.label + " has one matrix per operation";
    const IrrepMatrix one = IrrepMatrix::identity(irrep.dimension);
    if (irrep.matrices[0] != one) return irrep.label + " maps the identity to 1";
    auto& row = characters.emplace_back();
    for (std::size_t i = 0; i < order; ++i) {
      const IrrepMatrix& m = irrep.matrices[i];
      if (m.dimension() != irrep.dimension) return irrep.label + " has its dimension";
      const ExactMatrix exact = m.to_exact();
      if (exact * exact.adjoint() != one.to_exact()) return irrep.label + " is unitary";
      row.push_back(to_cyclotomic(irrep.characters[i]));
      if (row.back() != exact.trace()) return irrep.label + " has its traces as characters";
    }
  }
  if (squares != order) return "the squared dimensions sum to the order of the co-group";
  for (std::size_t a = 0; a < irreps.size(); ++a) {
    for (std::size_t b = 0; b <= a; ++b) {
      Cyclotomic sum;
      for (std::size_t i = 0; i < order; ++i)
        if (!characters[a][i].is_zero() && !characters[b][i].is_zero())
          sum += characters[a][i] * characters[b][i].conjugate();
      if (sum != Cyclotomic(a == b ? static_cast<std::int64_t>(order) : 0))
        return irreps[a].label + " and " + irreps[b].label + " obey character orthogonality";
    }
  }
  return {};
}

/// The order in which irreps are listed, decided with exact arithmetic.
std::string order_fault(std::span<const SmallIrrep> irreps) {
  for (std::size_t n = 0; n < irreps.size(); ++n) {
    if (irreps[n].label != "Γ" + std::to_string(n + 1)) return "labels count from 1";
    if (n > 0 && irreps[n].dimension < irreps[n - 1].dimension) return "dimensions ascend";
  }
  return {};
}

std::string reality_fault(const LittleGroup& little_group, std::span<const SmallIrrep> irreps) {
  const SpaceGroup& group = little_group.group();
  const Representation D(little_group);
  for (const SmallIrrep& irrep : irreps) {
    Cyclotomic sum;
    for (const std::size_t n : little_group.reversing()) {
      const Operation& a = group.operations()[n];
      const auto square = D.image(a * a);
      if (!square) return "squares of reversing operations lie in the little group";
      const auto e = exponent(square->phase);
      if (!e) return "Herring's terms lie in the field";
      sum += Cyclotomic::root(*e) * to_cyclotomic(irrep.characters[square->position]);
    }
    const auto order = static_cast<std::int64_t>(little_group.order());
    const std::int64_t expected = irrep.reality == Reality::real         ? order
                                  : irrep.reality == Reality::pseudoreal ? -order
                                                                         : 0;
    if (sum != Cyclotomic(expected)) return irrep.label + " has the reality of Herring's sum";
  }
  return {};
}

std::string partner_fault(const LittleGroup& little_group, std::span<const SmallIrrep> irreps) {
  const SpaceGroup& group = little_group.group();
  const Representation D(little_group);
  for (std::size_t n = 0; n < irreps.size(); ++n) {
    const SmallIrrep& irrep = irreps[n];
    if (irrep.reality != Reality::complex || !little_group.minus_k_in_star()) {
      if (irrep.partner) return irrep.label + " has no partner";
      continue;
    }
    if (!irrep.partner) return irrep.label + " has a partner";
    if (*irrep.partner == n) return irrep.label + " is not its own partner";
    const SmallIrrep& partner = irreps[*irrep.partner];
    if (partner.partner != n) return irrep.label + " is its partner's partner";
    for (const std::size_t m : little_group.reversing()) {
      const Operation& a = group.operations()[m];
      for (std::size_t i = 0; i < little_group.order(); ++i) {
        const auto turned = D.image(a.inverse() * D.operation(i) * a);
        if (!turned) return "conjugates by reversing operations lie in the little group";
        const auto e = exponent(-turned->phase - little_group.phase(i));
        if (!e) return "conjugate characters lie in the field";
        const Cyclotomic expected =
            Cyclotomic::root(*e) * to_cyclotomic(irrep.characters[turned->position]).conjugate();
        if (to_cyclotomic(partner.characters[i]) != expected)
          return irrep.label + " conjugated is its partner" + pair_text(a, D.operation(i));
      }
    }
  }
  return {};
}

std::string reversal_fault(const LittleGroup& little_group, std::span<const SmallIrrep> irreps) {
  const SpaceGroup& group = little_group.group();
  const Representation D(little_group);
  for (const SmallIrrep& irrep : irreps) {
    const std::optional<Reversal> reversed = reversal(little_group, irrep);
    if (reversed.has_value() == (irrep.reality == Reality::complex))
      return irrep.label + " has a reversal unless complex";
    if (!reversed) continue;
    const Operation& a = group.operations()[reversed->operation];
    const IrrepMatrix& U = reversed->matrix;
    if (U.dimension() != irrep.dimension) return irrep.label + ": U has its dimension";
    if (U * U.adjoint() != IrrepMatrix::identity(irrep.dimension))
      return irrep.label + ": U is unitary";
    if (reversed->sign != (irrep.reality == Reality::real ? 1 : -1))
      return irrep.label + ": the sign is +1 real, -1 pseudoreal";
    for (std::size_t i = 0; i < little_group.order(); ++i) {
      const Operation& g = D.operation(i);
      const auto image = D.image(a * g * a.inverse());
      if (!image) return "conjugates by the reversal lie in the little group";
      const auto e = exponent(image->phase + little_group.phase(i));
      if (!e ||
          U * irrep.matrices[i].conjugate() != (irrep.matrices[image->position] * U).times_root(*e))
        return irrep.label + ": D(a g a^-1) = U D(g)* U^-1" + pair_text(a, g);
    }
    const auto square = D.image(a * a);
    const auto e = square ? exponent(square->phase) : std::nullopt;
    if (!e) return "the square of the reversal lies in the little group";
    if (U * U.conjugate() !=
        irrep.matrices[square->position].times_root(*e + (reversed->sign > 0 ? 0 : 12)))
      return irrep.label + ": U U* = sign D(a a)";
  }
  return {};
}

}  // namespace

std::string broken_law(const LittleGroup& little_group) {
  const SpaceGroup& group = little_group.group();
  const Wavevector& k = little_group.k();
  std::vector<std::size_t> keeping;
  std::vector<std::size_t> reversing;
  for (std::size_t i = 0; i < group.order(); ++i) {
    const Wavevector image = row_times(k, inverse(group.operations()[i].rotation));
    if (equivalent(group, image, k)) keeping.push_back(i);
    if (equivalent(group, image, -k)) reversing.push_back(i);
  }
  if (!std::ranges::equal(keeping, little_group.operations())) return "operations keep k";
  if (!std::ranges::equal(reversing, little_group.reversing())) return "reversing operations";
  if (little_group.self_conjugate() != equivalent(group, k, -k)) return "self-conjugate k";
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const Wavevector g = row_times(k, group.operations()[keeping[i]].rotation) - k;
    if (g.constant !=
        FractionVector{little_group.g(i)[0], little_group.g(i)[1], little_group.g(i)[2]})
      return "g_R = kR - k";
  }
  const std::span<const Wavevector> star = little_group.star();
  if (star.size() * little_group.order() != group.order()) return "arms times co-group";
  if (star[0] != k) return "the first arm is k";
  for (std::size_t i = 0; i < star.size(); ++i) {
    const IntMatrix& R = group.operations()[little_group.arm_operation(i)].rotation;
    if (!equivalent(group, star[i], row_times(k, inverse(R)))) return "arm = k R^-1";
    for (std::size_t j = 0; j < i; ++j)
      if (equivalent(group, star[i], star[j])) return "arms are distinct";
  }
  const IntMatrix& r = group.operations()[little_group.canonical_operation()].rotation;
  const IntVector& K = little_group.canonical_shift();
  if (row_times(little_group.canonical_k(), inverse(r)) + FractionVector{K[0], K[1], K[2]} != k ||
      !group.in_reciprocal_lattice(FractionVector{K[0], K[1], K[2]}))
    return "k = canonical k R^-1 + K";
  return {};
}

std::string broken_law(const LittleGroup& little_group, std::span<const SmallIrrep> irreps) {
  for (const auto& law :
       {homomorphism_fault, completeness_fault, reality_fault, partner_fault, reversal_fault})
    if (std::string fault = law(little_group, irreps); !fault.empty()) return fault;
  return order_fault(irreps);
}

std::string broken_law(const LittleGroup& of_k, std::span<const SmallIrrep> irreps_of_k,
                       const LittleGroup& of_arm, std::span<const SmallIrrep> irreps_of_arm,
                       const Operation& a) {
  const Representation D(of_k);
  const Representation D_arm(of_arm);
  if (irreps_of_k.size() != irreps_of_arm.size()) return "arms have equally many irreps";
  for (std::size_t i = 0; i < of_arm.order(); ++i) {
    const auto image = D.image(a.inverse() * D_arm.operation(i) * a);
    if (!image) return "little groups of arms are conjugate";
    const auto e = exponent(image->phase - of_arm.phase(i));
    if (!e) return "arms differ by factors of the field";
    for (std::size_t n = 0; n < irreps_of_k.size(); ++n) {
      if (irreps_of_k[n].reality != irreps_of_arm[n].reality ||
          irreps_of_k[n].partner != irreps_of_arm[n].partner)
        return irreps_of_k[n].label + " has one reality and partner on all arms";
      if (to_cyclotomic(irreps_of_arm[n].characters[i]) !=
          Cyclotomic::root(*e) * to_cyclotomic(irreps_of_k[n].characters[image->position]))
        return irreps_of_k[n].label + " is the same irrep on all arms";
    }
  }
  return {};
}

Wavevector point(const Wavevector& k, const FractionVector& values) {
  Wavevector result(k.constant);
  for (std::size_t p = 0; p < 3; ++p) result.constant = result.constant + values[p] * k.along[p];
  return result;
}

Wavevector generic_point(const Wavevector& k) {
  return point(k, {Fraction(17, 61), Fraction(23, 59), Fraction(11, 67)});
}

LittleGroup little_group_of(const SpaceGroup& group, const Wavevector& k) {
  return {std::make_shared<const SymmetryTables>(group), k};
}

SpaceGroup with_origin(const SpaceGroup& group, const FractionVector& s) {
  std::vector<Operation> operations;
  for (const FractionVector& c : group.centrings()) {
    for (Operation operation : group.operations()) {
      operation.translation = operation.translation + times(operation.rotation, s) - s + c;
      operations.push_back(operation);
    }
  }
  return SpaceGroup::from_operations(operations);
}

}  // namespace spinsieve
