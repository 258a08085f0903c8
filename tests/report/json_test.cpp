#include "report/json.hpp"

#include <complex>
#include <limits>
#include <string>

#include <gtest/gtest.h>
#include <nlohmann/json.hpp>

namespace spinsieve {
namespace {

TEST(JsonTest, KeepsTheOrderOfKeys) {
  Json object = Json::object();
  object.set("schema", "rank/1").set("complete", true).set("a", 1);
  EXPECT_EQ(object.text(), "{\"schema\": \"rank/1\", \"complete\": true, \"a\": 1}\n");
}

TEST(JsonTest, WritesEachKindOfValue) {
  Json array = Json::array();
  array.push(Json()).push(false).push(-3).push(0.1).push("½ \"x\"\n").push(std::complex(1.5, -0.0));
  array.push(std::numeric_limits<double>::quiet_NaN());
  EXPECT_EQ(array.text(), "[null, false, -3, 0.1, \"½ \\\"x\\\"\\n\", [1.5, 0.0], null]\n");
  EXPECT_EQ(Json("Γ").text(Letters::plain), "\"\\u0393\"\n");
}

TEST(JsonTest, InvalidUtf8IsReplacedNotThrown) {
  EXPECT_EQ(Json("a\xFFz").text(), "\"a\xEF\xBF\xBDz\"\n");
}

TEST(JsonTest, BreaksWhatIsWiderThanThePageAndStaysReadable) {
  Json rows = Json::array();
  for (int i = 0; i < 40; ++i) rows.push(Json::array_of(std::array{i, i + 1, i + 2}));
  Json object = Json::object();
  object.set("rows", std::move(rows)).set("empty", Json::array());
  const std::string text = object.text();
  std::size_t widest = 0;
  for (std::size_t start = 0; start < text.size();) {
    const std::size_t end = text.find('\n', start);
    widest = std::max(widest, end - start);
    start = end + 1;
  }
  EXPECT_LE(widest, 100U);
  const nlohmann::json read = nlohmann::json::parse(text);  // The judge: another reader.
  ASSERT_EQ(read["rows"].size(), 40U);
  EXPECT_EQ(read["rows"][39][2], 41);
  EXPECT_TRUE(read["empty"].empty());
}

TEST(JsonTest, NumbersSurviveARoundTrip) {
  for (const double value : {1.0 / 3, 1e-300, 123456789.123456789, 2.695})
    EXPECT_EQ(nlohmann::json::parse(Json(value).text()).get<double>(), value);
}

TEST(JsonTest, RefusesAKeyTwiceAndTheWrongKind) {
  Json object = Json::object();
  object.set("id", "3a");
  EXPECT_THROW(object.set("id", "3b"), std::logic_error);
  EXPECT_THROW(object.push(1), std::logic_error);
  EXPECT_THROW(Json(1).set("id", 1), std::logic_error);
}

}  // namespace
}  // namespace spinsieve
