#pragma once

#include <memory>
#include <vector>

#include "modes/isotypic_space.hpp"

namespace spinsieve {

/// Everything symmetry says about one wavevector and a list of magnetic sites.
struct WavevectorModes {
  LittleGroup little_group;
  std::vector<SmallIrrep> irreps;
  std::vector<MagneticRepresentation> sites;  ///< Axial, one per magnetic site.
};

WavevectorModes wavevector_modes(std::shared_ptr<const SymmetryTables> tables, const Wavevector& k,
                                 std::span<const Site> sites);

}  // namespace spinsieve
