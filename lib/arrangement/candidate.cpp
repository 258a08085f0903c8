#include "arrangement/candidate.hpp"

#include <algorithm>
#include <numeric>
#include <set>

#include "arrangement/phase_lattice.hpp"

namespace spinsieve {

namespace {

/// Real parameters of a direction: each row of the result is one parameter's amplitudes z without
/// the common phase theta/2, indexed [copy * rows(irrep) + row].
ExactMatrix amplitude_basis(const Direction& direction, const IsotypicSpace& space) {
  const std::size_t v = direction.basis.rows();
  const std::size_t m = space.copies.size();
  const std::size_t d = direction.basis.columns();
  const auto to_amplitudes = [&](const std::vector<Cyclotomic>& y) {
    std::vector<Cyclotomic> z(m * d);
    for (std::size_t c = 0; c < m; ++c)
      for (std::size_t r = 0; r < v; ++r)
        for (std::size_t b = 0; b < d; ++b) z[c * d + b] += y[c * v + r] * direction.basis(r, b);
    return z;
  };
  std::vector<std::vector<Cyclotomic>> parameters;
  if (!direction.antilinear) {
    for (std::size_t i = 0; i < m * v; ++i)
      for (const Cyclotomic& unit : {Cyclotomic(1), Cyclotomic::root(6)}) {
        std::vector<Cyclotomic> y(m * v);
        y[i] = unit;
        parameters.push_back(to_amplitudes(y));
      }
  } else {
    // y = C y* with C = M ⊗ B: over real and imaginary parts, interleaved.
    const ExactMatrix image = direction.basis.conjugate() * direction.antilinear->transpose();
    ExactMatrix C(m * v, m * v);
    for (std::size_t r = 0; r < v; ++r) {
      std::size_t pivot = 0;
      while (direction.basis(r, pivot).is_zero()) ++pivot;
      for (std::size_t s = 0; s < v; ++s)
        for (std::size_t c = 0; c < m; ++c)
          for (std::size_t e = 0; e < m; ++e)
            C(c * v + r, e * v + s) = image(s, pivot) * space.reversal_copies(c, e);
    }
    ExactMatrix system(2 * m * v, 2 * m * v);
    for (std::size_t i = 0; i < m * v; ++i) {
      for (std::size_t j = 0; j < m * v; ++j) {
        const Cyclotomic real = C(i, j).real_part();
        const Cyclotomic imaginary = C(i, j).imaginary_part();
        system(2 * i, 2 * j) = -real;
        system(2 * i, 2 * j + 1) = -imaginary;
        system(2 * i + 1, 2 * j) = -imaginary;
        system(2 * i + 1, 2 * j + 1) = real;
      }
      system(2 * i, 2 * i) += 1;
      system(2 * i + 1, 2 * i + 1) += 1;
    }
    const ExactMatrix kept = null_space(system);
    for (std::size_t p = 0; p < kept.rows(); ++p) {
      std::vector<Cyclotomic> y(m * v);
      for (std::size_t i = 0; i < m * v; ++i)
        y[i] = kept(p, 2 * i) + Cyclotomic::root(6) * kept(p, 2 * i + 1);
      parameters.push_back(to_amplitudes(y));
    }
  }
  ExactMatrix result(parameters.size(), m * d);
  for (std::size_t p = 0; p < parameters.size(); ++p)
    for (std::size_t i = 0; i < m * d; ++i) result(p, i) = parameters[p][i];
  return result;
}

/// Adds e(phase) · z · entry to a component, joining terms of equal phase.
void add_term(ExactComponent& component, Phase phase, const Cyclotomic& z,
              const std::array<Cyclotomic, 3>& entry) {
  auto term = std::ranges::find_if(component, [&](const ExactTerm& t) { return t.phase == phase; });
  if (term == component.end()) {
    component.push_back({phase, {}});
    term = component.end() - 1;
  }
  for (std::size_t i = 0; i < 3; ++i) term->moment[i] += z * entry[i];
}

ExactArm exact_arm(const WavevectorModes& modes, const IsotypicSpace& space,
                   const Direction& direction) {
  const FractionVector& k = modes.little_group.k().constant;
  const ExactMatrix amplitudes = amplitude_basis(direction, space);
  const std::size_t d = direction.basis.columns();
  ExactArm arm;
  arm.k = k;
  arm.self_conjugate = modes.little_group.self_conjugate();
  std::vector<std::size_t> first_atom;
  for (std::size_t s = 0; s < modes.sites.size(); ++s) {
    first_atom.push_back(arm.atoms.size());
    for (const OrbitAtom& atom : modes.sites[s].orbit().atoms())
      arm.atoms.push_back({s, atom.position});
  }
  const Phase common(direction.theta.turns() * Fraction(1, 2));
  arm.components.resize(amplitudes.rows() * arm.atoms.size());
  for (std::size_t p = 0; p < amplitudes.rows(); ++p) {
    for (std::size_t c = 0; c < space.copies.size(); ++c) {
      const IsotypicSpace::Copy& member = space.copies[c];
      const MagneticRepresentation& site = modes.sites[member.site];
      const ModeCopy& copy = site.copies()[member.copy];
      const SubOrbit& suborbit = site.suborbits()[copy.suborbit];
      for (std::size_t b = 0; b < d; ++b) {
        const Cyclotomic& z = amplitudes(p, c * d + b);
        if (z.is_zero()) continue;
        for (std::size_t a = 0; a < copy.atoms; ++a) {
          const Phase phase = common + member.phase + Phase(dot(k, suborbit.paths[a]));
          const std::size_t j = first_atom[member.site] + suborbit.atoms[a];
          add_term(arm.components[p * arm.atoms.size() + j], phase, z, copy.component(b, a));
        }
      }
    }
  }
  return arm;
}

/// The primed and unprimed operations of a commensurate direction, one per coset of the kernel.
std::vector<PrimedOperation> symmetry_operations(const WavevectorModes& modes,
                                                 const Direction& direction,
                                                 const PhaseLattice& phases) {
  std::vector<PrimedOperation> result;
  for (const Stabilizer& s : direction.stabilizers) {
    for (const bool primed : {false, true}) {
      const auto T = phases.translation(primed ? s.phase + Phase(1, 2) : s.phase);
      if (!T) continue;
      Operation operation = modes.little_group.group().operations()[s.operation];
      operation.translation = operation.translation + *T;
      result.push_back({operation, primed});
    }
  }
  return result;
}

DomainCount count_domains(const WavevectorModes& modes, const Direction& direction,
                          const PhaseSteps& steps, const PhaseLattice& phases) {
  const LittleGroup& little_group = modes.little_group;
  DomainCount count;
  const bool pairs = little_group.minus_k_in_star() && !little_group.self_conjugate();
  count.k = little_group.star().size() / (pairs ? 2 : 1);
  count.orientation = little_group.order() * (pairs ? 2 : 1) / direction.stabilizers.size();
  if (steps.continuous) return count;
  // Pure translations and reversal that keep the arrangement: phases 0 and 1/2 of the identity.
  std::size_t kept = 1;
  if (phases.translation(Phase(1, 2))) ++kept;
  count.translation_reversal = 2 * static_cast<std::size_t>(phases.order()) / kept;
  return count;
}

}  // namespace

bool is_incommensurate(const Wavevector& k, Modulation modulation) {
  if (modulation != Modulation::automatic) return modulation == Modulation::incommensurate;
  std::int64_t denominator = 1;
  for (const Fraction f : k.constant) denominator = std::lcm(denominator, f.denominator());
  return k.is_symbolic() || denominator > commensurate_denominator;
}

std::string parameter_name(std::size_t index) {
  constexpr std::string_view letters = "uvwpqrstxyzabcdfgh";
  const std::string letter(1, letters[index % letters.size()]);
  const std::size_t round = index / letters.size();
  return round == 0 ? letter : letter + std::to_string(round + 1);
}

std::string direction_letter(std::size_t index) {
  std::string text;
  for (++index; index > 0; index = (index - 1) / 26)
    text.insert(text.begin(), static_cast<char>('a' + (index - 1) % 26));
  return text;
}

std::vector<Candidate> enumerate_candidates(std::span<const WavevectorModes> wavevectors,
                                            const EnumerationOptions& options) {
  std::vector<Candidate> result;
  for (std::size_t w = 0; w < wavevectors.size(); ++w) {
    const WavevectorModes& modes = wavevectors[w];
    const LittleGroup& little_group = modes.little_group;
    if (little_group.k().is_symbolic())
      throw Error("the wavevector " + to_string(little_group.k()) +
                  " has free parameters; arrangements need numbers, such as 1/4 for u");
    const bool incommensurate =
        !little_group.self_conjugate() && is_incommensurate(little_group.k(), options.modulation);
    const PhaseSteps steps = phase_steps(little_group, incommensurate);
    const PhaseLattice phases(little_group.tables(), little_group.k().constant);
    const std::string prefix =
        wavevectors.size() > 1 ? "k" + std::to_string(w + 1) + ":" : std::string();
    for (std::size_t n = 0; n < modes.irreps.size(); ++n) {
      const SmallIrrep& irrep = modes.irreps[n];
      if (irrep.partner && *irrep.partner < n) continue;
      const IsotypicSpace space = isotypic_space(little_group, modes.irreps, modes.sites, n);
      if (space.copies.empty()) continue;
      const std::vector<Direction> list = directions(little_group, irrep, space, steps);
      for (std::size_t i = 0; i < list.size(); ++i) {
        Candidate candidate;
        candidate.id = prefix + std::to_string(n + 1) + direction_letter(i);
        candidate.maximal = list[i].maximal;
        candidate.field.arms.push_back(exact_arm(modes, space, list[i]));
        const ExactArm& arm = candidate.field.arms.back();
        candidate.field.parameters = arm.components.size() / arm.atoms.size();
        for (std::size_t p = 0; p < candidate.field.parameters; ++p)
          candidate.parameters.push_back(parameter_name(p));
        candidate.domains = count_domains(modes, list[i], steps, phases);
        if (incommensurate) {
          for (const Stabilizer& s : list[i].stabilizers)
            candidate.superspace.push_back(
                {little_group.group().operations()[s.operation], false, s.reversing, s.phase});
        } else {
          candidate.group = MagneticGroup::from_operations(
              symmetry_operations(modes, list[i], phases), phases.kernel().basis());
        }
        candidate.parts.push_back({w, n, irrep.partner, list[i]});
        result.push_back(std::move(candidate));
      }
    }
  }
  if (options.directions == DirectionFilter::maximal)
    std::erase_if(result, [](const Candidate& c) { return !c.maximal; });
  return result;
}

}  // namespace spinsieve
