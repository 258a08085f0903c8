#include "input/yaml.hpp"

#include <gmock/gmock.h>
#include <gtest/gtest.h>

namespace spinsieve {
namespace {

using testing::HasSubstr;

Node read(std::string text) {
  return parse_yaml({std::make_shared<const std::string>("job.yaml"), std::move(text)});
}

std::string fault(std::string text) {
  try {
    read(std::move(text));
  } catch (const Error& error) {
    return error.what();
  }
  return "no error";
}

/// The tree in one line: lists in [], mappings in {}, every text with its place.
std::string picture(const Node& node) {
  const std::string place =
      "@" + std::to_string(node.place.line()) + ":" + std::to_string(node.place.column());
  if (node.kind == NodeKind::text) return node.text + place;
  std::string text = node.kind == NodeKind::list ? "[" : "{";
  for (std::size_t i = 0; i < node.items.size(); ++i) {
    if (i > 0) text += ", ";
    if (node.kind == NodeKind::mapping) text += picture(node.keys[i]) + ": ";
    text += picture(node.items[i]);
  }
  return text + (node.kind == NodeKind::list ? "]" : "}") + place;
}

TEST(YamlTest, PlacesCountLinesAndCharactersFromOne) {
  const struct {
    const char* text;
    const char* tree;
    const char* source;
  } cases[] = {
      {"a: 1\nb: [2, x]\n", "{a@1:1: 1@1:4, b@2:1: [2@2:5, x@2:8]@2:4}@1:1", "by hand"},
      {"a:\n  - {b: c}\n  - d\n", "{a@1:1: [{b@2:6: c@2:9}@2:5, d@3:5]@2:3}@1:1", "by hand"},
      {"\"µ°\": x  # note\nb: \"Å⁻¹\"", "{µ°@1:1: x@1:7, b@2:1: Å⁻¹@2:4}@1:1",
       "two-byte characters are one column"},
      {"{𝑘: é, q: 1}", "{𝑘@1:2: é@1:5, q@1:8: 1@1:11}@1:1", "a four-byte character"},
      {"\xEF\xBB\xBF"
       "a: 1",
       "{a@1:1: 1@1:4}@1:1", "a byte-order mark takes no column"},
      {"a: 1\r\nb: 2\r\n", "{a@1:1: 1@1:4, b@2:1: 2@2:4}@1:1", "line ends of two characters"},
      {"---\na: 1\n...\n", "{a@2:1: 1@2:4}@2:1", "markers of one document are harmless"},
      {"a: '#1'\nb: 'it''s'\nc: \"x\\ty\"\n",
       "{a@1:1: #1@1:4, b@2:1: it's@2:4, c@3:1: x\ty@3:4}@1:1", "quotes and escapes are resolved"},
      {"a: >\n  one\n  two\nb: 3", "{a@1:1: one two\n@1:4, b@4:1: 3@4:4}@1:1", "a folded text"},
      {"a: 'null'\nb: ''\n", "{a@1:1: null@1:4, b@2:1: @2:4}@1:1", "quoted, it is a text"},
      {"a: 010\nb: 1e3\nc: yes\n", "{a@1:1: 010@1:4, b@2:1: 1e3@2:4, c@3:1: yes@3:4}@1:1",
       "values stay as written"},
  };
  for (const auto& [text, tree, source] : cases) {
    SCOPED_TRACE(source);
    EXPECT_EQ(picture(read(text)), tree);
  }
}

TEST(YamlTest, RefusesWhatAJobMustNotContain) {
  const struct {
    const char* text;
    const char* message;
  } cases[] = {
      {"", "job.yaml:1:1: error: the file is empty; a job starts with 'spinsieve: 1'"},
      {"# only a note\n",
       "job.yaml:1:1: error: the file is empty; a job starts with 'spinsieve: 1'"},
      {"a: 1\nb: &x 2\n",
       "job.yaml:2:4: error: anchors (&name) are not accepted; write the value out"},
      {"a: &x [*x]\n",
       "job.yaml:1:4: error: anchors (&name) are not accepted; write the value out"},
      {"a: *x\n", "job.yaml:1:4: error: aliases (*name) are not accepted; write the value out"},
      {"a: !!float 2\n",
       "job.yaml:1:4: error: tags (!name) are not accepted; write the value alone"},
      {"a: ! x\n", "job.yaml:1:4: error: tags (!name) are not accepted; write the value alone"},
      {"a: !list [1]\n",
       "job.yaml:1:4: error: tags (!name) are not accepted; write the value alone"},
      {"a: 1\n<<: {b: 2}\n",
       "job.yaml:2:1: error: merge keys (<<) are not accepted; write the values out"},
      {"a: 1\n---\nb: 2\n",
       "job.yaml:2:1: error: a second document starts here; a job is one document"},
      {"a: 1\nb: 2\na: 3\n",
       "job.yaml:3:1: error: the key 'a' appears twice; it is on line 1 already"},
      {"a:\n  b: 1\n  \"b\": 2\n",
       "job.yaml:3:3: error: the key 'b' appears twice; it is on line 2 already"},
      {"é: {a: 1, a: 2}",
       "job.yaml:1:11: error: the key 'a' appears twice; it is on line 1 already"},
      {"a: 1\nb:\nc: 2\n",
       "job.yaml:2:1: error: the key 'b' has no value; give one or leave the key out"},
      {"a: ~\n", "job.yaml:1:1: error: the key 'a' has no value; give one or leave the key out"},
      {"{x: 1, a}", "job.yaml:1:8: error: the key 'a' has no value; give one or leave the key out"},
      {"a: [1, , 2]\n",
       "job.yaml:1:4: error: entry 2 of this list is empty; give a value or leave it out"},
      {"a:\n  - 1\n  -\n",
       "job.yaml:2:3: error: entry 2 of this list is empty; give a value or leave it out"},
      {": 1\n", "job.yaml:1:1: error: a key is missing here; accepted is 'key: value'"},
      {"[1, 2]: 3\n", "job.yaml:1:1: error: a key must be a text, not a list or mapping"},
      {"a: \"b\nc: 2\n",
       "job.yaml:1:4: error: this quote is not closed on its line; close it there"},
      {"a: 'b\nc: 'x'\nd: 1\n",
       "job.yaml:1:4: error: this quote is not closed on its line; close it there"},
      {"a: [1, \"b, 2]\nc: \"d\"\n",
       "job.yaml:1:8: error: this quote is not closed on its line; close it there"},
      {"a: \"x\\e[31m\"\n",
       "job.yaml:1:4: error: a control character in a text; accepted are printable characters"},
  };
  for (const auto& [text, message] : cases) EXPECT_EQ(fault(text), message) << text;
}

TEST(YamlTest, ExplainsWhatIsNotYaml) {
  const struct {
    const char* text;
    const char* message;
  } cases[] = {
      {"crystal:\n  space_group: P 4/n b m : 2\n",
       "job.yaml:2:26: error: a ':' cannot stand here; a text that contains ': ' must be in "
       "quotes, such as \"P 4/n b m : 2\""},
      {"a: [1, 2\nb: 3\n",
       "job.yaml:2:2: error: a list opened with '[' on line 1 is not closed before this; ',' or "
       "']' is expected"},
      {"a: {b: 1, c: [2}\n", "job.yaml:1:16: error: a ']' or '}' without its opening bracket"},
      {"a: 1\n]\n", "job.yaml:2:1: error: a ']' or '}' without its opening bracket"},
      {"a: 1\n- b\n",
       "job.yaml:2:1: error: this does not continue what stands above it; check the indentation "
       "and the ':' behind the key"},
      {"a: @x\n",
       "job.yaml:1:4: error: a text cannot start with this character; put the text in quotes"},
      {"a: \"\\q\"\n",
       "job.yaml:1:7: error: an unknown escape in a text in double quotes; single quotes keep '\\' "
       "as it is"},
  };
  for (const auto& [text, message] : cases) EXPECT_EQ(fault(text), message) << text;
}

TEST(YamlTest, RefusesBytesThatAreNotText) {
  const char* encoding =
      ": error: this byte is not part of UTF-8 text; save the file with the encoding UTF-8";
  const struct {
    std::string text;
    const char* place;
    const char* source;
  } bad[] = {
      {"a: 1\nb: \xE9\n", "job.yaml:2:4", "Latin-1 é"},
      {"é: \xC0\x80", "job.yaml:1:4", "an overlong NUL"},
      {"a: \xED\xA0\x80", "job.yaml:1:4", "a surrogate"},
      {"a: \xF4\x90\x80\x80", "job.yaml:1:4", "above U+10FFFF"},
      {"a: \xE2\x82", "job.yaml:1:4", "cut short"},
      {"\xFF\xFE"
       "a",
       "job.yaml:1:1", "UTF-16"},
  };
  for (const auto& [text, place, source] : bad) {
    SCOPED_TRACE(source);
    EXPECT_EQ(fault(text), std::string(place) + encoding);
  }
  const char* control =
      ": error: a control character; accepted are printable characters, tabs and line ends";
  EXPECT_EQ(fault(std::string("a: x\0y", 6)), std::string("job.yaml:1:5") + control);
  EXPECT_EQ(fault("a: \x1b[31m"), std::string("job.yaml:1:4") + control);
  EXPECT_EQ(fault("a: \xC2\x9B"), std::string("job.yaml:1:4") + control);
}

TEST(YamlTest, BoundsDepthAndSize) {
  std::string deep = "a: ";
  for (int i = 0; i < 31; ++i) deep += "[";
  const std::string closing(31, ']');
  EXPECT_NO_THROW(read(deep + "1" + closing));
  EXPECT_EQ(fault(deep + "[1]" + closing),
            "job.yaml:1:35: error: lists and mappings are nested more than 32 deep");
  EXPECT_NE(fault("a: " + std::string(100000, '[')), "no error") << "never a crash";
  EXPECT_EQ(fault(std::string((std::size_t{4} << 20) + 1, ' ')),
            "job.yaml: error: longer than 4 MB; long lists of lines belong in CSV files");
}

}  // namespace
}  // namespace spinsieve
