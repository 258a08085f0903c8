#pragma once

#include <string_view>
#include <vector>

namespace spinsieve {

/// The cells of an embedded table, a row a line; lines that start with # and the line of column
/// names are left out. The cells point into the text.
std::vector<std::vector<std::string_view>> table_rows(std::string_view text);

/// A number of an embedded table. Throws std::logic_error when the text is not one.
double table_number(std::string_view cell);

}  // namespace spinsieve
