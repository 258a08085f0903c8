#pragma once

#include <filesystem>
#include <optional>
#include <string>
#include <string_view>

namespace spinsieve {

/// Where a result goes: standard output, or a file that appears whole or not at all.
struct Destination {
  std::optional<std::filesystem::path> file;  ///< Standard output without one.
  bool overwrite = false;
};

/// The reader of standard output has gone (a closed pipe): the work ends, without a fault.
class ReaderGone {};

/// Throws Error when the file exists and may not be overwritten, or its folder cannot be written:
/// called before the work, so that hours of it are not lost.
void require_writable(const Destination& destination);

/// Throws Error when the text cannot be written whole, ReaderGone on a closed pipe. A file is
/// written beside its final place and renamed.
void write(const Destination& destination, std::string_view text);

/// From now on an interrupt removes a file half written and ends the process with code 130, and a
/// closed pipe is an error of the write instead of a signal.
void handle_signals();

}  // namespace spinsieve
