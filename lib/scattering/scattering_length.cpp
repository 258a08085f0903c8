#include "scattering/scattering_length.hpp"

#include <algorithm>
#include <array>
#include <vector>

#include "scattering/constants.hpp"
#include "scattering/data_table.hpp"
#include "scattering/embedded_data.hpp"

namespace spinsieve {
namespace {

std::vector<ScatteringLength> read_table() {
  std::vector<ScatteringLength> table;
  for (const std::vector<std::string_view>& row : table_rows(data_scattering_lengths)) {
    ScatteringLength& entry = table.emplace_back();
    entry.nuclide = row.at(0);
    entry.length_fm = table_number(row.at(1));
    entry.absorption_barn = table_number(row.at(2));
  }
  return table;
}

const std::vector<ScatteringLength>& tabulated_lengths() {
  static const std::vector<ScatteringLength> table = read_table();
  return table;
}

/// "Li" of "7Li".
std::string_view without_mass(std::string_view nuclide) {
  nuclide.remove_prefix(std::min(nuclide.find_first_not_of("0123456789"), nuclide.size()));
  return nuclide;
}

}  // namespace

std::complex<double> ScatteringLength::complex_length_fm() const {
  constexpr double fm_per_angstrom = 1e5;
  const double wavelength_fm = thermal_wavelength_angstrom * fm_per_angstrom;
  return {length_fm, -absorption_barn * fm2_per_barn / (2 * wavelength_fm)};
}

ScatteringLength scattering_length(std::string_view element, const Place& place) {
  std::string_view wanted = element;
  if (wanted == "D") wanted = "2H";
  if (wanted == "T") wanted = "3H";
  const std::vector<ScatteringLength>& table = tabulated_lengths();
  const auto found = std::ranges::find(table, wanted, &ScatteringLength::nuclide);
  if (found != table.end()) return *found;
  std::string known;
  for (const ScatteringLength& entry : table) {
    if (without_mass(entry.nuclide) == without_mass(wanted))
      known += (known.empty() ? "" : ", ") + entry.nuclide;
  }
  throw Error(place, "no scattering length for \"" + std::string(element) + "\"; " +
                         (known.empty() ? "accepted: an element such as O or an isotope such as 7Li"
                                        : "tabulated: " + known));
}

std::optional<std::string> absorber_warning(std::string_view element) {
  constexpr std::array<std::string_view, 5> resonant = {"Cd", "Sm", "Eu", "Gd", "Dy"};
  if (std::ranges::find(resonant, without_mass(element)) == resonant.end()) return std::nullopt;
  return "the scattering length of " + std::string(element) +
         " depends strongly on the neutron energy; the tabulated value holds at 1.798 Å";
}

}  // namespace spinsieve
