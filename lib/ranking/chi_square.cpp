#include "ranking/chi_square.hpp"

#include <algorithm>
#include <cmath>

namespace spinsieve {

ChiSquare::ChiSquare(const ReducedProblem& problem)
    : problem_(&problem),
      parameters_(problem.parameters()),
      slots_(static_cast<Eigen::Index>(problem.slots().size())),
      multipliers_(Eigen::VectorXd::Zero(problem.constraints().size())),
      products_(parameters_, problem.rows().size()),
      q_(problem.rows().size()),
      factor_(Eigen::VectorXd::Ones(problem.rows().size())),
      residual_(problem.rows().size()),
      active_(Eigen::VectorXd::Ones(problem.rows().size())),
      weights_(problem.rows().size()),
      weighted_(parameters_, problem.rows().size()) {}

void ChiSquare::evaluate(const Eigen::VectorXd& x) {
  const FormRows& rows = problem_->rows();
  const Eigen::Index r = parameters_;
  // The forms are symmetric, so that all A_s z are one product with the packed matrix.
  const Eigen::Map<const Eigen::MatrixXd> wide(rows.packed.data(), r, r * rows.size());
  Eigen::Map<Eigen::RowVectorXd>(products_.data(), r * rows.size()).noalias() =
      x.head(r).transpose() * wide;
  q_.noalias() = products_.transpose() * x.head(r);
  if (slots_ > 0)
    for (Eigen::Index s = 0; s < rows.size(); ++s) {
      const int slot = rows.slot[static_cast<std::size_t>(s)];
      factor_(s) = slot < 0 ? 1.0 : x(r + slot) * x(r + slot);
    }
  residual_ = factor_.cwiseProduct(q_) - rows.target;
  for (Eigen::Index s = 0; s < rows.size(); ++s) {
    if (rows.one_sided[static_cast<std::size_t>(s)] == 0) continue;
    active_(s) = residual_(s) < 0 ? 1 : 0;
    residual_(s) *= active_(s);
  }
}

double ChiSquare::plain(const Eigen::VectorXd& x) {
  evaluate(x);
  double result = problem_->rest() + residual_.squaredNorm();
  for (Eigen::Index k = 0; k < slots_; ++k) {
    const ScaleSlot& slot = problem_->slots()[static_cast<std::size_t>(k)];
    if (!slot.measured) continue;
    const double kappa = x(parameters_ + k);
    const double deviation = (kappa * kappa - slot.value) / slot.sigma;
    result += deviation * deviation;
  }
  return result;
}

double ChiSquare::constraint_terms(const Eigen::VectorXd& x) {
  const FormRows& constraints = problem_->constraints();
  double result = 0;
  for (Eigen::Index i = 0; i < constraints.size(); ++i) {
    const double g =
        x.head(parameters_).dot(constraints.form(i, parameters_) * x.head(parameters_)) -
        constraints.target(i);
    double shifted = g + multipliers_(i) / weight_;
    if (i < static_cast<Eigen::Index>(problem_->limits())) shifted = std::max(0.0, shifted);
    result += weight_ * shifted * shifted;
  }
  return result;
}

double ChiSquare::value(const Eigen::VectorXd& x) { return plain(x) + constraint_terms(x); }

double ChiSquare::derivatives(const Eigen::VectorXd& x, Eigen::VectorXd& gradient,
                              Eigen::MatrixXd& hessian) {
  const Eigen::Index r = parameters_;
  const FormRows& rows = problem_->rows();
  const double result = value(x);
  gradient.setZero(size());
  hessian.setZero(size(), size());
  weights_ = residual_.cwiseProduct(factor_);
  gradient.head(r).noalias() = 4 * (products_ * weights_);
  Eigen::MatrixXd curvature(r, r);
  Eigen::Map<Eigen::VectorXd>(curvature.data(), r * r).noalias() = 4 * (rows.packed * weights_);
  weighted_ = products_ * (factor_.cwiseProduct(active_)).asDiagonal();
  hessian.topLeftCorner(r, r).noalias() = 8 * (weighted_ * weighted_.transpose());
  hessian.topLeftCorner(r, r) += curvature;
  for (Eigen::Index s = 0; slots_ > 0 && s < rows.size(); ++s) {
    const int slot = rows.slot[static_cast<std::size_t>(s)];
    if (slot < 0 || active_(s) == 0) continue;
    const Eigen::Index at = r + slot;
    const double kappa = x(at);
    gradient(at) += 4 * residual_(s) * kappa * q_(s);
    hessian(at, at) += 8 * kappa * kappa * q_(s) * q_(s) + 4 * residual_(s) * q_(s);
    hessian.col(at).head(r) +=
        (8 * factor_(s) * kappa * q_(s) + 8 * residual_(s) * kappa) * products_.col(s);
  }
  for (Eigen::Index k = 0; k < slots_; ++k) {
    const ScaleSlot& slot = problem_->slots()[static_cast<std::size_t>(k)];
    const Eigen::Index at = r + k;
    hessian.row(at).head(r) = hessian.col(at).head(r).transpose();
    if (!slot.measured) continue;
    const double variance = slot.sigma * slot.sigma;
    const double deviation = x(at) * x(at) - slot.value;
    gradient(at) += 4 * deviation * x(at) / variance;
    hessian(at, at) += (8 * x(at) * x(at) + 4 * deviation) / variance;
  }
  const FormRows& constraints = problem_->constraints();
  for (Eigen::Index i = 0; i < constraints.size(); ++i) {
    const Eigen::VectorXd slope = constraints.form(i, r) * x.head(r);
    double shifted = slope.dot(x.head(r)) - constraints.target(i) + multipliers_(i) / weight_;
    if (i < static_cast<Eigen::Index>(problem_->limits()) && shifted <= 0) continue;
    shifted *= weight_;
    gradient.head(r) += 4 * shifted * slope;
    hessian.topLeftCorner(r, r) += 4 * shifted * constraints.form(i, r);
    hessian.topLeftCorner(r, r) += 8 * weight_ * (slope * slope.transpose());
  }
  return result;
}

Eigen::MatrixXd ChiSquare::jacobian(const Eigen::VectorXd& x) {
  evaluate(x);
  const FormRows& rows = problem_->rows();
  Eigen::MatrixXd result = Eigen::MatrixXd::Zero(rows.size() + slots_, size());
  for (Eigen::Index s = 0; s < rows.size(); ++s) {
    result.row(s).head(parameters_) = 2 * active_(s) * factor_(s) * products_.col(s).transpose();
    const int slot = rows.slot[static_cast<std::size_t>(s)];
    if (slot >= 0) result(s, parameters_ + slot) = 2 * active_(s) * x(parameters_ + slot) * q_(s);
  }
  for (Eigen::Index k = 0; k < slots_; ++k) {
    const ScaleSlot& slot = problem_->slots()[static_cast<std::size_t>(k)];
    if (slot.measured)
      result(rows.size() + k, parameters_ + k) = 2 * x(parameters_ + k) / slot.sigma;
  }
  return result;
}

double ChiSquare::violation(const Eigen::VectorXd& x) {
  const FormRows& constraints = problem_->constraints();
  double worst = 0;
  for (Eigen::Index i = 0; i < constraints.size(); ++i) {
    const double g =
        x.head(parameters_).dot(constraints.form(i, parameters_) * x.head(parameters_)) -
        constraints.target(i);
    const bool limit = i < static_cast<Eigen::Index>(problem_->limits());
    worst = std::max(worst, std::abs(limit ? std::max(g, -multipliers_(i) / weight_) : g));
  }
  return worst;
}

void ChiSquare::reset(double weight) {
  multipliers_.setZero();
  weight_ = weight;
}

void ChiSquare::update_multipliers(const Eigen::VectorXd& x, double weight) {
  const FormRows& constraints = problem_->constraints();
  for (Eigen::Index i = 0; i < constraints.size(); ++i) {
    const double g =
        x.head(parameters_).dot(constraints.form(i, parameters_) * x.head(parameters_)) -
        constraints.target(i);
    multipliers_(i) += weight_ * g;
    if (i < static_cast<Eigen::Index>(problem_->limits()))
      multipliers_(i) = std::max(0.0, multipliers_(i));
  }
  weight_ = weight;
}

void ChiSquare::scale_to_data(Eigen::VectorXd& x) {
  const FormRows& rows = problem_->rows();
  for (Eigen::Index k = 0; k < slots_; ++k)
    x(parameters_ + k) = std::sqrt(problem_->slots()[static_cast<std::size_t>(k)].value);
  evaluate(x);
  double with_data = 0;
  double with_itself = 0;
  const auto is_free = [this](int slot) {
    return slot >= 0 && !problem_->slots()[static_cast<std::size_t>(slot)].measured;
  };
  for (Eigen::Index s = 0; s < rows.size(); ++s) {
    if (is_free(rows.slot[static_cast<std::size_t>(s)])) continue;
    with_data += factor_(s) * q_(s) * rows.target(s);
    with_itself += factor_(s) * q_(s) * factor_(s) * q_(s);
  }
  // A direction that fits only with a negative square starts near zero, not at it: zero is
  // stationary for every χ².
  constexpr double near_zero = 1e-3;
  const double least = near_zero * std::sqrt(rows.target.squaredNorm() + 1);
  double square = with_itself > 0 ? with_data / with_itself : 1.0;
  if (!(square > 0) && with_itself > 0) square = least / std::sqrt(with_itself);
  x.head(parameters_) *= std::sqrt(square);
  evaluate(x);
  for (Eigen::Index k = 0; k < slots_; ++k) {
    if (problem_->slots()[static_cast<std::size_t>(k)].measured) continue;
    with_data = 0;
    with_itself = 0;
    for (Eigen::Index s = 0; s < rows.size(); ++s) {
      if (rows.slot[static_cast<std::size_t>(s)] != k) continue;
      with_data += q_(s) * rows.target(s);
      with_itself += q_(s) * q_(s);
    }
    const double free_factor = with_itself > 0 ? with_data / with_itself : 1.0;
    x(parameters_ + k) = std::sqrt(free_factor > 0 ? free_factor : near_zero);
  }
}

}  // namespace spinsieve
