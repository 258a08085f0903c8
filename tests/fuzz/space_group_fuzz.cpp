// Any text names a space group or is an Error; a group found is found again by its Hall symbol.

#include "crystal/space_group.hpp"
#include "exact/error.hpp"
#include "fuzz_text.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  try {
    const auto group = spinsieve::parse_space_group(fuzz_text(data, size));
    require(group.number() >= 1 && group.number() <= 230);
    require(spinsieve::parse_space_group(group.hall_symbol()).hall_number() == group.hall_number());
  } catch (const spinsieve::Error& fault) {
    require(!fault.message().empty());
  }
  return 0;
}
