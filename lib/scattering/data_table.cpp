#include "scattering/data_table.hpp"

#include <charconv>
#include <stdexcept>
#include <string>

namespace spinsieve {

std::vector<std::vector<std::string_view>> table_rows(std::string_view text) {
  std::vector<std::vector<std::string_view>> rows;
  bool names_passed = false;
  while (!text.empty()) {
    const std::size_t end = text.find('\n');
    std::string_view line = text.substr(0, end);
    text.remove_prefix(end == std::string_view::npos ? text.size() : end + 1);
    if (line.empty() || line.front() == '#') continue;
    if (!names_passed) {
      names_passed = true;
      continue;
    }
    std::vector<std::string_view>& row = rows.emplace_back();
    while (true) {
      const std::size_t comma = line.find(',');
      row.push_back(line.substr(0, comma));
      if (comma == std::string_view::npos) break;
      line.remove_prefix(comma + 1);
    }
  }
  return rows;
}

double table_number(std::string_view cell) {
  double value = 0;
  const auto result = std::from_chars(cell.data(), cell.data() + cell.size(), value);
  if (result.ec != std::errc() || result.ptr != cell.data() + cell.size())
    throw std::logic_error("embedded table holds \"" + std::string(cell) + "\" for a number");
  return value;
}

}  // namespace spinsieve
