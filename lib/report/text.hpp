#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace spinsieve {

/// Letters a text may use: those of the trade (Γ, µ, Å, χ²), or plain ones where a terminal has
/// no others (Gamma, u, A, chi2).
enum class Letters { trade, plain };

/// Columns of a terminal that UTF-8 text takes: combining marks take none, wide letters two.
std::size_t display_width(std::string_view text);

/// The text in plain letters: "µB/Å" becomes "uB/A"; a letter without a plain form becomes "?".
std::string to_plain(std::string_view text);

/// Lines of at most width columns, broken at blanks; a longer word keeps a line of its own.
/// A line break in the text stays.
std::vector<std::string> wrapped(std::string_view text, std::size_t width);

/// "3.720": a number with the given decimals; never "-0.000". "-" when it is not finite.
std::string fixed(double value, int decimals);

/// The shortest text of at most digits significant digits: "0.0123", "310", "1.2e-07".
std::string significant(double value, int digits);

/// "3.72(5)": a value with its standard uncertainty in units of the last digit, two digits of it
/// when it starts with 1. "3.72" with four significant digits when sigma is not positive.
std::string with_uncertainty(double value, double sigma);

enum class Align { left, right };

/// Rows under headings. Cells that do not fit the page are broken at blanks, left-aligned columns
/// only.
class Table {
 public:
  struct Column {
    std::string heading;
    Align align = Align::left;
  };

  explicit Table(std::vector<Column> columns) : columns_(std::move(columns)) {}

  /// REQUIRES: as many cells as columns (std::logic_error otherwise).
  void add_row(std::vector<std::string> cells);
  bool empty() const noexcept { return rows_.empty(); }

  std::vector<std::string> lines(std::size_t width, Letters letters) const;

 private:
  std::vector<Column> columns_;
  std::vector<std::vector<std::string>> rows_;
};

/// Rows with many columns as tables one below the other, each within the width: the left columns
/// are repeated, the right ones shared out. rows: the cells of left and right columns.
std::vector<Table> fitting_tables(const std::vector<Table::Column>& left,
                                  const std::vector<Table::Column>& right,
                                  const std::vector<std::vector<std::string>>& rows,
                                  std::size_t width, Letters letters);

/// A page of text for people, built from top to bottom.
class TextPage {
 public:
  static constexpr std::size_t width = 100;

  explicit TextPage(Letters letters) : letters_(letters) {}

  void heading(std::string_view text);    ///< Underlined, with a blank line before it.
  void paragraph(std::string_view text);  ///< Wrapped.
  /// Wrapped with later lines indented: "name  text".
  void item(std::string_view name, std::string_view text, std::size_t name_width);
  void table(const Table& table);
  void blank();
  Letters letters() const noexcept { return letters_; }

  const std::string& text() const noexcept { return text_; }

 private:
  std::string in_letters(std::string_view text) const;
  void line(std::string_view text);

  Letters letters_;
  std::string text_;
};

}  // namespace spinsieve
