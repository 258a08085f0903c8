#include "symmetry/irrep_matrix.hpp"

#include <algorithm>
#include <cmath>
#include <optional>
#include <stdexcept>

namespace spinsieve {

namespace {

constexpr std::size_t index(int i) { return static_cast<std::size_t>(i); }

/// Coefficients of ζ^k on 1, ζ, …, ζ⁷, for 0 ≤ k < 24.
constexpr std::array<IrrepMatrix::Trace, 24> make_roots() {
  std::array<IrrepMatrix::Trace, 24> roots{};
  for (int k = 0; k < 24; ++k) {
    const auto sign = static_cast<std::int16_t>(k < 12 ? 1 : -1);
    const int rest = k % 12;
    if (rest < 8) {
      roots[index(k)][index(rest)] = sign;
    } else {
      roots[index(k)][index(rest - 4)] = sign;
      roots[index(k)][index(rest - 8)] = static_cast<std::int16_t>(-sign);
    }
  }
  return roots;
}

constexpr std::array<IrrepMatrix::Trace, 24> roots = make_roots();

}  // namespace

void add_root(IrrepMatrix::Trace& sum, int exponent, int factor) {
  const IrrepMatrix::Trace& root = roots[index(exponent)];
  for (std::size_t i = 0; i < 8; ++i) sum[i] = static_cast<std::int16_t>(sum[i] + factor * root[i]);
}

IrrepMatrix IrrepMatrix::identity(int dimension) {
  std::array<std::uint8_t, largest> columns{};
  for (int i = 0; i < dimension; ++i) columns[index(i)] = static_cast<std::uint8_t>(i);
  return {dimension, columns, {}};
}

IrrepMatrix::IrrepMatrix(const ExactMatrix& matrix)
    : dimension_(static_cast<std::uint8_t>(matrix.rows())) {
  bool monomial = true;
  for (std::size_t i = 0; i < matrix.rows() && monomial; ++i) {
    int entries = 0;
    for (std::size_t j = 0; j < matrix.columns(); ++j) {
      if (matrix(i, j).is_zero()) continue;
      const std::optional<Phase> phase = matrix(i, j).phase();
      monomial = monomial && phase.has_value() && ++entries == 1;
      if (!monomial) break;
      column_[i] = static_cast<std::uint8_t>(j);
      exponent_[i] = static_cast<std::uint8_t>(phase->numerator() *
                                               (Cyclotomic::order / phase->denominator()));
    }
    monomial = monomial && entries == 1;
  }
  if (monomial) return;
  column_ = {};
  exponent_ = {};
  dense_ = std::make_shared<const ExactMatrix>(matrix);
}

ExactMatrix IrrepMatrix::to_exact() const {
  if (!is_monomial()) return *dense_;
  ExactMatrix result(dimension_, dimension_);
  for (std::size_t i = 0; i < dimension_; ++i)
    result(i, column_[i]) = Cyclotomic::root(exponent_[i]);
  return result;
}

bool operator==(const IrrepMatrix& a, const IrrepMatrix& b) {
  if (a.dimension_ != b.dimension_ || a.is_monomial() != b.is_monomial()) return false;
  if (!a.is_monomial()) return *a.dense_ == *b.dense_;
  return a.column_ == b.column_ && a.exponent_ == b.exponent_;
}

std::optional<int> IrrepMatrix::ratio(const IrrepMatrix& other) const {
  if (is_monomial() != other.is_monomial()) return std::nullopt;
  int m = 0;
  if (is_monomial()) {
    m = root_exponent(exponent_[0] - other.exponent_[0]);
  } else {
    std::size_t column = 0;
    while ((*other.dense_)(0, column).is_zero()) ++column;
    const std::optional<Phase> phase = ((*dense_)(0, column) / (*other.dense_)(0, column)).phase();
    if (!phase) return std::nullopt;
    m = static_cast<int>(phase->numerator() * (Cyclotomic::order / phase->denominator()));
  }
  if (*this != other.times_root(m)) return std::nullopt;
  return m;
}

IrrepMatrix IrrepMatrix::times_root(int exponent) const {
  if (!is_monomial()) return IrrepMatrix(Cyclotomic::root(exponent) * *dense_);
  IrrepMatrix result = *this;
  for (std::size_t i = 0; i < dimension_; ++i)
    result.exponent_[i] = static_cast<std::uint8_t>(root_exponent(exponent_[i] + exponent));
  return result;
}

IrrepMatrix IrrepMatrix::adjoint() const {
  if (!is_monomial()) return IrrepMatrix(dense_->adjoint());
  IrrepMatrix result = *this;
  for (std::size_t i = 0; i < dimension_; ++i) {
    result.column_[column_[i]] = static_cast<std::uint8_t>(i);
    result.exponent_[column_[i]] = static_cast<std::uint8_t>(root_exponent(-exponent_[i]));
  }
  return result;
}

IrrepMatrix IrrepMatrix::conjugate() const {
  if (!is_monomial()) return IrrepMatrix(dense_->conjugate());
  IrrepMatrix result = *this;
  for (std::size_t i = 0; i < dimension_; ++i)
    result.exponent_[i] = static_cast<std::uint8_t>(root_exponent(-exponent_[i]));
  return result;
}

IrrepMatrix operator*(const IrrepMatrix& a, const IrrepMatrix& b) {
  if (!a.is_monomial() || !b.is_monomial()) return IrrepMatrix(a.to_exact() * b.to_exact());
  IrrepMatrix result = a;
  for (std::size_t i = 0; i < a.dimension_; ++i) {
    const std::size_t middle = a.column_[i];
    result.column_[i] = b.column_[middle];
    result.exponent_[i] =
        static_cast<std::uint8_t>(root_exponent(a.exponent_[i] + b.exponent_[middle]));
  }
  return result;
}

IrrepMatrix::Trace IrrepMatrix::trace() const {
  Trace sum{};
  if (is_monomial()) {
    for (std::size_t i = 0; i < dimension_; ++i)
      if (column_[i] == i) add_root(sum, exponent_[i], 1);
    return sum;
  }
  const Cyclotomic exact = dense_->trace();
  if (exact.denominator() != 1) throw std::logic_error("a trace that is no algebraic integer");
  for (std::size_t i = 0; i < 8; ++i) sum[i] = static_cast<std::int16_t>(exact.coefficients()[i]);
  return sum;
}

Cyclotomic to_cyclotomic(const IrrepMatrix::Trace& trace) {
  Cyclotomic::Coefficients coefficients{};
  std::copy(trace.begin(), trace.end(), coefficients.begin());
  return {coefficients, 1};
}

IrrepMatrix::Trace times_root(const IrrepMatrix::Trace& trace, int exponent) {
  IrrepMatrix::Trace sum{};
  for (int i = 0; i < 8; ++i)
    if (trace[index(i)] != 0) add_root(sum, root_exponent(i + exponent), trace[index(i)]);
  return sum;
}

namespace {

/// The positive square root of a positive rational, when it is rational times 1, √2, √3 or √6.
std::optional<Cyclotomic> square_root(Fraction value) {
  static const Cyclotomic root2 = Cyclotomic::root(3) + Cyclotomic::root(-3);
  static const Cyclotomic root3 = Cyclotomic::root(2) + Cyclotomic::root(-2);
  const std::array<std::pair<int, Cyclotomic>, 4> surds{
      {{1, Cyclotomic(1)}, {2, root2}, {3, root3}, {6, root2 * root3}}};
  const auto exact_root = [](std::int64_t n) -> std::optional<std::int64_t> {
    const auto guess = static_cast<std::int64_t>(std::llround(std::sqrt(static_cast<double>(n))));
    if (guess * guess != n) return std::nullopt;
    return guess;
  };
  for (const auto& [square, surd] : surds) {
    const Fraction rest = value / Fraction(square);
    const std::optional<std::int64_t> numerator = exact_root(rest.numerator());
    const std::optional<std::int64_t> denominator = exact_root(rest.denominator());
    if (numerator && denominator) return Cyclotomic(Fraction(*numerator, *denominator)) * surd;
  }
  return std::nullopt;
}

}  // namespace

ExactMatrix normalized_unitary(ExactMatrix matrix) {
  for (std::size_t i = 0; i < matrix.rows(); ++i) {
    for (std::size_t j = 0; j < matrix.columns(); ++j) {
      if (matrix(i, j).is_zero()) continue;
      // With one entry made 1 the norm is rational for at least one choice of that entry.
      const ExactMatrix scaled = matrix(i, j).inverse() * matrix;
      const Cyclotomic norm = (scaled * scaled.adjoint())(0, 0);
      if (!norm.is_rational()) continue;
      if (const std::optional<Cyclotomic> root = square_root(norm.rational()))
        return root->inverse() * scaled;
    }
  }
  throw std::logic_error("an intertwiner that cannot be made unitary inside Q(e(1/24))");
}

namespace {

/// ζ^e with n ζ^e = value for a positive integer n.
struct ScaledRoot {
  int scale = 0;  ///< 0: the value has no such form.
  int exponent = 0;
};

ScaledRoot scaled_root(const IrrepMatrix::Trace& value) {
  for (int e = 0; e < Cyclotomic::order; ++e) {
    const IrrepMatrix::Trace& root = roots[index(e)];
    std::size_t first = 0;
    while (root[first] == 0) ++first;
    const int scale = value[first] / root[first];
    if (scale <= 0) continue;
    bool equal = true;
    for (std::size_t i = 0; i < 8 && equal; ++i) equal = value[i] == scale * root[i];
    if (equal) return {scale, e};
  }
  return {};
}

/// Σ left[n] E right[n]⁺ with the one entry of E in row 0 and a column, for monomial matrices.
using TraceMatrix =
    std::array<std::array<IrrepMatrix::Trace, IrrepMatrix::largest>, IrrepMatrix::largest>;

TraceMatrix monomial_sum(std::span<const IrrepMatrix> left, std::span<const IrrepMatrix> right,
                         int column) {
  const int dimension = left[0].dimension();
  TraceMatrix sum{};
  for (std::size_t n = 0; n < left.size(); ++n) {
    int i = 0;
    while (left[n].column(i) != 0) ++i;
    int j = 0;
    while (right[n].column(j) != column) ++j;
    if (i >= dimension || j >= dimension) throw std::logic_error("a monomial matrix without entry");
    add_root(sum[index(i)][index(j)], root_exponent(left[n].exponent(i) - right[n].exponent(j)), 1);
  }
  return sum;
}

/// The unitary multiple of the sum, when that is monomial.
std::optional<IrrepMatrix> monomial_multiple(const TraceMatrix& sum, int dimension) {
  std::array<std::uint8_t, IrrepMatrix::largest> columns{};
  std::array<std::uint8_t, IrrepMatrix::largest> exponents{};
  int scale = 0;
  for (int i = 0; i < dimension; ++i) {
    int entries = 0;
    for (int j = 0; j < dimension; ++j) {
      const IrrepMatrix::Trace& entry = sum[index(i)][index(j)];
      if (entry == IrrepMatrix::Trace{}) continue;
      const ScaledRoot root = scaled_root(entry);
      if (root.scale == 0 || ++entries > 1 || (scale != 0 && root.scale != scale))
        return std::nullopt;
      scale = root.scale;
      columns[index(i)] = static_cast<std::uint8_t>(j);
      exponents[index(i)] = static_cast<std::uint8_t>(root.exponent);
    }
    if (entries == 0) return std::nullopt;
  }
  return IrrepMatrix(dimension, columns, exponents);
}

ExactMatrix dense_sum(std::span<const IrrepMatrix> left, std::span<const IrrepMatrix> right,
                      std::size_t column) {
  const auto dimension = static_cast<std::size_t>(left[0].dimension());
  ExactMatrix sum(dimension, dimension);
  for (std::size_t n = 0; n < left.size(); ++n) {
    const ExactMatrix of_left = left[n].to_exact();
    const ExactMatrix of_right = right[n].to_exact();
    for (std::size_t i = 0; i < dimension; ++i) {
      if (of_left(i, 0).is_zero()) continue;
      for (std::size_t j = 0; j < dimension; ++j)
        if (!of_right(j, column).is_zero())
          sum(i, j) += of_left(i, 0) * of_right(j, column).conjugate();
    }
  }
  return sum;
}

}  // namespace

IrrepMatrix unitary_intertwiner(std::span<const IrrepMatrix> left,
                                std::span<const IrrepMatrix> right) {
  const int dimension = left[0].dimension();
  const auto monomial = [](const IrrepMatrix& m) { return m.is_monomial(); };
  const bool fast = std::ranges::all_of(left, monomial) && std::ranges::all_of(right, monomial);
  for (int column = 0; column < dimension; ++column) {
    ExactMatrix sum;
    if (fast) {
      const TraceMatrix traces = monomial_sum(left, right, column);
      if (const auto result = monomial_multiple(traces, dimension)) return *result;
      sum = ExactMatrix(index(dimension), index(dimension));
      for (int i = 0; i < dimension; ++i)
        for (int j = 0; j < dimension; ++j)
          sum(index(i), index(j)) = to_cyclotomic(traces[index(i)][index(j)]);
    } else {
      sum = dense_sum(left, right, index(column));
    }
    if (!sum.is_zero()) return IrrepMatrix(normalized_unitary(sum));
  }
  throw std::logic_error("no intertwiner between two irreps");
}

}  // namespace spinsieve
