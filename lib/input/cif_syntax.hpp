#pragma once

#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "exact/error.hpp"

namespace spinsieve {

// This header and its .cpp are C++17: gemmi's grammar does not compile as C++20 with clang 14.

/// One value of a CIF, without its delimiters.
struct CifValue {
  std::string text;
  bool null = false;  ///< An unquoted "?" or ".".
  Place place;
};

/// A data name with its values: one, or one a row of its loop.
struct CifItem {
  std::string name;  ///< Lower case, dots turned into underscores: old and new names agree.
  Place place;
  int loop = 0;  ///< Items of one loop share a number from 1; 0 outside loops.
  std::vector<CifValue> values;
};

struct CifBlock {
  std::string name;
  Place place;
  std::vector<CifItem> items;

  /// The item of this name in CifItem's spelling; null when there is none.
  const CifItem* find(std::string_view item_name) const;
};

/// The data blocks of a CIF 1.1 text; save frames are passed over.
/// Throws Error, located, on a fault of syntax and on a name that occurs twice in a block.
std::vector<CifBlock> parse_cif_blocks(const std::shared_ptr<const std::string>& file,
                                       const std::string& text);

}  // namespace spinsieve
