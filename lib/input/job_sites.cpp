#include <algorithm>
#include <array>
#include <string>
#include <vector>

#include "input/job_parts.hpp"
#include "input/spots.hpp"

namespace spinsieve {

namespace {

bool is_positive_definite(const std::array<double, 6>& u) {
  const double minor = u[0] * u[1] - u[3] * u[3];
  const double whole =
      u[2] * minor - u[0] * u[5] * u[5] - u[1] * u[4] * u[4] + 2 * u[3] * u[4] * u[5];
  return u[0] > 0 && u[1] > 0 && u[2] > 0 && minor > 0 && whole > 0;
}

/// What a CIF says of an atom, checked.
Displacement displacement_of(const CifAtom& atom) {
  Displacement result;
  result.u_ij = atom.u_ij;
  if (atom.u_ij && !is_positive_definite(*atom.u_ij))
    throw Error(atom.place, "the U_ij of " + atom.label + " are not positive definite");
  if (atom.b_iso && !atom.u_ij) result.b_iso = *atom.b_iso;
  if (!(result.b_iso >= 0))
    throw Error(atom.place, "the B of " + atom.label + " is " + short_text(result.b_iso) +
                                " Å²; accepted is a number from 0");
  return result;
}

Displacement displacement_of(const Fields& fields, const CifAtom* atom) {
  constexpr std::array<std::string_view, 2> keys{"b_iso", "u_ij"};
  fields.at_most_one(keys);
  if (atom != nullptr && fields.present(keys).empty()) return displacement_of(*atom);
  Displacement result;
  if (const Node* node = fields.find("b_iso"))
    result.b_iso = number_of(*node, "b_iso", {.at_least = 0, .at_most = 100, .unit = "Å²"});
  if (const Node* node = fields.find("u_ij")) {
    const std::span<const Node> items = list_of(*node, "u_ij", 6);
    std::array<double, 6> u{};
    for (std::size_t i = 0; i < 6; ++i)
      u[i] = number_of(items[i], "u_ij", {.at_least = -10, .at_most = 10, .unit = "Å²"});
    if (!is_positive_definite(u))
      throw Error(
          node->place,
          "u_ij is not positive definite, so that an amplitude would be imaginary; accepted "
          "are U11 U22 U33 U12 U13 U23 in Å² of an ellipsoid");
    result.u_ij = u;
  }
  return result;
}

double occupancy_of(const Fields& fields, const CifAtom* atom) {
  if (const Node* node = fields.find("occupancy"))
    return number_of(*node, "occupancy", {.above = 0, .at_most = 1});
  if (atom == nullptr) return 1;
  if (!(atom->occupancy > 0))
    throw Error(atom->place, "the occupancy of " + atom->label +
                                 " is 0; accepted is a number above 0 and up to 1");
  return atom->occupancy;
}

RadialCoefficients coefficients_of(const Node& node, std::string_view what) {
  const std::span<const Node> items = list_of(node, what, 7);
  RadialCoefficients result{};
  for (std::size_t i = 0; i < 7; ++i)
    result[i] = number_of(items[i], what, {.at_least = -1e6, .at_most = 1e6});
  return result;
}

MagneticIon magnetic_ion_of(const Fields& fields) {
  MagneticIon result;
  const Node& ion = fields.require("ion");
  result.place = ion.place;
  try {
    result.ion = parse_ion(trimmed(text_of(ion, "ion")));
  } catch (const Error& fault) {
    throw fault.at(ion.place);
  }
  constexpr std::array<std::string_view, 3> orbital_keys{"lande_g", "spin_g", "c2"};
  fields.at_most_one(orbital_keys);
  if (const Node* node = fields.find("lande_g"))
    result.lande_g = number_of(*node, "lande_g", {.above = 0, .at_most = 10});
  if (const Node* node = fields.find("spin_g"))
    result.spin_g = number_of(*node, "spin_g", {.above = 0, .at_most = 20});
  if (const Node* node = fields.find("c2"))
    result.c2 = number_of(*node, "c2", {.at_least = -20, .at_most = 20});
  if (const Node* node = fields.find("form_factor")) {
    constexpr std::array<std::string_view, 2> keys{"j0", "j2"};
    const Fields given(*node, "form_factor", keys);
    result.j0 = coefficients_of(given.require("j0"), "j0");
    if (const Node* j2 = given.find("j2")) result.j2 = coefficients_of(*j2, "j2");
  }
  return result;
}

void offer_fractions(const Node& position, const std::string& label, Job& job) {
  for (const Node& item : position.items) {
    const Fraction value = exact_of(item, "position");
    const Fraction likely = likely_fraction(item.text, 6, 3);
    if (likely == value) continue;
    job.notes.push_back({item.place, "coordinate " + in_quotes(item.text) + " of " + label +
                                         " is taken as " + to_string(value) + " exactly; write " +
                                         to_string(likely) + " if that is meant"});
  }
}

const CifAtom* find_atom(const CifStructure* cif, const std::string& label) {
  if (cif == nullptr) return nullptr;
  const auto found = std::ranges::find(cif->atoms, label, &CifAtom::label);
  return found == cif->atoms.end() ? nullptr : &*found;
}

/// Moves a site onto a special position nearby, with a note; true when it was moved.
bool snap(Site& site, const Place& place, Job& job) {
  const SnappedPosition moved = snapped(job.group, site.position);
  if (moved.moved)
    job.notes.push_back({place, "site " + site.label + " was moved from (" +
                                    to_string(site.position) + ") to the special position (" +
                                    to_string(moved.position) + ")"});
  site.position = moved.position;
  return moved.moved;
}

void read_own_position(const Node& node, const CifAtom* atom, Site& site, Job& job) {
  site.position = position_of(node, "position");
  try {
    if (!snap(site, node.place, job)) offer_fractions(node, site.label, job);
    if (atom == nullptr) return;
    const FractionVector there = snapped(job.group, atom->position).position;
    if (spot_of(job.group, site.position) == spot_of(job.group, there)) return;
  } catch (const Error& fault) {
    throw fault.at(node.place);
  }
  throw Error(node.place, "the CIF has " + site.label + " at (" + to_string(atom->position) +
                              "), which is not equivalent to (" + to_string(site.position) +
                              "); leave the position out or take another label");
}

void read_cif_position(const CifAtom& atom, Site& site, Job& job) {
  site.position = atom.position;
  try {
    snap(site, atom.place, job);
  } catch (const Error& fault) {
    throw fault.at(atom.place);
  }
}

Site site_of(const Fields& fields, const CifStructure* cif, Job& job) {
  Site site;
  const Node& label = fields.require("label");
  site.label = text_of(label, "label");
  site.place = label.place;
  if (site.label.empty() || characters(site.label) > 24 ||
      site.label.find_first_of(" \t\n\r,;\"'") != std::string::npos)
    throw Error(label.place, "label " + in_quotes(site.label) +
                                 " is not accepted; a label has 1 to 24 characters without blanks, "
                                 "commas and quotes");
  const CifAtom* atom = find_atom(cif, site.label);
  if (const Node* position = fields.find("position"))
    read_own_position(*position, atom, site, job);
  else if (atom != nullptr)
    read_cif_position(*atom, site, job);
  else if (cif != nullptr)
    throw Error(label.place, "the CIF has no atom " + in_quotes(site.label) +
                                 "; accepted is one of its labels, or the key 'position'");
  else
    fields.require("position");
  return site;
}

void require_unique_label(const Site& site, const Job& job) {
  const auto check = [&site](const Site& other) {
    if (other.label == site.label)
      throw Error(site.place, "the label " + in_quotes(site.label) +
                                  " appears twice; it is on line " +
                                  std::to_string(other.place.line()) + " already");
  };
  for (const MagneticSite& other : job.magnetic_sites) check(other.site);
  for (const NuclearSite& other : job.other_sites) check(other.site);
}

MagneticSite magnetic_site_of(const Node& node, const CifStructure* cif, Job& job) {
  constexpr std::array<std::string_view, 11> keys{"label",  "ion",       "position",     "b_iso",
                                                  "u_ij",   "occupancy", "moment_limit", "lande_g",
                                                  "spin_g", "c2",        "form_factor"};
  const Fields fields(node, "a magnetic site", keys);
  MagneticSite result;
  result.site = site_of(fields, cif, job);
  require_unique_label(result.site, job);
  const CifAtom* atom = find_atom(cif, result.site.label);
  result.ion = magnetic_ion_of(fields);
  result.displacement = displacement_of(fields, atom);
  result.occupancy = occupancy_of(fields, atom);
  if (const Node* limit = fields.find("moment_limit"))
    result.moment_limit =
        number_of(*limit, "moment_limit", {.above = 0, .at_most = 100, .unit = "µB"});
  return result;
}

bool is_element_or_isotope(std::string_view text) {
  const std::size_t digits = std::min(text.find_first_not_of("0123456789"), text.size());
  return digits <= 3 && is_element(text.substr(digits));
}

NuclearSite nuclear_site_of(const Node& node, const CifStructure* cif, Job& job) {
  constexpr std::array<std::string_view, 6> keys{"label", "element", "position",
                                                 "b_iso", "u_ij",    "occupancy"};
  const Fields fields(node, "a site", keys);
  NuclearSite result;
  result.site = site_of(fields, cif, job);
  require_unique_label(result.site, job);
  const CifAtom* atom = find_atom(cif, result.site.label);
  const Node& element = fields.require("element");
  result.element = trimmed(text_of(element, "element"));
  if (!is_element_or_isotope(result.element))
    throw Error(element.place, "element " + in_quotes(result.element) +
                                   " is unknown; accepted is a symbol such as O, or an isotope "
                                   "such as 7Li, without charge");
  result.displacement = displacement_of(fields, atom);
  result.occupancy = occupancy_of(fields, atom);
  return result;
}

/// The atoms of a CIF that the job does not name.
void add_cif_sites(const CifStructure& cif, Job& job) {
  std::vector<std::string> named;
  for (const MagneticSite& site : job.magnetic_sites) named.push_back(site.site.label);
  for (const NuclearSite& site : job.other_sites) named.push_back(site.site.label);
  for (const CifAtom& atom : cif.atoms) {
    if (std::ranges::find(named, atom.label) != named.end()) continue;
    if (atom.occupancy == 0) {
      job.notes.push_back({atom.place, "atom " + atom.label + " has occupancy 0 and is left out"});
      continue;
    }
    NuclearSite site;
    site.site.label = atom.label;
    site.site.place = atom.place;
    read_cif_position(atom, site.site, job);
    require_unique_label(site.site, job);
    site.element = atom.type_symbol.substr(0, atom.type_symbol.find_first_of("+-(0123456789", 1));
    if (!is_element_or_isotope(site.element))
      throw Error(atom.place, "the type " + in_quotes(atom.type_symbol) + " of " + atom.label +
                                  " is no element; accepted is a symbol such as O or O2-");
    site.displacement = displacement_of(atom);
    site.occupancy = atom.occupancy;
    job.other_sites.push_back(std::move(site));
  }
}

/// An ion whose element contradicts the CIF is a slip of the label.
void require_same_element(const MagneticSite& site, const CifStructure& cif) {
  const CifAtom* atom = find_atom(&cif, site.site.label);
  if (atom == nullptr || atom->type_symbol.starts_with(site.ion.ion.element)) return;
  throw Error(site.ion.place, "ion " + to_string(site.ion.ion) + ", but the CIF has " +
                                  atom->type_symbol + " at " + atom->label +
                                  "; accepted is an ion of the same element");
}

}  // namespace

void read_sites(const Fields& root, const CifStructure* cif, Job& job) {
  const Node* magnetic = root.find("magnetic_sites");
  const Node* others = root.find("other_sites");
  if (magnetic == nullptr && others == nullptr && cif == nullptr) return;
  if (!job.cell_given)
    throw Error(root.key_place("crystal"), "crystal needs the key 'cell' when there are sites");
  if (magnetic != nullptr) {
    for (const Node& node : list_of(*magnetic, "magnetic_sites")) {
      job.magnetic_sites.push_back(magnetic_site_of(node, cif, job));
      if (cif != nullptr) require_same_element(job.magnetic_sites.back(), *cif);
    }
  }
  if (others != nullptr)
    for (const Node& node : list_of(*others, "other_sites"))
      job.other_sites.push_back(nuclear_site_of(node, cif, job));
  if (cif != nullptr) add_cif_sites(*cif, job);
  try {
    require_distinct_spots(job);
  } catch (const Error& fault) {
    throw fault.at(root.place());
  }
}

}  // namespace spinsieve
