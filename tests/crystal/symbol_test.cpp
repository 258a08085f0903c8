#include <set>
#include <string>

#include <gtest/gtest.h>

#include "crystal/space_group.hpp"
#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

std::string meaning(const std::string& text) {
  try {
    const SpaceGroup group = parse_space_group(text);
    return group.symbol() + (group.setting().empty() ? "" : ":" + group.setting());
  } catch (const Error& error) {
    return error.message();
  }
}

/// Settings whose operations are the same have no symbol of their own.
bool same_operations(const SpaceGroup& a, const SpaceGroup& b) {
  if (a.order() != b.order() || a.number() != b.number()) return false;
  for (const Operation& operation : a.operations()) {
    const auto index = b.find_rotation(operation.rotation);
    if (!index || !b.in_lattice(b.operations()[*index].translation - operation.translation))
      return false;
  }
  return true;
}

TEST(SymbolTest, EverySettingIsFoundAgainFromItsSymbols) {
  for (int hall_number = 1; hall_number <= 530; ++hall_number) {
    const SpaceGroup group = SpaceGroup::from_hall_number(hall_number);
    const std::string suffix = group.setting().empty() ? "" : ":" + group.setting();
    SCOPED_TRACE(group.symbol() + suffix);
    EXPECT_EQ(parse_space_group(group.symbol() + suffix).hall_number(), hall_number);
    EXPECT_EQ(parse_space_group(group.short_symbol() + suffix).hall_number(), hall_number);
    EXPECT_EQ(parse_space_group(std::to_string(group.number()) + suffix).hall_number(),
              suffix.empty() ? SpaceGroup::from_number(group.number()).hall_number() : hall_number);
    EXPECT_TRUE(same_operations(parse_hall_symbol(group.hall_symbol()), group));
    std::string packed = group.symbol();
    std::erase(packed, ' ');
    std::erase(packed, '_');
    EXPECT_EQ(parse_space_group(packed + suffix).hall_number(), hall_number);
    // Without a suffix at least the type is right.
    EXPECT_EQ(parse_space_group(group.short_symbol()).number(), group.number());
    EXPECT_EQ(parse_space_group(packed).number(), group.number());
  }
}

TEST(SymbolTest, SpellingsOfTheTradeAreRead) {
  const struct {
    const char* text;
    const char* meaning;
  } cases[] = {
      {"62", "P 2_1/n 2_1/m 2_1/a"},
      {"P n m a", "P 2_1/n 2_1/m 2_1/a"},
      {"Pnma", "P 2_1/n 2_1/m 2_1/a"},
      {"PNMA", "P 2_1/n 2_1/m 2_1/a"},
      {"pnma", "P 2_1/n 2_1/m 2_1/a"},
      {"P 21/n 21/m 21/a", "P 2_1/n 2_1/m 2_1/a"},
      {"-P 2ac 2n", "P 2_1/n 2_1/m 2_1/a"},
      {"-p 2AC 2N", "P 2_1/n 2_1/m 2_1/a"},
      {"Pbnm", "P 2_1/b 2_1/n 2_1/m:cab"},
      {"P b n m", "P 2_1/b 2_1/n 2_1/m:cab"},
      {"62:cab", "P 2_1/b 2_1/n 2_1/m:cab"},
      {"P21/c", "P 1 2_1/c 1:b1"},
      {"P 1 21/c 1", "P 1 2_1/c 1:b1"},
      {"P2(1)/c", "P 1 2_1/c 1:b1"},
      {"P21/n", "P 1 2_1/n 1:b2"},
      {"P 21/a", "P 1 2_1/a 1:b3"},
      {"P 21/b", "P 1 1 2_1/b:c3"},
      {"14:c1", "P 1 1 2_1/a:c1"},
      {"14:c", "P 1 1 2_1/a:c1"},
      {"C2/m", "C 1 2/m 1:b1"},
      {"I 2/m", "I 1 2/m 1:b3"},
      {"B 2", "B 1 1 2:c2"},
      {"Fd-3m", "F 4_1/d -3 2/m:2"},
      {"Fd3m", "F 4_1/d -3 2/m:2"},
      {"Fd-3m:1", "F 4_1/d -3 2/m:1"},
      {"F d -3 m S", "F 4_1/d -3 2/m:1"},
      {"F d -3 m Z", "F 4_1/d -3 2/m:2"},
      {"227:1", "F 4_1/d -3 2/m:1"},
      {"P 4/n b m : 2", "P 4/n 2/b 2/m:2"},
      {"P n c b:1", "P 2/n 2/c 2/b:1cab"},
      {"R-3c", "R -3 2/c:H"},
      {"R-3c:H", "R -3 2/c:H"},
      {"R -3 c:r", "R -3 2/c:R"},
      {"R -3 c R", "R -3 2/c:R"},
      {"Ia-3d", "I 4_1/a -3 2/d"},
      {"I a 3 d", "I 4_1/a -3 2/d"},
      {"Cmca", "C 2/m 2/c 2_1/e"},
      {"C m c e", "C 2/m 2/c 2_1/e"},
      {"Bmab", "B 2/m 2_1/e 2/b:a-cb"},
      {"A b a 2", "A e a 2"},
      {"Cccb", "C 2/c 2/c 2/e:2ba-c"},
      {"P 42", "P 4_2"},
      {"P42", "P 4_2"},
      {"P 4 2", "P 4 2 2"},      // A Hall symbol word by word.
      {"P 3* -2n", "R 3 c:R"},   // A Hall symbol.
      {"R 3 -2\"c", "R 3 c:H"},  // A Hall symbol.
      {"P 2", "P 1 2 1:b"},      // Hermann-Mauguin before Hall, where it means P 1 1 2.
      {"P 31 1 2", "P 3_1 1 2"},
      {"P 3 1 2", "P 3 1 2"},
      {"P 3 2 1", "P 3 2 1"},
  };
  for (const auto& [text, expected] : cases) EXPECT_EQ(meaning(text), expected) << text;
  EXPECT_EQ(parse_hall_symbol("P 2").symbol(), "P 1 1 2");
}

TEST(SymbolTest, FaultsNameWhatIsKnown) {
  EXPECT_EQ(meaning("P nmx"),
            "'P nmx' is no known space group; the nearest symbols are 'P n m a', 'P n m b', "
            "'P n m n'; accepted are a number 1 to 230, a Hermann-Mauguin or a Hall symbol");
  EXPECT_EQ(meaning("231"), "space-group number 231; it must lie within 1 to 230");
  EXPECT_EQ(meaning("0"), "space-group number 0; it must lie within 1 to 230");
  EXPECT_EQ(meaning("99999999999999999999"),
            "space-group number 99999999999999999999; it must lie within 1 to 230");
  EXPECT_EQ(meaning(" "),
            "' ' names no space group; accepted are a number 1 to 230, a Hermann-Mauguin or a "
            "Hall symbol");
  EXPECT_EQ(meaning("Pnma:3"), "'Pnma:3' has no setting ':3'; this symbol takes no suffix");
  EXPECT_EQ(meaning("R-3c:2"), "'R-3c:2' has no setting ':2'; accepted are :H, :R");
  EXPECT_EQ(meaning("62:xyz"),
            "'62:xyz' has no setting ':xyz'; accepted are :ba-c, :cab, :-cba, :bca, :a-cb");
  try {
    parse_hall_symbol("-P 2ac 2x");
    FAIL();
  } catch (const Error& error) {
    EXPECT_EQ(error.message(),
              "'-P 2ac 2x' is not among the 530 tabulated Hall symbols; accepted are for example "
              "-P 2ac 2n");
  }
}

}  // namespace
}  // namespace spinsieve
