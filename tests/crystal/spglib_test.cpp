#include "crystal/spglib.hpp"

#include <algorithm>
#include <array>
#include <set>

#include <gtest/gtest.h>

#include "crystal/closure.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

TEST(SpglibTest, SettingsCarryTheirSymbols) {
  const HallSetting pnma = hall_setting(292);
  EXPECT_EQ(pnma.number, 62);
  EXPECT_EQ(pnma.symbol_short, "P n m a");
  EXPECT_EQ(pnma.symbol_full, "P 2_1/n 2_1/m 2_1/a");
  EXPECT_EQ(pnma.hall_symbol, "-P 2ac 2n");
  EXPECT_EQ(pnma.choice, "");
  EXPECT_EQ(hall_setting(82).symbol_short, "P 2_1/n");
  EXPECT_EQ(hall_setting(86).symbol_short, "P 2_1/b");
  EXPECT_EQ(hall_setting(84).symbol_short, "P 1 1 2_1/a");
  EXPECT_EQ(hall_setting(1).symbol_short, "P 1");
}

TEST(SpglibTest, ShortAndFullSymbolsAgreeInEverySetting) {
  // Dropping "2/" and "2_1/" (and the like) from the full symbol leaves the short one, in the
  // classes where the short symbol lists planes only.
  for (int hall_number = 227; hall_number <= 348; ++hall_number) {
    const HallSetting setting = hall_setting(hall_number);
    std::string planes;
    for (std::size_t i = 0; i < setting.symbol_full.size(); ++i) {
      const std::size_t slash = setting.symbol_full.find('/', i);
      if (setting.symbol_full[i] == '2') i = slash + 1;
      planes += setting.symbol_full[i];
    }
    EXPECT_EQ(planes, setting.symbol_short) << hall_number;
  }
}

TEST(SpglibTest, MagneticTypesAreAsManyAsKnown) {
  // Bradley & Cracknell (1972), ch. 7: 230 colourless, 230 grey, 674 and 517 black-white groups.
  std::array<int, 5> count{};
  std::set<std::string> names;
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    const MagneticType type = magnetic_type(uni_number);
    ASSERT_GE(type.type, 1);
    ASSERT_LE(type.type, 4);
    ++count[static_cast<std::size_t>(type.type)];
    names.insert(type.bns_number);
    EXPECT_EQ(type.bns_number.substr(0, type.bns_number.find('.')), std::to_string(type.number));
  }
  EXPECT_EQ(count, (std::array<int, 5>{0, 230, 230, 674, 517}));
  EXPECT_EQ(names.size(), 1651U);
}

TEST(SpglibTest, MagneticOperationsFormGroupsOfTheirType) {
  for (int uni_number = 1; uni_number <= 1651; ++uni_number) {
    SCOPED_TRACE(uni_number);
    const int type = magnetic_type(uni_number).type;
    std::vector<Operation> all;
    std::vector<Operation> unprimed;
    bool grey = false;
    bool primed_translation = false;
    for (const PrimedOperation& element : magnetic_operations(uni_number)) {
      all.push_back(element.operation);
      if (!element.primed) unprimed.push_back(element.operation);
      if (element.primed && element.operation.rotation == Operation{}.rotation)
        (element.operation.translation == FractionVector{} ? grey : primed_translation) = true;
    }
    EXPECT_EQ(all.size(), unprimed.size() * (type == 1 ? 1 : 2));
    EXPECT_EQ(grey, type == 2);
    EXPECT_EQ(primed_translation && !grey, type == 4);
    const OperationSet group = closure(unprimed);
    EXPECT_EQ(group.representatives.size() * group.centrings.size(), unprimed.size());
  }
}

TEST(SpglibTest, NumbersOutOfRangeAreRefused) {
  const auto message_of = [](auto body) -> std::string {
    try {
      body();
    } catch (const Error& error) {
      return error.message();
    }
    return "no error";
  };
  EXPECT_EQ(message_of([] { hall_operations(0); }), "hall number 0; it must lie within 1 to 530");
  EXPECT_EQ(message_of([] { hall_setting(531); }), "hall number 531; it must lie within 1 to 530");
  EXPECT_EQ(message_of([] { magnetic_type(0); }), "UNI number 0; it must lie within 1 to 1651");
  EXPECT_EQ(message_of([] { magnetic_operations(1652); }),
            "UNI number 1652; it must lie within 1 to 1651");
  EXPECT_EQ(message_of([] { magnetic_operations(1, 530); }),
            "UNI number 1 has no operations in the setting 530; the hall number must belong to its "
            "space-group family, or be 0");
}

}  // namespace
}  // namespace spinsieve
