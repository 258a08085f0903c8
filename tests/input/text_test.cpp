#include "input/text.hpp"

#include <array>
#include <clocale>

#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "input/fields.hpp"

namespace spinsieve {
namespace {

using testing::ThrowsMessage;

TEST(TextTest, NumbersReadAsDecimals) {
  EXPECT_EQ(parse_number("2.41"), 2.41);
  EXPECT_EQ(parse_number(" -1.5e3 "), -1500);
  EXPECT_EQ(parse_number("+.5"), 0.5);
  EXPECT_EQ(parse_number("010"), 10) << "no octal numbers";
  EXPECT_EQ(parse_integer("010"), 10);
  EXPECT_EQ(parse_integer("-3"), -3);
}

TEST(TextTest, TheLocaleChangesNothing) {
  const std::string before = std::setlocale(LC_ALL, nullptr);
  const bool changed = std::setlocale(LC_ALL, "de_DE.UTF-8") != nullptr;
  EXPECT_EQ(parse_number("2.5"), 2.5) << (changed ? "in a locale with a comma" : "in C");
  EXPECT_EQ(short_text(2.5), "2.5");
  std::setlocale(LC_ALL, before.c_str());
}

TEST(TextTest, WhatIsNoNumberIsQuoted) {
  const struct {
    const char* text;
    const char* message;
  } cases[] = {
      {"nan", "'nan' is not a finite number; accepted is a decimal such as 2.41"},
      {"-inf", "'-inf' is not a finite number; accepted is a decimal such as 2.41"},
      {".inf", "'.inf' is not a number; accepted is a decimal such as 2.41"},
      {"1e999", "'1e999' is beyond the range of numbers; accepted are 1e-300 to 1e300"},
      {"1/2", "'1/2' is not a number; accepted is a decimal here, such as 0.5"},
      {"5.74(2)",
       "'5.74(2)' is not a number; accepted is the value alone, without its uncertainty in "
       "brackets"},
      {"0x10", "'0x10' is not a number; accepted is a decimal such as 2.41"},
      {"1,5", "'1,5' is not a number; accepted is a decimal such as 2.41"},
      {"", "'' is not a number; accepted is a decimal such as 2.41"},
      {"+-1", "'+-1' is not a number; accepted is a decimal such as 2.41"},
  };
  for (const auto& [text, message] : cases)
    EXPECT_THAT([text = text] { parse_number(text); }, ThrowsMessage<Error>(message));
  EXPECT_THAT([] { parse_integer("1.0"); },
              ThrowsMessage<Error>("'1.0' is not an integer; accepted is a number such as 2"));
  EXPECT_THAT(
      [] { parse_integer("99999999999"); },
      ThrowsMessage<Error>("'99999999999' is too large; accepted are integers up to 2147483647"));
}

TEST(TextTest, NearestWordForgivesSlips) {
  constexpr std::array<std::string_view, 5> words{"position", "label", "ion", "b_iso", "u_ij"};
  const struct {
    const char* typed;
    const char* nearest;
  } cases[] = {{"positon", "position"}, {"poistion", "position"}, {"Label", "label"},
               {"iom", "ion"},          {"biso", "b_iso"},        {"ION", "ion"},
               {"Uij", "u_ij"}};
  for (const auto& [typed, nearest] : cases) EXPECT_EQ(nearest_word(typed, words), nearest);
}

TEST(TextTest, LongQuotesAreCutBetweenCharacters) {
  EXPECT_EQ(in_quotes("abc"), "'abc'");
  std::string longest;
  for (int i = 0; i < 60; ++i) longest += "é";
  EXPECT_EQ(in_quotes(longest), "'" + longest + "'");
  EXPECT_EQ(in_quotes(longest + "x"), "'" + longest + "…'");
  EXPECT_EQ(in_quotes("a\nb"), "'a…'");
}

TEST(TextTest, CutOrRoundedFractionsAreRecognised) {
  const struct {
    const char* written;
    const char* likely;
  } cases[] = {
      {"0.333", "1/3"},     {"0.3333", "1/3"},  {"0.666", "2/3"},   {"0.667", "2/3"},
      {"-0.333", "-1/3"},   {"-0.667", "-2/3"}, {"0.167", "1/6"},   {"0.166", "1/6"},
      {"1.3333", "4/3"},    {"0.143", "1/7"},   {"0.0833", "1/12"}, {"0.125", "1/8"},
      {"0.334", "167/500"}, {"0.33", "33/100"}, {"0.5", "1/2"},     {"0.2815", "563/2000"}};
  for (const auto& [written, likely] : cases)
    EXPECT_EQ(to_string(likely_fraction(written, 12, 3)), likely) << written;
  EXPECT_EQ(to_string(likely_fraction("0.143", 6, 3)), "143/1000");
  EXPECT_EQ(to_string(likely_fraction("0.33", 6, 2)), "1/3");
}

TEST(TextTest, AMissingFileIsNamed) {
  EXPECT_THAT(
      [] { read_text_file("no_such_job.yaml"); },
      ThrowsMessage<Error>("no_such_job.yaml: error: cannot be read: No such file or directory"));
  EXPECT_THAT([] { read_text_file("/"); },
              ThrowsMessage<Error>("/: error: cannot be read: it is a directory"));
}

}  // namespace
}  // namespace spinsieve
