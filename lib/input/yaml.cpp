#include "input/yaml.hpp"

#include <array>
#include <sstream>
#include <utility>

#include <yaml-cpp/eventhandler.h>
#include <yaml-cpp/exceptions.h>
#include <yaml-cpp/mark.h>
#include <yaml-cpp/node/node.h>  // Defines what parser.h only declares.
#include <yaml-cpp/parser.h>

namespace spinsieve {

namespace {

/// Offset just behind the quoted text that starts at an offset, or npos when it is not closed
/// before the end of its line.
std::size_t closing_quote(std::string_view line, std::size_t start) {
  const char quote = line[start];
  for (std::size_t i = start + 1; i < line.size(); ++i) {
    if (quote == '"' && line[i] == '\\') {
      ++i;
    } else if (line[i] == quote) {
      if (quote == '"' || i + 1 == line.size() || line[i + 1] != '\'') return i + 1;
      ++i;
    }
  }
  return std::string_view::npos;
}

/// The source text by lines, for places and for looking at what stands at a mark.
class Source {
 public:
  explicit Source(const TextFile& file) : file_(&file) {
    const std::string_view text = file.content;
    for (std::size_t start = 0;;) {
      const std::size_t end = text.find('\n', start);
      lines_.push_back(text.substr(start, end == std::string_view::npos ? end : end - start));
      if (lines_.back().ends_with('\r')) lines_.back().remove_suffix(1);
      if (end == std::string_view::npos) break;
      start = end + 1;
    }
  }

  std::string_view line(std::size_t index) const {
    return index < lines_.size() ? lines_[index] : std::string_view();
  }
  std::string_view rest(const YAML::Mark& mark) const {
    const std::string_view whole = line(line_of(mark));
    return whole.substr(std::min(column_of(mark), whole.size()));
  }

  /// Marks mostly move forward in a line, so that counting resumes at the last one.
  Place place(const YAML::Mark& mark) {
    const std::size_t index = line_of(mark);
    const std::size_t byte = std::min(column_of(mark), line(index).size());
    if (index != counted_line_ || byte < counted_bytes_) {
      counted_line_ = index;
      counted_bytes_ = 0;
      counted_characters_ = 0;
    }
    counted_characters_ += characters(line(index).substr(counted_bytes_, byte - counted_bytes_));
    counted_bytes_ = byte;
    return {file_->name, static_cast<int>(index) + 1, static_cast<int>(counted_characters_) + 1};
  }

  static std::size_t line_of(const YAML::Mark& mark) {
    return mark.line < 0 ? 0 : static_cast<std::size_t>(mark.line);
  }
  static std::size_t column_of(const YAML::Mark& mark) {
    return mark.column < 0 ? 0 : static_cast<std::size_t>(mark.column);
  }

 private:
  const TextFile* file_;
  std::vector<std::string_view> lines_;
  std::size_t counted_line_ = 0;
  std::size_t counted_bytes_ = 0;
  std::size_t counted_characters_ = 0;
};

/// Builds the tree from the parser's events and refuses what a job must not contain.
class TreeBuilder : public YAML::EventHandler {
 public:
  explicit TreeBuilder(Source& source) : source_(&source) {}

  void OnDocumentStart(const YAML::Mark& mark) override {
    if (documents_++ > 0)
      throw Error(source_->place(mark), "a second document starts here; a job is one document");
  }
  void OnDocumentEnd() override {}

  void OnNull(const YAML::Mark& mark, YAML::anchor_t anchor) override {
    refuse_decoration(mark, "?", anchor);
    if (open_.empty()) throw Error(source_->place(mark), "the file holds no value");
    const Node& parent = open_.back();
    if (parent.kind == NodeKind::list)
      throw Error(parent.place, "entry " + std::to_string(parent.items.size() + 1) +
                                    " of this list is empty; give a value or leave it out");
    if (parent.keys.size() == parent.items.size())
      throw Error(source_->place(mark), "a key is missing here; accepted is 'key: value'");
    const Node& key = parent.keys.back();
    throw Error(key.place,
                "the key " + in_quotes(key.text) + " has no value; give one or leave the key out");
  }

  void OnAlias(const YAML::Mark& mark, YAML::anchor_t /*anchor*/) override {
    throw Error(source_->place(mark), "aliases (*name) are not accepted; write the value out");
  }

  void OnScalar(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                const std::string& value) override {
    refuse_decoration(mark, tag, anchor);
    Node node;
    node.place = source_->place(mark);
    const std::string_view rest = source_->rest(mark);
    const bool quotes = tag == "!" && (rest.starts_with('"') || rest.starts_with('\''));
    if (quotes && closing_quote(rest, 0) == std::string_view::npos)
      throw Error(node.place, "this quote is not closed on its line; close it there");
    if (has_control_character(value))
      throw Error(node.place, "a control character in a text; accepted are printable characters");
    if (tag == "?" && value == "<<" && awaits_key())
      throw Error(node.place, "merge keys (<<) are not accepted; write the values out");
    node.text = value;
    add(std::move(node));
  }

  void OnSequenceStart(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                       YAML::EmitterStyle::value /*style*/) override {
    refuse_decoration(mark, tag, anchor);
    open(NodeKind::list, mark);
  }
  void OnSequenceEnd() override { close(); }

  void OnMapStart(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor,
                  YAML::EmitterStyle::value /*style*/) override {
    refuse_decoration(mark, tag, anchor);
    open(NodeKind::mapping, mark);
  }
  void OnMapEnd() override { close(); }

  bool complete() const { return documents_ > 0 && open_.empty(); }
  Node take() { return std::move(root_); }
  const Node* innermost() const { return open_.empty() ? nullptr : &open_.back(); }

 private:
  bool awaits_key() const {
    return !open_.empty() && open_.back().kind == NodeKind::mapping &&
           open_.back().keys.size() == open_.back().items.size();
  }

  void refuse_decoration(const YAML::Mark& mark, const std::string& tag, YAML::anchor_t anchor) {
    const std::string_view rest = source_->rest(mark);
    if (anchor != 0)
      throw Error(source_->place(mark), "anchors (&name) are not accepted; write the value out");
    const bool plain = tag.empty() || tag == "?" || tag == "!";
    if (!plain || rest.starts_with('!'))
      throw Error(source_->place(mark), "tags (!name) are not accepted; write the value alone");
  }

  void open(NodeKind kind, const YAML::Mark& mark) {
    const Place place = source_->place(mark);
    if (awaits_key()) throw Error(place, "a key must be a text, not a list or mapping");
    if (open_.size() == deepest_nesting)
      throw Error(place, "lists and mappings are nested more than " +
                             std::to_string(deepest_nesting) + " deep");
    Node node;
    node.kind = kind;
    node.place = place;
    open_.push_back(std::move(node));
  }

  void close() {
    Node node = std::move(open_.back());
    open_.pop_back();
    add(std::move(node));
  }

  void add(Node node) {
    if (open_.empty()) {
      root_ = std::move(node);
      return;
    }
    Node& parent = open_.back();
    if (!awaits_key()) {
      parent.items.push_back(std::move(node));
      return;
    }
    for (const Node& key : parent.keys)
      if (key.text == node.text)
        throw Error(node.place, "the key " + in_quotes(node.text) +
                                    " appears twice; it is on line " +
                                    std::to_string(key.place.line()) + " already");
    if (parent.keys.size() == 64)
      throw Error(parent.place,
                  "a mapping with more than 64 keys; no mapping of a job has as many");
    parent.keys.push_back(std::move(node));
  }

  Source* source_;
  std::vector<Node> open_;
  Node root_;
  int documents_ = 0;
};

/// Column of a quote that opens a text and is not closed on the line, or npos.
std::size_t unclosed_quote(std::string_view line) {
  char before = ' ';  // The last character that is not a blank.
  bool after_blank = true;
  for (std::size_t i = 0; i < line.size(); ++i) {
    const char c = line[i];
    const bool opens = after_blank || before == '[' || before == '{' || before == ',';
    if (c == '#' && after_blank) break;
    if ((c == '"' || c == '\'') && opens &&
        std::string_view(" :[{,-?").find(before) != std::string_view::npos) {
      const std::size_t end = closing_quote(line, i);
      if (end == std::string_view::npos) return i;
      i = end - 1;
      before = c;
      after_blank = false;
      continue;
    }
    after_blank = c == ' ' || c == '\t';
    if (!after_blank) before = c;
  }
  return std::string_view::npos;
}

/// The parser's complaint in words for somebody who knows no YAML.
std::string explanation(const std::string& complaint, std::string_view rest,
                        const Node* innermost) {
  const auto starts = [&complaint](const char* text) { return complaint.starts_with(text); };
  if (starts("illegal map value"))
    return "a ':' cannot stand here; a text that contains ': ' must be in quotes, such as "
           "\"P 4/n b m : 2\"";
  if (starts("end of sequence flow") || starts("end of map flow")) {
    const bool list = starts("end of sequence flow");
    std::string text = list ? "a list opened with '['" : "a mapping opened with '{'";
    if (innermost != nullptr) text += " on line " + std::to_string(innermost->place.line());
    return text + (list ? " is not closed before this; ',' or ']' is expected"
                        : " is not closed before this; ',' or '}' is expected");
  }
  if (starts("end of map") || starts("end of sequence"))
    return "this does not continue what stands above it; check the indentation and the ':' behind "
           "the key";
  if (starts("illegal flow end")) return "a ']' or '}' without its opening bracket";
  if (starts("the referenced anchor"))
    return "aliases (*name) are not accepted; write the value out";
  if (starts("unknown token"))
    return rest.starts_with('\t')
               ? "a tab cannot stand here; indent with blanks"
               : "a text cannot start with this character; put the text in quotes";
  if (starts("illegal tab")) return "a tab cannot stand here; indent with blanks";
  if (starts("unknown escape") || starts("bad character found while scanning hex") ||
      starts("invalid unicode"))
    return "an unknown escape in a text in double quotes; single quotes keep '\\' as it is";
  return "this is not YAML (" + complaint + ")";
}

}  // namespace

const Node* Node::find(std::string_view key) const {
  for (std::size_t i = 0; i < keys.size(); ++i)
    if (keys[i].text == key) return &items[i];
  return nullptr;
}

Node parse_yaml(TextFile file) {
  if (file.content.size() > largest_yaml)
    throw Error(Place(file.name, 0, 0), "longer than " + std::to_string(largest_yaml >> 20) +
                                            " MB; long lists of lines belong in CSV files");
  require_clean_text(file);
  Source source(file);
  TreeBuilder builder(source);
  std::istringstream stream(file.content);
  try {
    YAML::Parser parser(stream);
    while (parser.HandleNextDocument(builder)) {
    }
  } catch (const YAML::Exception& fault) {
    for (std::size_t i = 0; i <= Source::line_of(fault.mark); ++i) {
      const std::size_t column = unclosed_quote(source.line(i));
      if (column != std::string_view::npos)
        throw Error(file.place(i, column), "this quote is not closed on its line; close it there");
    }
    throw Error(source.place(fault.mark),
                explanation(fault.msg, source.rest(fault.mark), builder.innermost()));
  }
  if (!builder.complete())
    throw Error(Place(file.name, 1, 1), "the file is empty; a job starts with 'spinsieve: 1'");
  return builder.take();
}

}  // namespace spinsieve
