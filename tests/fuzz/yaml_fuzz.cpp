// Any bytes are a tree or an Error with a place.

#include "fuzz_text.hpp"
#include "input/yaml.hpp"

namespace {

void check(const spinsieve::Node& node, std::size_t depth) {
  require(depth <= spinsieve::deepest_nesting);
  require(node.place.known() && node.place.line() > 0 && node.place.column() > 0);
  require(node.kind != spinsieve::NodeKind::text || node.items.empty());
  require(node.keys.size() ==
          (node.kind == spinsieve::NodeKind::mapping ? node.items.size() : std::size_t{0}));
  for (const spinsieve::Node& item : node.items) check(item, depth + 1);
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  try {
    check(spinsieve::parse_yaml(
              {std::make_shared<const std::string>("job.yaml"), fuzz_text(data, size)}),
          0);
  } catch (const spinsieve::Error& fault) {
    require(fault.place().known());
  }
  return 0;
}
