#include "ranking/fit_data.hpp"

#include <cmath>
#include <utility>

#include "exact/error.hpp"

namespace spinsieve {
namespace {

/// Relative asymmetry of a covariance that is still rounding of the numbers in the user's file.
constexpr double symmetry_tolerance = 1e-9;

std::string name(const MeasuredPoint& point, std::size_t index) {
  return point.label.empty() ? "point " + std::to_string(index + 1) : "\"" + point.label + "\"";
}

void check_point(const MeasuredPoint& point, std::size_t index, std::size_t groups) {
  if (!std::isfinite(point.observed))
    throw Error("intensity of " + name(point, index) + " is not finite; it must be a number");
  if (!(point.sigma > 0) || !std::isfinite(point.sigma))
    throw Error("sigma " + std::to_string(point.sigma) + " of " + name(point, index) +
                "; it must be positive and finite");
  if (point.scale_group >= groups)
    throw Error("scale group " + std::to_string(point.scale_group) + " of " + name(point, index) +
                "; there are " + std::to_string(groups));
}

void check_scale(const ScaleGroup& scale) {
  if (scale.knowledge == ScaleKnowledge::free) return;
  if (!(scale.value > 0) || !std::isfinite(scale.value))
    throw Error("scale " + std::to_string(scale.value) + "; it must be positive and finite");
  if (scale.knowledge == ScaleKnowledge::measured &&
      (!(scale.sigma > 0) || !std::isfinite(scale.sigma)))
    throw Error("sigma " + std::to_string(scale.sigma) +
                " of a measured scale; it must be positive and finite");
}

void check_block(const CovarianceBlock& block, const std::vector<MeasuredPoint>& points,
                 std::vector<char>& used) {
  const auto size = static_cast<Eigen::Index>(block.points.size());
  if (size == 0 || block.covariance.rows() != size || block.covariance.cols() != size)
    throw Error("a covariance of " + std::to_string(block.covariance.rows()) + " by " +
                std::to_string(block.covariance.cols()) + " for " + std::to_string(size) +
                " points; it must be square and match them");
  for (const std::size_t p : block.points) {
    if (p >= points.size())
      throw Error("point " + std::to_string(p) + " of a covariance; there are " +
                  std::to_string(points.size()));
    if (used[p] != 0) throw Error(name(points[p], p) + " is in two covariances; one is allowed");
    used[p] = 1;
    if (is_one_sided(points[p].kind))
      throw Error(name(points[p], p) + " is one-sided; a covariance needs a measured intensity");
    if (points[p].scale_group != points[block.points.front()].scale_group)
      throw Error(name(points[p], p) + " has another scale than the rest of its covariance");
  }
  const double size_of_entries = block.covariance.cwiseAbs().maxCoeff();
  const double asymmetry = (block.covariance - block.covariance.transpose()).cwiseAbs().maxCoeff();
  const Eigen::LLT<Eigen::MatrixXd> factor(block.covariance);
  if (!block.covariance.allFinite() || asymmetry > symmetry_tolerance * size_of_entries ||
      factor.info() != Eigen::Success)
    throw Error("the covariance of " + name(points[block.points.front()], block.points.front()) +
                " is not symmetric and positive definite");
}

}  // namespace

FitData::FitData(std::vector<MeasuredPoint> points, std::vector<ScaleGroup> scales,
                 std::vector<CovarianceBlock> blocks)
    : points_(std::move(points)), scales_(std::move(scales)), blocks_(std::move(blocks)) {
  for (std::size_t i = 0; i < points_.size(); ++i) check_point(points_[i], i, scales_.size());
  for (const ScaleGroup& scale : scales_) {
    check_scale(scale);
    if (scale.knowledge != ScaleKnowledge::free) relative_ = false;
  }
  std::vector<char> used(points_.size(), 0);
  for (CovarianceBlock& block : blocks_) {
    check_block(block, points_, used);
    block.covariance = (0.5 * (block.covariance + block.covariance.transpose())).eval();
  }
}

FitData FitData::with_observed(const Eigen::VectorXd& observed) const {
  if (observed.size() != static_cast<Eigen::Index>(points_.size()) || !observed.allFinite())
    throw Error(std::to_string(observed.size()) + " new intensities for " +
                std::to_string(points_.size()) + " points; one finite value each is needed");
  FitData result = *this;
  for (std::size_t i = 0; i < points_.size(); ++i)
    result.points_[i].observed = observed(static_cast<Eigen::Index>(i));
  return result;
}

Eigen::VectorXd FitData::observed() const {
  Eigen::VectorXd result(static_cast<Eigen::Index>(points_.size()));
  for (std::size_t i = 0; i < points_.size(); ++i)
    result(static_cast<Eigen::Index>(i)) = points_[i].observed;
  return result;
}

Eigen::MatrixXd FitData::covariance() const {
  const auto size = static_cast<Eigen::Index>(points_.size());
  Eigen::MatrixXd result = Eigen::MatrixXd::Zero(size, size);
  for (std::size_t i = 0; i < points_.size(); ++i) {
    const auto row = static_cast<Eigen::Index>(i);
    result(row, row) = points_[i].sigma * points_[i].sigma;
  }
  for (const CovarianceBlock& block : blocks_)
    for (std::size_t a = 0; a < block.points.size(); ++a)
      for (std::size_t b = 0; b < block.points.size(); ++b)
        result(static_cast<Eigen::Index>(block.points[a]),
               static_cast<Eigen::Index>(block.points[b])) =
            block.covariance(static_cast<Eigen::Index>(a), static_cast<Eigen::Index>(b));
  return result;
}

}  // namespace spinsieve
