#include "search/observed_positions.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <variant>

namespace spinsieve {

namespace {

constexpr double tolerance_of_window = 1.0 / 5;

// |Q| = (4π/λ) sin θ, so a shift of 2θ moves it by (2π/λ) cos θ for each radian.
double shift_of(const Measurement& measurement, double q) {
  const auto* geometry = std::get_if<ConstantWavelength>(&measurement.geometry);
  if (geometry == nullptr || measurement.zero_shift_degrees == 0) return 0;
  const double wave_number = 2 * std::numbers::pi / geometry->wavelength_angstrom;
  const double sine = std::min(1.0, q / (2 * wave_number));
  return wave_number * std::sqrt(1 - sine * sine) * std::abs(measurement.zero_shift_degrees) *
         std::numbers::pi / 180;
}

}  // namespace

std::vector<SearchLine> search_lines(std::span<const Measurement> measurements) {
  std::vector<SearchLine> lines;
  for (const Measurement& measurement : measurements)
    for (const ObservedLine& observed : measurement.lines) {
      const LinePosition& position = observed.position;
      if (position.index.has_value()) continue;
      SearchLine line;
      line.q = position.q;
      line.tolerance =
          observed.tolerance_q.value_or((position.q_high - position.q_low) * tolerance_of_window);
      line.shift = shift_of(measurement, position.q);
      line.foreign = observed.foreign;
      line.text = position.text;
      line.place = position.place;
      lines.push_back(std::move(line));
    }
  return lines;
}

std::vector<SearchAbsence> search_absences(std::span<const Measurement> measurements) {
  std::vector<SearchAbsence> absences;
  for (const Measurement& measurement : measurements)
    for (const Absence& absence : measurement.absences)
      if (!absence.position.index.has_value())
        absences.push_back({absence.position.q_low, absence.position.q_high});
  return absences;
}

}  // namespace spinsieve
