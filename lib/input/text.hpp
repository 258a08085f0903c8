#pragma once

#include <memory>
#include <span>
#include <string>
#include <string_view>

#include "exact/error.hpp"

namespace spinsieve {

/// Longest file read, in bytes; longer ones are refused before they fill the memory.
constexpr std::size_t largest_input = std::size_t{64} << 20;

/// A file of the user: its name as shown in messages, and its whole content.
struct TextFile {
  std::shared_ptr<const std::string> name;
  std::string content;

  /// The place of a byte of the content; columns count characters.
  Place place(std::size_t line, std::size_t byte_in_line) const;
};

/// The content as it is. Throws Error at the file when it cannot be opened, is a directory or
/// exceeds largest_input.
TextFile read_text_file(const std::string& path);

/// Drops a leading byte-order mark. Throws Error, located, on bytes that are not UTF-8 and on
/// control characters other than tab and line ends.
void require_clean_text(TextFile& file);

/// True when text holds a control character (C0, DEL, C1) other than tab and line feed.
bool has_control_character(std::string_view text);

/// Number of characters (code points) of valid UTF-8.
std::size_t characters(std::string_view text);

/// The text in quotes for a message; long ones are cut after 60 characters.
std::string in_quotes(std::string_view text);

/// The word with the fewest insertions, deletions, replacements and swaps of neighbours; the
/// earlier one among equals, letter case counting half. REQUIRES: words is not empty.
std::string_view nearest_word(std::string_view word, std::span<const std::string_view> words);

/// "a, b or c".
std::string joined_or(std::span<const std::string_view> words);

/// Text without blanks and tabs at its ends.
std::string_view trimmed(std::string_view text);

/// A finite decimal number such as "-1.5e3", whatever the locale.
/// Throws Error, quoting the text, on anything else, NaN and infinity included.
double parse_number(std::string_view text);

/// Throws Error on anything but decimal digits with an optional sign, and outside 32 bits.
int parse_integer(std::string_view text);

/// The shortest decimal that gives the same number back: "0.008".
std::string short_text(double value);

}  // namespace spinsieve
