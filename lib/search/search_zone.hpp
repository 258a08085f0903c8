#pragma once

#include <array>
#include <vector>

#include "search/fixed_subspaces.hpp"
#include "search/reciprocal_space.hpp"

namespace spinsieve {

/// normal · x ≤ bound, in the frame of a SearchZone, Å⁻¹.
struct HalfSpace {
  Vector3 normal{};
  double bound = 0;
};

/// A box of the frame: centre ± half, Å⁻¹. Axes beyond the dimension of the zone have half = 0.
struct Box {
  Vector3 centre{};
  Vector3 half{};
};

/// The part of a fixed subspace that has to be searched, every other point being equivalent to one
/// of it: the Dirichlet domain of a generic point among its images under the holohedry and the
/// reciprocal lattice.
///
/// Points are x in an orthonormal frame: Q = origin + Σ x_i axes[i], Å⁻¹; the first `dimension`
/// axes lie in the subspace. Fewer half-spaces than the domain has only enlarge what is searched.
struct SearchZone {
  std::size_t dimension = 0;
  Vector3 origin{};
  Matrix3 axes{};
  std::vector<HalfSpace> faces;
  Box bounds;         ///< Holds the whole zone.
  double volume = 1;  ///< Of the Dirichlet domain, (Å⁻¹)^dimension; 1 for a point.

  Vector3 to_frame(const Vector3& q) const;    ///< Coordinates of a vector, without the origin.
  Vector3 from_frame(const Vector3& x) const;  ///< Cartesian Q of a point.
  /// True when no point of the box lies in the zone, with an allowance for rounding.
  bool excludes(const Box& box) const;
};

SearchZone search_zone(const FixedSubspace& subspace, const ReciprocalSpace& space);

}  // namespace spinsieve
