#include "input/cif.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <numbers>
#include <span>

#include "crystal/ion.hpp"
#include "input/cif_syntax.hpp"
#include "input/text.hpp"

namespace spinsieve {

namespace {

using Names = std::span<const std::string_view>;

std::string quoted(const std::string& text) { return "'" + text + "'"; }

/// Digits without the standard uncertainty: "0.1234(5)" to "0.1234".
std::string without_uncertainty(const CifValue& value) {
  const std::size_t open = value.text.find('(');
  if (open == std::string::npos) return value.text;
  const bool digits =
      value.text.size() > open + 2 && value.text.back() == ')' &&
      std::all_of(value.text.begin() + static_cast<std::ptrdiff_t>(open) + 1, value.text.end() - 1,
                  [](char c) { return (c >= '0' && c <= '9') || c == '.'; });
  if (!digits)
    throw Error(value.place, quoted(value.text) +
                                 " has no standard uncertainty that can be read; accepted are "
                                 "1.234 and 1.234(5)");
  return value.text.substr(0, open);
}

double number(const CifValue& value, const std::string& what) {
  std::string text = without_uncertainty(value);
  if (!text.empty() && text.front() == '+') text.erase(0, 1);
  double result = 0;
  const char* const end = text.data() + text.size();
  const auto [read, fault] = std::from_chars(text.data(), end, result);
  if (value.null || fault != std::errc() || read != end || !std::isfinite(result))
    throw Error(value.place,
                quoted(value.text) + " is no " + what + "; accepted are 1.234 and " + "1.234(5)");
  return result;
}

const CifValue& single(const CifBlock& block, const CifItem* item, std::string_view name) {
  if (item == nullptr || item->values.empty())
    throw Error(block.place, "the data block " + quoted(block.name) + " has no " +
                                 std::string(name) + ", which is needed");
  return item->values.front();
}

Cell read_cell(const CifBlock& block, Place& place) {
  const auto read = [&block](std::string_view name) {
    const CifValue& value = single(block, block.find(name), name);
    return number(value, "cell parameter");
  };
  place = block.find("_cell_length_a")->place;
  // Angles of 90° may be left out; the dictionary gives them that default.
  const auto angle = [&block](std::string_view name) {
    const CifItem* item = block.find(name);
    return item == nullptr || item->values.empty() || item->values.front().null
               ? 90.0
               : number(item->values.front(), "cell parameter");
  };
  try {
    return {read("_cell_length_a"),     read("_cell_length_b"),    read("_cell_length_c"),
            angle("_cell_angle_alpha"), angle("_cell_angle_beta"), angle("_cell_angle_gamma")};
  } catch (const Error& error) {
    throw error.at(place);
  }
}

/// A decimal translation as the fraction meant: 0.3333 is 1/3 to its last digit.
Fraction translation_meant(Fraction written) {
  constexpr std::int64_t shortest_decimal = 250;  // 83/500 is 0.166; 1/8 = 0.125 is exact.
  std::int64_t rest = written.denominator();
  while (rest % 2 == 0) rest /= 2;
  while (rest % 5 == 0) rest /= 5;
  if (rest != 1 || written.denominator() < shortest_decimal) return written;
  return nearest_simple(written, 24, Fraction(1, written.denominator()));
}

std::vector<Operation> read_operations(const CifItem& item, std::vector<std::string>& notes) {
  std::vector<Operation> operations;
  for (const CifValue& value : item.values) {
    try {
      Operation operation = parse_operation(value.text);
      for (Fraction& t : operation.translation) {
        const Fraction meant = translation_meant(t);
        if (meant != t)
          notes.push_back("the translation " + to_string(t) + " of operation " + value.text +
                          " is read as " + to_string(meant));
        t = meant;
      }
      operations.push_back(operation);
    } catch (const Error& error) {
      throw error.at(value.place);
    }
  }
  return operations;
}

const CifValue* first_value(const CifBlock& block, Names names) {
  for (const std::string_view name : names)
    if (const CifItem* item = block.find(name))
      if (!item->values.empty() && !item->values.front().null) return &item->values.front();
  return nullptr;
}

constexpr std::array<std::string_view, 2> operation_names{"_space_group_symop_operation_xyz",
                                                          "_symmetry_equiv_pos_as_xyz"};
constexpr std::array<std::string_view, 2> hall_names{"_space_group_name_hall",
                                                     "_symmetry_space_group_name_hall"};
constexpr std::array<std::string_view, 4> symbol_names{
    "_space_group_name_h-m_alt", "_space_group_name_h-m_full", "_space_group_name_h-m_ref",
    "_symmetry_space_group_name_h-m"};
constexpr std::array<std::string_view, 2> number_names{"_space_group_it_number",
                                                       "_symmetry_int_tables_number"};

/// A contradiction between operations and symbols is told; the operations decide.
void compare_with_names(const CifBlock& block, const SpaceGroup& group,
                        std::vector<std::string>& notes) {
  for (const Names names : {Names(hall_names), Names(symbol_names), Names(number_names)}) {
    const CifValue* value = first_value(block, names);
    if (value == nullptr) continue;
    std::optional<int> named;
    try {
      named = parse_space_group(value->text).number();
    } catch (const Error&) {
      continue;  // A symbol of an untabulated setting; the operations say all.
    }
    if (*named != group.number())
      notes.push_back("the listed operations form " + group.short_symbol() + " (No. " +
                      std::to_string(group.number()) + "), though the file also says " +
                      value->text + "; the operations are used");
  }
}

SpaceGroup read_group(const CifBlock& block, Place& place, std::vector<std::string>& notes) {
  for (const std::string_view name : operation_names) {
    const CifItem* operations = block.find(name);
    if (operations == nullptr || operations->values.empty() || operations->values[0].null) continue;
    place = operations->place;
    const std::vector<Operation> list = read_operations(*operations, notes);
    try {
      SpaceGroup group = SpaceGroup::from_operations(list);
      if (group.order() * group.centrings().size() != list.size())
        notes.push_back("the " + std::to_string(list.size()) + " listed operations generate " +
                        std::to_string(group.order() * group.centrings().size()) +
                        ", all of which are used");
      compare_with_names(block, group, notes);
      return group;
    } catch (const Error& error) {
      throw error.at(place);
    }
  }
  const CifValue* value = first_value(block, hall_names);
  const bool hall = value != nullptr;
  if (value == nullptr) value = first_value(block, symbol_names);
  if (value == nullptr) value = first_value(block, number_names);
  if (value == nullptr)
    throw Error(block.place, "the data block " + quoted(block.name) +
                                 " has no operations, symbol or number of a space group; one of "
                                 "_space_group_symop_operation_xyz, _space_group_name_Hall, "
                                 "_space_group_name_H-M_alt, _space_group_IT_number is needed");
  place = value->place;
  try {
    SpaceGroup group = hall ? parse_hall_symbol(value->text) : parse_space_group(value->text);
    notes.push_back("no operations are listed; " + value->text + " is taken as " + group.symbol() +
                    (group.setting().empty() ? "" : ", setting " + group.setting()));
    return group;
  } catch (const Error& error) {
    throw error.at(place);
  }
}

/// One row of a loop: values by name, with what may be absent.
class AtomRow {
 public:
  AtomRow(const CifBlock& block, int loop, std::size_t row)
      : block_(block), loop_(loop), row_(row) {}

  /// The value, when the loop has the name and the value is given.
  const CifValue* find(std::string_view name) const {
    const CifItem* item = block_.find(name);
    if (item == nullptr || item->loop != loop_ || row_ >= item->values.size()) return nullptr;
    const CifValue& value = item->values[row_];
    return value.null ? nullptr : &value;
  }

 private:
  const CifBlock& block_;
  int loop_;
  std::size_t row_;
};

FractionVector read_position(const AtomRow& row, const CifValue& label) {
  constexpr std::array<std::string_view, 3> names{"_atom_site_fract_x", "_atom_site_fract_y",
                                                  "_atom_site_fract_z"};
  FractionVector position;
  for (std::size_t i = 0; i < 3; ++i) {
    const CifValue* value = row.find(names[i]);
    if (value == nullptr)
      throw Error(label.place, "site " + label.text + " has no value of " + std::string(names[i]) +
                                   ", which is needed");
    try {
      position[i] = parse_fraction(without_uncertainty(*value));
    } catch (const Error& error) {
      throw error.at(value->place);
    }
  }
  return position;
}

/// The element and charge at the front of a label: "Mn1" to "Mn".
std::string type_of_label(const CifValue& label) {
  std::string letters;
  for (const char c : label.text.substr(0, 2))
    if ((c >= 'A' && c <= 'Z' && letters.empty()) || (c >= 'a' && c <= 'z' && !letters.empty()))
      letters += c;
    else
      break;
  while (!letters.empty() && !is_element(letters)) letters.pop_back();
  if (letters.empty())
    throw Error(label.place, "site " + label.text +
                                 " has no _atom_site_type_symbol and its label does not begin with "
                                 "an element symbol; one of both is needed");
  return letters;
}

std::optional<std::array<double, 6>> read_anisotropic(const CifBlock& block,
                                                      const std::string& label) {
  const CifItem* labels = block.find("_atom_site_aniso_label");
  if (labels == nullptr) return std::nullopt;
  for (std::size_t i = 0; i < labels->values.size(); ++i) {
    if (labels->values[i].text != label) continue;
    const AtomRow row(block, labels->loop, i);
    constexpr std::array<std::string_view, 6> parts{"11", "22", "33", "12", "13", "23"};
    std::array<double, 6> u{};
    for (std::size_t j = 0; j < 6; ++j) {
      const std::string part(parts[j]);
      const CifValue* value = row.find("_atom_site_aniso_u_" + part);
      double scale = 1;
      if (value == nullptr) {
        value = row.find("_atom_site_aniso_b_" + part);
        scale = 1 / (8 * std::numbers::pi * std::numbers::pi);
      }
      if (value == nullptr) return std::nullopt;
      u[j] = scale * number(*value, "displacement parameter");
    }
    return u;
  }
  return std::nullopt;
}

std::vector<CifAtom> read_atoms(const CifBlock& block, std::vector<std::string>& notes) {
  std::vector<CifAtom> atoms;
  const CifItem* labels = block.find("_atom_site_label");
  if (labels == nullptr) return atoms;
  for (std::size_t i = 0; i < labels->values.size(); ++i) {
    const CifValue& label = labels->values[i];
    const AtomRow row(block, labels->loop, i);
    if (const CifValue* flag = row.find("_atom_site_calc_flag");
        flag != nullptr && flag->text == "dum") {
      notes.push_back("the dummy site " + label.text + " is left out");
      continue;
    }
    CifAtom atom;
    atom.label = label.text;
    atom.place = label.place;
    atom.position = read_position(row, label);
    const CifValue* type = row.find("_atom_site_type_symbol");
    atom.type_symbol = type != nullptr ? type->text : type_of_label(label);
    if (const CifValue* value = row.find("_atom_site_occupancy")) {
      atom.occupancy = number(*value, "occupancy");
      if (atom.occupancy < 0 || atom.occupancy > 1)
        throw Error(value->place, "occupancy " + value->text + " of site " + label.text +
                                      "; it must lie within 0 to 1");
    }
    if (const CifValue* b = row.find("_atom_site_b_iso_or_equiv"))
      atom.b_iso = number(*b, "displacement parameter");
    else if (const CifValue* u = row.find("_atom_site_u_iso_or_equiv"))
      atom.b_iso = 8 * std::numbers::pi * std::numbers::pi * number(*u, "displacement parameter");
    atom.u_ij = read_anisotropic(block, label.text);
    atoms.push_back(std::move(atom));
  }
  return atoms;
}

}  // namespace

CifStructure parse_cif(const std::shared_ptr<const std::string>& file, const std::string& text) {
  const std::vector<CifBlock> blocks = parse_cif_blocks(file, text);
  const auto block = std::find_if(blocks.begin(), blocks.end(), [](const CifBlock& candidate) {
    return candidate.find("_cell_length_a") != nullptr;
  });
  if (block == blocks.end())
    throw Error(Place(file, 0, 0),
                "no data block has a cell (_cell_length_a), so there is no structure to read");
  CifStructure structure;
  structure.name = block->name;
  structure.cell = read_cell(*block, structure.cell_place);
  structure.group = read_group(*block, structure.group_place, structure.notes);
  try {
    require_cell_fits(structure.cell, structure.group);
  } catch (const Error& error) {
    throw error.at(structure.cell_place);
  }
  structure.atoms = read_atoms(*block, structure.notes);
  const auto more = std::count_if(block + 1, blocks.end(), [](const CifBlock& candidate) {
    return candidate.find("_cell_length_a") != nullptr;
  });
  if (more > 0)
    structure.notes.push_back("the first of " + std::to_string(more + 1) +
                              " data blocks with a cell is used: " + structure.name);
  return structure;
}

CifStructure read_cif(const std::string& path) {
  const TextFile file = read_text_file(path);
  constexpr std::string_view byte_order_mark = "\xEF\xBB\xBF";
  const bool marked = file.content.starts_with(byte_order_mark);
  return parse_cif(file.name, marked ? file.content.substr(byte_order_mark.size()) : file.content);
}

}  // namespace spinsieve
