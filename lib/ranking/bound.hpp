#pragma once

#include <cstddef>
#include <optional>
#include <vector>

#include <Eigen/Dense>

#include "ranking/certificate.hpp"
#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

struct BoundOptions {
  std::size_t most_cones = 0;     ///< Relaxations that branching may spend; 0: do not branch.
  double target = 0;              ///< Branching may stop when the bound exceeds this.
  std::optional<double> minimum;  ///< χ² of the best fit: branching stops when the bound meets it.
};

/// A point's part in a bound.
struct PointShare {
  std::size_t point = 0;
  double share = 0;  ///< λ_s (Cλ)_s over the sum of these: 1 when the point alone carries it.
};

/// A certified lower bound on χ² over all parameters of a candidate.
struct Bound {
  double value = 0;                  ///< Checked; never above χ² of any parameters.
  BoundCertificate certificate;      ///< The proof.
  std::vector<PointShare> carriers;  ///< By decreasing share, of the cone with the least bound.
  std::size_t cones = 0;             ///< Relaxations solved.
  /// Fit starts: leading eigenvectors of the relaxed moment matrix, n values each.
  std::vector<Eigen::VectorXd> starts;
};

/// The bound has met the minimum when they differ by less than this part of 1 + χ².
constexpr double closed_gap = 1e-4;

/// Bounds χ² from below by the convex relaxation z zᵀ → X ⪰ 0 and, where asked, by splitting the
/// directions of z into ever narrower cones until the bound meets the minimum, exceeds the target,
/// or the effort is spent.
///
/// Lists with unknown scales of their own are bounded one by one and added, which gives up that
/// they share one arrangement; branching is for one common scale only.
/// The result has passed check_certificate; when no proof is found it is the trivial bound 0.
Bound lower_bound(const FitData& data, const CandidateModel& model,
                  const BoundOptions& options = {});

}  // namespace spinsieve
