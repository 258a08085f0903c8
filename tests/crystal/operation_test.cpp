#include "crystal/operation.hpp"

#include <gtest/gtest.h>

#include "crystal/spglib.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

std::string refusal(const char* text) {
  try {
    return "accepted as " + to_string(parse_operation(text));
  } catch (const Error& error) {
    return error.message();
  }
}

TEST(OperationTest, TextIsReadInEveryUsualSpelling) {
  const struct {
    const char* text;
    const char* canonical;
  } cases[] = {
      {"x,y,z", "x,y,z"},
      {"x, y+1/2, -z", "x,y+1/2,-z"},
      {"1/2-x,y,z", "-x+1/2,y,z"},
      {" -Y+1/2 , X-Y , Z+1/3 ", "-y+1/2,x-y,z+1/3"},
      {"0.25+z,x,y", "z+1/4,x,y"},
      {"+x,-y,+z-1/4", "x,-y,z-1/4"},
      {"2x+y,x+y,z", "2x+y,x+y,z"},
      {"2*x+y,x+y,z", "2x+y,x+y,z"},
      {"x+1/7,y+0.3333,z+3/2", "x+1/7,y+3333/10000,z+3/2"},
      {"x-1/2+1/2,y,z", "x,y,z"},
  };
  for (const auto& [text, canonical] : cases) {
    EXPECT_EQ(to_string(parse_operation(text)), canonical);
    EXPECT_EQ(to_string(parse_operation(canonical)), canonical);
  }
}

TEST(OperationTest, FaultsAreQuoted) {
  const std::string accepted = "; accepted are x,y+1/2,-z or x-y,x,z+0.25";
  EXPECT_EQ(refusal("x,y"), "operation 'x,y' does not have three parts" + accepted);
  EXPECT_EQ(refusal("x,y,z,x"), "operation 'x,y,z,x' does not have three parts" + accepted);
  EXPECT_EQ(refusal("x,,z"), "'' in an operation is empty" + accepted);
  EXPECT_EQ(refusal("x,y+q,z"),
            "'y+q' in an operation is no sum of x, y, z and a number" + accepted);
  EXPECT_EQ(refusal("xy,y,z"), "'xy' in an operation is no sum of x, y, z and a number" + accepted);
  EXPECT_EQ(refusal("x,y,z+"), "'z+' in an operation is no sum of x, y, z and a number" + accepted);
  EXPECT_EQ(refusal("1/2x,y,z"),
            "'1/2x' in an operation has a factor that is not a small integer" + accepted);
  EXPECT_EQ(refusal("60x+60x,y,z"),
            "'60x+60x' in an operation has a factor that is not a small integer" + accepted);
  EXPECT_EQ(refusal("x,x,z"),
            "operation 'x,x,z' has the determinant 0; a symmetry operation has 1 or -1");
  EXPECT_EQ(refusal("2x,y,z"),
            "operation '2x,y,z' has the determinant 2; a symmetry operation has 1 or -1");
}

TEST(OperationTest, ProductsActOneAfterTheOther) {
  const FractionVector x{Fraction(1, 7), Fraction(-2, 5), Fraction(3, 11)};
  for (const int hall_number : {82, 292, 461, 488, 530}) {
    const std::vector<Operation> operations = hall_operations(hall_number);
    for (const Operation& a : operations) {
      EXPECT_EQ(a * a.inverse(), Operation{});
      EXPECT_EQ(a.inverse() * a, Operation{});
      for (const Operation& b : operations) EXPECT_EQ((a * b).apply(x), a.apply(b.apply(x)));
    }
  }
}

TEST(OperationTest, RowsPairWithColumns) {
  // k R⁻¹ · R x = k · x: the product of a row and a column is kept.
  const FractionVector k{Fraction(1, 3), Fraction(2, 3), Fraction(1, 2)};
  const FractionVector x{Fraction(1, 7), Fraction(-2, 5), Fraction(3, 11)};
  for (const Operation& operation : hall_operations(488)) {
    const IntMatrix& R = operation.rotation;
    EXPECT_EQ(dot(row_times(k, inverse(R)), times(R, x)), dot(k, x));
  }
}

TEST(OperationTest, MatricesByHand) {
  const IntMatrix R{{{0, -1, 0}, {1, -1, 0}, {0, 0, 1}}};  // 3⁺ along c, hexagonal axes.
  const IntMatrix back{{{-1, 1, 0}, {-1, 0, 0}, {0, 0, 1}}};
  EXPECT_EQ(inverse(R), back);
  EXPECT_EQ(product(R, R), back);
  EXPECT_EQ(determinant(R), 1);
  EXPECT_EQ(trace(R), 0);
  EXPECT_EQ(row_times(IntVector{1, 2, 3}, R), (IntVector{2, -3, 3}));
  const IntMatrix skewed{{{1, 3, 0}, {0, 1, 0}, {0, 0, -1}}};
  EXPECT_EQ(determinant(skewed), -1);
  EXPECT_EQ(product(skewed, inverse(skewed)), (IntMatrix{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}}));
}

TEST(OperationTest, VectorsByHand) {
  const FractionVector v{Fraction(-1, 4), Fraction(5, 3), Fraction(2)};
  EXPECT_EQ(to_string(v), "-1/4, 5/3, 2");
  EXPECT_EQ(to_string(modulo_one(v)), "3/4, 2/3, 0");
  EXPECT_FALSE(is_integer(v));
  EXPECT_TRUE(is_integer(v - v));
  EXPECT_EQ(to_string(Fraction(2) * v), "-1/2, 10/3, 4");
}

}  // namespace
}  // namespace spinsieve
