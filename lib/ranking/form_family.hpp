#pragma once

#include <cstddef>
#include <vector>

#include <Eigen/Dense>

namespace spinsieve {

/// The computed side of one candidate: intensities I_s = cᵀ M_s c of all points, µB² or barn.
///
/// Invariant: all forms are finite, symmetric and of one size n ≥ 1. M_s ⪰ 0 where a form is a sum
/// of squares, as unpolarised intensities are; bounds do not rely on it.
class FormFamily {
 public:
  FormFamily() = default;

  /// parameters: n; forms: one n × n matrix per point, symmetrised here.
  /// Throws Error when a form has another size, is not finite, or n = 0.
  FormFamily(std::size_t parameters, const std::vector<Eigen::MatrixXd>& forms);

  Eigen::Index parameters() const noexcept { return parameters_; }
  Eigen::Index size() const noexcept { return columns_.cols(); }

  Eigen::Map<const Eigen::MatrixXd> form(Eigen::Index s) const {
    return {columns_.col(s).data(), parameters_, parameters_};
  }

  /// n² × N, each column one form.
  const Eigen::MatrixXd& columns() const noexcept { return columns_; }

  /// I_s for all s. c: n values.
  Eigen::VectorXd intensities(const Eigen::VectorXd& c) const;

  /// ∂I_s/∂c_p = 2 (M_s c)_p, N × n.
  Eigen::MatrixXd jacobian(const Eigen::VectorXd& c) const;

  /// The family in other parameters, c = V z: forms Vᵀ M_s V. V: n × r.
  FormFamily pulled_back(const Eigen::MatrixXd& V) const;

 private:
  Eigen::Index parameters_ = 0;
  Eigen::MatrixXd columns_;
};

/// cᵀ Q c ≤ limit: a squared moment, at one place and phase, that physics bounds (µB²).
struct QuadraticLimit {
  Eigen::MatrixXd form;
  double limit = 0;  ///< > 0.
};

/// A candidate as the ranking sees it.
struct CandidateModel {
  FormFamily forms;                         ///< One per point of the data, in its order.
  std::vector<QuadraticLimit> limits;       ///< Have no meaning when the scale is relative.
  std::vector<Eigen::MatrixXd> equalities;  ///< cᵀ E c = 0, such as equal moments of two orbits.
};

}  // namespace spinsieve
