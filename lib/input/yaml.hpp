#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "exact/error.hpp"
#include "input/text.hpp"

namespace spinsieve {

enum class NodeKind { text, list, mapping };

/// One node of a job file: a text, a list or a mapping, and where it stands.
///
/// Numbers stay text, exactly as written. There are no empty values, no aliases and no tags: the
/// reader refuses them.
struct Node {
  NodeKind kind = NodeKind::text;
  Place place;
  std::string text;         ///< Of a text; quotes and escapes resolved.
  std::vector<Node> keys;   ///< Of a mapping: distinct texts, one for each item.
  std::vector<Node> items;  ///< Of a list or a mapping, in the order of the file.

  const Node* find(std::string_view key) const;  ///< The value of a mapping's key, or nullptr.
};

/// Deepest nesting of lists and mappings accepted.
constexpr std::size_t deepest_nesting = 32;
/// Longest YAML text accepted, in bytes; long tables belong in CSV files.
constexpr std::size_t largest_yaml = std::size_t{4} << 20;

/// Reads one YAML document.
///
/// A byte-order mark is skipped. Throws Error, located, on what is not YAML or not UTF-8; on
/// aliases, anchors, tags, merge keys, a second document, duplicate keys, keys that are not text,
/// keys without a value, quotes that are not closed on their line, control characters; and beyond
/// deepest_nesting and largest_yaml. An empty text is an error too.
Node parse_yaml(TextFile file);

}  // namespace spinsieve
