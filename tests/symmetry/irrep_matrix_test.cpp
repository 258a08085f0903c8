#include "symmetry/irrep_matrix.hpp"

#include <random>
#include <stdexcept>
#include <vector>

#include <gtest/gtest.h>

namespace spinsieve {
namespace {

IrrepMatrix random_monomial(std::mt19937& random, int dimension) {
  std::array<std::uint8_t, IrrepMatrix::largest> columns{};
  std::array<std::uint8_t, IrrepMatrix::largest> exponents{};
  for (int i = 0; i < dimension; ++i)
    columns[static_cast<std::size_t>(i)] = static_cast<std::uint8_t>(i);
  for (std::size_t i = static_cast<std::size_t>(dimension); i > 1; --i)
    std::swap(columns[i - 1], columns[random() % i]);
  for (int i = 0; i < dimension; ++i)
    exponents[static_cast<std::size_t>(i)] = static_cast<std::uint8_t>(random() % 24);
  return {dimension, columns, exponents};
}

/// (1 i; i 1)/√2: unitary and not monomial.
IrrepMatrix dense_example() {
  const Cyclotomic half_root = (Cyclotomic::root(3) + Cyclotomic::root(-3)) / Cyclotomic(2);
  ExactMatrix m(2, 2);
  m(0, 0) = m(1, 1) = half_root;
  m(0, 1) = m(1, 0) = half_root * Cyclotomic::root(6);
  return IrrepMatrix(m);
}

TEST(IrrepMatrixTest, MonomialFormAgreesWithDenseMatrices) {
  std::mt19937 random(11);
  for (int dimension = 1; dimension <= IrrepMatrix::largest; ++dimension) {
    for (int n = 0; n < 20; ++n) {
      const IrrepMatrix a = random_monomial(random, dimension);
      const IrrepMatrix b = random_monomial(random, dimension);
      ASSERT_TRUE(a.is_monomial());
      EXPECT_EQ((a * b).to_exact(), a.to_exact() * b.to_exact());
      EXPECT_EQ(a.adjoint().to_exact(), a.to_exact().adjoint());
      EXPECT_EQ(a.conjugate().to_exact(), a.to_exact().conjugate());
      EXPECT_EQ(a.times_root(29).to_exact(), Cyclotomic::root(5) * a.to_exact());
      EXPECT_EQ(to_cyclotomic(a.trace()), a.to_exact().trace());
      EXPECT_EQ(to_cyclotomic(times_root(a.trace(), -7)),
                Cyclotomic::root(-7) * a.to_exact().trace());
      EXPECT_EQ(IrrepMatrix(a.to_exact()), a) << "a dense form of a monomial matrix is reduced";
    }
  }
}

TEST(IrrepMatrixTest, DenseMatricesKeepTheirValues) {
  const IrrepMatrix m = dense_example();
  ASSERT_FALSE(m.is_monomial());
  EXPECT_EQ(m * m.adjoint(), IrrepMatrix::identity(2));
  const IrrepMatrix square = m * m;  // By hand: (0 i; i 0).
  EXPECT_TRUE(square.is_monomial());
  EXPECT_EQ(square, IrrepMatrix(2, {1, 0}, {6, 6}));
  EXPECT_EQ(m.times_root(24), m);
  EXPECT_EQ(m.times_root(12) * m.times_root(12), square);
  EXPECT_EQ(m.conjugate(), m.adjoint()) << "a symmetric matrix";
  EXPECT_EQ((m * IrrepMatrix(2, {1, 0}, {0, 0})).to_exact()(0, 0), m.to_exact()(0, 1));
}

TEST(IrrepMatrixTest, NormalizedUnitaryTakesAnyMultiple) {
  ExactMatrix m = dense_example().to_exact();
  const ExactMatrix scaled = (Cyclotomic(3) * Cyclotomic::root(5)) * m;
  const ExactMatrix unitary = normalized_unitary(scaled);
  EXPECT_EQ(unitary * unitary.adjoint(), ExactMatrix::identity(2));
  EXPECT_EQ(row_echelon(stacked(unitary, scaled)), row_echelon(unitary));
  ExactMatrix third(1, 1);  // Norm 7: √7 is not in the field.
  third(0, 0) = 1;
  EXPECT_EQ(normalized_unitary(Cyclotomic(7) * third), third);
}

/// The two-dimensional irrep of the group of the square and its images under a change of basis.
TEST(IrrepMatrixTest, IntertwinersJoinEquivalentIrreps) {
  const IrrepMatrix turn(2, {1, 0}, {12, 0});
  const IrrepMatrix mirror(2, {0, 1}, {0, 12});
  std::vector<IrrepMatrix> right;
  for (int r = 0; r < 4; ++r)
    for (int m = 0; m < 2; ++m) {
      IrrepMatrix g = IrrepMatrix::identity(2);
      for (int i = 0; i < r; ++i) g = g * turn;
      right.push_back(m == 0 ? g : g * mirror);
    }
  for (const IrrepMatrix& basis :
       {dense_example(), IrrepMatrix(2, {1, 0}, {5, 11}), IrrepMatrix::identity(2),
        dense_example() * IrrepMatrix(2, {0, 1}, {0, 3})}) {
    std::vector<IrrepMatrix> left;
    for (const IrrepMatrix& g : right) left.push_back(basis * g * basis.adjoint());
    const IrrepMatrix X = unitary_intertwiner(left, right);
    EXPECT_EQ(X * X.adjoint(), IrrepMatrix::identity(2));
    for (std::size_t i = 0; i < left.size(); ++i) EXPECT_EQ(left[i] * X, X * right[i]);
  }
}

TEST(IrrepMatrixTest, IntertwinersRefuseInequivalentIrreps) {
  const std::vector<IrrepMatrix> trivial{IrrepMatrix::identity(1), IrrepMatrix::identity(1)};
  const std::vector<IrrepMatrix> sign{IrrepMatrix::identity(1), IrrepMatrix(1, {0}, {12})};
  EXPECT_THROW(unitary_intertwiner(trivial, sign), std::logic_error);
}

}  // namespace
}  // namespace spinsieve
