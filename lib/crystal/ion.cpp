#include "crystal/ion.hpp"

#include <algorithm>
#include <array>

#include "exact/error.hpp"

namespace spinsieve {

namespace {

constexpr std::array<std::string_view, 119> elements{
    "H",  "D",  "He", "Li", "Be", "B",  "C",  "N",  "O",  "F",  "Ne", "Na", "Mg", "Al", "Si",
    "P",  "S",  "Cl", "Ar", "K",  "Ca", "Sc", "Ti", "V",  "Cr", "Mn", "Fe", "Co", "Ni", "Cu",
    "Zn", "Ga", "Ge", "As", "Se", "Br", "Kr", "Rb", "Sr", "Y",  "Zr", "Nb", "Mo", "Tc", "Ru",
    "Rh", "Pd", "Ag", "Cd", "In", "Sn", "Sb", "Te", "I",  "Xe", "Cs", "Ba", "La", "Ce", "Pr",
    "Nd", "Pm", "Sm", "Eu", "Gd", "Tb", "Dy", "Ho", "Er", "Tm", "Yb", "Lu", "Hf", "Ta", "W",
    "Re", "Os", "Ir", "Pt", "Au", "Hg", "Tl", "Pb", "Bi", "Po", "At", "Rn", "Fr", "Ra", "Ac",
    "Th", "Pa", "U",  "Np", "Pu", "Am", "Cm", "Bk", "Cf", "Es", "Fm", "Md", "No", "Lr", "Rf",
    "Db", "Sg", "Bh", "Hs", "Mt", "Ds", "Rg", "Cn", "Nh", "Fl", "Mc", "Lv", "Ts", "Og"};

constexpr std::array<std::string_view, 9> roman{"0", "I",  "II",  "III", "IV",
                                                "V", "VI", "VII", "VIII"};

bool is_letter(char c) { return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z'); }
bool is_sign(char c) { return c == '+' || c == '-'; }
bool is_charge_digit(char c) { return c >= '1' && c <= '9'; }

/// The charge in "3+", "+3", "+", "(III)", or 10 when the text is none of these.
int charge_of(std::string_view text) {
  constexpr int none = 10;
  if (text.empty()) return 0;
  if (text.size() > 2 && text.front() == '(' && text.back() == ')') {
    const std::string_view inner = text.substr(1, text.size() - 2);
    const auto* const found = std::find(roman.begin(), roman.end(), inner);
    return found == roman.end() ? none : static_cast<int>(found - roman.begin());
  }
  char sign = 0;
  int magnitude = 1;
  if (text.size() == 1 && is_sign(text[0])) {
    sign = text[0];
  } else if (text.size() == 2 && is_charge_digit(text[0]) && is_sign(text[1])) {
    magnitude = text[0] - '0';
    sign = text[1];
  } else if (text.size() == 2 && is_sign(text[0]) && is_charge_digit(text[1])) {
    sign = text[0];
    magnitude = text[1] - '0';
  } else {
    return none;
  }
  return sign == '-' ? -magnitude : magnitude;
}

}  // namespace

std::string to_string(const Ion& ion) {
  std::string text = ion.element;
  if (ion.charge == 0) return text;
  text += std::to_string(ion.charge < 0 ? -ion.charge : ion.charge);
  text += ion.charge < 0 ? '-' : '+';
  return text;
}

Ion parse_ion(std::string_view text) {
  std::size_t letters = 0;
  while (letters < text.size() && is_letter(text[letters])) ++letters;
  const std::string_view element = text.substr(0, letters);
  const std::string quoted = "'" + std::string(text) + "'";
  if (!is_element(element))
    throw Error("ion " + quoted + " does not begin with an element symbol such as Mn; accepted " +
                "are Mn3+, Mn+3, Mn(III), Fe");
  const int charge = charge_of(text.substr(letters));
  if (charge > 9)
    throw Error("ion " + quoted + " has no charge that can be read after " + std::string(element) +
                "; accepted are Mn3+, Mn+3, Mn(III), Fe");
  return {std::string(element), charge};
}

bool is_element(std::string_view symbol) {
  return std::find(elements.begin(), elements.end(), symbol) != elements.end();
}

}  // namespace spinsieve
