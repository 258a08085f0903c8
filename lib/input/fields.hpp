#pragma once

#include <limits>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "exact/fraction.hpp"
#include "input/yaml.hpp"

namespace spinsieve {

/// A mapping of the job, with its keys checked against those that are known.
class Fields {
 public:
  /// what: how messages call the mapping, "a magnetic site". Throws Error when the node is no
  /// mapping, at the first unknown key (naming the nearest known one), and at a reserved key.
  Fields(const Node& node, std::string_view what, std::span<const std::string_view> known,
         std::span<const std::string_view> reserved = {});

  const Node* find(std::string_view key) const { return node_->find(key); }
  bool has(std::string_view key) const { return find(key) != nullptr; }
  /// Throws Error at the mapping when the key is missing.
  const Node& require(std::string_view key) const;
  const Place& place() const noexcept { return node_->place; }
  const Place& key_place(std::string_view key) const;  ///< REQUIRES: has(key).
  const std::string& what() const noexcept { return what_; }

  /// Those of the keys that are present, in the order given.
  std::vector<std::string_view> present(std::span<const std::string_view> keys) const;
  /// Throws Error at the later one when more than one of the keys is present.
  void at_most_one(std::span<const std::string_view> keys) const;

 private:
  const Node* node_;
  std::string what_;
};

/// Limits of a number; each bound that is set is part of the message.
struct Limits {
  double above = -std::numeric_limits<double>::infinity();     ///< Exclusive.
  double at_least = -std::numeric_limits<double>::infinity();  ///< Inclusive.
  double below = std::numeric_limits<double>::infinity();      ///< Exclusive.
  double at_most = std::numeric_limits<double>::infinity();    ///< Inclusive.
  std::string_view unit{};                                     ///< Named behind the bounds.
};

/// Each of these throws Error at the node; what names the value in messages ("wavelength").
const std::string& text_of(const Node& node, std::string_view what);
double number_of(const Node& node, std::string_view what, const Limits& limits = {});
int integer_of(const Node& node, std::string_view what, int lowest, int highest);
Fraction exact_of(const Node& node, std::string_view what);
bool truth_of(const Node& node, std::string_view what);  ///< "true" or "false".
/// Index of the word.
std::size_t choice_of(const Node& node, std::string_view what,
                      std::span<const std::string_view> words);
/// The entries of a list; count 0 takes any length but an empty list.
std::span<const Node> list_of(const Node& node, std::string_view what, std::size_t count = 0);

/// Largest denominator of an exact coordinate or wavevector component: nine decimals.
constexpr std::int64_t largest_denominator = 1'000'000'000;

/// Three exact components, each within ±1000 and with a denominator ≤ largest_denominator.
FractionVector position_of(const Node& node, std::string_view what);

/// The simple fraction that a plain decimal looks like when cut or rounded to its digits: "1/3" for
/// "0.333", "2/3" for "0.67". The value itself when there is none, when the decimal is exact, and
/// when it has fewer than fewest_decimals digits. For offering, never for deciding.
Fraction likely_fraction(std::string_view written, std::int64_t highest_denominator,
                         int fewest_decimals);

}  // namespace spinsieve
