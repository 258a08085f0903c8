#pragma once

#include <span>
#include <vector>

#include "modes/moment_field.hpp"
#include "scattering/displacement.hpp"
#include "scattering/form_factor.hpp"
#include "scattering/reflection.hpp"

namespace spinsieve {

/// The magnetic sites of a crystal, checked and ready for structure factors.
class MagneticScatterers {
 public:
  /// Throws Error, at the place of the site, as FormFactor, DebyeWaller, checked_occupancy do.
  MagneticScatterers(const Cell& cell, const SpaceGroup& group,
                     std::span<const MagneticSite> sites);

  const Cell& cell() const noexcept { return cell_; }
  const SpaceGroup& group() const noexcept { return group_; }
  std::size_t size() const noexcept { return sites_.size(); }

  /// Occupancy · f(s) · exp(−B s²) of a site at |Q|, Å⁻¹; what is the same for all its atoms.
  double weight(std::size_t site, double q_length) const;
  /// Sites of one kind share f(s) exp(−B s²); kinds count from 0.
  std::size_t kinds() const noexcept { return representatives_.size(); }
  std::size_t kind(std::size_t site) const { return sites_[site].kind; }
  double kind_weight(std::size_t kind, double q_length) const;  ///< f(s) exp(−B s²).
  double occupancy(std::size_t site) const { return sites_[site].occupancy; }
  bool anisotropic(std::size_t site) const { return !sites_[site].displacement.isotropic(); }
  /// The displacement of one atom of a site.
  DebyeWaller displacement(const FieldAtom& atom) const;

 private:
  struct Scatterer {
    FractionVector position;
    FormFactor form_factor;
    DebyeWaller displacement;
    double occupancy;
    std::size_t kind;
  };
  Cell cell_;
  SpaceGroup group_;
  std::vector<Scatterer> sites_;
  std::vector<std::size_t> representatives_;  ///< A site of each kind.
};

}  // namespace spinsieve
