#pragma once

#include <optional>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "scattering/scatterer.hpp"

namespace spinsieve {

/// Damping of amplitudes by displacements, checked and ready to evaluate.
class DebyeWaller {
 public:
  DebyeWaller() = default;  ///< No displacement.

  /// Of the first atom of a site. Throws Error (at the place) when B is negative or not finite,
  /// when both B and U are given, when U is not positive semidefinite, and when U breaks the
  /// symmetry of the site by more than 1 % of its largest component.
  DebyeWaller(const Displacement& displacement, const Cell& cell, const SpaceGroup& group,
              const Site& site);

  bool isotropic() const noexcept { return !beta_; }
  double b_iso() const noexcept { return b_iso_; }  ///< Å²; 0 when anisotropic.
  /// exp(−B s²); 1 when anisotropic.
  double isotropic_factor(double s) const;
  /// exp(−h β hᵀ), β_ij = 2π² a*_i a*_j U_ij; 1 when isotropic. hkl need not be integers.
  /// Source: Trueblood et al. (1996), Acta Cryst. A52, 770, Eqs. (2.1.30)-(2.1.32).
  double anisotropic_factor(const Vector3& hkl) const;

  /// For the atom that an operation of rotation R makes from this one: β → R β Rᵀ.
  DebyeWaller moved(const IntMatrix& R) const;

 private:
  double b_iso_ = 0;
  std::optional<Matrix3> beta_;
};

/// Occupancy in 0 < x ≤ 1. Throws Error at the site's place otherwise.
double checked_occupancy(double occupancy, const Site& site);

/// An operation that takes the first position of a site to a position, modulo the lattice.
/// Throws std::logic_error when the position belongs to another orbit.
std::size_t operation_leading_to(const SpaceGroup& group, const FractionVector& first,
                                 const FractionVector& position);

}  // namespace spinsieve
