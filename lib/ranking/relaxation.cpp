#include "ranking/relaxation.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

namespace spinsieve {
namespace {

/// Factor by which the barrier weight falls once a centre is reached nearly.
constexpr double barrier_decrease = 0.1;
/// Newton decrement (half the predicted decrease over µ) at which a centre counts as reached.
constexpr double centred = 0.05;
/// At the last centre, where the multipliers are read: they prove nothing before the Newton steps
/// have converged.
constexpr double settled = 1e-12;
constexpr int most_newton_steps = 400;
/// Equalities enter as residuals of this weight against the rows: the bound stays valid for any.
constexpr double equality_weight = 1e6;

/// The barrier function in the entries of X (or T); index k runs over pairs i ≥ j.
class Barrier {
 public:
  Barrier(const ReducedProblem& problem, const Eigen::MatrixXd& cone)
      : problem_(problem),
        r_(problem.parameters()),
        in_cone_(cone.size() > 0),
        lengths_(cone.colwise().norm().transpose()) {
    // Generators may be long; unit ones keep T in the range of X.
    const Eigen::MatrixXd unit = cone * lengths_.cwiseInverse().asDiagonal();
    for (Eigen::Index i = 0; i < r_; ++i)
      for (Eigen::Index j = 0; j <= i; ++j) {
        first_.push_back(i);
        second_.push_back(j);
      }
    m_ = static_cast<Eigen::Index>(first_.size());
    rows_ = vectors(problem.rows(), unit);
    target_ = problem.rows().target;
    constraints_ = vectors(problem.constraints(), unit);
    limits_ = static_cast<Eigen::Index>(problem.limits());
    const double largest = rows_.size() > 0 ? rows_.rowwise().norm().maxCoeff() : 1.0;
    equality_scale_ = std::sqrt(equality_weight) * std::max(largest, 1e-300);
  }

  RelaxedMinimum run(const Eigen::MatrixXd& cone) {
    start();
    RelaxedMinimum result;
    const double order = static_cast<double>(r_ + limits_) +
                         (in_cone_ ? 0.5 * static_cast<double>(r_ * (r_ - 1)) : 0.0);
    barrier_ = std::max(chi2(v_), 1.0) / order;
    for (result.iterations = 0; result.iterations < most_newton_steps; ++result.iterations) {
      const double decrement = newton_step();
      const bool last = barrier_ * order <= relaxation_gap * (1 + chi2(v_));
      if (decrement > (last ? settled : centred)) continue;
      if (last) break;
      barrier_ *= barrier_decrease;
    }
    const Eigen::MatrixXd T = matrix(v_);
    result.X = T;
    if (in_cone_) {
      const Eigen::MatrixXd unit = cone * lengths_.cwiseInverse().asDiagonal();
      result.X = unit * T * unit.transpose();
    }
    result.value = problem_.rest() + chi2_rows(v_);
    result.limits.resize(limits_);
    for (Eigen::Index i = 0; i < limits_; ++i)
      result.limits(i) = 0.5 * barrier_ / (1 - constraints_.row(i).dot(v_));
    result.equalities = equality_scale_ * equality_scale_ *
                        (constraints_.bottomRows(constraints_.rows() - limits_) * v_);
    if (in_cone_) {
      result.cone = Eigen::MatrixXd::Zero(r_, r_);
      for (Eigen::Index i = 0; i < r_; ++i)
        for (Eigen::Index j = 0; j < r_; ++j)
          if (i != j) result.cone(i, j) = 0.25 * barrier_ / T(i, j) * lengths_(i) * lengths_(j);
    }
    return result;
  }

 private:
  /// Each form as the vector a with tr(A X) = a·v.
  Eigen::MatrixXd vectors(const FormRows& rows, const Eigen::MatrixXd& cone) const {
    Eigen::MatrixXd result(rows.size(), m_);
    for (Eigen::Index s = 0; s < rows.size(); ++s) {
      Eigen::MatrixXd A = rows.form(s, r_);
      if (in_cone_) A = (cone.transpose() * A * cone).eval();
      for (Eigen::Index k = 0; k < m_; ++k) result(s, k) = multiplicity(k) * A(row(k), column(k));
    }
    return result;
  }

  Eigen::Index row(Eigen::Index k) const { return first_[static_cast<std::size_t>(k)]; }
  Eigen::Index column(Eigen::Index k) const { return second_[static_cast<std::size_t>(k)]; }
  double multiplicity(Eigen::Index k) const { return row(k) == column(k) ? 1.0 : 2.0; }

  Eigen::MatrixXd matrix(const Eigen::VectorXd& v) const {
    Eigen::MatrixXd X(r_, r_);
    for (Eigen::Index k = 0; k < m_; ++k) X(row(k), column(k)) = X(column(k), row(k)) = v(k);
    return X;
  }

  Eigen::VectorXd residual(const Eigen::VectorXd& v) const {
    Eigen::VectorXd result = rows_ * v - target_;
    for (Eigen::Index s = 0; s < result.size(); ++s)
      if (problem_.rows().one_sided[static_cast<std::size_t>(s)] != 0)
        result(s) = std::min(0.0, result(s));
    return result;
  }

  double chi2_rows(const Eigen::VectorXd& v) const { return residual(v).squaredNorm(); }

  double chi2(const Eigen::VectorXd& v) const {
    const Eigen::Index equalities = constraints_.rows() - limits_;
    return problem_.rest() + chi2_rows(v) +
           equality_scale_ * equality_scale_ *
               (constraints_.bottomRows(equalities) * v).squaredNorm();
  }

  /// The barrier function; infinite outside.
  double value(const Eigen::VectorXd& v) const {
    const Eigen::LLT<Eigen::MatrixXd> factor(matrix(v));
    if (factor.info() != Eigen::Success) return HUGE_VAL;
    double logarithms = 0;
    for (Eigen::Index i = 0; i < r_; ++i) logarithms += 2 * std::log(factor.matrixLLT()(i, i));
    for (Eigen::Index i = 0; i < limits_; ++i) {
      const double slack = 1 - constraints_.row(i).dot(v);
      if (!(slack > 0)) return HUGE_VAL;
      logarithms += std::log(slack);
    }
    for (Eigen::Index k = 0; in_cone_ && k < m_; ++k) {
      if (row(k) == column(k)) continue;
      if (!(v(k) > 0)) return HUGE_VAL;
      logarithms += std::log(v(k));
    }
    return chi2(v) - barrier_ * logarithms;
  }

  /// A multiple of the identity (plus a little of every product in a cone) that suits the data.
  void start() {
    v_.resize(m_);
    for (Eigen::Index k = 0; k < m_; ++k)
      v_(k) = row(k) == column(k) ? 1.0 : (in_cone_ ? 0.5 / static_cast<double>(r_) : 0.0);
    const Eigen::VectorXd computed = rows_ * v_;
    const double square = computed.squaredNorm();
    double factor = square > 0 ? computed.dot(target_) / square : 1.0;
    const double least = 1e-3 * std::sqrt((target_.squaredNorm() + 1) / std::max(square, 1e-300));
    factor = std::max(factor, least);
    for (Eigen::Index i = 0; i < limits_; ++i) {
      const double used = constraints_.row(i).dot(v_);
      if (used > 0) factor = std::min(factor, 0.5 / used);
    }
    v_ *= factor;
  }

  /// One damped Newton step; returns half the predicted decrease over µ.
  double newton_step() {
    const Eigen::MatrixXd Y = matrix(v_).llt().solve(Eigen::MatrixXd::Identity(r_, r_));
    const Eigen::VectorXd left = residual(v_);
    active_rows_ = rows_;
    for (Eigen::Index s = 0; s < left.size(); ++s)
      if (problem_.rows().one_sided[static_cast<std::size_t>(s)] != 0 && left(s) == 0)
        active_rows_.row(s).setZero();
    gradient_.noalias() = 2 * (active_rows_.transpose() * left);
    hessian_.noalias() = 2 * (active_rows_.transpose() * active_rows_);
    for (Eigen::Index k = 0; k < m_; ++k) {
      const Eigen::Index i = row(k);
      const Eigen::Index j = column(k);
      gradient_(k) -= barrier_ * multiplicity(k) * Y(i, j);
      for (Eigen::Index l = 0; l <= k; ++l) {
        const Eigen::Index p = row(l);
        const Eigen::Index q = column(l);
        const double entry = 0.5 * barrier_ * multiplicity(k) * multiplicity(l) *
                             (Y(i, p) * Y(j, q) + Y(i, q) * Y(j, p));
        hessian_(k, l) += entry;
        if (l != k) hessian_(l, k) += entry;
      }
      if (in_cone_ && i != j) {
        gradient_(k) -= barrier_ / v_(k);
        hessian_(k, k) += barrier_ / (v_(k) * v_(k));
      }
    }
    for (Eigen::Index i = 0; i < constraints_.rows(); ++i) {
      const Eigen::VectorXd a = constraints_.row(i).transpose();
      if (i < limits_) {
        const double slack = 1 - a.dot(v_);
        gradient_ += barrier_ / slack * a;
        hessian_ += barrier_ / (slack * slack) * (a * a.transpose());
      } else {
        const double weight = equality_scale_ * equality_scale_;
        gradient_ += 2 * weight * a.dot(v_) * a;
        hessian_ += 2 * weight * (a * a.transpose());
      }
    }
    const Eigen::VectorXd move = hessian_.ldlt().solve(-gradient_);
    const double decrease = -gradient_.dot(move);
    if (!(decrease > 0)) return 0;
    const double before = value(v_);
    double length = 1;
    // Rounding of the sum limits what a step can show; smaller decreases count as none.
    while (length > 1e-12 && !(value(v_ + length * move) <= before - 1e-4 * length * decrease)) {
      if (0.5 * decrease < 1e-13 * (1 + std::abs(before))) return 0;
      length *= 0.5;
    }
    if (length <= 1e-12) return 0;
    v_ += length * move;
    return 0.5 * decrease / barrier_;
  }

  const ReducedProblem& problem_;
  Eigen::Index r_;
  bool in_cone_;
  Eigen::VectorXd lengths_;
  Eigen::Index m_ = 0;
  Eigen::Index limits_ = 0;
  std::vector<Eigen::Index> first_;
  std::vector<Eigen::Index> second_;
  Eigen::MatrixXd rows_;
  Eigen::VectorXd target_;
  Eigen::MatrixXd constraints_;
  double equality_scale_ = 1;
  double barrier_ = 1;
  Eigen::VectorXd v_;
  Eigen::MatrixXd active_rows_;
  Eigen::VectorXd gradient_;
  Eigen::MatrixXd hessian_;
};

}  // namespace

RelaxedMinimum relaxed_minimum(const ReducedProblem& problem, const Eigen::MatrixXd& cone) {
  return Barrier(problem, cone).run(cone);
}

}  // namespace spinsieve
