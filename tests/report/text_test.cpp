#include "report/text.hpp"

#include <string>
#include <vector>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

namespace spinsieve {
namespace {

using ::testing::ElementsAre;

TEST(TextTest, WidthCountsColumnsNotBytes) {
  const struct {
    const char* text;
    std::size_t width;
    const char* why;
  } cases[] = {
      {"", 0, "nothing"},
      {"rank", 4, "one byte each"},
      {"Γ1 µB Å⁻¹", 9, "Greek and superscripts take one column"},
      {"a\xCC\x84", 1, "a with a combining bar"},
      {"磁石", 4, "wide letters take two"},
  };
  for (const auto& [text, width, why] : cases) {
    SCOPED_TRACE(why);
    EXPECT_EQ(display_width(text), width);
  }
}

TEST(TextTest, PlainLettersLoseNoMeaning) {
  EXPECT_EQ(to_plain("Γ3: 3.7(1) µB, Q = 1.157 Å⁻¹"), "Gamma3: 3.7(1) uB, Q = 1.157 1/A");
  EXPECT_EQ(to_plain("exp(−2πi k·L), χ² ≤ 9"), "exp(-2pii k*L), chi2 <= 9");
  EXPECT_EQ(to_plain("磁"), "?");
}

TEST(TextTest, WrapsAtBlanksAndKeepsLongWords) {
  EXPECT_THAT(wrapped("one two three", 7), ElementsAre("one two", "three"));
  EXPECT_THAT(wrapped("Γ1 Γ2 Γ3", 5), ElementsAre("Γ1 Γ2", "Γ3"));
  EXPECT_THAT(wrapped("a (u,v,w)-and-more b", 5), ElementsAre("a", "(u,v,w)-and-more", "b"));
  EXPECT_THAT(wrapped("first\n\nlast", 20), ElementsAre("first", "", "last"));
}

TEST(TextTest, NumbersNeverShowNegativeZero) {
  EXPECT_EQ(fixed(-0.0004, 3), "0.000");
  EXPECT_EQ(fixed(-0.0006, 3), "-0.001");
  EXPECT_EQ(fixed(1.0 / 0.0, 3), "-");
  EXPECT_EQ(significant(-0.0, 3), "0");
  EXPECT_EQ(significant(0.00012345, 3), "0.000123");
}

TEST(TextTest, UncertaintyStandsInTheLastDigits) {
  const struct {
    double value, sigma;
    const char* text;
  } cases[] = {
      {3.7213, 0.0512, "3.72(5)"}, {3.7213, 0.0123, "3.721(12)"}, {3.7213, 0.0196, "3.72(2)"},
      {310.4, 9.2, "310(9)"},      {310.4, 27, "310(27)"},        {3.7213, 0.0961, "3.72(10)"},
      {-0.004, 0.3, "0.0(3)"},     {3.7213, 0, "3.721"},          {2.5, 0.997, "2.5(10)"},
  };
  for (const auto& [value, sigma, text] : cases) EXPECT_EQ(with_uncertainty(value, sigma), text);
}

TEST(TableTest, AlignsByColumnsOfTheTerminal) {
  Table table({{"id", Align::left}, {"χ²", Align::right}});
  table.add_row({"Γ1", "12.5"});
  table.add_row({"long", "3"});
  EXPECT_THAT(table.lines(100, Letters::trade),
              ElementsAre("id      χ²", "────  ────", "Γ1    12.5", "long     3"));
  EXPECT_THAT(table.lines(100, Letters::plain),
              ElementsAre("id      chi2", "------  ----", "Gamma1  12.5", "long       3"));
}

TEST(TableTest, BreaksLongCellsInsteadOfOverflowing) {
  Table table({{"id", Align::left}, {"reason", Align::left}});
  table.add_row({"3a", "no arrangement of this symmetry can fit the lines"});
  for (const std::string& line : table.lines(30, Letters::trade))
    EXPECT_LE(display_width(line), 30);
  EXPECT_THAT(table.lines(30, Letters::trade),
              ElementsAre("id  reason", "──  ──────────────────────────",
                          "3a  no arrangement of this", "    symmetry can fit the lines"));
}

TEST(TableTest, RefusesARowOfAnotherLength) {
  Table table({{"id", Align::left}});
  EXPECT_THROW(table.add_row({"a", "b"}), std::logic_error);
}

TEST(TextPageTest, SeparatesPartsByOneBlankLine) {
  TextPage page(Letters::trade);
  page.heading("Γ");
  page.paragraph("text");
  page.blank();
  page.heading("next");
  page.item("name", "value", 6);
  EXPECT_EQ(page.text(), "Γ\n=\ntext\n\nnext\n====\nname  value\n");
}

}  // namespace
}  // namespace spinsieve
