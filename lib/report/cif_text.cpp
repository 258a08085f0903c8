#include "report/cif_text.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

namespace spinsieve {

std::string cif_quoted(const std::string& text) {
  return text.find('\'') == std::string::npos ? "'" + text + "'" : "\"" + text + "\"";
}

std::string cif_block_name(const std::string& title) {
  std::string result;
  for (const char c : title) {
    const bool plain = (c >= '0' && c <= '9') || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z');
    if (plain || c == '-')
      result += c;
    else if (!result.empty() && result.back() != '_')
      result += '_';
  }
  while (!result.empty() && result.back() == '_') result.pop_back();
  return result.empty() ? "arrangement" : result;
}

/// Fixed digits without a sign on zero.
std::string cif_number(double value, int digits) {
  std::string text = fmt::format("{:.{}f}", value, digits);
  if (text.find_first_of("123456789") == std::string::npos && text.front() == '-')
    text.erase(text.begin());
  return text;
}

std::string cif_coordinate(Fraction value) {
  if (value.is_integer()) return to_string(value);
  return fmt::format("{:.10g}", value.to_double());
}

std::string cif_item(const std::string& name, const std::string& value) {
  return fmt::format("{:<45} {}\n", name, value);
}

std::string cif_loop(const std::vector<std::string>& names,
                     const std::vector<std::vector<std::string>>& rows) {
  std::string result = "\nloop_\n";
  for (const auto& name : names) result += name + "\n";
  for (const auto& row : rows) result += fmt::format("{}\n", fmt::join(row, " "));
  return result;
}

std::string cif_cell(const Cell& cell) {
  return cif_item("_cell_length_a", cif_number(cell.a(), 6)) +
         cif_item("_cell_length_b", cif_number(cell.b(), 6)) +
         cif_item("_cell_length_c", cif_number(cell.c(), 6)) +
         cif_item("_cell_angle_alpha", cif_number(cell.alpha(), 5)) +
         cif_item("_cell_angle_beta", cif_number(cell.beta(), 5)) +
         cif_item("_cell_angle_gamma", cif_number(cell.gamma(), 5)) +
         cif_item("_cell_volume", cif_number(cell.volume(), 4));
}

std::string cif_parent(const MagneticCifParent& parent, const BasisTransformation& child) {
  std::string result;
  if (parent.number > 0) {
    result += cif_item("_parent_space_group.name_H-M_alt", cif_quoted(parent.symbol));
    result += cif_item("_parent_space_group.IT_number", std::to_string(parent.number));
  }
  result += cif_item("_parent_space_group.child_transform_Pp_abc", cif_quoted(to_string(child)));
  std::vector<std::vector<std::string>> rows;
  for (const FractionVector& k : parent.propagation)
    rows.push_back(
        {"k" + std::to_string(rows.size() + 1),
         fmt::format("'[{} {} {}]'", to_string(k[0]), to_string(k[1]), to_string(k[2]))});
  if (!rows.empty())
    result +=
        cif_loop({"_parent_propagation_vector.id", "_parent_propagation_vector.kxkykz"}, rows);
  return result + "\n";
}

std::vector<std::string> cif_site(const MagneticCifAtom& atom, const std::string& label,
                                  const FractionVector& position) {
  return {label,
          atom.type,
          cif_coordinate(position[0]),
          cif_coordinate(position[1]),
          cif_coordinate(position[2]),
          cif_number(atom.occupancy, 4),
          atom.b_iso ? cif_number(*atom.b_iso, 4) : "."};
}

const std::vector<std::string>& cif_site_names() {
  static const std::vector<std::string> names = {
      "_atom_site_label",         "_atom_site_type_symbol", "_atom_site_fract_x",
      "_atom_site_fract_y",       "_atom_site_fract_z",     "_atom_site_occupancy",
      "_atom_site_B_iso_or_equiv"};
  return names;
}

std::string CifLabels::next(const std::string& label) {
  const int count = ++used_[label];
  return count == 1 ? label : label + "_" + std::to_string(count);
}

}  // namespace spinsieve
