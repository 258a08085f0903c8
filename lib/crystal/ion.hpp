#pragma once

#include <string>
#include <string_view>

namespace spinsieve {

/// An element with a charge.
struct Ion {
  std::string element;  ///< "Mn".
  int charge = 0;

  friend bool operator==(const Ion& a, const Ion& b) = default;
};

std::string to_string(const Ion& ion);  ///< "Mn3+", "Fe" for charge 0.

/// Reads "Mn3+", "Mn+3", "Mn(III)", "mn3+" is refused (case matters for elements), "Fe", "Ho3+".
/// Throws Error that quotes the text and shows an accepted form.
Ion parse_ion(std::string_view text);

/// True for the symbols of the 118 elements and D.
bool is_element(std::string_view symbol);

}  // namespace spinsieve
