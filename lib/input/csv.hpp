#pragma once

#include <span>
#include <string_view>

#include "input/yaml.hpp"

namespace spinsieve {

/// Reads comma-separated values as a list of mappings, one per row, keyed by the header.
///
/// The first line that is neither blank nor a comment (#) names the columns; blanks around cells
/// are dropped, cells may stand in double quotes (RFC 4180), empty cells are left out of their row.
/// The list's place is the header. Throws Error, located in the file, on unknown, empty or repeated
/// column names (naming the nearest known one), on rows longer or shorter than the header, on
/// quotes that are not closed on their line, and on a file without a row.
Node parse_csv(TextFile file, std::span<const std::string_view> columns);

}  // namespace spinsieve
