#include "report/modes_parts.hpp"

#include "report/exact_text.hpp"

namespace spinsieve {
namespace {

/// Factors from lattice-basis entries to entries along the unit vectors, relative to the first
/// non-zero entry of the copy, which stays as it is.
std::array<double, 3> unit_vector_factors(const ModeCopy& copy, const std::optional<Cell>& cell) {
  if (!cell) return {1, 1, 1};
  const std::array<double, 3> lengths{cell->a(), cell->b(), cell->c()};
  for (const auto& component : copy.components)
    for (std::size_t axis = 0; axis < 3; ++axis)
      if (!component[axis].is_zero())
        return {lengths[0] / lengths[axis], lengths[1] / lengths[axis], lengths[2] / lengths[axis]};
  return {1, 1, 1};
}

}  // namespace

std::vector<BasisEntry> basis_entries(const WavevectorModes& modes,
                                      const MagneticRepresentation& representation,
                                      const ModeCopy& copy, std::size_t row,
                                      const std::optional<Cell>& cell, PhaseSign sign) {
  const SubOrbit& suborbit = representation.suborbits()[copy.suborbit];
  const std::array<double, 3> factors = unit_vector_factors(copy, cell);
  const std::vector<PrintedComponent> printed =
      printed_row(modes.little_group, suborbit, copy, row);
  std::vector<BasisEntry> entries;
  for (std::size_t i = 0; i < suborbit.atoms.size(); ++i) {
    BasisEntry entry;
    entry.position = representation.orbit().atoms()[suborbit.atoms[i]].position;
    for (std::size_t axis = 0; axis < 3; ++axis) {
      entry.exact[axis] = in_sign(printed[i].exact[axis], sign);
      entry.moment[axis] = factors[axis] * in_sign(printed[i].value[axis], sign);
    }
    entries.push_back(std::move(entry));
  }
  return entries;
}

std::string matrix_text(const LittleGroup& little_group, std::size_t operation,
                        const Cyclotomic& entry, PhaseSign sign) {
  const Phase phase = little_group.k().is_symbolic() ? Phase() : little_group.phase(operation);
  return sign == PhaseSign::plus ? exact_text(phase, entry) : exact_text(-phase, entry.conjugate());
}

std::complex<double> matrix_value(const LittleGroup& little_group, std::size_t operation,
                                  const Cyclotomic& entry, PhaseSign sign) {
  const Phase phase = little_group.k().is_symbolic() ? Phase() : little_group.phase(operation);
  return in_sign(phase.factor() * entry.to_complex(), sign);
}

}  // namespace spinsieve
