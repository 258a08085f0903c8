#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include <Eigen/Dense>

#include "scattering/observation.hpp"

namespace spinsieve {

/// One measured number and what it says of the computed intensity; both numbers in the unit of the
/// list it comes from.
struct MeasuredPoint {
  double observed = 0;
  double sigma = 0;  ///< > 0.
  PointKind kind = PointKind::line;
  std::size_t scale_group = 0;  ///< Which scale multiplies its computed intensity.
  std::string label;            ///< For tables and certificates.
};

/// Whether only deviations in one direction count.
constexpr bool is_one_sided(PointKind kind) {
  return kind == PointKind::at_least || kind == PointKind::at_most;
}

/// Joint errors of points that overlap; replaces their sigma.
struct CovarianceBlock {
  std::vector<std::size_t> points;  ///< Lines or absences of one scale group, each in one block.
  Eigen::MatrixXd covariance;       ///< Symmetric, positive definite, in the order of `points`.
};

/// How the factor between computed and measured intensity of one list is known.
enum class ScaleKnowledge {
  free,     ///< Any positive factor.
  fixed,    ///< Exactly `value`.
  measured  ///< `value` ± `sigma`, Gaussian (from nuclear lines).
};

struct ScaleGroup {
  ScaleKnowledge knowledge = ScaleKnowledge::free;
  double value = 1;
  double sigma = 0;  ///< > 0 when measured.
};

/// The measured side of a ranking: the same for all candidates.
///
/// Invariant: every number is finite, every sigma positive, every block positive definite, every
/// scale group exists. One free scale is absorbed in the moments; when no scale is known
/// (`scale_is_relative`) this is the first one, which is then 1 by definition.
class FitData {
 public:
  FitData() = default;

  /// Throws Error for a value that breaks the invariant; quotes the point's label.
  explicit FitData(std::vector<MeasuredPoint> points,
                   std::vector<ScaleGroup> scales = {ScaleGroup{}},
                   std::vector<CovarianceBlock> blocks = {});

  const std::vector<MeasuredPoint>& points() const noexcept { return points_; }
  const std::vector<ScaleGroup>& scales() const noexcept { return scales_; }
  const std::vector<CovarianceBlock>& blocks() const noexcept { return blocks_; }

  /// No scale is fixed or measured, so that only ratios of moments have a meaning.
  bool scale_is_relative() const noexcept { return relative_; }

  /// The same measurement with other observed values: redrawn or simulated data.
  /// observed: one value per point, finite. Throws Error otherwise.
  FitData with_observed(const Eigen::VectorXd& observed) const;

  Eigen::VectorXd observed() const;

  /// Covariance matrix of all points, N × N.
  Eigen::MatrixXd covariance() const;

 private:
  std::vector<MeasuredPoint> points_;
  std::vector<ScaleGroup> scales_;
  std::vector<CovarianceBlock> blocks_;
  bool relative_ = true;
};

}  // namespace spinsieve
