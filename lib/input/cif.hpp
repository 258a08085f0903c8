#pragma once

#include <array>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "exact/error.hpp"

namespace spinsieve {

/// One row of the atom list of a CIF, as written.
struct CifAtom {
  std::string label;
  std::string type_symbol;  ///< "Mn3+", "O"; from the label when the file names no type.
  FractionVector position;  ///< Exactly the digits written, without the standard uncertainty.
  double occupancy = 1;
  std::optional<double> b_iso;                ///< Å²; from B or 8π² U.
  std::optional<std::array<double, 6>> u_ij;  ///< U11 U22 U33 U12 U13 U23, Å².
  Place place;                                ///< Of the label.
};

/// A parent structure: what a CIF says about cell, space group and sites.
struct CifStructure {
  std::string name;  ///< Of the data block.
  Cell cell;
  SpaceGroup group;
  Place cell_place;
  Place group_place;
  std::vector<CifAtom> atoms;
  std::vector<std::string> notes;  ///< What was read otherwise than written, for the report.
};

/// Reads the first data block that has a cell, from the text of a CIF.
///
/// The group comes from the listed operations, in whatever setting, else from the Hall symbol, the
/// Hermann-Mauguin symbol or the number. Translations written as decimals, such as 0.3333, are read
/// as the fraction of denominator up to 24 within one unit of the last digit, with a note.
/// Throws Error, located, on faults of syntax, missing or unreadable values, and a cell that does
/// not fit the group.
CifStructure parse_cif(const std::shared_ptr<const std::string>& file, const std::string& text);

/// Reads a file. Throws Error at the file when it cannot be read.
CifStructure read_cif(const std::string& path);

}  // namespace spinsieve
