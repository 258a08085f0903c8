#include "report/text.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <numeric>
#include <stdexcept>
#include <utility>

#include <fmt/format.h>

namespace spinsieve {
namespace {

constexpr std::size_t column_gap = 2;

/// The code point at the start of the text and its bytes; a stray byte counts as one letter.
std::pair<std::uint32_t, std::size_t> code_point(std::string_view text) {
  const auto byte = [text](std::size_t i) {
    return static_cast<std::uint32_t>(static_cast<unsigned char>(text[i]));
  };
  const std::uint32_t first = byte(0);
  std::size_t length = 1;
  std::uint32_t value = first;
  if (first >= 0xF0U) {
    length = 4;
    value = first & 0x07U;
  } else if (first >= 0xE0U) {
    length = 3;
    value = first & 0x0FU;
  } else if (first >= 0xC0U) {
    length = 2;
    value = first & 0x1FU;
  }
  if (length > text.size()) return {first, 1};
  for (std::size_t i = 1; i < length; ++i) value = value << 6U | (byte(i) & 0x3FU);
  return {value, length};
}

/// Blocks of combining marks and of wide letters. Source: Unicode Standard Annex 11 (2021).
std::size_t letter_width(std::uint32_t c) {
  if ((c >= 0x300 && c <= 0x36F) || (c >= 0x200B && c <= 0x200D) || (c >= 0x20D0 && c <= 0x20FF))
    return 0;
  if ((c >= 0x1100 && c <= 0x115F) || (c >= 0x2E80 && c <= 0xA4CF) ||
      (c >= 0xAC00 && c <= 0xD7A3) || (c >= 0xF900 && c <= 0xFAFF) ||
      (c >= 0xFE30 && c <= 0xFE6F) || (c >= 0xFF00 && c <= 0xFF60) ||
      (c >= 0x1F300 && c <= 0x1FAFF) || (c >= 0x20000 && c <= 0x3FFFD))
    return 2;
  return 1;
}

constexpr std::array<std::pair<std::string_view, std::string_view>, 44> plain_forms = {{
    {"Å⁻¹", "1/A"}, {"Γ", "Gamma"},  {"µ", "u"},     {"μ", "u"},   {"Å", "A"},    {"χ", "chi"},
    {"θ", "theta"}, {"λ", "lambda"}, {"σ", "sigma"}, {"τ", "tau"}, {"π", "pi"},   {"Δ", "Delta"},
    {"α", "alpha"}, {"β", "beta"},   {"γ", "gamma"}, {"⁻", "-"},   {"¹", "1"},    {"²", "2"},
    {"³", "3"},     {"⁴", "4"},      {"±", "+/-"},   {"×", "x"},   {"·", "*"},    {"−", "-"},
    {"–", "-"},     {"—", "-"},      {"→", "->"},    {"≤", "<="},  {"≥", ">="},   {"≠", "!="},
    {"≡", "=="},    {"∥", "||"},     {"⟂", "_|_"},   {"⊥", "_|_"}, {"°", " deg"}, {"′", "'"},
    {"…", "..."},   {"─", "-"},      {"⟨", "<"},     {"⟩", ">"},   {"⊕", "+"},    {"√", "sqrt"},
    {"‖", "||"},    {"ζ", "zeta"},
}};

}  // namespace

std::size_t display_width(std::string_view text) {
  std::size_t width = 0;
  while (!text.empty()) {
    const auto [letter, length] = code_point(text);
    width += letter_width(letter);
    text.remove_prefix(length);
  }
  return width;
}

std::string to_plain(std::string_view text) {
  std::string plain;
  while (!text.empty()) {
    const std::string_view rest = text;
    const auto* const form = std::ranges::find_if(
        plain_forms, [rest](const auto& entry) { return rest.starts_with(entry.first); });
    if (form != plain_forms.end()) {
      plain += form->second;
      text.remove_prefix(form->first.size());
      continue;
    }
    const auto [letter, length] = code_point(text);
    if (letter < 0x80)
      plain += static_cast<char>(letter);
    else if (letter_width(letter) > 0)
      plain += '?';
    text.remove_prefix(length);
  }
  return plain;
}

std::vector<std::string> wrapped(std::string_view text, std::size_t width) {
  std::vector<std::string> lines;
  while (true) {
    const std::size_t end = std::min(text.find('\n'), text.size());
    std::string_view rest = text.substr(0, end);
    std::string current;
    while (!rest.empty()) {
      const std::size_t start = std::min(rest.find_first_not_of(' '), rest.size());
      rest.remove_prefix(start);
      const std::string_view word = rest.substr(0, rest.find(' '));
      rest.remove_prefix(word.size());
      if (word.empty()) break;
      if (!current.empty() && display_width(current) + 1 + display_width(word) > width) {
        lines.push_back(current);
        current.clear();
      }
      if (!current.empty()) current += ' ';
      current += word;
    }
    lines.push_back(current);
    if (end == text.size()) return lines;
    text.remove_prefix(end + 1);
  }
}

std::string fixed(double value, int decimals) {
  if (!std::isfinite(value)) return "-";
  std::string text = fmt::format("{:.{}f}", value, decimals);
  if (text.starts_with('-') && text.find_first_not_of("-0.") == std::string::npos) text.erase(0, 1);
  return text;
}

std::string significant(double value, int digits) {
  if (!std::isfinite(value)) return "-";
  return fmt::format("{:.{}g}", value == 0 ? 0.0 : value, digits);
}

std::string with_uncertainty(double value, double sigma) {
  if (!std::isfinite(value)) return "-";
  if (!(sigma > 0) || !std::isfinite(sigma)) return significant(value, 4);
  const int exponent = static_cast<int>(std::floor(std::log10(sigma)));
  const double leading = sigma / std::pow(10.0, exponent);
  int decimals = -exponent + (leading < 1.95 ? 1 : 0);
  if (decimals <= 0) return fmt::format("{}({})", fixed(value, 0), fixed(sigma, 0));
  const double last_digits = std::round(sigma * std::pow(10.0, decimals));
  return fmt::format("{}({:.0f})", fixed(value, decimals), last_digits);
}

namespace {

/// Widths that fit the page where possible: the widest left-aligned column gives way first.
std::vector<std::size_t> column_widths(const std::vector<std::vector<std::string>>& rows,
                                       const std::vector<Table::Column>& columns,
                                       std::size_t page) {
  constexpr std::size_t narrowest = 12;
  std::vector<std::size_t> widths(columns.size(), 0);
  for (const std::vector<std::string>& row : rows)
    for (std::size_t i = 0; i < row.size(); ++i)
      for (const std::string& part : wrapped(row[i], std::string::npos))
        widths[i] = std::max(widths[i], display_width(part));
  const std::size_t gaps = column_gap * (columns.size() - 1);
  while (std::accumulate(widths.begin(), widths.end(), gaps) > page) {
    std::size_t widest = columns.size();
    for (std::size_t i = 0; i < columns.size(); ++i)
      if (columns[i].align == Align::left && widths[i] > narrowest &&
          (widest == columns.size() || widths[i] > widths[widest]))
        widest = i;
    if (widest == columns.size()) break;
    --widths[widest];
  }
  return widths;
}

/// The lines of one row, its cells broken to the widths.
void add_row_lines(std::vector<std::string>& lines, const std::vector<std::string>& row,
                   const std::vector<Table::Column>& columns,
                   const std::vector<std::size_t>& widths) {
  std::vector<std::vector<std::string>> parts;
  std::size_t height = 1;
  for (std::size_t i = 0; i < row.size(); ++i) {
    parts.push_back(wrapped(row[i], widths[i]));
    height = std::max(height, parts.back().size());
  }
  for (std::size_t at = 0; at < height; ++at) {
    std::string line;
    for (std::size_t i = 0; i < row.size(); ++i) {
      const std::string cell = at < parts[i].size() ? parts[i][at] : "";
      const std::size_t used = display_width(cell);
      const std::string blanks(widths[i] > used ? widths[i] - used : 0, ' ');
      if (i > 0) line.append(column_gap, ' ');
      line += columns[i].align == Align::right ? blanks + cell : cell + blanks;
    }
    line.erase(line.find_last_not_of(' ') + 1);
    lines.push_back(line);
  }
}

}  // namespace

void Table::add_row(std::vector<std::string> cells) {
  if (cells.size() != columns_.size())
    throw std::logic_error("a table row has " + std::to_string(cells.size()) + " cells for " +
                           std::to_string(columns_.size()) + " columns");
  rows_.push_back(std::move(cells));
}

std::vector<std::string> Table::lines(std::size_t width, Letters letters) const {
  const auto in_letters = [letters](const std::string& text) {
    return letters == Letters::plain ? to_plain(text) : text;
  };
  std::vector<std::vector<std::string>> rows(1);
  for (const Column& column : columns_) rows.front().push_back(in_letters(column.heading));
  for (const std::vector<std::string>& row : rows_) {
    rows.emplace_back();
    for (const std::string& cell : row) rows.back().push_back(in_letters(cell));
  }
  const std::vector<std::size_t> widths = column_widths(rows, columns_, width);

  std::vector<std::string> lines;
  add_row_lines(lines, rows.front(), columns_, widths);
  std::string rule;
  const std::string dash = letters == Letters::plain ? "-" : "─";
  for (std::size_t i = 0; i < widths.size(); ++i) {
    if (i > 0) rule.append(column_gap, ' ');
    for (std::size_t n = 0; n < widths[i]; ++n) rule += dash;
  }
  rule.erase(rule.find_last_not_of(' ') + 1);
  lines.push_back(rule);
  for (std::size_t i = 1; i < rows.size(); ++i) add_row_lines(lines, rows[i], columns_, widths);
  return lines;
}

std::vector<Table> fitting_tables(const std::vector<Table::Column>& left,
                                  const std::vector<Table::Column>& right,
                                  const std::vector<std::vector<std::string>>& rows,
                                  std::size_t width, Letters letters) {
  const auto shown_width = [letters](const std::string& text) {
    return display_width(letters == Letters::plain ? to_plain(text) : text) + column_gap;
  };
  const auto column_width = [&](std::size_t column, const std::string& heading) {
    std::size_t widest = shown_width(heading);
    for (const auto& row : rows) widest = std::max(widest, shown_width(row[column]));
    return widest;
  };
  std::size_t left_width = 0;
  for (std::size_t i = 0; i < left.size(); ++i) left_width += column_width(i, left[i].heading);

  std::vector<Table> tables;
  for (std::size_t first = 0; first < right.size();) {
    std::size_t used = left_width;
    std::size_t last = first;
    while (last < right.size()) {
      const std::size_t wanted = column_width(left.size() + last, right[last].heading);
      if (last > first && used + wanted > width + column_gap) break;
      used += wanted;
      ++last;
    }
    std::vector<Table::Column> columns = left;
    columns.insert(columns.end(), right.begin() + static_cast<std::ptrdiff_t>(first),
                   right.begin() + static_cast<std::ptrdiff_t>(last));
    Table table(columns);
    for (const auto& row : rows) {
      const auto right_cells = row.begin() + static_cast<std::ptrdiff_t>(left.size());
      std::vector<std::string> cells(row.begin(), right_cells);
      cells.insert(cells.end(), right_cells + static_cast<std::ptrdiff_t>(first),
                   right_cells + static_cast<std::ptrdiff_t>(last));
      table.add_row(std::move(cells));
    }
    tables.push_back(std::move(table));
    first = last;
  }
  return tables;
}

std::string TextPage::in_letters(std::string_view text) const {
  return letters_ == Letters::plain ? to_plain(text) : std::string(text);
}

void TextPage::line(std::string_view text) {
  text_ += text;
  text_ += '\n';
}

void TextPage::blank() {
  if (!text_.empty() && !text_.ends_with("\n\n")) text_ += '\n';
}

void TextPage::heading(std::string_view text) {
  blank();
  const std::string shown = in_letters(text);
  line(shown);
  line(std::string(display_width(shown), '='));
}

void TextPage::paragraph(std::string_view text) {
  for (const std::string& part : wrapped(in_letters(text), width)) line(part);
}

void TextPage::item(std::string_view name, std::string_view text, std::size_t name_width) {
  std::string left = in_letters(name);
  const std::size_t used = display_width(left);
  left.append(used < name_width ? name_width - used : 1, ' ');
  for (const std::string& part : wrapped(in_letters(text), width - name_width)) {
    line(left + part);
    left.assign(name_width, ' ');
  }
}

void TextPage::table(const Table& table) {
  for (const std::string& part : table.lines(width, letters_)) line(part);
}

}  // namespace spinsieve
