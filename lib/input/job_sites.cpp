#include <algorithm>
#include <array>
#include <cmath>

#include "input/job_parts.hpp"

namespace spinsieve {

namespace {

Displacement displacement_of(const Fields& fields) {
  constexpr std::array<std::string_view, 2> keys{"b_iso", "u_ij"};
  fields.at_most_one(keys);
  Displacement result;
  if (const Node* node = fields.find("b_iso"))
    result.b_iso = number_of(*node, "b_iso", {.at_least = 0, .at_most = 100, .unit = "Å²"});
  if (const Node* node = fields.find("u_ij")) {
    const std::span<const Node> items = list_of(*node, "u_ij", 6);
    std::array<double, 6> u{};
    for (std::size_t i = 0; i < 6; ++i)
      u[i] = number_of(items[i], "u_ij", {.at_least = -10, .at_most = 10, .unit = "Å²"});
    const double minor = u[0] * u[1] - u[3] * u[3];
    const double whole =
        u[2] * minor - u[0] * u[5] * u[5] - u[1] * u[4] * u[4] + 2 * u[3] * u[4] * u[5];
    if (!(u[0] > 0 && u[1] > 0 && u[2] > 0 && minor > 0 && whole > 0))
      throw Error(
          node->place,
          "u_ij is not positive definite, so that an amplitude would be imaginary; accepted "
          "are U11 U22 U33 U12 U13 U23 in Å² of an ellipsoid");
    result.u_ij = u;
  }
  return result;
}

double occupancy_of(const Fields& fields) {
  const Node* node = fields.find("occupancy");
  return node == nullptr ? 1 : number_of(*node, "occupancy", {.above = 0, .at_most = 1});
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

Site site_of(const Fields& fields, Job& job) {
  Site site;
  const Node& label = fields.require("label");
  site.label = text_of(label, "label");
  site.place = label.place;
  if (site.label.empty() || characters(site.label) > 24 ||
      site.label.find_first_of(" \t\n\r,;\"'") != std::string::npos)
    throw Error(label.place, "label " + in_quotes(site.label) +
                                 " is not accepted; a label has 1 to 24 characters without blanks, "
                                 "commas and quotes");
  const Node& position = fields.require("position");
  site.position = position_of(position, "position");
  try {
    const SnappedPosition moved = snapped(job.group, site.position);
    if (moved.moved)
      job.notes.push_back(
          {position.place, "site " + site.label + " was moved from (" + to_string(site.position) +
                               ") to the special position (" + to_string(moved.position) + ")"});
    else
      offer_fractions(position, site.label, job);
    site.position = moved.position;
  } catch (const Error& fault) {
    throw fault.at(position.place);
  }
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

MagneticSite magnetic_site_of(const Node& node, Job& job) {
  constexpr std::array<std::string_view, 11> keys{"label",  "ion",       "position",     "b_iso",
                                                  "u_ij",   "occupancy", "moment_limit", "lande_g",
                                                  "spin_g", "c2",        "form_factor"};
  const Fields fields(node, "a magnetic site", keys);
  MagneticSite result;
  result.site = site_of(fields, job);
  require_unique_label(result.site, job);
  result.ion = magnetic_ion_of(fields);
  result.displacement = displacement_of(fields);
  result.occupancy = occupancy_of(fields);
  if (const Node* limit = fields.find("moment_limit"))
    result.moment_limit =
        number_of(*limit, "moment_limit", {.above = 0, .at_most = 100, .unit = "µB"});
  return result;
}

NuclearSite nuclear_site_of(const Node& node, Job& job) {
  constexpr std::array<std::string_view, 6> keys{"label", "element", "position",
                                                 "b_iso", "u_ij",    "occupancy"};
  const Fields fields(node, "a site", keys);
  NuclearSite result;
  result.site = site_of(fields, job);
  require_unique_label(result.site, job);
  const Node& element = fields.require("element");
  result.element = trimmed(text_of(element, "element"));
  const std::size_t digits =
      std::min(result.element.find_first_not_of("0123456789"), std::size_t{3});
  if (!is_element(std::string_view(result.element).substr(std::min(digits, result.element.size()))))
    throw Error(element.place, "element " + in_quotes(result.element) +
                                   " is unknown; accepted is a symbol such as O, or an isotope "
                                   "such as 7Li, without charge");
  result.displacement = displacement_of(fields);
  result.occupancy = occupancy_of(fields);
  return result;
}

/// A site seen as an occupant of a spot.
struct Occupant {
  const Site* site;
  double occupancy;
  bool magnetic;
  FractionVector spot;  ///< The smallest reduced position of the orbit: equal for equal spots.
};

FractionVector spot_of(const SpaceGroup& group, const FractionVector& position) {
  FractionVector smallest = group.lattice_reduced(position);
  for (const Operation& operation : group.operations())
    smallest = std::min(smallest, group.lattice_reduced(operation.apply(position)));
  return smallest;
}

/// Two elements may share a spot when their occupancies leave room for both.
void require_room(const Occupant& a, const Occupant& b, double total) {
  const std::string pair = "sites " + a.site->label + " and " + b.site->label;
  if (a.magnetic && b.magnetic)
    throw Error(b.site->place,
                pair + " stand on the same spot; accepted is one magnetic site for a spot");
  if (total > 1 + 1e-6)
    throw Error(b.site->place, pair +
                                   " stand on the same spot; accepted are sites apart, or "
                                   "occupancies that sum to at most 1");
}

void require_distinct(const Job& job) {
  std::vector<Occupant> occupants;
  for (const MagneticSite& m : job.magnetic_sites)
    occupants.push_back({&m.site, m.occupancy, true, spot_of(job.group, m.site.position)});
  for (const NuclearSite& n : job.other_sites)
    occupants.push_back({&n.site, n.occupancy, false, spot_of(job.group, n.site.position)});
  std::vector<Site> apart;  // One site for each spot.
  for (std::size_t i = 0; i < occupants.size(); ++i) {
    const Occupant* first = nullptr;
    double total = occupants[i].occupancy;
    for (std::size_t j = 0; j < i; ++j) {
      if (occupants[j].spot != occupants[i].spot) continue;
      if (first == nullptr || occupants[j].magnetic) first = &occupants[j];
      total += occupants[j].occupancy;
    }
    if (first == nullptr)
      apart.push_back(*occupants[i].site);
    else
      require_room(*first, occupants[i], total);
  }
  require_distinct_sites(job.group, job.cell, apart);
}

}  // namespace

void read_sites(const Fields& root, Job& job) {
  const Node* magnetic = root.find("magnetic_sites");
  const Node* others = root.find("other_sites");
  if (magnetic == nullptr && others == nullptr) return;
  if (!job.cell_given)
    throw Error(root.key_place("crystal"), "crystal needs the key 'cell' when there are sites");
  if (magnetic != nullptr)
    for (const Node& node : list_of(*magnetic, "magnetic_sites"))
      job.magnetic_sites.push_back(magnetic_site_of(node, job));
  if (others != nullptr)
    for (const Node& node : list_of(*others, "other_sites"))
      job.other_sites.push_back(nuclear_site_of(node, job));
  try {
    require_distinct(job);
  } catch (const Error& fault) {
    throw fault.at((magnetic != nullptr ? magnetic : others)->place);
  }
}

}  // namespace spinsieve
