#include "scattering/magnetic_scatterers.hpp"

#include "scattering/constants.hpp"

namespace spinsieve {

MagneticScatterers::MagneticScatterers(const Cell& cell, const SpaceGroup& group,
                                       std::span<const MagneticSite> sites)
    : cell_(cell), group_(group) {
  sites_.reserve(sites.size());
  for (const MagneticSite& site : sites) {
    sites_.push_back({site.site.position, FormFactor(site.ion),
                      DebyeWaller(site.displacement, cell, group, site.site),
                      checked_occupancy(site.occupancy, site.site)});
  }
}

double MagneticScatterers::weight(std::size_t site, double q_length) const {
  const Scatterer& scatterer = sites_[site];
  const double s = s_from_q(q_length);
  return scatterer.occupancy * scatterer.form_factor(s) *
         scatterer.displacement.isotropic_factor(s);
}

DebyeWaller MagneticScatterers::displacement(const FieldAtom& atom) const {
  const Scatterer& scatterer = sites_[atom.site];
  if (scatterer.displacement.isotropic()) return scatterer.displacement;
  const std::size_t operation = operation_leading_to(group_, scatterer.position, atom.position);
  return scatterer.displacement.moved(group_.operations()[operation].rotation);
}

}  // namespace spinsieve
