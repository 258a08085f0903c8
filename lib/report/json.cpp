#include "report/json.hpp"

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include <nlohmann/json.hpp>

namespace spinsieve {
namespace {

std::string quoted(const std::string& text, Letters letters) {
  return nlohmann::json(text).dump(-1, ' ', letters == Letters::plain,
                                   nlohmann::json::error_handler_t::replace);
}

std::string number(double value) {
  if (!std::isfinite(value)) return "null";
  return nlohmann::json(value == 0 ? 0.0 : value).dump();  // No negative zero.
}

}  // namespace

Json& Json::set(std::string_view key, Json value) {
  auto* const members = std::get_if<Object>(&value_);
  if (members == nullptr) throw std::logic_error("Json::set on what is not an object");
  if (std::ranges::find(*members, key, &Object::value_type::first) != members->end())
    throw std::logic_error("Json::set: the key " + std::string(key) + " is there");
  members->emplace_back(std::string(key), std::move(value));
  return *this;
}

Json& Json::push(Json element) {
  auto* const elements = std::get_if<Array>(&value_);
  if (elements == nullptr) throw std::logic_error("Json::push on what is not an array");
  elements->push_back(std::move(element));
  return *this;
}

std::string Json::compact(Letters letters) const {
  if (const auto* const truth = std::get_if<bool>(&value_)) return *truth ? "true" : "false";
  if (const auto* const whole = std::get_if<std::int64_t>(&value_)) return std::to_string(*whole);
  if (const auto* const real = std::get_if<double>(&value_)) return number(*real);
  if (const auto* const text = std::get_if<std::string>(&value_)) return quoted(*text, letters);
  std::string out;
  if (const auto* const elements = std::get_if<Array>(&value_)) {
    for (const Json& element : *elements) {
      if (!out.empty()) out += ", ";
      out += element.compact(letters);
    }
    return "[" + out + "]";
  }
  if (const auto* const members = std::get_if<Object>(&value_)) {
    for (const auto& member : *members) {
      if (!out.empty()) out += ", ";
      out += quoted(member.first, letters) + ": " + member.second.compact(letters);
    }
    return "{" + out + "}";
  }
  return "null";
}

void Json::append(std::string& out, std::size_t indent, std::size_t used, Letters letters) const {
  constexpr std::size_t page = 100;
  const std::string line = compact(letters);
  const auto* const elements = std::get_if<Array>(&value_);
  const auto* const members = std::get_if<Object>(&value_);
  const bool nested =
      (elements != nullptr && !elements->empty()) || (members != nullptr && !members->empty());
  if (!nested || used + display_width(line) + 1 <= page) {
    out += line;
    return;
  }
  const std::string blanks(indent + 1, ' ');
  if (elements != nullptr) {
    out += "[\n";
    for (std::size_t i = 0; i < elements->size(); ++i) {
      out += blanks;
      (*elements)[i].append(out, indent + 1, indent + 1, letters);
      out += i + 1 < elements->size() ? ",\n" : "\n";
    }
    out += std::string(indent, ' ') + "]";
  } else {
    out += "{\n";
    for (std::size_t i = 0; i < members->size(); ++i) {
      const std::string key = quoted((*members)[i].first, letters) + ": ";
      out += blanks + key;
      (*members)[i].second.append(out, indent + 1, indent + 1 + display_width(key), letters);
      out += i + 1 < members->size() ? ",\n" : "\n";
    }
    out += std::string(indent, ' ') + "}";
  }
}

std::string Json::text(Letters letters) const {
  std::string out;
  append(out, 0, 0, letters);
  return out + "\n";
}

}  // namespace spinsieve
