#pragma once

#include <map>
#include <string>
#include <vector>

#include "arrangement/magnetic_group.hpp"
#include "crystal/cell.hpp"
#include "report/magnetic_cif.hpp"

namespace spinsieve {

/// Pieces of CIF text that both kinds of magnetic CIF use.

std::string cif_quoted(const std::string& text);  ///< In quotes that do not occur in it.
/// "MnF2, 4 K" becomes "MnF2_4_K".
std::string cif_block_name(const std::string& title);
std::string cif_number(double value, int digits);  ///< Fixed digits, no sign on zero.
std::string cif_coordinate(Fraction value);        ///< Ten digits unless it is an integer.
std::string cif_item(const std::string& name, const std::string& value);
std::string cif_loop(const std::vector<std::string>& names,
                     const std::vector<std::vector<std::string>>& rows);
std::string cif_cell(const Cell& cell);
/// The parent group, how the child's axes follow from the parent's, and the propagation vectors.
std::string cif_parent(const MagneticCifParent& parent, const BasisTransformation& child);

/// Names and one row of the loop over sites.
const std::vector<std::string>& cif_site_names();
std::vector<std::string> cif_site(const MagneticCifAtom& atom, const std::string& label,
                                  const FractionVector& position);

/// Labels that are still free; a repeated one gets _2, _3, ….
class CifLabels {
 public:
  std::string next(const std::string& label);

 private:
  std::map<std::string, int> used_;
};

}  // namespace spinsieve
