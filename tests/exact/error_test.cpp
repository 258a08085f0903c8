#include "exact/error.hpp"

#include <limits>

#include <gtest/gtest.h>

#include "exact/checked.hpp"

namespace spinsieve {
namespace {

TEST(ErrorTest, TheTextSaysWhereWhenItIsKnown) {
  const auto file = std::make_shared<const std::string>("job.yaml");
  EXPECT_STREQ(Error("what; what is accepted").what(), "what; what is accepted");
  EXPECT_STREQ(Error(Place(file, 7, 19), "what").what(), "job.yaml:7:19: error: what");
  EXPECT_STREQ(Error(Place(file, 0, 0), "cannot be read").what(),
               "job.yaml: error: cannot be read");
}

TEST(ErrorTest, TheFirstPlaceIsKept) {
  const auto file = std::make_shared<const std::string>("a.cif");
  const Error bare("wrong");
  const Error placed = bare.at(Place(file, 3, 1));
  EXPECT_STREQ(placed.what(), "a.cif:3:1: error: wrong");
  EXPECT_STREQ(placed.at(Place(file, 9, 9)).what(), "a.cif:3:1: error: wrong");
  EXPECT_EQ(placed.message(), "wrong");
  EXPECT_EQ(placed.place().line(), 3);
  EXPECT_FALSE(bare.place().known());
  EXPECT_EQ(bare.place().file(), "");
}

TEST(CheckedTest, OverflowThrowsAndTheLastValueDoesNot) {
  constexpr std::int64_t most = std::numeric_limits<std::int64_t>::max();
  EXPECT_EQ(checked_add(most - 1, 1), most);
  EXPECT_THROW(checked_add(most, 1), Error);
  EXPECT_EQ(checked_subtract(-most, 1), std::numeric_limits<std::int64_t>::min());
  EXPECT_THROW(checked_subtract(-most, 2), Error);
  EXPECT_EQ(checked_multiply(most / 2, 2), most - 1);
  EXPECT_THROW(checked_multiply(most / 2 + 1, 2), Error);
}

TEST(CheckedTest, TheModuloIsNeverNegative) {
  for (std::int64_t n = 1; n < 8; ++n)
    for (std::int64_t a = -20; a <= 20; ++a) {
      const std::int64_t rest = positive_modulo(a, n);
      EXPECT_GE(rest, 0);
      EXPECT_LT(rest, n);
      EXPECT_EQ((a - rest) % n, 0);
    }
}

}  // namespace
}  // namespace spinsieve
