#include <algorithm>
#include <array>

#include "input/csv.hpp"
#include "input/job_parts.hpp"
#include "input/line_position.hpp"

namespace spinsieve {

namespace {

constexpr std::array<std::string_view, 12> line_keys{"q",      "d",       "two_theta", "hkl",
                                                     "k_sign", "k",       "intensity", "sigma",
                                                     "above",  "foreign", "width",     "tolerance"};
constexpr std::array<std::string_view, 8> absence_keys{"q",      "d", "two_theta", "hkl",
                                                       "k_sign", "k", "below",     "width"};
constexpr std::array<std::string_view, 4> scanned_keys{"q", "d", "two_theta", "below"};
constexpr std::array<std::string_view, 7> nuclear_keys{"q",         "d",     "two_theta", "hkl",
                                                       "intensity", "sigma", "width"};
constexpr std::array<std::string_view, 4> position_columns{"q", "d", "two_theta", "hkl"};

/// A list in the job itself or in a CSV file named by a text.
struct Table {
  Node from_file;
  const Node* list = nullptr;
  bool is_file() const { return list == &from_file; }
};

bool has_column(const Node& list, std::string_view column) {
  return std::ranges::any_of(list.items,
                             [column](const Node& row) { return row.find(column) != nullptr; });
}

void require_column(const Node& list, std::span<const std::string_view> one_of) {
  for (const std::string_view column : one_of)
    if (has_column(list, column)) return;
  throw Error(list.place, "the file has no column " + joined_or(one_of) + " with values in it");
}

void open_table(const Node& node, std::string_view what, std::span<const std::string_view> keys,
                const MeasurementContext& context, Table& table) {
  if (node.kind == NodeKind::text) {
    try {
      table.from_file = parse_csv(read_text_file((context.folder / node.text).string()), keys);
    } catch (const Error& fault) {
      if (fault.place().line() > 0) throw;
      throw Error(node.place,
                  in_quotes(node.text) + " " + fault.message() +
                      "; accepted is a CSV file, its path relative to the job's folder");
    }
    table.list = &table.from_file;
    require_column(table.from_file, position_columns);
    return;
  }
  if (node.kind == NodeKind::mapping)
    throw Error(
        node.place,
        std::string(what) + " must be a list of entries or the name of a CSV file, not a mapping");
  table.list = &node;
}

void read_intensity(const Fields& fields, double& intensity, double& sigma) {
  intensity = number_of(fields.require("intensity"), "intensity");
  sigma = number_of(fields.require("sigma"), "sigma", {.above = 0});
}

}  // namespace

std::vector<ObservedLine> read_lines(const Node& node, const MeasurementContext& context) {
  Table table;
  open_table(node, "lines", line_keys, context, table);
  constexpr std::array<std::string_view, 2> strength{"intensity", "above"};
  // Positions alone are enough to search the wavevector, not to compare arrangements.
  const bool needs_strength = !context.job->propagation.empty();
  if (table.is_file()) {
    if (needs_strength) require_column(*table.list, strength);
    constexpr std::array<std::string_view, 1> sigma{"sigma"};
    if (has_column(*table.list, "intensity")) require_column(*table.list, sigma);
  }
  std::vector<ObservedLine> lines;
  for (const Node& item : list_of(*table.list, "lines")) {
    const Fields fields(item, "a line", line_keys);
    ObservedLine line;
    line.position = read_position(fields, context);
    fields.at_most_one(strength);
    if (const Node* above = fields.find("above")) {
      line.above = number_of(*above, "above", {.at_least = 0});
      if (fields.has("sigma"))
        throw Error(fields.key_place("sigma"), "sigma belongs to an intensity, not to 'above'");
    } else if (fields.has("intensity")) {
      line.intensity.emplace();
      read_intensity(fields, *line.intensity, line.sigma);
    } else if (fields.has("sigma")) {
      throw Error(fields.key_place("sigma"), "sigma without an intensity");
    } else if (needs_strength) {
      throw Error(fields.place(),
                  "a line needs the key 'intensity', or 'above' when it is only seen");
    }
    line.tolerance_q = read_tolerance(fields, context);
    if (const Node* foreign = fields.find("foreign")) line.foreign = truth_of(*foreign, "foreign");
    lines.push_back(std::move(line));
  }
  return lines;
}

std::vector<Absence> read_absences(const Node& node, const MeasurementContext& context) {
  Table table;
  open_table(node, "absences", absence_keys, context, table);
  if (table.is_file()) {
    constexpr std::array<std::string_view, 1> below{"below"};
    require_column(*table.list, below);
  }
  std::vector<Absence> absences;
  for (const Node& item : list_of(*table.list, "absences")) {
    const Fields fields(item, "an absence", absence_keys);
    Absence absence;
    absence.position = read_position(fields, context);
    absence.below = number_of(fields.require("below"), "below", {.above = 0});
    absences.push_back(std::move(absence));
  }
  return absences;
}

std::vector<ScannedRange> read_scanned(const Node& node, const MeasurementContext& context) {
  std::vector<ScannedRange> ranges;
  for (const Node& item : list_of(node, "scanned")) {
    const Fields fields(item, "a scanned range", scanned_keys);
    ScannedRange range;
    range.place = item.place;
    const std::array<double, 2> q = read_range(fields, context);
    range.q_min = q[0];
    range.q_max = q[1];
    range.below = number_of(fields.require("below"), "below", {.above = 0});
    ranges.push_back(range);
  }
  return ranges;
}

std::vector<NuclearLine> read_nuclear_lines(const Node& node, const MeasurementContext& context) {
  Table table;
  open_table(node, "nuclear_lines", nuclear_keys, context, table);
  if (table.is_file()) {
    constexpr std::array<std::string_view, 1> intensity{"intensity"};
    constexpr std::array<std::string_view, 1> sigma{"sigma"};
    require_column(*table.list, intensity);
    require_column(*table.list, sigma);
  }
  std::vector<NuclearLine> lines;
  for (const Node& item : list_of(*table.list, "nuclear_lines")) {
    const Fields fields(item, "a nuclear line", nuclear_keys);
    NuclearLine line;
    line.position = read_position(fields, context, ListKind::nuclear);
    read_intensity(fields, line.intensity, line.sigma);
    lines.push_back(std::move(line));
  }
  return lines;
}

}  // namespace spinsieve
