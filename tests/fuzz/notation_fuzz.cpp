// Fractions, operations, wavevector components and ions: what is read is printed so that it reads
// back the same. The first byte chooses the notation.

#include "crystal/ion.hpp"
#include "crystal/operation.hpp"
#include "exact/error.hpp"
#include "fuzz_text.hpp"
#include "input/fields.hpp"
#include "symmetry/wavevector.hpp"

namespace {

void read_back(std::uint8_t choice, const std::string& text) {
  using namespace spinsieve;
  switch (choice % 4) {
    case 0: {
      const Fraction value = parse_fraction(text);
      require(parse_fraction(to_string(value)) == value);
      require(likely_fraction(text, 12, 2).denominator() > 0);
      break;
    }
    case 1: {
      const Operation operation = parse_operation(text);
      require(parse_operation(to_string(operation)) == operation);
      require((operation * operation.inverse()) == Operation());
      break;
    }
    case 2: {
      Wavevector k;
      parse_component(text, 1, k);
      Wavevector again;
      parse_component(component_texts(k)[1], 1, again);
      require(again == k);
      break;
    }
    default: {
      const Ion ion = parse_ion(text);
      require(parse_ion(to_string(ion)) == ion);
      break;
    }
  }
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  if (size == 0) return 0;
  try {
    read_back(data[0], fuzz_text(data + 1, size - 1));
  } catch (const spinsieve::Error& fault) {
    require(!fault.message().empty());
  }
  return 0;
}
