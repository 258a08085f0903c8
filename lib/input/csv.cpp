#include "input/csv.hpp"

#include <algorithm>
#include <vector>

namespace spinsieve {

namespace {

/// One line cut into its cells, each with its place.
class RowReader {
 public:
  RowReader(const TextFile& file, std::string_view line, std::size_t number)
      : file_(&file), line_(line), number_(number) {}

  std::vector<Node> cells() {
    std::vector<Node> result;
    for (;;) {
      result.push_back(cell());
      if (at_ == line_.size()) return result;
      ++at_;  // The comma.
    }
  }

 private:
  Place place(std::size_t byte) {
    column_ += characters(line_.substr(counted_, byte - counted_));
    counted_ = byte;
    return {file_->name, static_cast<int>(number_) + 1, static_cast<int>(column_)};
  }

  void skip_blanks() {
    while (at_ < line_.size() && (line_[at_] == ' ' || line_[at_] == '\t')) ++at_;
  }

  Node cell() {
    skip_blanks();
    Node node;
    node.place = place(at_);
    if (at_ == line_.size() || line_[at_] != '"') {
      const std::size_t end = std::min(line_.find(',', at_), line_.size());
      node.text = trimmed(line_.substr(at_, end - at_));
      at_ = end;
      return node;
    }
    for (++at_;; ++at_) {
      if (at_ >= line_.size())
        throw Error(node.place, "this quote is not closed on its line; close it there");
      if (line_[at_] == '"') {
        if (at_ + 1 >= line_.size() || line_[at_ + 1] != '"') break;
        ++at_;
      }
      node.text += line_[at_];
    }
    ++at_;
    skip_blanks();
    if (at_ < line_.size() && line_[at_] != ',')
      throw Error(place(at_), "text behind a closing quote; a comma is expected");
    return node;
  }

  const TextFile* file_;
  std::string_view line_;
  std::size_t number_;
  std::size_t at_ = 0;
  std::size_t counted_ = 0;
  std::size_t column_ = 1;
};

void check_header(const std::vector<Node>& header, std::span<const std::string_view> columns) {
  for (std::size_t i = 0; i < header.size(); ++i) {
    const Node& name = header[i];
    if (name.text.empty())
      throw Error(name.place, "a column without a name; accepted are " + joined_or(columns));
    if (std::ranges::find(columns, std::string_view(name.text)) == columns.end()) {
      if (header.size() == 1 && name.text.find_first_of(";\t") != std::string::npos)
        throw Error(
            name.place,
            "columns must be separated by commas, not " +
                std::string(name.text.find(';') == std::string::npos ? "tabs" : "semicolons"));
      throw Error(name.place, "unknown column " + in_quotes(name.text) +
                                  "; the nearest known column is " +
                                  in_quotes(nearest_word(name.text, columns)));
    }
    for (std::size_t j = 0; j < i; ++j)
      if (header[j].text == name.text)
        throw Error(name.place, "the column " + in_quotes(name.text) + " appears twice");
  }
}

}  // namespace

Node parse_csv(TextFile file, std::span<const std::string_view> columns) {
  require_clean_text(file);
  Node list;
  list.kind = NodeKind::list;
  std::vector<Node> header;
  std::string_view rest = file.content;
  for (std::size_t number = 0; !rest.empty(); ++number) {
    const std::size_t end = std::min(rest.find('\n'), rest.size());
    std::string_view line = rest.substr(0, end);
    rest.remove_prefix(std::min(end + 1, rest.size()));
    if (line.ends_with('\r')) line.remove_suffix(1);
    const std::string_view content = trimmed(line);
    if (content.empty() || content.front() == '#') continue;
    std::vector<Node> cells = RowReader(file, line, number).cells();
    if (header.empty()) {
      check_header(cells, columns);
      list.place = cells.front().place;
      header = std::move(cells);
      continue;
    }
    if (cells.size() != header.size())
      throw Error(cells.front().place, "this row has " + std::to_string(cells.size()) +
                                           (cells.size() == 1 ? " cell" : " cells") +
                                           ", but the header names " +
                                           std::to_string(header.size()) + " columns");
    Node row;
    row.kind = NodeKind::mapping;
    row.place = cells.front().place;
    for (std::size_t i = 0; i < cells.size(); ++i) {
      if (cells[i].text.empty()) continue;
      row.keys.push_back(header[i]);
      row.items.push_back(std::move(cells[i]));
    }
    list.items.push_back(std::move(row));
  }
  if (header.empty())
    throw Error(Place(file.name, 1, 1),
                "the file is empty; its first line names the columns: " + joined_or(columns));
  if (list.items.empty()) throw Error(list.place, "no rows follow the names of the columns");
  return list;
}

}  // namespace spinsieve
