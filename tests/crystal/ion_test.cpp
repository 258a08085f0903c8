#include "crystal/ion.hpp"

#include <gtest/gtest.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

TEST(IonTest, UsualSpellingsAreRead) {
  const struct {
    const char* text;
    Ion ion;
    const char* canonical;
  } cases[] = {
      {"Mn3+", {"Mn", 3}, "Mn3+"}, {"Mn+3", {"Mn", 3}, "Mn3+"},     {"Mn(III)", {"Mn", 3}, "Mn3+"},
      {"Fe", {"Fe", 0}, "Fe"},     {"Ho3+", {"Ho", 3}, "Ho3+"},     {"O2-", {"O", -2}, "O2-"},
      {"O-2", {"O", -2}, "O2-"},   {"Na+", {"Na", 1}, "Na1+"},      {"Cl-", {"Cl", -1}, "Cl1-"},
      {"D", {"D", 0}, "D"},        {"Ru(VIII)", {"Ru", 8}, "Ru8+"}, {"Fe(0)", {"Fe", 0}, "Fe"},
  };
  for (const auto& [text, ion, canonical] : cases) {
    SCOPED_TRACE(text);
    EXPECT_EQ(parse_ion(text), ion);
    EXPECT_EQ(to_string(ion), canonical);
    EXPECT_EQ(parse_ion(canonical), ion);
  }
}

TEST(IonTest, OtherTextIsRefused) {
  for (const char* text : {"", "mn3+", "MN3+", "Xx2+", "3+", "Mm"}) try {
      parse_ion(text);
      FAIL() << text;
    } catch (const Error& error) {
      EXPECT_EQ(error.message(), "ion '" + std::string(text) +
                                     "' does not begin with an element symbol such as Mn; "
                                     "accepted are Mn3+, Mn+3, Mn(III), Fe");
    }
  for (const char* text : {"Mn3", "Mn0+", "Mn++", "Mn3+4", "Mn(iii)", "Mn()", "Mn 3+", "Mn33+"})
    try {
      parse_ion(text);
      FAIL() << text;
    } catch (const Error& error) {
      EXPECT_EQ(error.message(), "ion '" + std::string(text) +
                                     "' has no charge that can be read after Mn; accepted are "
                                     "Mn3+, Mn+3, Mn(III), Fe");
    }
}

TEST(IonTest, ElementsAreKnownByCase) {
  for (const char* symbol : {"H", "D", "Co", "U", "Og"}) EXPECT_TRUE(is_element(symbol));
  for (const char* symbol : {"", "CO", "co", "T", "Z"}) EXPECT_FALSE(is_element(symbol));
}

}  // namespace
}  // namespace spinsieve
