#include "scattering/form_factor.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <string_view>

#include "scattering/data_table.hpp"
#include "scattering/embedded_data.hpp"
#include "scattering/free_ion.hpp"

namespace spinsieve {
namespace {

/// "Mn2+", "Sc" as the table writes ions.
Ion table_ion(std::string_view text) {
  const std::size_t digits = text.find_first_of("0123456789");
  Ion ion{std::string(text.substr(0, digits)), 0};
  if (digits != std::string_view::npos) ion.charge = text[digits] - '0';
  return ion;
}

std::vector<TabulatedIntegrals> read_table() {
  std::vector<TabulatedIntegrals> table;
  for (const std::vector<std::string_view>& row : table_rows(data_form_factors)) {
    const Ion ion = table_ion(row.at(0));
    if (table.empty() || !(table.back().ion == ion)) table.emplace_back().ion = ion;
    RadialCoefficients coefficients{};
    for (std::size_t i = 0; i < coefficients.size(); ++i)
      coefficients[i] = table_number(row.at(i + 2));
    TabulatedIntegrals& entry = table.back();
    const char order = row[1].back();
    (order == '0'   ? entry.j0
     : order == '2' ? entry.j2
     : order == '4' ? entry.j4
                    : entry.j6) = coefficients;
  }
  return table;
}

const TabulatedIntegrals* find_tabulated(const Ion& ion) {
  const std::vector<TabulatedIntegrals>& table = tabulated_integrals();
  const auto found = std::ranges::find(table, ion, &TabulatedIntegrals::ion);
  return found == table.end() ? nullptr : &*found;
}

std::string available_ions(const std::string& element) {
  std::string names;
  for (const TabulatedIntegrals& entry : tabulated_integrals()) {
    if (entry.ion.element != element) continue;
    names += (names.empty() ? "" : ", ") + to_string(entry.ion);
  }
  return names;
}

double positive_g(const MagneticIon& ion, const char* key, double g) {
  if (std::isfinite(g) && g > 0) return g;
  throw Error(ion.place, std::string(key) + " " + std::to_string(g) + " of " + to_string(ion.ion) +
                             "; it must be positive");
}

OrbitalWeight default_weight(const MagneticIon& ion) {
  const std::string name = to_string(ion.ion);
  const std::optional<OpenShell> open = open_shell(ion.ion);
  // Lanthanoids and actinoids of charge 0 or 1 have no open_shell() either.
  const Ion trivalent{ion.ion.element, 3};
  const std::optional<OpenShell> usual = open_shell(trivalent);
  const bool is_4f = usual && usual->shell == Shell::f4;
  const bool is_5f = usual && usual->shell == Shell::f5;
  if (!is_4f && !is_5f) return {0, "spin only"};
  if (!open || (is_5f && ion.ion.charge != 3))
    throw Error(ion.place,
                "no default weight of <j2> for " + name + "; give lande_g, spin_g or c2");
  const HundTerm term = hund_term(3, open->electrons);
  const std::string shell = (is_4f ? "4f" : "5f") + std::to_string(open->electrons);
  const std::optional<Fraction> g = term.lande_g();
  if (!g)
    throw Error(ion.place, name + " (" + shell +
                               ") has J = 0, no free-ion moment and no default weight of <j2>; "
                               "give lande_g, spin_g or c2");
  return {(Fraction(2) / *g - Fraction(1)).to_double(),
          "Landé g = " + to_string(*g) + " of " + shell};
}

}  // namespace

const std::vector<TabulatedIntegrals>& tabulated_integrals() {
  static const std::vector<TabulatedIntegrals> table = read_table();
  return table;
}

double radial_integral(int order, const RadialCoefficients& coefficients, double s) {
  const double s2 = s * s;
  const auto& [A, a, B, b, C, c, D] = coefficients;
  const double sum = A * std::exp(-a * s2) + B * std::exp(-b * s2) + C * std::exp(-c * s2) + D;
  return order == 0 ? sum : s2 * sum;
}

OrbitalWeight orbital_weight(const MagneticIon& ion) {
  const int given = (ion.lande_g ? 1 : 0) + (ion.spin_g ? 1 : 0) + (ion.c2 ? 1 : 0);
  if (given > 1)
    throw Error(ion.place, "more than one of lande_g, spin_g and c2 for " + to_string(ion.ion) +
                               "; they all set the weight of <j2>, give one");
  if (ion.lande_g) return {2 / positive_g(ion, "lande_g", *ion.lande_g) - 1, "given lande_g"};
  if (ion.spin_g) return {1 - 2 / positive_g(ion, "spin_g", *ion.spin_g), "given spin_g"};
  if (ion.c2) {
    if (!std::isfinite(*ion.c2)) throw Error(ion.place, "c2 is not a finite number");
    return {*ion.c2, "given c2"};
  }
  return default_weight(ion);
}

FormFactor::FormFactor(const MagneticIon& ion) {
  const TabulatedIntegrals* tabulated = find_tabulated(ion.ion);
  const std::string name = to_string(ion.ion);
  if (ion.j0) {
    j0_ = *ion.j0;
  } else if (tabulated != nullptr && tabulated->j0) {
    j0_ = *tabulated->j0;
  } else {
    const std::string known = available_ions(ion.ion.element);
    throw Error(ion.place, "no form factor for " + name + "; " +
                               (known.empty() ? "no ion of " + ion.ion.element + " is tabulated"
                                              : "tabulated: " + known) +
                               ", or give form_factor: {j0: [A, a, B, b, C, c, D], j2: [...]}");
  }
  weight_ = orbital_weight(ion);
  if (ion.j2) {
    j2_ = ion.j2;
  } else if (tabulated != nullptr) {
    j2_ = tabulated->j2;
  }
  if (weight_.c2 != 0 && !j2_)
    throw Error(ion.place, "<j2> of " + name + " is not tabulated, but its weight c2 is " +
                               std::to_string(weight_.c2) + " (" + weight_.reason +
                               "); give form_factor: {j2: [A, a, B, b, C, c, D]}, or c2: 0");
}

double FormFactor::operator()(double s) const {
  double f = radial_integral(0, j0_, s);
  if (weight_.c2 != 0) f += weight_.c2 * radial_integral(2, *j2_, s);
  return f;
}

}  // namespace spinsieve
