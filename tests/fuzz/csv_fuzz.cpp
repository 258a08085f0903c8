// Any bytes are a table or an Error with a place.

#include <array>

#include "fuzz_text.hpp"
#include "input/csv.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  constexpr std::array<std::string_view, 4> columns{"q", "hkl", "intensity", "sigma"};
  try {
    const spinsieve::Node table = spinsieve::parse_csv(
        {std::make_shared<const std::string>("lines.csv"), fuzz_text(data, size)}, columns);
    require(!table.items.empty());
    for (const spinsieve::Node& row : table.items) require(row.keys.size() == row.items.size());
  } catch (const spinsieve::Error& fault) {
    require(fault.place().line() > 0);
  }
  return 0;
}
