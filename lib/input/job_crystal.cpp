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

CifStructure structure_of(const Node& node, const std::filesystem::path& folder, Job& job) {
  const std::string& path = text_of(node, "cif");
  try {
    CifStructure structure = read_cif((folder / path).string());
    job.group = structure.group;
    job.cell = structure.cell;
    job.cell_given = true;
    job.notes.push_back({structure.group_place, setting_note(job.group)});
    for (const std::string& note : structure.notes) job.notes.push_back({node.place, note});
    return structure;
  } catch (const Error& fault) {
    if (fault.place().line() > 0) throw;
    throw Error(node.place, in_quotes(path) + " " + fault.message() +
                                "; accepted is a CIF, its path relative to the job's folder");
  }
}

}  // namespace

std::optional<CifStructure> read_crystal(const Node& node, const std::filesystem::path& folder,
                                         Job& job) {
  constexpr std::array<std::string_view, 3> keys{"space_group", "cell", "cif"};
  const Fields fields(node, "crystal", keys);
  if (const Node* path = fields.find("cif")) {
    for (const std::string_view key : {"space_group", "cell"})
      if (fields.has(key))
        throw Error(fields.key_place(key), in_quotes(key) +
                                               " beside 'cif' in crystal; accepted is either a CIF "
                                               "or space_group and cell");
    return structure_of(*path, folder, job);
  }
  const Node& group = fields.require("space_group");
  job.group = space_group_of(group);
  job.notes.push_back({group.place, setting_note(job.group)});
  const Node* cell = fields.find("cell");
  if (cell == nullptr) return std::nullopt;
  job.cell = cell_of(*cell);
  job.cell_given = true;
  try {
    require_cell_fits(job.cell, job.group);
  } catch (const Error& fault) {
    throw fault.at(cell->place);
  }
  return std::nullopt;
}

}  // namespace spinsieve
