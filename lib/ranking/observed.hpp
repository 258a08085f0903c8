#pragma once

#include <span>
#include <vector>

#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"
#include "scattering/observation.hpp"

namespace spinsieve {

/// The points of a job's measurements in one list: those of measurement 0 first.
///
/// plans and scales: one per measurement; a scale takes the place of the measurement's scale group.
/// Throws Error where the numbers cannot be used.
FitData observed_data(std::span<const ObservationPlan> plans, std::vector<ScaleGroup> scales);

/// The forms of one candidate for observed_data(plans, …).
///
/// points: data_points(plan, …) of the candidate for every plan, in the same order.
FormFamily observed_forms(std::size_t parameters, std::span<const std::vector<DataPoint>> points);

}  // namespace spinsieve
