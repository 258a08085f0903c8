#pragma once

#include <span>
#include <vector>

#include "crystal/space_group.hpp"
#include "search/fixed_subspaces.hpp"
#include "search/reciprocal_space.hpp"
#include "search/wavevector_search.hpp"

namespace spinsieve {

/// The image of k inside its family that a reader would write: short, few minus signs, then the
/// larger components first. A point is returned exactly as the family has it.
LocatedVector presented(const Vector3& k, const FixedSubspace& family,
                        const ReciprocalSpace& space);

/// One vector for each further star of the group (k and −k counted as one star) among the images
/// of k under the holohedry.
std::vector<LocatedVector> tied_stars(const LocatedVector& vector, const SpaceGroup& group,
                                      const ReciprocalSpace& space);

/// The values of the family's free parameters at k.
std::vector<double> free_values(const Wavevector& family, const Vector3& k);

/// The member of the family whose free parameters are the nearest multiples of 1/denominator.
FractionVector nearest_member(const Wavevector& family, const Vector3& k, int denominator);

}  // namespace spinsieve
