#include <gmock/gmock.h>
#include <gtest/gtest.h>

#include "exact/error.hpp"
#include "proof.hpp"

namespace spinsieve {
namespace {

using ::testing::HasSubstr;
using ::testing::ThrowsMessage;

Wavevector parse(const std::array<const char*, 3>& texts) {
  Wavevector k;
  for (std::size_t i = 0; i < 3; ++i) parse_component(texts[i], i, k);
  return k;
}

TEST(WavevectorTest, ReadsAndPrintsComponents) {
  const struct {
    std::array<const char*, 3> texts;
    const char* printed;
  } cases[] = {
      {{"0", "1/2", "-1/3"}, "0, 1/2, -1/3"},
      {{"0.25", "u", "-u"}, "1/4, u, -u"},
      {{"1/2-u", "2u", "u+v"}, "-u+1/2, 2u, u+v"},
      {{" 1/2 + u ", "1/2*w", "5/2"}, "u+1/2, 1/2*w, 5/2"},
      {{"-u-v-1/2", "0.28", "2.5e-1"}, "-u-v-1/2, 7/25, 1/4"},
      {{"0", "0", "0"}, "0, 0, 0"},
  };
  for (const auto& [texts, printed] : cases) {
    const Wavevector k = parse(texts);
    EXPECT_EQ(to_string(k), printed);
    const auto again = component_texts(k);
    EXPECT_EQ(parse({again[0].c_str(), again[1].c_str(), again[2].c_str()}), k);
  }
}

TEST(WavevectorTest, RefusesWhatIsNoComponent) {
  for (const char* text : {"", "x", "1/0", "u*2", "1//2", "uu", "1/2-", "--u", "u1", "1 2"}) {
    SCOPED_TRACE(text);
    Wavevector k;
    EXPECT_THROW(parse_component(text, 0, k), Error);
  }
  Wavevector k;
  EXPECT_THAT(([&] { parse_component("half", 1, k); }), ThrowsMessage<Error>(HasSubstr("'half'")));
}

TEST(WavevectorTest, RowsTurnFromTheRight) {
  // By hand: a threefold axis x' = -y, y' = x - y takes the row (h, k) to (k, -h - k).
  const Operation three = parse_operation("-y,x-y,z");
  EXPECT_EQ(to_string(row_times(parse({"1/3", "0", "u"}), three.rotation)), "0, -1/3, u");
  EXPECT_EQ(to_string(row_times(parse({"u", "v", "0"}), three.rotation)), "v, -u-v, 0");
}

TEST(WavevectorTest, CountsFreeParameters) {
  EXPECT_EQ(parse({"0", "1/2", "0"}).free_parameters(), 0);
  EXPECT_EQ(parse({"u", "u", "0"}).free_parameters(), 1);
  EXPECT_EQ(parse({"u", "v", "u+v"}).free_parameters(), 2);
  EXPECT_EQ(parse({"u", "w", "0"}).free_parameters(), 2);
}

}  // namespace
}  // namespace spinsieve
