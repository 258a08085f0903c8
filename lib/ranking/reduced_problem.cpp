#include "ranking/reduced_problem.hpp"

#include <cmath>
#include <string>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

/// Forms come out of sums of products of rounded numbers: relative noise near 1e-15 per term.
/// A form this small against the largest is an extinct line, not a weak one (moments would have to
/// be a million times larger than those of the other lines to show in it).
constexpr double extinct_form = 1e-12;

/// A direction whose normalised intensity is this small is unseen: rounding of the forms stays two
/// orders below, and a real direction this weak would need moments 1e6 times the others.
constexpr double unseen_direction = 1e-12;

/// A sum of positive semidefinite forms has no eigenvalue below this part of the largest.
constexpr double indefinite = 1e-10;

}  // namespace

std::vector<std::optional<std::size_t>> scale_slots(const FitData& data) {
  std::vector<std::optional<std::size_t>> result(data.scales().size());
  std::size_t next = 0;
  bool absorbed = !data.scale_is_relative();
  for (std::size_t g = 0; g < data.scales().size(); ++g) {
    const ScaleKnowledge knowledge = data.scales()[g].knowledge;
    if (knowledge == ScaleKnowledge::fixed) continue;
    if (!absorbed) {
      absorbed = true;
      continue;
    }
    result[g] = next++;
  }
  return result;
}

ReducedProblem::ReducedProblem(const FitData& data, const CandidateModel& model) {
  if (model.forms.size() != static_cast<Eigen::Index>(data.points().size()))
    throw Error(std::to_string(model.forms.size()) + " intensity forms for " +
                std::to_string(data.points().size()) + " points; one each is needed");
  const Eigen::Index n = model.forms.parameters();
  for (const QuadraticLimit& limit : model.limits)
    if (limit.form.rows() != n || limit.form.cols() != n || !(limit.limit > 0))
      throw Error("a moment limit of " + std::to_string(limit.limit) +
                  "; it must be positive with a form of the candidate's size");
  for (const Eigen::MatrixXd& E : model.equalities)
    if (E.rows() != n || E.cols() != n)
      throw Error("an equality of moments with " + std::to_string(E.rows()) + " rows; it needs " +
                  std::to_string(n));
  const std::vector<std::optional<std::size_t>> slot_of = scale_slots(data);
  for (std::size_t g = 0; g < slot_of.size(); ++g) {
    if (!slot_of[g]) continue;
    const ScaleGroup& scale = data.scales()[g];
    ScaleSlot slot;
    slot.group = g;
    slot.measured = scale.knowledge == ScaleKnowledge::measured;
    slot.value = scale.value;
    slot.sigma = scale.sigma;
    slots_.push_back(slot);
  }
  CandidateModel used = model;
  if (data.scale_is_relative()) used.limits.clear();
  find_basis(used);
  add_rows(data, used);
}

void ReducedProblem::find_basis(const CandidateModel& model) {
  const Eigen::Index n = model.forms.parameters();
  Eigen::MatrixXd A = Eigen::MatrixXd::Zero(n, n);
  double largest = 0;
  for (Eigen::Index s = 0; s < model.forms.size(); ++s)
    largest = std::max(largest, model.forms.columns().col(s).norm());
  for (Eigen::Index s = 0; s < model.forms.size(); ++s) {
    const double norm = model.forms.columns().col(s).norm();
    if (norm > extinct_form * largest) A += model.forms.form(s) / norm;
  }
  for (const QuadraticLimit& limit : model.limits)
    if (limit.form.norm() > 0) A += limit.form / limit.form.norm();
  for (const Eigen::MatrixXd& E : model.equalities)
    if (E.norm() > 0) A += E * E.transpose() / E.squaredNorm();
  Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> eigen(A);
  double least = unseen_direction * eigen.eigenvalues()(n - 1);
  if (eigen.eigenvalues()(0) < -indefinite * eigen.eigenvalues().cwiseAbs().maxCoeff()) {
    // Forms that are no sums of squares may cancel in A; their squares cannot.
    A.setZero();
    for (Eigen::Index s = 0; s < model.forms.size(); ++s) {
      const double norm = model.forms.columns().col(s).norm();
      if (norm > extinct_form * largest)
        A += model.forms.form(s) * model.forms.form(s) / (norm * norm);
    }
    for (const QuadraticLimit& limit : model.limits)
      if (limit.form.norm() > 0) A += limit.form / limit.form.norm();
    for (const Eigen::MatrixXd& E : model.equalities)
      if (E.norm() > 0) A += E * E.transpose() / E.squaredNorm();
    eigen.compute(A);
    least = unseen_direction * unseen_direction * eigen.eigenvalues()(n - 1);
  }
  Eigen::Index hidden = 0;
  while (hidden < n && !(eigen.eigenvalues()(hidden) > least)) ++hidden;
  unseen_ = eigen.eigenvectors().leftCols(hidden);
  basis_ = eigen.eigenvectors().rightCols(n - hidden);
  for (Eigen::Index j = 0; j < basis_.cols(); ++j)
    basis_.col(j) /= std::sqrt(eigen.eigenvalues()(hidden + j));
}

void ReducedProblem::append(const Eigen::MatrixXd& packed, const Eigen::VectorXd& target, int slot,
                            bool one_sided) {
  const Eigen::Index old = rows_.target.size();
  rows_.packed.conservativeResize(packed.rows(), old + target.size());
  rows_.packed.rightCols(target.size()) = packed;
  rows_.target.conservativeResize(old + target.size());
  rows_.target.tail(target.size()) = target;
  rows_.slot.resize(static_cast<std::size_t>(rows_.target.size()), slot);
  rows_.one_sided.resize(static_cast<std::size_t>(rows_.target.size()), one_sided ? 1 : 0);
}

void ReducedProblem::compress(const Eigen::MatrixXd& packed, const Eigen::VectorXd& target,
                              int slot) {
  const Eigen::Index r = parameters();
  const Eigen::Index products = r * (r + 1) / 2;
  if (target.size() <= products + 1) {
    append(packed, target, slot, false);
    return;
  }
  Eigen::MatrixXd augmented(target.size(), products + 1);
  Eigen::Index column = 0;
  for (Eigen::Index i = 0; i < r; ++i)
    for (Eigen::Index j = 0; j <= i; ++j)
      augmented.col(column++) = packed.row(i * r + j).transpose() * (i == j ? 1.0 : 2.0);
  augmented.col(products) = target;
  const Eigen::HouseholderQR<Eigen::MatrixXd> qr(augmented);
  Eigen::MatrixXd rows(r * r, products);
  for (Eigen::Index row = 0; row < products; ++row) {
    column = 0;
    for (Eigen::Index i = 0; i < r; ++i)
      for (Eigen::Index j = 0; j <= i; ++j, ++column) {
        const double entry = column < row ? 0.0 : qr.matrixQR()(row, column);
        rows(i * r + j, row) = i == j ? entry : 0.5 * entry;
        rows(j * r + i, row) = rows(i * r + j, row);
      }
  }
  const Eigen::VectorXd reduced = qr.matrixQR().col(products).head(products);
  const double remainder = qr.matrixQR()(products, products);
  rest_ += remainder * remainder;
  append(rows, reduced, slot, false);
}

void ReducedProblem::add_rows(const FitData& data, const CandidateModel& model) {
  const Eigen::Index r = parameters();
  const std::size_t count = data.points().size();
  const std::vector<std::optional<std::size_t>> slot_of = scale_slots(data);
  Eigen::MatrixXd packed = model.forms.pulled_back(basis_).columns();
  Eigen::VectorXd target = data.observed();
  std::vector<char> in_block(count, 0);
  for (std::size_t i = 0; i < count; ++i) {
    const ScaleGroup& scale = data.scales()[data.points()[i].scale_group];
    if (scale.knowledge == ScaleKnowledge::fixed)
      packed.col(static_cast<Eigen::Index>(i)) *= scale.value;
  }
  for (const CovarianceBlock& block : data.blocks()) {
    const std::vector<Eigen::Index> index(block.points.begin(), block.points.end());
    const Eigen::LLT<Eigen::MatrixXd> factor(block.covariance);
    const Eigen::MatrixXd forms = factor.matrixL().solve(packed(Eigen::all, index).transpose());
    const Eigen::VectorXd values = factor.matrixL().solve(target(index));
    packed(Eigen::all, index) = forms.transpose();
    target(index) = values;
    for (const std::size_t p : block.points) in_block[p] = 1;
  }
  for (std::size_t i = 0; i < count; ++i) {
    if (in_block[i] != 0) continue;
    // "At most" is "at least" of the opposite sign.
    const bool at_most = data.points()[i].kind == PointKind::at_most;
    const double unit = at_most ? -data.points()[i].sigma : data.points()[i].sigma;
    packed.col(static_cast<Eigen::Index>(i)) /= unit;
    target(static_cast<Eigen::Index>(i)) /= unit;
  }
  for (int slot = -1; slot < static_cast<int>(slots_.size()); ++slot) {
    std::vector<Eigen::Index> measured;
    std::vector<Eigen::Index> seen;
    for (std::size_t i = 0; i < count; ++i) {
      const std::optional<std::size_t>& own = slot_of[data.points()[i].scale_group];
      if ((own ? static_cast<int>(*own) : -1) != slot) continue;
      const bool one_sided = is_one_sided(data.points()[i].kind);
      (one_sided ? seen : measured).push_back(static_cast<Eigen::Index>(i));
    }
    if (!measured.empty()) compress(packed(Eigen::all, measured), target(measured), slot);
    if (!seen.empty()) append(packed(Eigen::all, seen), target(seen), slot, true);
  }
  limits_ = model.limits.size();
  const auto constraints = static_cast<Eigen::Index>(limits_ + model.equalities.size());
  constraints_.packed.resize(r * r, constraints);
  constraints_.target = Eigen::VectorXd::Zero(constraints);
  for (Eigen::Index i = 0; i < constraints; ++i) {
    const auto at = static_cast<std::size_t>(i);
    Eigen::MatrixXd A;
    if (at < limits_) {
      A = model.limits[at].form / model.limits[at].limit;
      constraints_.target(i) = 1;
    } else {
      const Eigen::MatrixXd& E = model.equalities[at - limits_];
      A = E.norm() > 0 ? Eigen::MatrixXd(E / E.norm()) : E;
    }
    const Eigen::MatrixXd pulled = basis_.transpose() * (0.5 * (A + A.transpose())) * basis_;
    constraints_.packed.col(i) = Eigen::Map<const Eigen::VectorXd>(pulled.data(), r * r);
  }
  constraints_.slot.assign(static_cast<std::size_t>(constraints), -1);
  constraints_.one_sided.assign(static_cast<std::size_t>(constraints), 0);
}

}  // namespace spinsieve
