#include <algorithm>
#include <array>

#include "input/job_parts.hpp"

namespace spinsieve {

namespace {

constexpr std::array<std::string_view, 12> measurement_keys{
    "sample", "wavelength", "flight", "temperature", "resolution", "intensity",
    "scale",  "zero_shift", "lines",  "absences",    "scanned",    "nuclear_lines"};
constexpr std::array<std::string_view, 6> reserved_keys{"pattern",    "background", "covariance",
                                                        "difference", "polarised",  "domains"};

Geometry geometry_of(const Fields& fields) {
  constexpr std::array<std::string_view, 2> keys{"wavelength", "flight"};
  fields.at_most_one(keys);
  Geometry geometry;
  if (const Node* node = fields.find("wavelength")) {
    geometry.emplace<ConstantWavelength>().wavelength_angstrom =
        number_of(*node, "wavelength", {.above = 0, .at_most = 100, .unit = "Å"});
  } else if (const Node* bank = fields.find("flight")) {
    constexpr std::array<std::string_view, 1> flight_keys{"two_theta"};
    const Fields flight(*bank, "flight", flight_keys);
    geometry.emplace<Flight>().two_theta_degrees = number_of(
        flight.require("two_theta"), "two_theta", {.above = 0, .below = 180, .unit = "degrees"});
  }
  return geometry;
}

Resolution resolution_of(const Node& node, const Geometry& geometry) {
  if (node.kind == NodeKind::text)
    return number_of(node, "resolution", {.above = 0, .at_most = 0.5});
  constexpr std::array<std::string_view, 3> keys{"u", "v", "w"};
  const Fields fields(node, "resolution", keys);
  if (!std::holds_alternative<ConstantWavelength>(geometry))
    throw Error(node.place,
                "resolution {u, v, w} needs the key 'wavelength'; without it, accepted "
                "is the full width Δd/d, such as 0.008");
  constexpr Limits limits{.at_least = -1e4, .at_most = 1e4, .unit = "degrees²"};
  return Caglioti{number_of(fields.require("u"), "u", limits),
                  number_of(fields.require("v"), "v", limits),
                  number_of(fields.require("w"), "w", limits)};
}

void read_scale(const Node& node, Measurement& measurement) {
  const std::string& text = text_of(node, "scale");
  if (text == "free" || text == "nuclear") {
    measurement.scale = text == "free" ? ScaleKind::free : ScaleKind::nuclear;
    return;
  }
  try {
    measurement.scale_value = parse_number(text);
  } catch (const Error&) {
    throw Error(node.place, "scale " + in_quotes(text) +
                                " is unknown; accepted is free, nuclear or a number above 0 "
                                "(intensity per barn)");
  }
  measurement.scale_value = number_of(node, "scale", {.above = 0});
  measurement.scale = ScaleKind::fixed;
}

void read_settings(const Fields& fields, Measurement& measurement) {
  if (const Node* node = fields.find("sample")) {
    constexpr std::array<std::string_view, 2> words{"powder", "single_crystal"};
    measurement.sample =
        choice_of(*node, "sample", words) == 0 ? Sample::powder : Sample::single_crystal;
  }
  measurement.geometry = geometry_of(fields);
  const bool has_wavelength = std::holds_alternative<ConstantWavelength>(measurement.geometry);
  if (const Node* node = fields.find("temperature"))
    measurement.temperature_kelvin =
        number_of(*node, "temperature", {.at_least = 0, .at_most = 1e5, .unit = "K"});
  if (const Node* node = fields.find("resolution"))
    measurement.resolution = resolution_of(*node, measurement.geometry);
  if (const Node* node = fields.find("intensity")) {
    constexpr std::array<std::string_view, 2> words{"lorentz_removed", "integrated"};
    if (choice_of(*node, "intensity", words) == 1) {
      measurement.intensity = IntensityKind::integrated;
      if (std::holds_alternative<std::monostate>(measurement.geometry))
        throw Error(node->place,
                    "intensity 'integrated' needs the key 'wavelength' or 'flight' for "
                    "the Lorentz factor");
    }
  }
  if (const Node* node = fields.find("scale")) read_scale(*node, measurement);
  if (const Node* node = fields.find("zero_shift")) {
    measurement.zero_shift_degrees =
        number_of(*node, "zero_shift", {.at_least = 0, .at_most = 5, .unit = "degrees"});
    if (!has_wavelength && measurement.zero_shift_degrees > 0)
      throw Error(node->place, "zero_shift needs the key 'wavelength'");
  }
}

/// Two entries of a powder list at one place merge into one window, which is rarely meant.
void warn_of_repeated_lines(const Measurement& measurement, Job& job) {
  if (measurement.sample != Sample::powder) return;
  std::vector<const LinePosition*> sorted;
  for (const ObservedLine& line : measurement.lines) sorted.push_back(&line.position);
  std::ranges::stable_sort(sorted, {}, &LinePosition::q);
  for (std::size_t i = 1; i < sorted.size(); ++i)
    if (sorted[i]->q == sorted[i - 1]->q)
      job.warnings.push_back({sorted[i]->place, "a second line at " + sorted[i]->text +
                                                    "; the two share one window and their "
                                                    "intensities add"});
}

Measurement measurement_of(const Node& node, const std::filesystem::path& folder, Job& job) {
  const Fields fields(node, "a measurement", measurement_keys, reserved_keys);
  Measurement measurement;
  measurement.place = node.place;
  read_settings(fields, measurement);
  const Node* resolution = fields.find("resolution");
  const MeasurementContext context{&job, &measurement,
                                   resolution == nullptr ? node.place : resolution->place, folder};
  if (const Node* list = fields.find("lines")) measurement.lines = read_lines(*list, context);
  if (const Node* list = fields.find("absences"))
    measurement.absences = read_absences(*list, context);
  if (const Node* list = fields.find("scanned")) measurement.scanned = read_scanned(*list, context);
  if (const Node* list = fields.find("nuclear_lines"))
    measurement.nuclear_lines = read_nuclear_lines(*list, context);
  if (measurement.scale == ScaleKind::nuclear && !fields.has("nuclear_lines"))
    throw Error(fields.key_place("scale"), "scale 'nuclear' needs the key 'nuclear_lines'");
  if (measurement.scale != ScaleKind::nuclear && fields.has("nuclear_lines"))
    throw Error(fields.key_place("nuclear_lines"),
                "nuclear_lines are used only with 'scale: nuclear'; set it or leave them out");
  warn_of_repeated_lines(measurement, job);
  return measurement;
}

}  // namespace

void read_measurements(const Node& node, const std::filesystem::path& folder, Job& job) {
  if (!job.cell_given) throw Error(node.place, "a measurement needs the key 'cell' of crystal");
  if (node.kind != NodeKind::list) {
    job.measurements.push_back(measurement_of(node, folder, job));
    return;
  }
  for (const Node& item : list_of(node, "measurement"))
    job.measurements.push_back(measurement_of(item, folder, job));
}

}  // namespace spinsieve
