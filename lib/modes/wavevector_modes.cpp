#include "modes/wavevector_modes.hpp"

namespace spinsieve {

WavevectorModes wavevector_modes(std::shared_ptr<const SymmetryTables> tables, const Wavevector& k,
                                 std::span<const Site> sites) {
  WavevectorModes result{LittleGroup(std::move(tables), k), {}, {}};
  result.irreps = small_irreps(result.little_group);
  for (const Site& site : sites)
    result.sites.emplace_back(result.little_group, result.irreps,
                              Orbit(result.little_group.group(), site.position));
  return result;
}

}  // namespace spinsieve
