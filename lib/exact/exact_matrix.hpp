#pragma once

#include <cstddef>
#include <vector>

#include "exact/cyclotomic.hpp"

namespace spinsieve {

/// A dense matrix of cyclotomic numbers, row by row.
class ExactMatrix {
 public:
  ExactMatrix() = default;
  ExactMatrix(std::size_t rows, std::size_t columns)
      : rows_(rows), columns_(columns), entries_(rows * columns) {}

  static ExactMatrix identity(std::size_t size);

  std::size_t rows() const noexcept { return rows_; }
  std::size_t columns() const noexcept { return columns_; }
  Cyclotomic& operator()(std::size_t row, std::size_t column) {
    return entries_[row * columns_ + column];
  }
  const Cyclotomic& operator()(std::size_t row, std::size_t column) const {
    return entries_[row * columns_ + column];
  }

  bool is_zero() const;
  ExactMatrix conjugate() const;
  ExactMatrix transpose() const;
  ExactMatrix adjoint() const;  ///< Conjugate transpose.
  Cyclotomic trace() const;     ///< REQUIRES: square.

  /// REQUIRE: matching shapes; std::logic_error otherwise.
  friend ExactMatrix operator+(const ExactMatrix& a, const ExactMatrix& b);
  friend ExactMatrix operator-(const ExactMatrix& a, const ExactMatrix& b);
  friend ExactMatrix operator*(const ExactMatrix& a, const ExactMatrix& b);
  friend ExactMatrix operator*(const Cyclotomic& a, const ExactMatrix& b);
  friend bool operator==(const ExactMatrix& a, const ExactMatrix& b) = default;

 private:
  std::size_t rows_ = 0;
  std::size_t columns_ = 0;
  std::vector<Cyclotomic> entries_;
};

/// Reduced row echelon form without zero rows: the canonical basis of the row space, each row's
/// first non-zero entry being 1. Equal row spaces give equal matrices.
ExactMatrix row_echelon(ExactMatrix matrix);

/// Canonical basis, as rows, of all x with matrix · x = 0.
ExactMatrix null_space(const ExactMatrix& matrix);

/// The rows of a, then those of b. REQUIRES: equal numbers of columns.
ExactMatrix stacked(const ExactMatrix& a, const ExactMatrix& b);

}  // namespace spinsieve
