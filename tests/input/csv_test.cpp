#include "input/csv.hpp"

#include <array>

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

constexpr std::array<std::string_view, 4> columns{"q", "intensity", "sigma", "hkl"};

Node read(std::string text) {
  return parse_csv({std::make_shared<const std::string>("lines.csv"), std::move(text)}, columns);
}

std::string fault(std::string text) {
  try {
    read(std::move(text));
  } catch (const Error& error) {
    return error.what();
  }
  return "no error";
}

TEST(CsvTest, RowsBecomeMappingsWithPlaces) {
  const Node list = read(
      "\xEF\xBB\xBF# taken at 4 K\r\n\r\n q , intensity,sigma , hkl\r\n"
      "1.157,  310, 9, \"1 0 -1\"\r\n# a gap\n 2.5,\"4\"\"0\" , , \n");
  ASSERT_EQ(list.items.size(), 2U);
  EXPECT_EQ(list.place.line(), 3);
  const Node& first = list.items[0];
  ASSERT_EQ(first.keys.size(), 4U);
  EXPECT_EQ(first.find("intensity")->text, "310");
  EXPECT_EQ(first.find("intensity")->place.line(), 4);
  EXPECT_EQ(first.find("intensity")->place.column(), 9);
  EXPECT_EQ(first.find("hkl")->text, "1 0 -1");
  const Node& second = list.items[1];
  EXPECT_EQ(second.keys.size(), 2U) << "empty cells are left out";
  EXPECT_EQ(second.find("q")->text, "2.5");
  EXPECT_EQ(second.find("q")->place.column(), 2);
  EXPECT_EQ(second.find("intensity")->text, "4\"0");
}

TEST(CsvTest, ErrorsSayWhereAndWhat) {
  const struct {
    const char* text;
    const char* message;
  } cases[] = {
      {"",
       "lines.csv:1:1: error: the file is empty; its first line names the columns: q, "
       "intensity, sigma or hkl"},
      {"q,sigma\n", "lines.csv:1:1: error: no rows follow the names of the columns"},
      {"q, intensty\n1,2\n",
       "lines.csv:1:4: error: unknown column 'intensty'; the nearest known column is 'intensity'"},
      {"q,,sigma\n",
       "lines.csv:1:3: error: a column without a name; accepted are q, intensity, sigma or hkl"},
      {"q,sigma,q\n", "lines.csv:1:9: error: the column 'q' appears twice"},
      {"q;sigma\n1;2\n",
       "lines.csv:1:1: error: columns must be separated by commas, not "
       "semicolons"},
      {"q\tsigma\n1\t2\n", "lines.csv:1:1: error: columns must be separated by commas, not tabs"},
      {"q,sigma\n1,2\n 1,2,3\n",
       "lines.csv:3:2: error: this row has 3 cells, but the header names 2 columns"},
      {"q,sigma\n1\n", "lines.csv:2:1: error: this row has 1 cell, but the header names 2 columns"},
      {"q,sigma\n1,\"2\n",
       "lines.csv:2:3: error: this quote is not closed on its line; close it there"},
      {"q,sigma\n\"1\" x,2\n",
       "lines.csv:2:5: error: text behind a closing quote; a comma is expected"},
      {"q,sigma\n1,\xE9\n",
       "lines.csv:2:3: error: this byte is not part of UTF-8 text; save the file with the encoding "
       "UTF-8"},
  };
  for (const auto& [text, message] : cases) EXPECT_EQ(fault(text), message) << text;
}

}  // namespace
}  // namespace spinsieve
