#include "input/fields.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace spinsieve {

namespace {

std::string_view kind_name(NodeKind kind) {
  switch (kind) {
    case NodeKind::text:
      return "a single value";
    case NodeKind::list:
      return "a list";
    case NodeKind::mapping:
      return "a mapping";
  }
  return "";
}

Error wrong_kind(const Node& node, std::string_view what, std::string_view wanted) {
  return {node.place, std::string(what) + " must be " + std::string(wanted) + ", not " +
                          std::string(kind_name(node.kind))};
}

std::string accepted(const Limits& limits) {
  std::string text;
  const auto add = [&text](const char* words, double bound) {
    if (std::isinf(bound)) return;
    text += (text.empty() ? "" : " and ") + std::string(words) + " " + short_text(bound);
  };
  add("above", limits.above);
  add("from", limits.at_least);
  add("below", limits.below);
  add("up to", limits.at_most);
  if (!limits.unit.empty()) text += " " + std::string(limits.unit);
  return text;
}

/// Keys that are easily written one level too high or too low, and where they belong.
constexpr std::array<std::array<std::string_view, 2>, 24> homes{{
    {"space_group", "crystal"},
    {"cell", "crystal"},
    {"cif", "crystal"},
    {"sample", "measurement"},
    {"wavelength", "measurement"},
    {"flight", "measurement"},
    {"temperature", "measurement"},
    {"resolution", "measurement"},
    {"scale", "measurement"},
    {"zero_shift", "measurement"},
    {"lines", "measurement"},
    {"absences", "measurement"},
    {"scanned", "measurement"},
    {"nuclear_lines", "measurement"},
    {"arms", "search"},
    {"combine", "search"},
    {"directions", "search"},
    {"equal_moments", "search"},
    {"foreign", "locate"},
    {"cell_tolerance", "locate"},
    {"count", "locate"},
    {"propagation", "the job itself"},
    {"modulation", "the job itself"},
    {"magnetic_sites", "the job itself"},
}};

/// Where an unknown key belongs or what it may have meant.
std::string remedy(std::string_view key, std::span<const std::string_view> known) {
  for (const auto& home : homes)
    if (home[0] == key) return "it belongs in " + std::string(home[1]);
  return "the nearest known key is " + in_quotes(nearest_word(key, known));
}

/// Digits behind the decimal point when the text is a plain decimal, else −1.
int decimals_of(std::string_view written) {
  if (written.find_first_not_of("+-0123456789.") != std::string_view::npos) return -1;
  const std::size_t point = written.find('.');
  return point == std::string_view::npos ? -1 : static_cast<int>(written.size() - point) - 1;
}

}  // namespace

Fields::Fields(const Node& node, std::string_view what, std::span<const std::string_view> known,
               std::span<const std::string_view> reserved)
    : node_(&node), what_(what) {
  if (node.kind != NodeKind::mapping)
    throw wrong_kind(node, what, "a mapping with keys such as " + in_quotes(known.front()));
  for (const Node& key : node.keys) {
    if (std::ranges::find(known, std::string_view(key.text)) != known.end()) continue;
    if (std::ranges::find(reserved, std::string_view(key.text)) != reserved.end())
      throw Error(key.place, "the key " + in_quotes(key.text) + " of " + what_ +
                                 " is reserved and not acted on yet; leave it out");
    throw Error(key.place, "unknown key " + in_quotes(key.text) + " in " + what_ + "; " +
                               remedy(key.text, known));
  }
}

const Node& Fields::require(std::string_view key) const {
  const Node* found = find(key);
  if (found == nullptr) throw Error(place(), what_ + " needs the key " + in_quotes(key));
  return *found;
}

const Place& Fields::key_place(std::string_view key) const {
  return std::ranges::find(node_->keys, key, &Node::text)->place;
}

std::vector<std::string_view> Fields::present(std::span<const std::string_view> keys) const {
  std::vector<std::string_view> found;
  for (const std::string_view key : keys)
    if (has(key)) found.push_back(key);
  return found;
}

void Fields::at_most_one(std::span<const std::string_view> keys) const {
  std::string_view first;
  for (const Node& key : node_->keys) {
    if (std::ranges::find(keys, std::string_view(key.text)) == keys.end()) continue;
    if (!first.empty())
      throw Error(key.place, in_quotes(key.text) + " beside " + in_quotes(first) + " in " + what_ +
                                 "; accepted is one of " + joined_or(keys));
    first = key.text;
  }
}

const std::string& text_of(const Node& node, std::string_view what) {
  if (node.kind != NodeKind::text) throw wrong_kind(node, what, "a single value");
  return node.text;
}

double number_of(const Node& node, std::string_view what, const Limits& limits) {
  if (node.kind != NodeKind::text) throw wrong_kind(node, what, "a number");
  double value = 0;
  try {
    value = parse_number(node.text);
  } catch (const Error& fault) {
    throw Error(node.place, std::string(what) + " " + fault.message());
  }
  if (value > limits.above && value >= limits.at_least && value < limits.below &&
      value <= limits.at_most)
    return value;
  throw Error(node.place, std::string(what) + " " + in_quotes(node.text) +
                              " is out of range; accepted is a number " + accepted(limits));
}

int integer_of(const Node& node, std::string_view what, int lowest, int highest) {
  if (node.kind != NodeKind::text) throw wrong_kind(node, what, "an integer");
  int value = 0;
  try {
    value = parse_integer(node.text);
  } catch (const Error& fault) {
    throw Error(node.place, std::string(what) + " " + fault.message());
  }
  if (value < lowest || value > highest)
    throw Error(node.place, std::string(what) + " " + in_quotes(node.text) +
                                " is out of range; accepted is an integer from " +
                                std::to_string(lowest) + " to " + std::to_string(highest));
  return value;
}

Fraction exact_of(const Node& node, std::string_view what) {
  if (node.kind != NodeKind::text) throw wrong_kind(node, what, "a number");
  try {
    return parse_fraction(trimmed(node.text));
  } catch (const Error& fault) {
    throw Error(node.place, std::string(what) + " " + fault.message());
  }
}

bool truth_of(const Node& node, std::string_view what) {
  const std::string& text = text_of(node, what);
  if (text == "true") return true;
  if (text == "false") return false;
  throw Error(node.place,
              std::string(what) + " " + in_quotes(text) + " is unknown; accepted is true or false");
}

std::size_t choice_of(const Node& node, std::string_view what,
                      std::span<const std::string_view> words) {
  const std::string& text = text_of(node, what);
  const auto found = std::ranges::find(words, std::string_view(text));
  if (found == words.end())
    throw Error(node.place, std::string(what) + " " + in_quotes(text) +
                                " is unknown; accepted is " + joined_or(words));
  return static_cast<std::size_t>(found - words.begin());
}

std::span<const Node> list_of(const Node& node, std::string_view what, std::size_t count) {
  if (node.kind != NodeKind::list)
    throw wrong_kind(node, what,
                     count == 0 ? "a list" : "a list of " + std::to_string(count) + " entries");
  if (count != 0 && node.items.size() != count)
    throw Error(node.place, std::string(what) + " must be a list of " + std::to_string(count) +
                                " entries, not of " + std::to_string(node.items.size()));
  if (node.items.empty())
    throw Error(node.place, std::string(what) + " is empty; leave the key out or give an entry");
  return node.items;
}

FractionVector position_of(const Node& node, std::string_view what) {
  const std::span<const Node> items = list_of(node, what, 3);
  FractionVector position;
  for (std::size_t i = 0; i < 3; ++i) {
    position[i] = exact_of(items[i], what);
    const bool inside = position[i] <= Fraction(1000) && Fraction(-1000) <= position[i];
    if (!inside || position[i].denominator() > largest_denominator)
      throw Error(items[i].place, std::string(what) + " " + in_quotes(items[i].text) +
                                      " is out of range; accepted is a fraction or a decimal of "
                                      "at most 9 digits within ±1000");
  }
  return position;
}

Fraction likely_fraction(std::string_view written, std::int64_t highest_denominator,
                         int fewest_decimals) {
  const Fraction value = parse_fraction(trimmed(written));
  const int decimals = decimals_of(trimmed(written));
  if (decimals < fewest_decimals || decimals > 9) return value;
  std::int64_t scale = 1;
  for (int i = 0; i < decimals; ++i) scale *= 10;
  const Fraction shown = value * Fraction(scale);
  for (const std::int64_t denominator : {3, 6, 7, 9, 11, 12}) {
    if (denominator > highest_denominator) break;
    const Fraction candidate((value * Fraction(denominator) + Fraction(1, 2)).floor(), denominator);
    if (candidate == value || candidate.denominator() != denominator) continue;
    const Fraction scaled = candidate * Fraction(scale);
    const std::int64_t rounded = (scaled + Fraction(1, 2)).floor();
    const std::int64_t cut = scaled < Fraction(0) ? -(-scaled).floor() : scaled.floor();
    if (shown == Fraction(rounded) || shown == Fraction(cut)) return candidate;
  }
  return value;
}

}  // namespace spinsieve
