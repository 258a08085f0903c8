#include "exact/error.hpp"

namespace spinsieve {

namespace {

std::string located(const Place& place, std::string_view message) {
  std::string text;
  if (place.known()) {
    text = place.file();
    if (place.line() > 0)
      text += ":" + std::to_string(place.line()) + ":" + std::to_string(place.column());
    text += ": error: ";
  }
  return text.append(message);
}

}  // namespace

const std::string& Place::file() const {
  static const std::string none;
  return file_ ? *file_ : none;
}

Error::Error(std::string_view message) : Error(Place(), message) {}

Error::Error(const Place& place, std::string_view message)
    : std::runtime_error(located(place, message)), message_(message), place_(place) {}

Error Error::at(const Place& place) const {
  return place_.known() ? *this : Error(place, message_);
}

}  // namespace spinsieve
