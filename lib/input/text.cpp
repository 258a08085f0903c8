#include "input/text.hpp"

#include <algorithm>
#include <array>
#include <cerrno>
#include <charconv>
#include <cmath>
#include <cstdio>
#include <cstring>
#include <filesystem>
#include <system_error>
#include <vector>

namespace spinsieve {

namespace {

bool is_continuation(char c) { return (static_cast<unsigned char>(c) & 0xC0U) == 0x80U; }

/// Bytes of the well-formed character at the front of text; 0 when there is none.
/// Source: The Unicode Standard 15.0, table 3-7.
std::size_t character_length(std::string_view text) {
  const auto byte = [text](std::size_t i) {
    return i < text.size() ? static_cast<unsigned char>(text[i]) : 0U;
  };
  const auto continues = [&byte](std::size_t from, std::size_t to) {
    for (std::size_t i = from; i < to; ++i)
      if ((byte(i) & 0xC0U) != 0x80U) return false;
    return true;
  };
  const unsigned first = byte(0);
  if (first < 0x80U) return 1;
  if (first >= 0xC2U && first <= 0xDFU) return continues(1, 2) ? 2 : 0;
  if (first >= 0xE0U && first <= 0xEFU) {
    const bool overlong = first == 0xE0U && byte(1) < 0xA0U;
    const bool surrogate = first == 0xEDU && byte(1) > 0x9FU;
    return !overlong && !surrogate && continues(1, 3) ? 3 : 0;
  }
  if (first >= 0xF0U && first <= 0xF4U) {
    const bool overlong = first == 0xF0U && byte(1) < 0x90U;
    const bool too_large = first == 0xF4U && byte(1) > 0x8FU;
    return !overlong && !too_large && continues(1, 4) ? 4 : 0;
  }
  return 0;
}

/// The control character at the front of text other than tab and line feed, or none.
bool starts_with_control(std::string_view text) {
  const auto first = static_cast<unsigned char>(text[0]);
  if (first < 0x20U) return first != '\t' && first != '\n';
  if (first == 0x7FU) return true;
  return first == 0xC2U && text.size() > 1 && static_cast<unsigned char>(text[1]) < 0xA0U;
}

std::size_t lower_distance(char a, char b) {
  if (a == b) return 0;
  const auto lower = [](char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c + 32) : c; };
  return lower(a) == lower(b) ? 1 : 2;
}

/// Twice the number of edits that lead from a to b.
std::size_t edit_distance(std::string_view a, std::string_view b) {
  const std::size_t width = b.size() + 1;
  std::vector<std::size_t> table((a.size() + 1) * width);
  const auto at = [&table, width](std::size_t i, std::size_t j) -> std::size_t& {
    return table[i * width + j];
  };
  for (std::size_t i = 0; i <= a.size(); ++i) at(i, 0) = 2 * i;
  for (std::size_t j = 0; j <= b.size(); ++j) at(0, j) = 2 * j;
  for (std::size_t i = 1; i <= a.size(); ++i) {
    for (std::size_t j = 1; j <= b.size(); ++j) {
      std::size_t best = at(i - 1, j - 1) + lower_distance(a[i - 1], b[j - 1]);
      best = std::min({best, at(i - 1, j) + 2, at(i, j - 1) + 2});
      if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1])
        best = std::min(best, at(i - 2, j - 2) + 2);
      at(i, j) = best;
    }
  }
  return at(a.size(), b.size());
}

}  // namespace

Place TextFile::place(std::size_t line, std::size_t byte_in_line) const {
  std::string_view rest = content;
  for (std::size_t i = 0; i < line; ++i) {
    const std::size_t end = rest.find('\n');
    if (end == std::string_view::npos) break;
    rest.remove_prefix(end + 1);
  }
  const std::size_t column = characters(rest.substr(0, byte_in_line)) + 1;
  return {name, static_cast<int>(line) + 1, static_cast<int>(column)};
}

TextFile read_text_file(const std::string& path) {
  TextFile file{std::make_shared<const std::string>(path), {}};
  const auto fail = [&file](const std::string& why) {
    return Error(Place(file.name, 0, 0), "cannot be read: " + why);
  };
  std::error_code code;
  if (std::filesystem::is_directory(path, code)) throw fail("it is a directory");
  const std::unique_ptr<std::FILE, int (*)(std::FILE*)> stream(std::fopen(path.c_str(), "rb"),
                                                               &std::fclose);
  if (!stream) throw fail(std::generic_category().message(errno));
  std::array<char, 65536> block{};
  for (;;) {
    const std::size_t count = std::fread(block.data(), 1, block.size(), stream.get());
    file.content.append(block.data(), count);
    if (file.content.size() > largest_input)
      throw fail("it is longer than " + std::to_string(largest_input >> 20) + " MB");
    if (count < block.size()) break;
  }
  if (std::ferror(stream.get()) != 0) throw fail(std::generic_category().message(errno));
  return file;
}

void require_clean_text(TextFile& file) {
  if (file.content.starts_with("\xEF\xBB\xBF")) file.content.erase(0, 3);
  const std::string_view text = file.content;
  std::size_t line = 0;
  std::size_t line_start = 0;
  for (std::size_t i = 0; i < text.size();) {
    const auto first = static_cast<unsigned char>(text[i]);
    if (first >= 0x20U && first < 0x7FU) {
      ++i;
      continue;
    }
    const std::string_view rest = text.substr(i);
    const std::size_t length = character_length(rest);
    if (length == 0)
      throw Error(file.place(line, i - line_start),
                  "this byte is not part of UTF-8 text; save the file with the encoding UTF-8");
    if (first != '\r' && starts_with_control(rest))
      throw Error(file.place(line, i - line_start),
                  "a control character; accepted are printable characters, tabs and line ends");
    i += length;
    if (first == '\n') {
      ++line;
      line_start = i;
    }
  }
}

bool has_control_character(std::string_view text) {
  for (std::size_t i = 0; i < text.size(); ++i)
    if (starts_with_control(text.substr(i))) return true;
  return false;
}

std::size_t characters(std::string_view text) {
  return static_cast<std::size_t>(
      std::ranges::count_if(text, [](char c) { return !is_continuation(c); }));
}

std::string in_quotes(std::string_view text) {
  std::size_t shown = 0;
  std::size_t end = 0;
  while (end < text.size() && shown < 60 && text[end] != '\n' && text[end] != '\r') {
    ++end;
    while (end < text.size() && is_continuation(text[end])) ++end;
    ++shown;
  }
  return "'" + std::string(text.substr(0, end)) + (end < text.size() ? "…'" : "'");
}

std::string_view nearest_word(std::string_view word, std::span<const std::string_view> words) {
  const std::string_view start = word.substr(0, 64);
  return *std::ranges::min_element(
      words, {}, [start](std::string_view candidate) { return edit_distance(start, candidate); });
}

std::string joined_or(std::span<const std::string_view> words) {
  std::string text;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (i > 0) text += i + 1 == words.size() ? " or " : ", ";
    text += words[i];
  }
  return text;
}

std::string_view trimmed(std::string_view text) {
  const auto is_blank = [](char c) { return c == ' ' || c == '\t' || c == '\r' || c == '\n'; };
  while (!text.empty() && is_blank(text.front())) text.remove_prefix(1);
  while (!text.empty() && is_blank(text.back())) text.remove_suffix(1);
  return text;
}

double parse_number(std::string_view text) {
  const auto bad = [text](const char* hint) {
    return Error(in_quotes(text) + " is not a number; accepted is " + hint);
  };
  std::string_view digits = trimmed(text);
  if (digits.starts_with('+') && !digits.starts_with("+-")) digits.remove_prefix(1);
  double value = 0;
  const auto [end, code] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
  const bool whole = end == digits.data() + digits.size();
  if (code == std::errc::result_out_of_range && whole)
    throw Error(in_quotes(text) + " is beyond the range of numbers; accepted are 1e-300 to 1e300");
  if (code != std::errc() || !whole) {
    if (digits.find('/') != std::string_view::npos) throw bad("a decimal here, such as 0.5");
    if (code == std::errc() && *end == '(')
      throw bad("the value alone, without its uncertainty in brackets");
    throw bad("a decimal such as 2.41");
  }
  if (!std::isfinite(value))
    throw Error(in_quotes(text) + " is not a finite number; accepted is a decimal such as 2.41");
  return value;
}

int parse_integer(std::string_view text) {
  std::string_view digits = trimmed(text);
  if (digits.starts_with('+') && !digits.starts_with("+-")) digits.remove_prefix(1);
  int value = 0;
  const auto [end, code] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
  const bool whole = end == digits.data() + digits.size();
  if (code == std::errc::result_out_of_range && whole)
    throw Error(in_quotes(text) + " is too large; accepted are integers up to 2147483647");
  if (code != std::errc() || !whole)
    throw Error(in_quotes(text) + " is not an integer; accepted is a number such as 2");
  return value;
}

std::string short_text(double value) {
  const double size = std::fabs(value);
  const bool plain = size == 0 || (size >= 1e-4 && size < 1e9);
  std::array<char, 64> buffer{};
  const auto [end, code] =
      std::to_chars(buffer.data(), buffer.data() + buffer.size(), value,
                    plain ? std::chars_format::fixed : std::chars_format::general);
  return code == std::errc() ? std::string(buffer.data(), end) : std::to_string(value);
}

}  // namespace spinsieve
