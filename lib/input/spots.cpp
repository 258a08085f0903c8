#include "input/spots.hpp"

#include <algorithm>
#include <vector>

namespace spinsieve {

namespace {

/// A site seen as an occupant of a spot.
struct Occupant {
  const Site* site;
  double occupancy;
  bool magnetic;
  FractionVector spot;
};

/// Two elements may share a spot when their occupancies leave room for both.
void require_room(const Occupant& a, const Occupant& b, double total) {
  const std::string pair = "sites " + a.site->label + " and " + b.site->label;
  if (a.magnetic && b.magnetic)
    throw Error(b.site->place,
                pair + " stand on the same spot; accepted is one magnetic site for a spot");
  if (total > 1 + 1e-6)
    throw Error(b.site->place, pair +
                                   " stand on the same spot; accepted are sites apart, or "
                                   "occupancies that sum to at most 1");
}

}  // namespace

FractionVector spot_of(const SpaceGroup& group, const FractionVector& position) {
  FractionVector smallest = group.lattice_reduced(position);
  for (const Operation& operation : group.operations())
    smallest = std::min(smallest, group.lattice_reduced(operation.apply(position)));
  return smallest;
}

void require_distinct_spots(const Job& job) {
  std::vector<Occupant> occupants;
  for (const MagneticSite& m : job.magnetic_sites)
    occupants.push_back({&m.site, m.occupancy, true, spot_of(job.group, m.site.position)});
  for (const NuclearSite& n : job.other_sites)
    occupants.push_back({&n.site, n.occupancy, false, spot_of(job.group, n.site.position)});
  std::vector<Site> apart;  // One site for each spot.
  for (std::size_t i = 0; i < occupants.size(); ++i) {
    const Occupant* first = nullptr;
    double total = occupants[i].occupancy;
    for (std::size_t j = 0; j < i; ++j) {
      if (occupants[j].spot != occupants[i].spot) continue;
      if (first == nullptr || occupants[j].magnetic) first = &occupants[j];
      total += occupants[j].occupancy;
    }
    if (first == nullptr)
      apart.push_back(*occupants[i].site);
    else
      require_room(*first, occupants[i], total);
  }
  require_distinct_sites(job.group, job.cell, apart);
}

}  // namespace spinsieve
