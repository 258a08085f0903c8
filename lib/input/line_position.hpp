#pragma once

#include <array>
#include <optional>

#include "input/fields.hpp"
#include "input/job_parts.hpp"

namespace spinsieve {

/// The units in which a position may be given, hkl apart.
enum class PositionUnit { q, d, two_theta };

/// Which reflections a list holds: a nuclear one has no k_sign.
enum class ListKind { magnetic, nuclear };

/// |Q| in Å⁻¹ of a value in its unit (Å⁻¹, Å, degrees). REQUIRES: a positive value; for two_theta a
/// wavelength in Å and less than 180°.
double q_of(PositionUnit unit, double value, double wavelength_angstrom);

/// Reads q, d, two_theta or hkl with k_sign and k, and width where it is accepted, into the
/// position and the window it owns. Throws Error, located, on more or less than one position, on
/// one that the wavelength does not reach, on a window that is wider than its position, and on hkl
/// whose Q is zero or not known.
LinePosition read_position(const Fields& fields, const MeasurementContext& context,
                           ListKind kind = ListKind::magnetic);

/// The key `tolerance` as a tolerance on Q in Å⁻¹, in the unit of the position.
std::optional<double> read_tolerance(const Fields& fields, const MeasurementContext& context);

/// The two ends of a range {q|d|two_theta: [from, to]} as Q in rising order.
std::array<double, 2> read_range(const Fields& fields, const MeasurementContext& context);

}  // namespace spinsieve
