#include "crystal/fraction_matrix.hpp"

#include <random>

#include <gtest/gtest.h>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

FractionMatrix draw(std::mt19937& random) {
  FractionMatrix A;
  for (FractionVector& row : A)
    for (Fraction& x : row)
      x = Fraction(static_cast<std::int64_t>(random() % 9) - 4,
                   static_cast<std::int64_t>(1 + random() % 4));
  return A;
}

TEST(FractionMatrixTest, InversesAndDeterminantsFollowTheLaws) {
  std::mt19937 random(4);
  const FractionMatrix unit = to_fractions({{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}});
  for (int i = 0; i < 100; ++i) {
    const FractionMatrix A = draw(random);
    const FractionMatrix B = draw(random);
    EXPECT_EQ(determinant(product(A, B)), determinant(A) * determinant(B));
    EXPECT_EQ(transpose(product(A, B)), product(transpose(B), transpose(A)));
    if (determinant(A).is_zero()) continue;
    EXPECT_EQ(product(A, inverse(A)), unit);
    EXPECT_EQ(times(A, times(inverse(A), B[0])), B[0]);
  }
  EXPECT_THROW(inverse(FractionMatrix{}), Error);
}

TEST(FractionMatrixTest, SolutionsSolve) {
  std::mt19937 random(8);
  for (int i = 0; i < 100; ++i) {
    const FractionMatrix A = draw(random);
    const FractionVector x = draw(random)[0];
    const FractionVector right = times(A, x);
    const auto found = solution(A, right);
    ASSERT_TRUE(found);
    EXPECT_EQ(times(A, *found), right);
  }
  const std::vector<FractionVector> rows{{1, 1, 0}, {2, 2, 0}};
  EXPECT_FALSE(solution(rows, std::vector<Fraction>{1, 3}));
  EXPECT_EQ(*solution(rows, std::vector<Fraction>{1, 2}), (FractionVector{1, 0, 0}));
}

TEST(FractionMatrixTest, NullSpacesByHand) {
  const auto null = null_space({{1, -1, 0}, {2, -2, 0}});
  ASSERT_EQ(null.size(), 2U);
  EXPECT_EQ(to_string(null[0]), "1, 1, 0");
  EXPECT_EQ(to_string(null[1]), "0, 0, 1");
  EXPECT_EQ(null_space({}).size(), 3U);
  EXPECT_EQ(row_echelon({{0, 2, 4}, {0, 1, 2}}).size(), 1U);
}

TEST(FractionMatrixTest, OnlyIntegersBecomeIntegers) {
  EXPECT_FALSE(to_integers({{{Fraction(1, 2), 0, 0}, {0, 1, 0}, {0, 0, 1}}}));
  EXPECT_EQ(to_integers({{{-3, 0, 0}, {0, 1, 0}, {0, 0, 1}}}),
            (IntMatrix{{{-3, 0, 0}, {0, 1, 0}, {0, 0, 1}}}));
}

}  // namespace
}  // namespace spinsieve
