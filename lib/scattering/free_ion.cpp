#include "scattering/free_ion.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <span>
#include <stdexcept>
#include <string>
#include <string_view>

namespace spinsieve {
namespace {

constexpr std::array<std::string_view, 10> elements_3d = {"Sc", "Ti", "V",  "Cr", "Mn",
                                                          "Fe", "Co", "Ni", "Cu", "Zn"};
constexpr std::array<std::string_view, 10> elements_4d = {"Y",  "Zr", "Nb", "Mo", "Tc",
                                                          "Ru", "Rh", "Pd", "Ag", "Cd"};
constexpr std::array<std::string_view, 9> elements_5d = {"Hf", "Ta", "W",  "Re", "Os",
                                                         "Ir", "Pt", "Au", "Hg"};
constexpr std::array<std::string_view, 15> elements_4f = {
    "La", "Ce", "Pr", "Nd", "Pm", "Sm", "Eu", "Gd", "Tb", "Dy", "Ho", "Er", "Tm", "Yb", "Lu"};
constexpr std::array<std::string_view, 15> elements_5f = {
    "Ac", "Th", "Pa", "U", "Np", "Pu", "Am", "Cm", "Bk", "Cf", "Es", "Fm", "Md", "No", "Lr"};

std::optional<OpenShell> in_series(const Ion& ion, Shell shell, int capacity, int first_beyond_core,
                                   std::span<const std::string_view> elements) {
  const auto found = std::ranges::find(elements, ion.element);
  if (found == elements.end() || ion.charge < 2) return std::nullopt;
  const int electrons = first_beyond_core + static_cast<int>(found - elements.begin()) - ion.charge;
  if (electrons < 0 || electrons > capacity) return std::nullopt;
  return OpenShell{shell, electrons};
}

}  // namespace

std::optional<Fraction> HundTerm::lande_g() const {
  if (J.is_zero()) return std::nullopt;
  const Fraction l(L);
  return Fraction(3, 2) +
         (S * (S + Fraction(1)) - l * (l + Fraction(1))) / (Fraction(2) * J * (J + Fraction(1)));
}

double HundTerm::saturation_moment() const {
  const std::optional<Fraction> g = lande_g();
  return g ? (*g * J).to_double() : 0;
}

double HundTerm::paramagnetic_moment() const {
  const std::optional<Fraction> g = lande_g();
  return g ? g->to_double() * std::sqrt((J * (J + Fraction(1))).to_double()) : 0;
}

HundTerm hund_term(int orbital, int electrons) {
  const int orbitals = 2 * orbital + 1;
  if (electrons < 0 || electrons > 2 * orbitals)
    throw std::logic_error("a shell cannot hold " + std::to_string(electrons) + " electrons");
  HundTerm term;
  const int up = std::min(electrons, orbitals);
  const int down = electrons - up;
  term.S = Fraction(up - down, 2);
  // Orbital quantum numbers l, l − 1, … are filled from the top, each spin in turn.
  for (int i = 0; i < electrons; ++i) term.L += orbital - i % orbitals;
  term.L = std::abs(term.L);
  const Fraction l(term.L);
  // Less than half full: J = |L − S|; half full or more: J = L + S.
  const Fraction less = l < term.S ? term.S - l : l - term.S;
  term.J = electrons < orbitals ? less : l + term.S;
  return term;
}

std::optional<OpenShell> open_shell(const Ion& ion) {
  if (ion == Ion{"Gd", 2}) return OpenShell{Shell::f4, 7};
  // Sc has 3 electrons beyond argon, Hf 4 beyond xenon and 4f¹⁴, La 3 beyond xenon, and so on.
  if (auto found = in_series(ion, Shell::d3, 10, 3, elements_3d)) return found;
  if (auto found = in_series(ion, Shell::d4, 10, 3, elements_4d)) return found;
  if (auto found = in_series(ion, Shell::d5, 10, 4, elements_5d)) return found;
  if (auto found = in_series(ion, Shell::f4, 14, 3, elements_4f)) return found;
  return in_series(ion, Shell::f5, 14, 3, elements_5f);
}

std::optional<double> spin_only_saturation_moment(const Ion& ion) {
  const std::optional<OpenShell> open = open_shell(ion);
  if (!open || open->shell != Shell::d3) return std::nullopt;
  return 2 * hund_term(2, open->electrons).S.to_double();
}

std::optional<double> spin_only_paramagnetic_moment(const Ion& ion) {
  const std::optional<double> twice_spin = spin_only_saturation_moment(ion);
  if (!twice_spin) return std::nullopt;
  return std::sqrt(*twice_spin * (*twice_spin + 2));
}

}  // namespace spinsieve
