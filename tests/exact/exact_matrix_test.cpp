#include "exact/exact_matrix.hpp"

#include <random>
#include <stdexcept>

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

class Draw {
 public:
  explicit Draw(unsigned seed) : random_(seed) {}
  Cyclotomic number() {
    Cyclotomic::Coefficients c{};
    for (std::int64_t& x : c)
      x = random_() % 3 == 0 ? static_cast<std::int64_t>(random_() % 5) - 2 : 0;
    return {c, 1};
  }
  ExactMatrix matrix(std::size_t rows, std::size_t columns) {
    ExactMatrix result(rows, columns);
    for (std::size_t i = 0; i < rows; ++i)
      for (std::size_t j = 0; j < columns; ++j) result(i, j) = number();
    return result;
  }

  /// Zeros and roots of unity, as the matrices of representations have them.
  ExactMatrix monomials(std::size_t rows, std::size_t columns) {
    ExactMatrix result(rows, columns);
    for (std::size_t i = 0; i < rows; ++i)
      for (std::size_t j = 0; j < columns; ++j)
        if (random_() % 2 == 0) result(i, j) = Cyclotomic::root(static_cast<int>(random_() % 24));
    return result;
  }

 private:
  std::mt19937 random_;
};

TEST(ExactMatrixTest, ProductsAndAdjointsFollowTheLaws) {
  Draw draw(2);
  for (int i = 0; i < 20; ++i) {
    const ExactMatrix A = draw.matrix(3, 4);
    const ExactMatrix B = draw.matrix(4, 2);
    const ExactMatrix C = draw.matrix(2, 3);
    EXPECT_EQ((A * B) * C, A * (B * C));
    EXPECT_EQ((A * B).adjoint(), B.adjoint() * A.adjoint());
    EXPECT_EQ(A.adjoint(), A.conjugate().transpose());
    EXPECT_EQ((A * B * C).trace(), (C * A * B).trace());
    EXPECT_EQ(A * ExactMatrix::identity(4), A);
    EXPECT_TRUE((A - A).is_zero());
    EXPECT_EQ(A + A, Cyclotomic(2) * A);
  }
}

TEST(ExactMatrixTest, ProductByHand) {
  ExactMatrix A(2, 2);
  A(0, 1) = Cyclotomic::root(6);  // i
  A(1, 0) = Cyclotomic(2);
  const ExactMatrix square = A * A;
  EXPECT_EQ(square(0, 0), Cyclotomic(2) * Cyclotomic::root(6));
  EXPECT_EQ(square(1, 1), Cyclotomic(2) * Cyclotomic::root(6));
  EXPECT_TRUE(square(0, 1).is_zero());
  EXPECT_TRUE(square(1, 0).is_zero());
}

TEST(ExactMatrixTest, EqualRowSpacesHaveEqualEchelonForms) {
  Draw draw(9);
  for (int i = 0; i < 20; ++i) {
    const ExactMatrix A = draw.monomials(3, 5);
    // Triangular mixtures with roots of unity on the diagonal are invertible.
    ExactMatrix mix = draw.monomials(3, 3);
    for (std::size_t row = 0; row < 3; ++row)
      for (std::size_t column = 0; column <= row; ++column)
        mix(row, column) = Cyclotomic(row == column ? Cyclotomic::root(i) : Cyclotomic());
    EXPECT_EQ(row_echelon(A), row_echelon(mix * A));
    EXPECT_EQ(row_echelon(A), row_echelon(stacked(A, mix * A)));
  }
}

TEST(ExactMatrixTest, EchelonFormByHand) {
  ExactMatrix A(2, 3);
  A(0, 1) = Cyclotomic(2);
  A(0, 2) = Cyclotomic(4);
  A(1, 1) = Cyclotomic(1);
  A(1, 2) = Cyclotomic(2);
  const ExactMatrix echelon = row_echelon(A);
  ASSERT_EQ(echelon.rows(), 1U);
  EXPECT_TRUE(echelon(0, 0).is_zero());
  EXPECT_EQ(echelon(0, 1), Cyclotomic(1));
  EXPECT_EQ(echelon(0, 2), Cyclotomic(2));
}

TEST(ExactMatrixTest, NullSpaceIsCompleteAndAnnihilated) {
  Draw draw(31);
  for (int i = 0; i < 20; ++i) {
    const ExactMatrix A = draw.matrix(2, 5);
    const ExactMatrix doubled = stacked(A, Cyclotomic::root(5) * A);
    const ExactMatrix N = null_space(doubled);
    EXPECT_EQ(N.rows() + row_echelon(A).rows(), 5U);
    EXPECT_TRUE((A * N.transpose()).is_zero());
    EXPECT_EQ(row_echelon(N), N);
  }
  EXPECT_EQ(null_space(ExactMatrix(1, 3)), ExactMatrix::identity(3));
  EXPECT_EQ(null_space(ExactMatrix::identity(3)).rows(), 0U);
}

TEST(ExactMatrixTest, ShapesThatDoNotMatchAreOurFault) {
  EXPECT_THROW(ExactMatrix(2, 3) * ExactMatrix(2, 3), std::logic_error);
  EXPECT_THROW(ExactMatrix(2, 3) + ExactMatrix(3, 2), std::logic_error);
  EXPECT_THROW(ExactMatrix(2, 3) - ExactMatrix(2, 2), std::logic_error);
}

}  // namespace
}  // namespace spinsieve
