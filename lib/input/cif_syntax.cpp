#include "input/cif_syntax.hpp"

#include <algorithm>
#include <cctype>
#include <utility>

#include <gemmi/cif.hpp>

namespace spinsieve {

namespace {

namespace rules = gemmi::cif::rules;
namespace pegtl = tao::pegtl;

/// What the grammar's actions fill.
struct Reading {
  const std::shared_ptr<const std::string>& file;
  const std::string& text;
  std::vector<CifBlock> blocks{};
  bool in_frame = false;
  int loops = 0;
  std::size_t loop_start = 0;  ///< Index of the first item of the loop being read.
  std::size_t loop_values = 0;

  std::size_t known_byte = 0;  ///< A byte whose column is known: places come mostly in order.
  std::size_t known_line = 1;
  int known_column = 1;

  /// Columns count characters: continuation bytes of UTF-8 do not count.
  Place place(std::size_t byte, std::size_t line, std::size_t byte_column) {
    if (line != known_line || byte < known_byte) {
      known_byte = byte - (byte_column - 1);
      known_line = line;
      known_column = 1;
    }
    for (; known_byte < byte; ++known_byte)
      if ((static_cast<unsigned char>(text[known_byte]) & 0xC0U) != 0x80U) ++known_column;
    return {file, static_cast<int>(line), known_column};
  }
  template <typename Input>
  Place place(const Input& in) {
    return place(in.iterator().byte, in.iterator().line, in.iterator().column);
  }

  std::vector<CifItem>& items() { return blocks.back().items; }

  template <typename Input>
  void add_item(const Input& in, int loop) {
    std::string name = in.string();
    std::transform(name.begin(), name.end(), name.begin(), [](unsigned char c) {
      return c == '.' ? '_' : static_cast<char>(std::tolower(c));
    });
    for (const CifItem& item : items())
      if (!in_frame && item.name == name)
        throw Error(place(in), "the data name " + in.string() +
                                   " occurs twice in a block; each may occur once");
    items().push_back({std::move(name), place(in), loop, {}});
  }

  template <typename Input>
  CifValue value(const Input& in) {
    std::string raw = in.string();
    if (raw == "?" || raw == ".") return {std::move(raw), true, place(in)};
    const char first = raw.front();
    if (first == '\'' || first == '"') return {raw.substr(1, raw.size() - 2), false, place(in)};
    const bool text_field = first == ';' && place(in).column() == 1 && raw.size() > 1;
    if (!text_field) return {std::move(raw), false, place(in)};
    raw = raw.substr(1, raw.size() - 2);
    while (!raw.empty() && (raw.back() == '\n' || raw.back() == '\r')) raw.pop_back();
    return {std::move(raw), false, place(in)};
  }
};

template <typename Rule>
struct Action : pegtl::nothing<Rule> {};

template <>
struct Action<rules::datablockname> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    reading.blocks.push_back({in.string(), reading.place(in), {}});
  }
};

template <>
struct Action<rules::str_global> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    reading.blocks.push_back({"global_", reading.place(in), {}});
  }
};

// The contents of a frame go to a block of their own, dropped at its end.
template <>
struct Action<rules::framename> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    reading.blocks.push_back({in.string(), reading.place(in), {}});
    reading.in_frame = true;
  }
};

template <>
struct Action<rules::endframe> {
  template <typename Input>
  static void apply(const Input& /*in*/, Reading& reading) {
    reading.blocks.pop_back();
    reading.in_frame = false;
  }
};

template <>
struct Action<rules::item_tag> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    reading.add_item(in, 0);
  }
};

template <>
struct Action<rules::item_value> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    reading.items().back().values.push_back(reading.value(in));
  }
};

template <>
struct Action<rules::missing_value> {
  template <typename Input>
  static void apply(const Input& /*in*/, Reading& reading) {
    const CifItem& item = reading.items().back();
    throw Error(item.place, "the data name " + item.name + " has no value; '?' means unknown");
  }
};

template <>
struct Action<rules::str_loop> {
  template <typename Input>
  static void apply(const Input& /*in*/, Reading& reading) {
    ++reading.loops;
    reading.loop_start = reading.items().size();
    reading.loop_values = 0;
  }
};

template <>
struct Action<rules::loop_tag> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    reading.add_item(in, reading.loops);
  }
};

template <>
struct Action<rules::loop_value> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    const std::size_t width = reading.items().size() - reading.loop_start;
    CifItem& item = reading.items()[reading.loop_start + reading.loop_values % width];
    item.values.push_back(reading.value(in));
    ++reading.loop_values;
  }
};

template <>
struct Action<rules::loop> {
  template <typename Input>
  static void apply(const Input& in, Reading& reading) {
    const std::size_t width = reading.items().size() - reading.loop_start;
    if (reading.loop_values % width != 0)
      throw Error(reading.place(in), "a loop of " + std::to_string(width) + " data names has " +
                                         std::to_string(reading.loop_values) +
                                         " values; their number must be a multiple");
  }
};

}  // namespace

const CifItem* CifBlock::find(std::string_view item_name) const {
  const auto found = std::find_if(items.begin(), items.end(), [item_name](const CifItem& item) {
    return item.name == item_name;
  });
  return found == items.end() ? nullptr : &*found;
}

std::vector<CifBlock> parse_cif_blocks(const std::shared_ptr<const std::string>& file,
                                       const std::string& text) {
  Reading reading{file, text};
  pegtl::memory_input<> input(text.data(), text.size(), *file);
  try {
    pegtl::parse<rules::file, Action, gemmi::cif::Errors>(input, reading);
  } catch (const pegtl::parse_error& error) {
    const auto& position = error.positions().front();
    throw Error(reading.place(position.byte, position.line, position.column),
                "not a CIF from here on: " + std::string(error.message()) +
                    "; expected are data_ blocks of names and values");
  }
  return std::move(reading.blocks);
}

}  // namespace spinsieve
