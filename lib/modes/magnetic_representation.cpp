#include "modes/magnetic_representation.hpp"

#include <algorithm>
#include <stdexcept>

namespace spinsieve {

namespace {

/// The matrix by which a rotation acts on the quantity of one atom.
ExactMatrix action(AtomQuantity quantity, const IntMatrix& R) {
  if (quantity == AtomQuantity::scalar) return ExactMatrix::identity(1);
  const int sign = quantity == AtomQuantity::axial ? determinant(R) : 1;
  ExactMatrix result(3, 3);
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) result(i, j) = sign * R[i][j];
  return result;
}

/// exp(−2πi g_R·r) of an operation that fixes an atom at r modulo the lattice.
Cyclotomic site_factor(const LittleGroup& little_group, std::size_t i, const FractionVector& r) {
  const IntVector& g = little_group.g(i);
  Fraction turns;
  for (std::size_t c = 0; c < 3; ++c) turns -= Fraction(g[c]) * r[c];
  return Cyclotomic::root(Phase(turns));
}

FractionVector in_table_origin(const LittleGroup& little_group, const FractionVector& position) {
  return position - little_group.group().origin_shift();
}

/// All V with action(R) V exp(−2πi g_R·r) = V P(R), as rows of length columns(V)·rows(V), the
/// entries of the first column (irrep row) leading.
ExactMatrix base_solutions(const LittleGroup& little_group, const SmallIrrep& irrep,
                           AtomQuantity quantity, const FractionVector& r,
                           std::span<const std::size_t> fixing) {
  const std::size_t size = quantity == AtomQuantity::scalar ? 1 : 3;
  const auto dimension = static_cast<std::size_t>(irrep.dimension);
  const std::size_t unknowns = size * dimension;
  ExactMatrix solutions = ExactMatrix::identity(unknowns);
  for (const std::size_t i : fixing) {
    const IntMatrix& R = little_group.group().operations()[little_group.operations()[i]].rotation;
    const ExactMatrix A = site_factor(little_group, i, r) * action(quantity, R);
    const ExactMatrix P = irrep.matrices[i].to_exact();
    // Condition rows: (A V − V P)(m, b) = 0.
    ExactMatrix condition(unknowns, unknowns);
    for (std::size_t b = 0; b < dimension; ++b) {
      for (std::size_t m = 0; m < size; ++m) {
        for (std::size_t n = 0; n < size; ++n) condition(b * size + m, b * size + n) += A(m, n);
        for (std::size_t c = 0; c < dimension; ++c)
          condition(b * size + m, c * size + m) -= P(c, b);
      }
    }
    // Within the present solutions x = y · solutions: condition · solutionsᵀ · yᵀ = 0.
    const ExactMatrix kept = null_space(condition * solutions.transpose());
    solutions = row_echelon(kept * solutions);
    if (solutions.rows() == 0) break;
  }
  return solutions;
}

}  // namespace

std::vector<SubOrbit> suborbits(const LittleGroup& little_group, const Orbit& orbit) {
  const SpaceGroup& group = little_group.group();
  std::vector<SubOrbit> result;
  std::vector<bool> taken(orbit.atoms().size());
  for (std::size_t base = 0; base < taken.size(); ++base) {
    if (taken[base]) continue;
    SubOrbit suborbit;
    const FractionVector first = in_table_origin(little_group, orbit.atoms()[base].position);
    for (std::size_t i = 0; i < little_group.order(); ++i) {
      const std::size_t g = little_group.operations()[i];
      const std::size_t atom = orbit.image(group, g, base).atom;
      if (taken[atom]) continue;
      taken[atom] = true;
      suborbit.atoms.push_back(atom);
      suborbit.operations.push_back(i);
      suborbit.paths.push_back(in_table_origin(little_group, orbit.atoms()[atom].position) -
                               times(group.operations()[g].rotation, first));
    }
    result.push_back(std::move(suborbit));
  }
  return result;
}

MagneticRepresentation::MagneticRepresentation(const LittleGroup& little_group,
                                               const std::vector<SmallIrrep>& irreps, Orbit orbit,
                                               AtomQuantity quantity)
    : orbit_(std::move(orbit)), suborbits_(spinsieve::suborbits(little_group, orbit_)) {
  const SpaceGroup& group = little_group.group();
  const std::size_t size = quantity == AtomQuantity::scalar ? 1 : 3;
  for (std::size_t n = 0; n < irreps.size(); ++n) {
    const auto dimension = static_cast<std::size_t>(irreps[n].dimension);
    for (std::size_t s = 0; s < suborbits_.size(); ++s) {
      const SubOrbit& suborbit = suborbits_[s];
      const std::size_t base = suborbit.atoms[0];
      std::vector<std::size_t> fixing;
      for (std::size_t i = 1; i < little_group.order(); ++i)
        if (orbit_.image(group, little_group.operations()[i], base).atom == base)
          fixing.push_back(i);
      const ExactMatrix solutions =
          base_solutions(little_group, irreps[n], quantity,
                         in_table_origin(little_group, orbit_.atoms()[base].position), fixing);
      for (std::size_t copy = 0; copy < solutions.rows(); ++copy) {
        ModeCopy mode;
        mode.irrep = n;
        mode.suborbit = s;
        mode.atoms = suborbit.atoms.size();
        mode.components.resize(dimension * mode.atoms);
        ExactMatrix V(size, dimension);
        for (std::size_t b = 0; b < dimension; ++b)
          for (std::size_t m = 0; m < size; ++m) V(m, b) = solutions(copy, b * size + m);
        for (std::size_t a = 0; a < mode.atoms; ++a) {
          const std::size_t i = suborbit.operations[a];
          const IntMatrix& R = group.operations()[little_group.operations()[i]].rotation;
          const ExactMatrix spread =
              action(quantity, R) * V * irreps[n].matrices[i].adjoint().to_exact();
          for (std::size_t b = 0; b < dimension; ++b)
            for (std::size_t m = 0; m < size; ++m)
              mode.components[b * mode.atoms + a][m] = spread(m, b);
        }
        copies_.push_back(std::move(mode));
      }
    }
  }
}

std::size_t MagneticRepresentation::multiplicity(std::size_t irrep) const {
  return static_cast<std::size_t>(
      std::ranges::count_if(copies_, [&](const ModeCopy& c) { return c.irrep == irrep; }));
}

std::size_t MagneticRepresentation::multiplicity(std::size_t irrep, std::size_t suborbit) const {
  return static_cast<std::size_t>(std::ranges::count_if(
      copies_, [&](const ModeCopy& c) { return c.irrep == irrep && c.suborbit == suborbit; }));
}

std::vector<std::size_t> multiplicities(const LittleGroup& little_group,
                                        const std::vector<SmallIrrep>& irreps, const Orbit& orbit,
                                        AtomQuantity quantity) {
  const SpaceGroup& group = little_group.group();
  // χ(R) exp(2πi k·t) for every operation, so that only g_R·r enters.
  std::vector<Cyclotomic> character(little_group.order());
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const std::size_t g = little_group.operations()[i];
    Cyclotomic fixed;
    for (std::size_t atom = 0; atom < orbit.atoms().size(); ++atom)
      if (orbit.image(group, g, atom).atom == atom)
        fixed += site_factor(little_group, i,
                             in_table_origin(little_group, orbit.atoms()[atom].position));
    character[i] = action(quantity, group.operations()[g].rotation).trace() * fixed;
  }
  std::vector<std::size_t> result;
  for (const SmallIrrep& irrep : irreps) {
    Cyclotomic sum;
    for (std::size_t i = 0; i < little_group.order(); ++i)
      sum += to_cyclotomic(irrep.characters[i]).conjugate() * character[i];
    const Cyclotomic mean =
        sum * Cyclotomic(Fraction(1, static_cast<std::int64_t>(little_group.order())));
    if (!mean.is_rational() || !mean.rational().is_integer() || mean.rational() < Fraction(0))
      throw std::logic_error("a multiplicity that is not a whole number");
    result.push_back(static_cast<std::size_t>(mean.rational().numerator()));
  }
  return result;
}

std::vector<PrintedComponent> printed_row(const LittleGroup& little_group, const SubOrbit& suborbit,
                                          const ModeCopy& copy, std::size_t row) {
  // The scale that makes the first non-zero entry of row 1 equal to 1.
  std::size_t reference = 0;
  std::optional<Cyclotomic> scale;
  for (std::size_t atom = 0; atom < copy.atoms && !scale; ++atom)
    for (std::size_t m = 0; m < 3 && !scale; ++m)
      if (!copy.component(0, atom)[m].is_zero()) {
        reference = atom;
        scale = copy.component(0, atom)[m].inverse();
      }
  std::vector<PrintedComponent> result;
  for (std::size_t atom = 0; atom < copy.atoms; ++atom) {
    const FractionVector path = suborbit.paths[atom] - suborbit.paths[reference];
    Wavevector turns;  // Only the first component: k·path, with free parameters.
    turns.constant[0] = dot(little_group.k().constant, path).modulo_one();
    for (std::size_t p = 0; p < 3; ++p) turns.along[p][0] = dot(little_group.k().along[p], path);
    const Phase constant(turns.constant[0]);
    const bool exact = !turns.is_symbolic() && Cyclotomic::holds(constant);
    PrintedComponent printed;
    for (std::size_t m = 0; m < 3; ++m) {
      Cyclotomic entry = copy.component(row, atom)[m] * *scale;
      printed.value[m] = entry.to_complex() * constant.factor();
      if (exact) entry = entry * Cyclotomic::root(constant);
      printed.exact[m] = to_string(entry);
      if (exact || entry.is_zero()) continue;
      // A root of unity joins the phase; anything else stands before it.
      if (const std::optional<Phase> own = entry.phase()) {
        Wavevector joined = turns;
        joined.constant[0] = (turns.constant[0] + own->turns()).modulo_one();
        printed.exact[m] = "e(" + component_texts(joined)[0] + ")";
      } else {
        const std::string factor = to_string(entry);
        const bool sum =
            factor.find('+') != std::string::npos || factor.find('-', 1) != std::string::npos;
        printed.exact[m] =
            (sum ? "(" + factor + ")" : factor) + "*e(" + component_texts(turns)[0] + ")";
      }
    }
    result.push_back(std::move(printed));
  }
  return result;
}

}  // namespace spinsieve
