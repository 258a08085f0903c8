#include "ranking/certificate.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <optional>

namespace spinsieve {
namespace {

// Plain loops on purpose: this file shares nothing with the solver.

/// Unit roundoff of double precision; γ_k = k u/(1 − k u) bounds k roundings (Higham 2002, 3.1).
constexpr double unit_roundoff = 0x1p-53;
double gamma(double k) { return k * unit_roundoff / (1 - k * unit_roundoff); }

/// Error bounds are sums of positive numbers themselves rounded; this covers it for up to 1e9
/// terms.
constexpr double upward = 1 + 1e-6;

/// Absolute floor for underflow in products.
constexpr double underflow = 1e-290;

/// A matrix with a bound of each entry's error.
struct Enclosed {
  std::size_t size = 0;
  std::vector<double> entry;
  std::vector<double> error;

  explicit Enclosed(std::size_t n) : size(n), entry(n * n, 0.0), error(n * n, 0.0) {}
  double& at(std::size_t i, std::size_t j) { return entry[i * size + j]; }
  double at(std::size_t i, std::size_t j) const { return entry[i * size + j]; }
  double& error_at(std::size_t i, std::size_t j) { return error[i * size + j]; }
  double error_at(std::size_t i, std::size_t j) const { return error[i * size + j]; }
};

/// A sum that knows how wrong it may be.
class Sum {
 public:
  void add(double a, double b, double c = 1) {
    const double term = a * b * c;
    value_ += term;
    size_ += std::abs(term);
    count_ += 1;
  }
  double value() const { return value_; }
  /// Two products and `count` additions a term.
  double error() const { return upward * gamma(count_ + 3) * size_ + count_ * underflow; }

 private:
  double value_ = 0;
  double size_ = 0;
  double count_ = 0;
};

/// S = Σ weight·matrix over a list of terms.
class FormSum {
 public:
  explicit FormSum(std::size_t n) : n_(n), sums_(n * n) {}

  template <class Matrix>
  void add(double weight, double factor, const Matrix& form) {
    for (std::size_t i = 0; i < n_; ++i)
      for (std::size_t j = 0; j < n_; ++j) {
        const auto row = static_cast<Eigen::Index>(i);
        const auto column = static_cast<Eigen::Index>(j);
        // The symmetric part is what counts; halving is exact.
        sums_[i * n_ + j].add(weight, 0.5 * form(row, column), factor);
        sums_[i * n_ + j].add(weight, 0.5 * form(column, row), factor);
      }
  }

  Enclosed result() const {
    Enclosed S(n_);
    for (std::size_t i = 0; i < n_ * n_; ++i) {
      S.entry[i] = sums_[i].value();
      S.error[i] = sums_[i].error();
    }
    return S;
  }

 private:
  std::size_t n_;
  std::vector<Sum> sums_;
};

/// Vᵀ S V with errors.
Enclosed congruent(const Enclosed& S, const Eigen::MatrixXd& V) {
  const auto r = static_cast<std::size_t>(V.cols());
  Enclosed result(r);
  for (std::size_t i = 0; i < r; ++i)
    for (std::size_t j = 0; j < r; ++j) {
      Sum sum;
      double inherited = 0;
      for (std::size_t p = 0; p < S.size; ++p)
        for (std::size_t q = 0; q < S.size; ++q) {
          const double left = V(static_cast<Eigen::Index>(p), static_cast<Eigen::Index>(i));
          const double right = V(static_cast<Eigen::Index>(q), static_cast<Eigen::Index>(j));
          sum.add(left, S.at(p, q), right);
          inherited += std::abs(left) * S.error_at(p, q) * std::abs(right);
        }
      result.at(i, j) = sum.value();
      result.error_at(i, j) = sum.error() + upward * inherited;
    }
  return result;
}

/// Whether every symmetric matrix within the errors is negative semidefinite (definite, in fact).
bool negative(const Enclosed& S) {
  const std::size_t n = S.size;
  double radius = 0;  // bounds the spectral norm of the error by its largest row sum
  double trace = 0;
  double largest = 0;
  for (std::size_t i = 0; i < n; ++i) {
    double row = 0;
    for (std::size_t j = 0; j < n; ++j) {
      // The symmetric part is decomposed: entries (i, j) and (j, i) may differ by rounding.
      row += std::max(S.error_at(i, j), S.error_at(j, i)) + std::abs(S.at(i, j) - S.at(j, i));
      largest = std::max(largest, std::abs(S.at(i, j)));
    }
    radius = std::max(radius, row);
    if (!(S.at(i, i) <= 0)) return false;
    trace -= S.at(i, i);
  }
  // Rump (2006): a Cholesky decomposition of A − shift that runs to its end proves A positive
  // definite when shift ≥ γ_{n+1}/(1 − γ_{n+1}) tr(A) + the error of A; twice that is taken.
  const auto order = static_cast<double>(n);
  const double g = gamma(order + 1);
  const double shift = 2 * (upward * radius + g / (1 - g) * trace +
                            (order + 4) * unit_roundoff * largest + order * underflow);
  std::vector<double> lower(n * n, 0.0);
  for (std::size_t j = 0; j < n; ++j) {
    double pivot = -S.at(j, j) - shift;
    for (std::size_t k = 0; k < j; ++k) pivot -= lower[j * n + k] * lower[j * n + k];
    if (!(pivot > 0) || !std::isfinite(pivot)) return false;
    lower[j * n + j] = std::sqrt(pivot);
    for (std::size_t i = j + 1; i < n; ++i) {
      double entry = -0.5 * (S.at(i, j) + S.at(j, i));
      for (std::size_t k = 0; k < j; ++k) entry -= lower[i * n + k] * lower[j * n + k];
      lower[i * n + j] = entry / lower[j * n + j];
    }
  }
  return true;
}

bool all_finite(const std::vector<double>& values) {
  return std::ranges::all_of(values, [](double v) { return std::isfinite(v); });
}

class BlockCheck {
 public:
  BlockCheck(const CertificateBlock& block, const FitData& data, const CandidateModel& model,
             std::size_t number)
      : block_(block), data_(data), model_(model), number_(number) {}

  /// The bound of the block, or none with failure() set.
  std::optional<double> bound() {
    if (!shape_holds()) return std::nullopt;
    std::vector<Eigen::MatrixXd> cones;
    if (!list_cones(cones)) return std::nullopt;
    double least = std::numeric_limits<double>::infinity();
    for (std::size_t leaf = 0; leaf < cones.size(); ++leaf) {
      const std::optional<double> own = leaf_bound(block_.multipliers[leaf], cones[leaf], leaf);
      if (!own) return std::nullopt;
      least = std::min(least, *own);
    }
    return std::max(0.0, least);
  }

  /// The bound of one cone alone.
  std::optional<double> bound(const DualMultipliers& multipliers, const Eigen::MatrixXd& cone) {
    if (!shape_holds()) return std::nullopt;
    return leaf_bound(multipliers, cone, 0);
  }

  const std::string& failure() const { return failure_; }

 private:
  bool fail(const std::string& what) {
    failure_ = "block " + std::to_string(number_ + 1) + ": " + what;
    return false;
  }

  bool has_scale_value() const {
    return !block_.points.empty() &&
           data_.scales()[data_.points()[block_.points.front()].scale_group].knowledge !=
               ScaleKnowledge::free;
  }

  /// Basis and unseen directions span all parameters, and the unseen ones change nothing.
  bool shape_holds() {
    const Eigen::Index n = model_.forms.parameters();
    const Eigen::Index r = block_.basis.cols();
    if (block_.basis.rows() != n || block_.unseen.rows() != n || r + block_.unseen.cols() != n ||
        !block_.basis.allFinite() || !block_.unseen.allFinite())
      return fail("basis and unseen directions are not n columns of n numbers");
    Eigen::MatrixXd all(n, n);
    all << block_.basis, block_.unseen;
    for (Eigen::Index j = 0; j < n; ++j) all.col(j) /= all.col(j).norm();
    // Decompositions give orthogonal columns, with determinant 1.
    constexpr double dependent = 1e-6;
    if (!(std::abs(all.determinant()) > dependent))
      return fail("basis and unseen directions are linearly dependent");
    double largest = 0;
    double response = 0;
    for (const std::size_t p : block_.points) {
      const auto M = model_.forms.form(static_cast<Eigen::Index>(p));
      largest = std::max(largest, M.norm());
      if (block_.unseen.cols() > 0) response = std::max(response, (M * block_.unseen).norm());
    }
    if (response > unseen_response * largest)
      return fail("an unseen direction changes the intensities");
    if (has_scale_value())
      for (const QuadraticLimit& limit : model_.limits)
        if ((limit.form * block_.unseen).norm() > unseen_response * limit.form.norm())
          return fail("an unseen direction changes a limited moment");
    for (const Eigen::MatrixXd& E : model_.equalities)
      if ((E * block_.unseen).norm() > unseen_response * E.norm())
        return fail("an unseen direction changes an equality");
    return true;
  }

  bool list_cones(std::vector<Eigen::MatrixXd>& cones) {
    const Eigen::Index r = block_.basis.cols();
    if (block_.splits.empty() && block_.multipliers.size() == 1 &&
        block_.multipliers.front().cone.size() == 0) {
      cones.emplace_back();
      return true;
    }
    constexpr Eigen::Index most = 20;
    if (r > most) return fail("too many parameters for cones");
    std::vector<Eigen::MatrixXd> all;
    for (std::size_t code = 0; code < std::size_t{1} << static_cast<std::size_t>(r - 1); ++code) {
      Eigen::MatrixXd orthant = Eigen::MatrixXd::Identity(r, r);
      for (Eigen::Index i = 1; i < r; ++i)
        if ((code >> static_cast<std::size_t>(i - 1) & 1U) != 0) orthant(i, i) = -1;
      all.push_back(orthant);
    }
    std::vector<char> is_split(all.size(), 0);
    for (const ConeSplit& split : block_.splits) {
      if (split.parent >= all.size() || is_split[split.parent] != 0 || split.first < 0 ||
          split.second < 0 || split.first >= r || split.second >= r ||
          split.first == split.second || !(split.multiple >= 1) ||
          split.multiple != std::floor(split.multiple))
        return fail("a split of cones is not one");
      is_split[split.parent] = 1;
      const Eigen::MatrixXd G = all[split.parent];
      const Eigen::VectorXd fresh = G.col(split.first) + split.multiple * G.col(split.second);
      constexpr double exact_integers = 0x1p52;
      if (fresh.cwiseAbs().maxCoeff() > exact_integers) return fail("generators are not exact");
      for (const Eigen::Index replaced : {split.first, split.second}) {
        all.push_back(G);
        all.back().col(replaced) = fresh;
      }
      is_split.resize(all.size(), 0);
    }
    for (std::size_t i = 0; i < all.size(); ++i)
      if (is_split[i] == 0) cones.push_back(all[i]);
    if (cones.size() != block_.multipliers.size())
      return fail(std::to_string(block_.multipliers.size()) + " sets of multipliers for " +
                  std::to_string(cones.size()) + " cones");
    return true;
  }

  bool signs_hold(const DualMultipliers& m) {
    const Eigen::Index r = block_.basis.cols();
    if (m.lambda.size() != block_.points.size() || !all_finite(m.lambda) || !all_finite(m.limits) ||
        !all_finite(m.equalities) || !m.cone.allFinite())
      return fail("a multiplier is missing or not finite");
    for (std::size_t i = 0; i < m.lambda.size(); ++i) {
      const PointKind kind = data_.points()[block_.points[i]].kind;
      if ((kind == PointKind::at_least && m.lambda[i] < 0) ||
          (kind == PointKind::at_most && m.lambda[i] > 0))
        return fail("the multiplier of a one-sided point has the wrong sign");
    }
    const bool any_limit = std::ranges::any_of(m.limits, [](double v) { return v != 0; });
    if (any_limit && (m.limits.size() != model_.limits.size() || !has_scale_value()))
      return fail("multipliers of limits that do not exist");
    if (std::ranges::any_of(m.limits, [](double v) { return v < 0; }))
      return fail("a multiplier of a limit is negative");
    if (!m.equalities.empty() && m.equalities.size() != model_.equalities.size())
      return fail("multipliers of equalities that do not exist");
    if (m.cone.size() != 0 && (m.cone.rows() != r || m.cone.cols() != r || m.cone.minCoeff() < 0))
      return fail("the matrix of a cone is not r by r and non-negative");
    return true;
  }

  std::optional<double> leaf_bound(const DualMultipliers& m, const Eigen::MatrixXd& cone,
                                   std::size_t leaf) {
    if (!signs_hold(m)) return std::nullopt;
    if (m.cone.size() != 0 && cone.size() == 0) {
      fail("a matrix of a cone without cones");
      return std::nullopt;
    }
    const auto n = static_cast<std::size_t>(model_.forms.parameters());
    FormSum sum(n);
    for (std::size_t i = 0; i < m.lambda.size(); ++i)
      sum.add(m.lambda[i], factor(block_.points[i]),
              model_.forms.form(static_cast<Eigen::Index>(block_.points[i])));
    const bool with_limits = std::ranges::any_of(m.limits, [](double v) { return v != 0; });
    for (std::size_t i = 0; with_limits && i < m.limits.size(); ++i)
      sum.add(-m.limits[i], 1 / model_.limits[i].limit, model_.limits[i].form);
    for (std::size_t j = 0; j < m.equalities.size(); ++j)
      sum.add(-m.equalities[j], 1, model_.equalities[j]);
    Enclosed S = congruent(sum.result(), block_.basis);
    if (cone.size() > 0) {
      // Powers of two bring long generators to a common length without rounding.
      Eigen::VectorXd unit(cone.cols());
      for (Eigen::Index i = 0; i < cone.cols(); ++i)
        unit(i) = std::ldexp(1.0, -std::ilogb(cone.col(i).norm()));
      S = congruent(S, cone * unit.asDiagonal());
      for (std::size_t i = 0; m.cone.size() != 0 && i < S.size; ++i)
        for (std::size_t j = 0; j < S.size; ++j) {
          const auto row = static_cast<Eigen::Index>(i);
          const auto column = static_cast<Eigen::Index>(j);
          S.at(i, j) += unit(row) * m.cone(row, column) * unit(column);
          S.error_at(i, j) += unit_roundoff * upward * std::abs(S.at(i, j));
        }
    }
    const bool nothing = std::ranges::all_of(m.lambda, [](double v) { return v == 0; });
    if (nothing) return 0.0;
    if (!negative(S)) {
      fail("the sum of forms of cone " + std::to_string(leaf + 1) +
           " is not proved negative semidefinite");
      return std::nullopt;
    }
    return value(m, with_limits);
  }

  double factor(std::size_t point) const {
    const ScaleGroup& scale = data_.scales()[data_.points()[point].scale_group];
    return scale.knowledge == ScaleKnowledge::fixed ? scale.value : 1.0;
  }

  /// 2λᵀy − λᵀCλ − 2ℓ v − ℓ²σ², ℓ = Σν; v = 1, σ = 0 for fixed scales, which are in the forms.
  double value(const DualMultipliers& m, bool with_limits) const {
    Sum sum;
    std::vector<double> of_point(data_.points().size(), 0.0);
    for (std::size_t i = 0; i < m.lambda.size(); ++i) of_point[block_.points[i]] = m.lambda[i];
    std::vector<char> in_covariance(of_point.size(), 0);
    for (const CovarianceBlock& together : data_.blocks())
      for (std::size_t a = 0; a < together.points.size(); ++a) {
        in_covariance[together.points[a]] = 1;
        for (std::size_t b = 0; b < together.points.size(); ++b)
          sum.add(-of_point[together.points[a]],
                  together.covariance(static_cast<Eigen::Index>(a), static_cast<Eigen::Index>(b)),
                  of_point[together.points[b]]);
      }
    for (std::size_t i = 0; i < of_point.size(); ++i) {
      const double lambda = of_point[i];
      const MeasuredPoint& point = data_.points()[i];
      sum.add(2, lambda, point.observed);
      const double spread = lambda * point.sigma;
      if (in_covariance[i] == 0) sum.add(-spread, spread);
    }
    if (with_limits) {
      double used = 0;
      for (const double nu : m.limits) used += nu;
      used *= upward;
      const ScaleGroup& scale = data_.scales()[data_.points()[block_.points.front()].scale_group];
      const bool fixed = scale.knowledge == ScaleKnowledge::fixed;
      sum.add(-2, used, fixed ? 1.0 : scale.value);
      if (!fixed) sum.add(-used * scale.sigma, used * scale.sigma);
    }
    return sum.value() - sum.error();
  }

  const CertificateBlock& block_;
  const FitData& data_;
  const CandidateModel& model_;
  std::size_t number_;
  std::string failure_;
};

/// Each point in at most one block, blocks of one unknown each.
std::string misplaced(const BoundCertificate& certificate, const FitData& data) {
  std::vector<char> used(data.points().size(), 0);
  std::vector<std::size_t> block_of_group(data.scales().size(), certificate.blocks.size());
  for (std::size_t b = 0; b < certificate.blocks.size(); ++b) {
    bool any_fixed = false;
    std::optional<std::size_t> own;
    for (const std::size_t p : certificate.blocks[b].points) {
      if (p >= used.size()) return "a point that does not exist";
      if (used[p] != 0) return "a point in two blocks";
      used[p] = 1;
      const std::size_t group = data.points()[p].scale_group;
      const bool fixed = data.scales()[group].knowledge == ScaleKnowledge::fixed;
      any_fixed = any_fixed || fixed;
      if (!fixed && own && *own != group) return "two unknown scales in one block";
      if (!fixed) own = group;
      if (block_of_group[group] != certificate.blocks.size() && block_of_group[group] != b)
        return "the points of one scale in two blocks";
      block_of_group[group] = b;
    }
    if (any_fixed && own) return "a fixed and an unknown scale in one block";
  }
  return "";
}

}  // namespace

CertificateCheck check_certificate(const BoundCertificate& certificate, const FitData& data,
                                   const CandidateModel& model) {
  CertificateCheck result;
  result.failure = misplaced(certificate, data);
  if (!result.failure.empty()) return result;
  double total = 0;
  for (std::size_t b = 0; b < certificate.blocks.size(); ++b) {
    BlockCheck check(certificate.blocks[b], data, model, b);
    const std::optional<double> bound = check.bound();
    if (!bound) {
      result.failure = check.failure();
      return result;
    }
    total += *bound * (1 - 4 * unit_roundoff);
  }
  result.valid = true;
  result.bound = total * (1 - 4 * unit_roundoff);
  return result;
}

CertificateCheck check_multipliers(const CertificateBlock& block,
                                   const DualMultipliers& multipliers,
                                   const Eigen::MatrixXd& generators, const FitData& data,
                                   const CandidateModel& model) {
  BlockCheck check(block, data, model, 0);
  const std::optional<double> bound = check.bound(multipliers, generators);
  CertificateCheck result;
  result.valid = bound.has_value();
  result.bound = bound.value_or(0.0);
  result.failure = check.failure();
  return result;
}

}  // namespace spinsieve
