#include "exact/exact_matrix.hpp"

#include <algorithm>
#include <stdexcept>

namespace spinsieve {

namespace {

void require(bool condition) {
  if (!condition) throw std::logic_error("matrices of unfitting shapes");
}

}  // namespace

ExactMatrix ExactMatrix::identity(std::size_t size) {
  ExactMatrix result(size, size);
  for (std::size_t i = 0; i < size; ++i) result(i, i) = 1;
  return result;
}

bool ExactMatrix::is_zero() const {
  return std::ranges::all_of(entries_, [](const Cyclotomic& c) { return c.is_zero(); });
}

ExactMatrix ExactMatrix::conjugate() const {
  ExactMatrix result = *this;
  for (Cyclotomic& c : result.entries_) c = c.conjugate();
  return result;
}

ExactMatrix ExactMatrix::transpose() const {
  ExactMatrix result(columns_, rows_);
  for (std::size_t i = 0; i < rows_; ++i)
    for (std::size_t j = 0; j < columns_; ++j) result(j, i) = (*this)(i, j);
  return result;
}

ExactMatrix ExactMatrix::adjoint() const { return conjugate().transpose(); }

Cyclotomic ExactMatrix::trace() const {
  require(rows_ == columns_);
  Cyclotomic sum;
  for (std::size_t i = 0; i < rows_; ++i) sum += (*this)(i, i);
  return sum;
}

ExactMatrix operator+(const ExactMatrix& a, const ExactMatrix& b) {
  require(a.rows_ == b.rows_ && a.columns_ == b.columns_);
  ExactMatrix result = a;
  for (std::size_t i = 0; i < result.entries_.size(); ++i) result.entries_[i] += b.entries_[i];
  return result;
}

ExactMatrix operator-(const ExactMatrix& a, const ExactMatrix& b) {
  require(a.rows_ == b.rows_ && a.columns_ == b.columns_);
  ExactMatrix result = a;
  for (std::size_t i = 0; i < result.entries_.size(); ++i) result.entries_[i] -= b.entries_[i];
  return result;
}

ExactMatrix operator*(const ExactMatrix& a, const ExactMatrix& b) {
  require(a.columns_ == b.rows_);
  ExactMatrix result(a.rows_, b.columns_);
  for (std::size_t i = 0; i < a.rows_; ++i) {
    for (std::size_t k = 0; k < a.columns_; ++k) {
      if (a(i, k).is_zero()) continue;
      for (std::size_t j = 0; j < b.columns_; ++j)
        if (!b(k, j).is_zero()) result(i, j) += a(i, k) * b(k, j);
    }
  }
  return result;
}

ExactMatrix operator*(const Cyclotomic& a, const ExactMatrix& b) {
  ExactMatrix result = b;
  for (Cyclotomic& c : result.entries_) c = a * c;
  return result;
}

ExactMatrix row_echelon(ExactMatrix matrix) {
  const std::size_t columns = matrix.columns();
  std::size_t rank = 0;
  for (std::size_t column = 0; column < columns && rank < matrix.rows(); ++column) {
    std::size_t pivot = rank;
    while (pivot < matrix.rows() && matrix(pivot, column).is_zero()) ++pivot;
    if (pivot == matrix.rows()) continue;
    const Cyclotomic scale = matrix(pivot, column).inverse();
    for (std::size_t j = 0; j < columns; ++j) {
      std::swap(matrix(rank, j), matrix(pivot, j));
      matrix(rank, j) = matrix(rank, j) * scale;
    }
    for (std::size_t i = 0; i < matrix.rows(); ++i) {
      const Cyclotomic factor = matrix(i, column);
      if (i == rank || factor.is_zero()) continue;
      for (std::size_t j = column; j < columns; ++j)
        if (!matrix(rank, j).is_zero()) matrix(i, j) -= factor * matrix(rank, j);
    }
    ++rank;
  }
  ExactMatrix result(rank, columns);
  for (std::size_t i = 0; i < rank; ++i)
    for (std::size_t j = 0; j < columns; ++j) result(i, j) = matrix(i, j);
  return result;
}

ExactMatrix null_space(const ExactMatrix& matrix) {
  const ExactMatrix echelon = row_echelon(matrix);
  const std::size_t columns = matrix.columns();
  std::vector<std::size_t> pivots;
  for (std::size_t i = 0; i < echelon.rows(); ++i) {
    std::size_t j = 0;
    while (echelon(i, j).is_zero()) ++j;
    pivots.push_back(j);
  }
  ExactMatrix basis(columns - pivots.size(), columns);
  std::size_t row = 0;
  for (std::size_t j = 0; j < columns; ++j) {
    if (std::ranges::binary_search(pivots, j)) continue;
    basis(row, j) = 1;
    for (std::size_t i = 0; i < pivots.size(); ++i) basis(row, pivots[i]) = -echelon(i, j);
    ++row;
  }
  return row_echelon(basis);
}

ExactMatrix stacked(const ExactMatrix& a, const ExactMatrix& b) {
  require(a.columns() == b.columns());
  ExactMatrix result(a.rows() + b.rows(), a.columns());
  for (std::size_t i = 0; i < result.rows(); ++i)
    for (std::size_t j = 0; j < result.columns(); ++j)
      result(i, j) = i < a.rows() ? a(i, j) : b(i - a.rows(), j);
  return result;
}

}  // namespace spinsieve
