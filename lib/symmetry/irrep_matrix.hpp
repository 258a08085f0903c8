#pragma once

#include <array>
#include <cstdint>
#include <memory>
#include <optional>
#include <span>

#include "exact/exact_matrix.hpp"

namespace spinsieve {

/// A unitary matrix of a small irrep, dimension 1 … 6, over Q(ζ), ζ = exp(2πi/24).
///
/// Nearly all are monomial: row i has the single entry ζ^exponent(i) in column(i). A dense matrix
/// is kept only where that form does not exist (points of (½,½,½) type of nine cubic groups).
class IrrepMatrix {
 public:
  static constexpr int largest = 6;

  IrrepMatrix() = default;  ///< The number 1.
  static IrrepMatrix identity(int dimension);
  /// REQUIRES: columns form a permutation of 0 … dimension − 1, exponents in 0 … 23.
  IrrepMatrix(int dimension, const std::array<std::uint8_t, largest>& columns,
              const std::array<std::uint8_t, largest>& exponents)
      : dimension_(static_cast<std::uint8_t>(dimension)), column_(columns), exponent_(exponents) {}
  /// Monomial when the matrix is; REQUIRES: square.
  explicit IrrepMatrix(const ExactMatrix& matrix);

  int dimension() const noexcept { return dimension_; }
  bool is_monomial() const noexcept { return dense_ == nullptr; }
  int column(int row) const { return column_[static_cast<std::size_t>(row)]; }
  int exponent(int row) const { return exponent_[static_cast<std::size_t>(row)]; }
  ExactMatrix to_exact() const;
  /// The exponent m with this = ζ^m other, if there is one. REQUIRES: equal dimensions.
  std::optional<int> ratio(const IrrepMatrix& other) const;

  /// ζ^exponent times the matrix.
  IrrepMatrix times_root(int exponent) const;
  IrrepMatrix adjoint() const;
  IrrepMatrix conjugate() const;
  friend IrrepMatrix operator*(const IrrepMatrix& a, const IrrepMatrix& b);
  friend bool operator==(const IrrepMatrix& a, const IrrepMatrix& b);

  /// The trace on 1, ζ, …, ζ⁷: an algebraic integer, so the coefficients are integers.
  using Trace = std::array<std::int16_t, 8>;
  Trace trace() const;

 private:
  std::uint8_t dimension_ = 1;
  std::array<std::uint8_t, largest> column_{};
  std::array<std::uint8_t, largest> exponent_{};
  std::shared_ptr<const ExactMatrix> dense_;  ///< Shared by copies, never changed.
};

Cyclotomic to_cyclotomic(const IrrepMatrix::Trace& trace);
/// Adds ζ^exponent; REQUIRES: 0 ≤ exponent < 24.
void add_root(IrrepMatrix::Trace& sum, int exponent, int factor = 1);
/// ζ^exponent times the trace.
IrrepMatrix::Trace times_root(const IrrepMatrix::Trace& trace, int exponent);

/// The unitary matrix proportional to one with rows of equal norm, if the norm's square root lies
/// in the field; std::logic_error otherwise (it always does for intertwiners of small irreps).
ExactMatrix normalized_unitary(ExactMatrix matrix);

/// A unitary X with left[i] X = X right[i] for two equivalent irreps listed in the same order of
/// elements, whose factor systems agree: X = Σ_i left[i] E right[i]⁺. Unique up to a phase.
/// Throws std::logic_error when they are not equivalent.
IrrepMatrix unitary_intertwiner(std::span<const IrrepMatrix> left,
                                std::span<const IrrepMatrix> right);

/// exponent modulo 24 in 0 … 23.
constexpr int root_exponent(int exponent) {
  const int rest = exponent % Cyclotomic::order;
  return rest < 0 ? rest + Cyclotomic::order : rest;
}

}  // namespace spinsieve
