#pragma once

#include <array>
#include <complex>
#include <optional>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "modes/wavevector_modes.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

/// One atom's entry of a basis vector, in the sign of the report.
struct BasisEntry {
  FractionVector position;
  std::array<std::string, 3> exact;            ///< On the lattice basis.
  std::array<std::complex<double>, 3> moment;  ///< Along the unit vectors when the cell is known.
};

/// Row `row` of a copy on the atoms of its sub-orbit.
std::vector<BasisEntry> basis_entries(const WavevectorModes& modes,
                                      const MagneticRepresentation& representation,
                                      const ModeCopy& copy, std::size_t row,
                                      const std::optional<Cell>& cell, PhaseSign sign);

/// Entry of D({R|t}) of the i-th operation, exact, in the sign of the report. With free parameters
/// in k: that of P(R), D being exp(−2πi k·t) P.
std::string matrix_text(const LittleGroup& little_group, std::size_t operation,
                        const Cyclotomic& entry, PhaseSign sign);
std::complex<double> matrix_value(const LittleGroup& little_group, std::size_t operation,
                                  const Cyclotomic& entry, PhaseSign sign);

}  // namespace spinsieve
