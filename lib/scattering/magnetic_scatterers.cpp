#include "scattering/magnetic_scatterers.hpp"

#include <algorithm>
#include <utility>

#include "scattering/constants.hpp"

namespace spinsieve {

MagneticScatterers::MagneticScatterers(const Cell& cell, const SpaceGroup& group,
                                       std::span<const MagneticSite> sites)
    : cell_(cell), group_(group) {
  sites_.reserve(sites.size());
  for (const MagneticSite& site : sites) {
    Scatterer scatterer{site.site.position, FormFactor(site.ion),
                        DebyeWaller(site.displacement, cell, group, site.site),
                        checked_occupancy(site.occupancy, site.site), 0};
    const auto same = std::ranges::find_if(representatives_, [&](std::size_t other) {
      return sites_[other].form_factor.same_function(scatterer.form_factor) &&
             sites_[other].displacement.b_iso() == scatterer.displacement.b_iso();
    });
    scatterer.kind = static_cast<std::size_t>(same - representatives_.begin());
    if (same == representatives_.end()) representatives_.push_back(sites_.size());
    sites_.push_back(std::move(scatterer));
  }
}

double MagneticScatterers::weight(std::size_t site, double q_length) const {
  return occupancy(site) * kind_weight(kind(site), q_length);
}

double MagneticScatterers::kind_weight(std::size_t kind, double q_length) const {
  const Scatterer& scatterer = sites_[representatives_[kind]];
  const double s = s_from_q(q_length);
  return scatterer.form_factor(s) * scatterer.displacement.isotropic_factor(s);
}

DebyeWaller MagneticScatterers::displacement(const FieldAtom& atom) const {
  const Scatterer& scatterer = sites_[atom.site];
  if (scatterer.displacement.isotropic()) return scatterer.displacement;
  const std::size_t operation = operation_leading_to(group_, scatterer.position, atom.position);
  return scatterer.displacement.moved(group_.operations()[operation].rotation);
}

}  // namespace spinsieve
