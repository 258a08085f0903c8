// Any bytes are a structure or an Error.

#include "fuzz_text.hpp"
#include "input/cif.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  static const auto name = std::make_shared<const std::string>("parent.cif");
  try {
    const spinsieve::CifStructure structure = spinsieve::parse_cif(name, fuzz_text(data, size));
    require(structure.group.order() > 0);
    require(structure.cell.volume() > 0);
  } catch (const spinsieve::Error& fault) {
    require(!fault.message().empty());
  }
  return 0;
}
