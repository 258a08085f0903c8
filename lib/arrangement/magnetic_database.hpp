#pragma once

#include <span>
#include <string_view>
#include <vector>

#include "arrangement/primitive_magnetic_group.hpp"
#include "crystal/spglib.hpp"

namespace spinsieve {

/// Symbols of one type of magnetic space group in Belov-Neronova-Smirnova (BNS) and
/// Opechowski-Guccione (OG) notation; `_x` is a subscript, `-3` a bar.
struct MagneticSymbols {
  int type = 0;
  std::string_view bns_number;
  std::string_view bns_symbol;
  std::string_view og_number;
  std::string_view og_symbol;
};

/// Source: Litvin, Magnetic Group Tables (2013). Throws Error unless 1 ≤ uni_number ≤ 1651.
const MagneticSymbols& magnetic_symbols(int uni_number);

/// Operations of a type in its standard BNS setting: that of International Tables (unique axis b,
/// cell choice 1, hexagonal axes, origin 2) for the family group, for the group of unprimed
/// operations in type 4. Centrings included. Throws Error unless 1 ≤ uni_number ≤ 1651.
std::vector<PrimedOperation> standard_magnetic_operations(int uni_number);

/// One type as the identification needs it.
struct MagneticReference {
  int uni_number = 0;
  PrimitiveMagneticGroup group;
  std::vector<PrimitiveMagneticGroup::Element> generators;
  CongruenceSystem origin;  ///< (1 − R) a ≡ …, three rows for each generator.
};

/// The types with the invariants of a group, by increasing number; usually one to a few.
/// Cost: the first call for a crystal class and type sets up its rows; safe from any thread.
std::span<const MagneticReference> magnetic_references(const PrimitiveMagneticGroup& group);

}  // namespace spinsieve
