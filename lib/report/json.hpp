#pragma once

#include <complex>
#include <concepts>
#include <cstdint>
#include <string>
#include <string_view>
#include <utility>
#include <variant>
#include <vector>

#include "report/text.hpp"

namespace spinsieve {

/// A JSON value to be written: objects keep the order in which their keys were set.
///
/// Numbers that are not finite are written as null, which JSON has instead.
class Json {
 public:
  using Array = std::vector<Json>;
  using Object = std::vector<std::pair<std::string, Json>>;

  Json() = default;  ///< null
  template <std::same_as<bool> Bool>
  Json(Bool value) : value_(value) {}  // NOLINT(google-explicit-constructor)
  template <std::integral Integer>
  requires(!std::same_as<Integer, bool>) Json(Integer value)  // NOLINT(google-explicit-constructor)
      : value_(static_cast<std::int64_t>(value)) {}
  Json(double value) : value_(value) {}                       // NOLINT(google-explicit-constructor)
  Json(std::string text) : value_(std::move(text)) {}         // NOLINT(google-explicit-constructor)
  Json(std::string_view text) : value_(std::string(text)) {}  // NOLINT(google-explicit-constructor)
  Json(const char* text) : value_(std::string(text)) {}       // NOLINT(google-explicit-constructor)
  Json(std::complex<double> value)                            // NOLINT(google-explicit-constructor)
      : value_(Array{Json(value.real()), Json(value.imag())}) {}

  static Json array() { return Json(Array{}); }
  static Json object() { return Json(Object{}); }
  /// One entry per element, through the function.
  template <class Range, class Function>
  static Json array_of(const Range& range, Function function) {
    Json result = array();
    for (const auto& element : range) result.push(function(element));
    return result;
  }
  template <class Range>
  static Json array_of(const Range& range) {
    return array_of(range, [](const auto& element) { return Json(element); });
  }

  /// Appends a key. REQUIRES: an object without that key (std::logic_error).
  Json& set(std::string_view key, Json value);
  /// Appends an element. REQUIRES: an array (std::logic_error).
  Json& push(Json element);

  /// Indented text, ending in a newline; what fits in 100 columns stays on one line. Plain letters
  /// escape everything beyond ASCII.
  std::string text(Letters letters = Letters::trade) const;

 private:
  explicit Json(Array elements) : value_(std::move(elements)) {}
  explicit Json(Object members) : value_(std::move(members)) {}

  std::string compact(Letters letters) const;
  void append(std::string& out, std::size_t indent, std::size_t used, Letters letters) const;

  std::variant<std::monostate, bool, std::int64_t, double, std::string, Array, Object> value_;
};

}  // namespace spinsieve
