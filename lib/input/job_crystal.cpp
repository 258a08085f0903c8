#include <array>

#include "input/job_parts.hpp"

namespace spinsieve {

namespace {

SpaceGroup space_group_of(const Node& node) {
  if (node.kind == NodeKind::list)
    throw Error(node.place,
                "space_group must be a number, a symbol or {hall_number: 292}, not a list");
  try {
    if (node.kind == NodeKind::text) return parse_space_group(trimmed(node.text));
    constexpr std::array<std::string_view, 1> keys{"hall_number"};
    const Fields fields(node, "space_group", keys);
    return SpaceGroup::from_hall_number(
        integer_of(fields.require("hall_number"), "hall_number", 1, 530));
  } catch (const Error& fault) {
    throw fault.at(node.place);
  }
}

Cell cell_of(const Node& node) {
  const std::span<const Node> items = list_of(node, "cell", 6);
  std::array<double, 6> values{};
  for (std::size_t i = 0; i < 6; ++i)
    values[i] = number_of(items[i], i < 3 ? "cell length" : "cell angle",
                          i < 3 ? Limits{.above = 0, .at_most = 1e4, .unit = "Å"}
                                : Limits{.above = 0, .below = 180, .unit = "degrees"});
  try {
    return {values[0], values[1], values[2], values[3], values[4], values[5]};
  } catch (const Error& fault) {
    throw fault.at(node.place);
  }
}

/// The setting in words, since a bare number or symbol stands for one of several.
std::string setting_note(const SpaceGroup& group) {
  std::string text =
      "space group " + group.short_symbol() + ", number " + std::to_string(group.number());
  if (!group.setting().empty()) text += ", setting " + group.setting();
  if (!group.hall_symbol().empty()) text += ", Hall symbol " + group.hall_symbol();
  return text;
}

}  // namespace

void read_crystal(const Node& node, const std::filesystem::path& /*folder*/, Job& job) {
  constexpr std::array<std::string_view, 3> keys{"space_group", "cell", "cif"};
  const Fields fields(node, "crystal", keys);
  if (fields.has("cif"))
    throw Error(fields.key_place("cif"),
                "the key 'cif' of crystal is not acted on yet; give space_group and cell");
  const Node& group = fields.require("space_group");
  job.group = space_group_of(group);
  job.notes.push_back({group.place, setting_note(job.group)});
  const Node* cell = fields.find("cell");
  if (cell == nullptr) return;
  job.cell = cell_of(*cell);
  job.cell_given = true;
  try {
    require_cell_fits(job.cell, job.group);
  } catch (const Error& fault) {
    throw fault.at(cell->place);
  }
}

}  // namespace spinsieve
