#include "modes/isotypic_space.hpp"

#include <map>
#include <stdexcept>

namespace spinsieve {

namespace {

/// A 3 × d block of a copy on one atom of its sub-orbit.
ExactMatrix block(const ModeCopy& copy, std::size_t atom, std::size_t dimension) {
  ExactMatrix result(3, dimension);
  for (std::size_t b = 0; b < dimension; ++b)
    for (std::size_t m = 0; m < 3; ++m) result(m, b) = copy.component(b, atom)[m];
  return result;
}

/// Where the reversing operation sends a sub-orbit, seen from the base atom of the target.
struct SuborbitImage {
  std::size_t source_atom = 0;  ///< Position in the source sub-orbit of the atom sent to the base.
  Phase phase;                  ///< −k·(path of that atom) − k·(lattice vector).
};

SuborbitImage image_at_base(const LittleGroup& little_group, const MagneticRepresentation& site,
                            std::size_t operation, std::size_t source, std::size_t target,
                            bool& found) {
  const SubOrbit& from = site.suborbits()[source];
  const std::size_t base = site.suborbits()[target].atoms[0];
  for (std::size_t i = 0; i < from.atoms.size(); ++i) {
    const Orbit::Image image = site.orbit().image(little_group.group(), operation, from.atoms[i]);
    if (image.atom != base) continue;
    found = true;
    const FractionVector& k = little_group.k().constant;
    return {i, Phase(-dot(k, from.paths[i]) - dot(k, image.shift))};
  }
  found = false;
  return {};
}

/// Coefficients of matrix (3 × d) on the echelon copies of one sub-orbit at its base atom.
std::vector<Cyclotomic> expanded(const MagneticRepresentation& site,
                                 const std::vector<std::size_t>& copies, ExactMatrix rest,
                                 std::size_t dimension) {
  std::vector<Cyclotomic> result;
  for (const std::size_t c : copies) {
    const ExactMatrix own = block(site.copies()[c], 0, dimension);
    // The first non-zero entry of an echelon copy is 1, and 0 in all other copies.
    Cyclotomic factor;
    bool done = false;
    for (std::size_t b = 0; b < dimension && !done; ++b)
      for (std::size_t m = 0; m < 3 && !done; ++m)
        if (!own(m, b).is_zero()) {
          factor = rest(m, b);
          done = true;
        }
    rest = rest - factor * own;
    result.push_back(factor);
  }
  if (!rest.is_zero()) throw std::logic_error("a reversed mode outside its isotypic space");
  return result;
}

}  // namespace

IsotypicSpace isotypic_space(const LittleGroup& little_group, const std::vector<SmallIrrep>& irreps,
                             std::span<const MagneticRepresentation> sites, std::size_t irrep) {
  IsotypicSpace space;
  space.irrep = irrep;
  // Copies of one sub-orbit, as positions in space.copies.
  std::map<std::pair<std::size_t, std::size_t>, std::vector<std::size_t>> of_suborbit;
  for (std::size_t s = 0; s < sites.size(); ++s)
    for (std::size_t c = 0; c < sites[s].copies().size(); ++c)
      if (sites[s].copies()[c].irrep == irrep) {
        of_suborbit[{s, sites[s].copies()[c].suborbit}].push_back(space.copies.size());
        space.copies.push_back({s, c, Phase()});
      }
  space.reversal = spinsieve::reversal(little_group, irreps[irrep]);
  const std::size_t m = space.copies.size();
  if (!space.reversal || m == 0) return space;

  const std::size_t a = space.reversal->operation;
  const IntMatrix& A = little_group.group().operations()[a].rotation;
  ExactMatrix axial(3, 3);
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) axial(i, j) = determinant(A) * A[i][j];
  const ExactMatrix U_inverse = space.reversal->matrix.adjoint().to_exact();
  const auto dimension = static_cast<std::size_t>(irreps[irrep].dimension);

  // Sub-orbit phases: a sub-orbit kept by a takes half of its phase, of two exchanged ones the
  // second takes it all, the first none.
  std::map<std::pair<std::size_t, std::size_t>, Phase> reference;
  std::map<std::pair<std::size_t, std::size_t>, std::pair<std::size_t, SuborbitImage>> image_of;
  for (const auto& [key, members] : of_suborbit) {
    const auto [s, source] = key;
    for (std::size_t target = 0; target < sites[s].suborbits().size(); ++target) {
      bool found = false;
      const SuborbitImage image = image_at_base(little_group, sites[s], a, source, target, found);
      if (!found) continue;
      image_of[key] = {target, image};
      if (target == source)
        reference[key] = Phase(image.phase.turns() * Fraction(1, 2));
      else if (target > source)
        reference[{s, target}] = image.phase;
    }
  }

  ExactMatrix M(m, m);
  for (const auto& [key, members] : of_suborbit) {
    const auto [s, source] = key;
    const auto& [target, image] = image_of.at(key);
    const std::vector<std::size_t>& targets = of_suborbit.at({s, target});
    std::vector<std::size_t> target_copies;
    for (const std::size_t t : targets) target_copies.push_back(space.copies[t].copy);
    const Phase residual = image.phase - reference[key] - reference[{s, target}];
    const Cyclotomic factor = Cyclotomic::root(residual);
    for (const std::size_t c : members) {
      const ExactMatrix moved =
          axial *
          block(sites[s].copies()[space.copies[c].copy], image.source_atom, dimension).conjugate() *
          U_inverse;
      const std::vector<Cyclotomic> column = expanded(sites[s], target_copies, moved, dimension);
      for (std::size_t t = 0; t < targets.size(); ++t) M(targets[t], c) = factor * column[t];
      space.copies[c].phase = reference[key];
    }
  }

  // A copy sent to a multiple e(x) of itself alone takes half of x.
  for (std::size_t c = 0; c < m; ++c) {
    bool alone = M(c, c).phase().has_value();
    for (std::size_t other = 0; other < m && alone; ++other)
      if (other != c) alone = M(other, c).is_zero() && M(c, other).is_zero();
    if (!alone) continue;
    space.copies[c].phase =
        space.copies[c].phase + Phase(M(c, c).phase()->turns() * Fraction(1, 2));
    M(c, c) = 1;
  }
  const ExactMatrix square = M * M.conjugate();
  space.reversal_square = square(0, 0);
  if (!(square == space.reversal_square * ExactMatrix::identity(m)))
    throw std::logic_error("a reversal whose square mixes copies");
  space.reversal_copies = M;
  return space;
}

}  // namespace spinsieve
