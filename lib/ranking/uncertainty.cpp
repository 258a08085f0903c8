#include "ranking/uncertainty.hpp"

#include <algorithm>
#include <cmath>

#include "ranking/effective_parameters.hpp"

namespace spinsieve {
namespace {

/// Second-order changes below this part of the largest form are rounding (their first-order parts
/// were cut at rank_tolerance, which leaves its square times the condition of J).
constexpr double second_order_tolerance = 1e-6;

/// An amplitude that may grow this much past the fitted moments without raising χ² by 1 is
/// undetermined for every purpose.
constexpr double endless = 1e6;

Eigen::MatrixXd null_space(const Eigen::MatrixXd& A) {
  if (A.rows() == 0) return Eigen::MatrixXd::Identity(A.cols(), A.cols());
  const Eigen::JacobiSVD<Eigen::MatrixXd> svd(A, Eigen::ComputeFullV);
  Eigen::Index rank = 0;
  while (rank < svd.singularValues().size() && svd.singularValues()(0) > 0 &&
         svd.singularValues()(rank) > rank_tolerance * svd.singularValues()(0))
    ++rank;
  return svd.matrixV().rightCols(A.cols() - rank);
}

/// Directions of x that keep the equalities to first order.
Eigen::MatrixXd tangent(const ReducedProblem& problem, const Eigen::VectorXd& x) {
  const FormRows& constraints = problem.constraints();
  const auto first = static_cast<Eigen::Index>(problem.limits());
  const Eigen::Index r = problem.parameters();
  Eigen::MatrixXd slopes = Eigen::MatrixXd::Zero(constraints.size() - first, x.size());
  for (Eigen::Index i = first; i < constraints.size(); ++i)
    slopes.row(i - first).head(r) = 2 * (constraints.form(i, r) * x.head(r)).transpose();
  return null_space(slopes);
}

/// Second derivative of the whitened rows along a pair of directions of (z, κ).
Eigen::VectorXd second_order(const ReducedProblem& problem, const Eigen::VectorXd& x,
                             const Eigen::VectorXd& v, const Eigen::VectorXd& w) {
  const FormRows& rows = problem.rows();
  const Eigen::Index r = problem.parameters();
  const auto slots = static_cast<Eigen::Index>(problem.slots().size());
  Eigen::VectorXd result = Eigen::VectorXd::Zero(rows.size() + slots);
  for (Eigen::Index s = 0; s < rows.size(); ++s) {
    const auto A = rows.form(s, r);
    if (rows.one_sided[static_cast<std::size_t>(s)] != 0) continue;
    const int slot = rows.slot[static_cast<std::size_t>(s)];
    if (slot < 0) {
      result(s) = 2 * v.head(r).dot(A * w.head(r));
      continue;
    }
    const Eigen::VectorXd slope = A * x.head(r);
    const double kappa = x(r + slot);
    result(s) =
        2 * kappa * kappa * v.head(r).dot(A * w.head(r)) +
        4 * kappa * (v(r + slot) * slope.dot(w.head(r)) + w(r + slot) * slope.dot(v.head(r))) +
        2 * v(r + slot) * w(r + slot) * slope.dot(x.head(r));
  }
  for (Eigen::Index k = 0; k < slots; ++k) {
    const ScaleSlot& slot = problem.slots()[static_cast<std::size_t>(k)];
    if (slot.measured) result(rows.size() + k) = 2 * v(r + k) * w(r + k) / slot.sigma;
  }
  return result;
}

/// Whether over the first-order sigma of a direction, 1/slope, the second-order change of the
/// intensities exceeds the first-order one (which is 1 by definition): the amplitude is not
/// significantly different from zero and a symmetric error would be wrong.
bool is_quadratic(const ReducedProblem& problem, const Eigen::VectorXd& x,
                  const Eigen::VectorXd& direction, const Eigen::MatrixXd& range, double slope) {
  Eigen::VectorXd change = second_order(problem, x, direction, direction);
  change -= range * (range.transpose() * change);
  return 0.5 * change.norm() > slope * slope;
}

/// Splits the null directions W of the Jacobian: undetermined ones first, then those at zero.
struct Split {
  Eigen::MatrixXd flat;
  Eigen::MatrixXd curved;
};

Split split(const ReducedProblem& problem, const Eigen::VectorXd& x, const Eigen::MatrixXd& W,
            const Eigen::MatrixXd& range) {
  const Eigen::Index d = W.cols();
  const Eigen::Index rows = range.rows();
  Eigen::MatrixXd stacked(d * rows, d);
  double largest = 0;
  for (Eigen::Index i = 0; i < d; ++i)
    for (Eigen::Index j = 0; j < d; ++j) {
      Eigen::VectorXd change = second_order(problem, x, W.col(i), W.col(j));
      largest = std::max(largest, change.norm());
      change -= range * (range.transpose() * change);
      stacked.block(j * rows, i, rows, 1) = change;
    }
  const Eigen::JacobiSVD<Eigen::MatrixXd> svd(stacked, Eigen::ComputeFullV);
  const double least = second_order_tolerance * largest;
  Eigen::Index curved = 0;
  while (curved < std::min(d, svd.singularValues().size()) && svd.singularValues()(curved) > least)
    ++curved;
  return {W * svd.matrixV().rightCols(d - curved), W * svd.matrixV().leftCols(curved)};
}

/// The step along a direction that raises χ² by 1, the longer of both signs.
double width(ChiSquare& objective, const Eigen::VectorXd& x, const Eigen::VectorXd& direction,
             double longest) {
  const double base = objective.plain(x);
  double result = 0;
  for (const double sign : {1.0, -1.0}) {
    double low = 0;
    double high = 1e-6 * longest;
    while (high < longest && objective.plain(x + sign * high * direction) < base + 1) {
      low = high;
      high *= 2;
    }
    for (int halving = 0; halving < 50; ++halving) {
      const double middle = 0.5 * (low + high);
      (objective.plain(x + sign * middle * direction) < base + 1 ? low : high) = middle;
    }
    result = std::max(result, high);
  }
  return result;
}

}  // namespace

Uncertainty uncertainty(const ReducedProblem& problem, ChiSquare& objective,
                        const Eigen::VectorXd& x) {
  const Eigen::Index n = problem.basis().rows();
  const Eigen::Index r = problem.parameters();
  Uncertainty result;
  result.covariance = Eigen::MatrixXd::Zero(n, n);
  result.at_zero.resize(n, 0);
  Eigen::MatrixXd loose = problem.unseen();
  const auto add_loose = [&loose](const Eigen::VectorXd& direction) {
    loose.conservativeResize(Eigen::NoChange, loose.cols() + 1);
    loose.col(loose.cols() - 1) = direction.normalized();
  };
  if (x.size() > 0) {
    const Eigen::MatrixXd T = tangent(problem, x);
    const Eigen::MatrixXd jacobian = objective.jacobian(x) * T;
    const Eigen::JacobiSVD<Eigen::MatrixXd> svd(jacobian,
                                                Eigen::ComputeThinU | Eigen::ComputeFullV);
    const Eigen::VectorXd& values = svd.singularValues();
    // Against the strongest response that moments of this size can give: at c = 0 J vanishes.
    const double scale = problem.rows().packed.norm() * std::max(x.norm(), 1e-150);
    const double top = values.size() > 0 ? values(0) : 0.0;
    Eigen::Index rank = 0;
    while (rank < values.size() && values(rank) > rank_tolerance * top &&
           values(rank) > rank_tolerance * rank_tolerance * scale)
      ++rank;
    while (rank > 0 && is_quadratic(problem, x, T * svd.matrixV().col(rank - 1),
                                    svd.matrixU().leftCols(rank - 1), values(rank - 1)))
      --rank;
    for (Eigen::Index j = 0; j < rank; ++j) {
      const Eigen::VectorXd in_c = problem.basis() * (T * svd.matrixV().col(j)).head(r);
      result.covariance += in_c * in_c.transpose() / (values(j) * values(j));
    }
    const Eigen::MatrixXd W = T * svd.matrixV().rightCols(T.cols() - rank);
    if (W.cols() > 0) {
      const Split parts = split(problem, x, W, svd.matrixU().leftCols(rank));
      for (Eigen::Index j = 0; j < parts.flat.cols(); ++j) {
        const Eigen::VectorXd in_c = problem.basis() * parts.flat.col(j).head(r);
        if (in_c.norm() > 0) add_loose(in_c);
      }
      for (Eigen::Index j = 0; j < parts.curved.cols(); ++j) {
        const Eigen::VectorXd in_c = problem.basis() * parts.curved.col(j).head(r);
        if (!(in_c.norm() > 0)) continue;
        const double longest = endless * std::max(x.norm(), 1.0);
        const double step = width(objective, x, parts.curved.col(j), longest);
        if (step >= longest) {
          add_loose(in_c);
          continue;
        }
        result.at_zero.conservativeResize(Eigen::NoChange, result.at_zero.cols() + 1);
        result.at_zero.col(result.at_zero.cols() - 1) = in_c.normalized();
        result.at_zero_width.push_back(step * in_c.norm());
      }
    }
  }
  result.undetermined.resize(n, 0);
  if (loose.cols() > 0) {
    Eigen::ColPivHouseholderQR<Eigen::MatrixXd> qr(loose);
    qr.setThreshold(rank_tolerance);
    const Eigen::MatrixXd Q = qr.householderQ() * Eigen::MatrixXd::Identity(n, qr.rank());
    result.undetermined = Q;
  }
  return result;
}

}  // namespace spinsieve
