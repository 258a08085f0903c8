#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include <Eigen/Dense>

#include "ranking/fit_data.hpp"
#include "ranking/form_family.hpp"

namespace spinsieve {

/// Multipliers that prove a lower bound of χ² for c in one cone of parameters.
///
/// For any λ, χ² ≥ 2λᵀ(y − I) − λᵀCλ with C the covariance of the points. If
/// S = Σ λ_s M_s − Σ ν_i Q_i/L_i² − Σ η_j E_j obeys cᵀSc ≤ 0 on the cone, then cᵀSc drops out and
/// χ² ≥ 2λᵀy − λᵀCλ − 2Σν_i for every c there, whatever its scale (fixed factors are part of M_s).
/// cᵀSc ≤ 0 is shown by Gᵀ(BᵀSB)G + N ⪯ 0 with N ≥ 0 entrywise, where c = B G t, t ≥ 0.
struct DualMultipliers {
  std::vector<double> lambda;  ///< One per point of the block; ≥ 0 for at_least, ≤ 0 at_most.
  std::vector<double> limits;  ///< ν ≥ 0, in units of the limit.
  std::vector<double> equalities;  ///< η.
  Eigen::MatrixXd cone;            ///< N, r × r; empty for all c.
};

/// Splits cone `parent` into two: generator `first` or `second` gives way to
/// g_first + multiple·g_second. The two parts cover the parent.
struct ConeSplit {
  std::size_t parent = 0;
  Eigen::Index first = 0;
  Eigen::Index second = 0;
  double multiple = 1;  ///< A positive whole number, so that generators stay exact.
};

/// The proof for the points of scale groups that share one unknown: all groups of fixed scale
/// together, every other group alone.
struct CertificateBlock {
  std::vector<std::size_t> points;  ///< Of the data.
  Eigen::MatrixXd basis;            ///< B, n × r: c = B z + (unseen directions).
  Eigen::MatrixXd unseen;           ///< n × (n − r): directions that no point of the block sees.
  std::vector<ConeSplit> splits;    ///< Empty: one set of multipliers for all c.
  std::vector<DualMultipliers> multipliers;  ///< One per cone that is not split, in their order.
};

/// A lower bound of χ² over all parameters and scales that anybody can recompute.
///
/// With splits, the cones are numbered: first the 2^(r−1) orthants of z (generators the unit
/// vectors with signs; the first is positive, bit i − 1 of the number tells whether the i-th is
/// negative), then two for each split, in which the new generator replaces the first and the
/// second. The bound of a block is the least over its cones; the bound is the sum over blocks.
struct BoundCertificate {
  double bound = 0;  ///< As checked, rounded down.
  std::vector<CertificateBlock> blocks;
};

struct CertificateCheck {
  bool valid = false;
  double bound = 0;     ///< Rigorous for the given numbers; 0 when not valid.
  std::string failure;  ///< What does not hold; empty when valid.
};

/// How much an unseen direction may change an intensity against the largest form of the block:
/// forms are rounded to 1e-12 or so; what is smaller than this is taken as zero.
constexpr double unseen_response = 1e-9;

/// Checks a certificate from its numbers alone.
///
/// Negative semidefiniteness is shown by a Cholesky decomposition in floating point after a shift
/// that covers all rounding, of the sums that lead to the matrix and of the decomposition.
/// Source: Rump (2006), BIT 46, 433, Theorem 2.3; Higham (2002), Accuracy and Stability of
/// Numerical Algorithms, section 3.1 for the constants γ_k.
/// The data and forms are taken as exact. The bound ignores limits when the scale is relative.
CertificateCheck check_certificate(const BoundCertificate& certificate, const FitData& data,
                                   const CandidateModel& model);

/// The same for one set of multipliers: a bound for all c of one cone, G as columns (empty: all c).
CertificateCheck check_multipliers(const CertificateBlock& block,
                                   const DualMultipliers& multipliers,
                                   const Eigen::MatrixXd& generators, const FitData& data,
                                   const CandidateModel& model);

}  // namespace spinsieve
