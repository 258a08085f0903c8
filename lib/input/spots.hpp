#pragma once

#include "input/job.hpp"

namespace spinsieve {

/// The smallest reduced position of an orbit: equal for equivalent positions, and only for them.
FractionVector spot_of(const SpaceGroup& group, const FractionVector& position);

/// Throws Error, located, when two sites or two atoms of one orbit are too close. Elements may
/// share one spot when their occupancies sum to at most 1 and only one of them is magnetic.
void require_distinct_spots(const Job& job);

}  // namespace spinsieve
