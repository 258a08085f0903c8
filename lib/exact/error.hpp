#pragma once

#include <memory>
#include <stdexcept>
#include <string>
#include <string_view>

namespace spinsieve {

/// A place in the user's input; lines and columns count from 1, columns in characters.
///
/// A default place is "nowhere": what came from no file. Cheap to copy: files share their name.
class Place {
 public:
  Place() = default;
  Place(std::shared_ptr<const std::string> file, int line, int column)
      : file_(std::move(file)), line_(line), column_(column) {}

  bool known() const noexcept { return file_ != nullptr; }
  const std::string& file() const;  ///< Empty when unknown.
  int line() const noexcept { return line_; }
  int column() const noexcept { return column_; }

 private:
  std::shared_ptr<const std::string> file_;
  int line_ = 0;
  int column_ = 0;
};

/// A fault in what the user gave. Broken invariants of our own are std::logic_error instead.
///
/// The message starts in lower case, quotes the value, names what is accepted and ends without a
/// full stop. what() is "job.yaml:7:19: error: message" with a place, the bare message without.
class Error : public std::runtime_error {
 public:
  explicit Error(std::string_view message);
  Error(const Place& place, std::string_view message);

  const std::string& message() const noexcept { return message_; }
  const Place& place() const noexcept { return place_; }

  /// The same error at a place; an error that has a place already keeps it.
  Error at(const Place& place) const;

 private:
  std::string message_;
  Place place_;
};

/// A limit of effort was reached (exit code 3); the message names the limit.
class LimitReached : public std::runtime_error {
 public:
  using std::runtime_error::runtime_error;
};

}  // namespace spinsieve
