#include "ranking/bound.hpp"

#include <algorithm>
#include <cmath>
#include <iterator>
#include <utility>

#include "ranking/reduced_problem.hpp"
#include "ranking/relaxation.hpp"

namespace spinsieve {
namespace {

/// First shift of the sum of forms towards the safe side, against its size: a few roundings.
constexpr double first_shift = 1e-15;
/// Shifts grow by this factor until the check passes; after the last the bound has lost 1e-5.
constexpr double shift_growth = 8;
constexpr int most_shifts = 12;

/// The points of one unknown: a problem of its own with one common scale.
struct Block {
  std::vector<std::size_t> points;
  FitData data;
  CandidateModel model;
};

/// Two-sided points, and those that may not exceed a value, tie every direction down; what only
/// "at least" points see cannot be bounded and is left out with them.
bool can_bound(const FitData& data, std::size_t p) {
  return data.points()[p].kind != PointKind::at_least;
}

Block block_of(const FitData& data, const CandidateModel& model,
               const std::vector<std::size_t>& points) {
  Block block;
  block.points = points;
  std::vector<MeasuredPoint> list;
  std::vector<Eigen::MatrixXd> forms;
  std::vector<std::size_t> place(data.points().size(), data.points().size());
  const ScaleGroup& scale = data.scales()[data.points()[points.front()].scale_group];
  for (const std::size_t p : points) {
    place[p] = list.size();
    MeasuredPoint point = data.points()[p];
    const ScaleGroup& own = data.scales()[point.scale_group];
    const double factor = own.knowledge == ScaleKnowledge::fixed ? own.value : 1.0;
    point.scale_group = 0;
    list.push_back(std::move(point));
    forms.emplace_back(factor * model.forms.form(static_cast<Eigen::Index>(p)));
  }
  std::vector<CovarianceBlock> covariances;
  for (const CovarianceBlock& together : data.blocks()) {
    if (place[together.points.front()] == data.points().size()) continue;
    covariances.push_back(together);
    for (std::size_t& p : covariances.back().points) p = place[p];
  }
  block.model.forms = FormFamily(static_cast<std::size_t>(model.forms.parameters()), forms);
  block.model.equalities = model.equalities;
  // A factor of 1 that is "fixed" keeps the limits alive. With an uncertain scale they are given
  // up: the bound is lower than it might be.
  ScaleGroup unit;
  if (scale.knowledge == ScaleKnowledge::fixed) {
    unit.knowledge = ScaleKnowledge::fixed;
    block.model.limits = model.limits;
  }
  block.data = FitData(std::move(list), {unit}, std::move(covariances));
  return block;
}

/// Solves and proves one block.
class BlockBound {
 public:
  BlockBound(Block block, const FitData& data, const CandidateModel& model)
      : block_(std::move(block)),
        data_(data),
        model_(model),
        problem_(block_.data, block_.model),
        covariance_(block_.data.covariance()) {
    certificate_.points = block_.points;
    certificate_.basis = problem_.basis();
    certificate_.unseen = problem_.unseen();
    for (Eigen::Index s = 0; s < block_.model.forms.size(); ++s)
      largest_form_ = std::max(largest_form_, block_.model.forms.columns().col(s).norm());
  }

  const ReducedProblem& problem() const { return problem_; }
  const CertificateBlock& certificate() const { return certificate_; }
  CertificateBlock& certificate() { return certificate_; }

  struct Part {
    DualMultipliers multipliers;
    double bound = 0;
    Eigen::MatrixXd X;
  };

  /// The bound in one cone of z; G empty: for all z.
  Part part(const Eigen::MatrixXd& G) const {
    Part result;
    if (problem_.parameters() == 0) {
      result.multipliers = multipliers_at(Eigen::MatrixXd(), RelaxedMinimum());
      prove(result, G);
      return result;
    }
    RelaxedMinimum relaxed;
    if (problem_.parameters() == 1 && G.size() == 0 && is_plain())
      relaxed = single();
    else
      relaxed = relaxed_minimum(problem_, G);
    result.X = relaxed.X;
    result.multipliers = multipliers_at(relaxed.X, relaxed);
    if (G.size() > 0) result.multipliers.cone = relaxed.cone;
    prove(result, G);
    return result;
  }

 private:
  bool is_plain() const {
    return problem_.constraints().size() == 0 &&
           std::ranges::count(problem_.rows().one_sided, char{1}) == 0;
  }

  /// One parameter: the least squares solution, or zero.
  RelaxedMinimum single() const {
    const Eigen::VectorXd a = problem_.rows().packed.row(0).transpose();
    RelaxedMinimum result;
    result.X = Eigen::MatrixXd::Constant(
        1, 1, std::max(0.0, a.dot(problem_.rows().target) / a.squaredNorm()));
    return result;
  }

  /// λ = C⁻¹(y − I) of the relaxed intensities, in the user's units.
  DualMultipliers multipliers_at(const Eigen::MatrixXd& X, const RelaxedMinimum& relaxed) const {
    const Eigen::Index count = block_.model.forms.size();
    Eigen::VectorXd left = block_.data.observed();
    if (X.size() > 0) {
      const Eigen::MatrixXd in_c = problem_.basis() * X * problem_.basis().transpose();
      for (Eigen::Index s = 0; s < count; ++s)
        left(s) -= block_.model.forms.form(s).cwiseProduct(in_c).sum();
    }
    DualMultipliers result;
    result.lambda.resize(static_cast<std::size_t>(count));
    for (Eigen::Index s = 0; s < count; ++s) {
      const MeasuredPoint& point = block_.data.points()[static_cast<std::size_t>(s)];
      double value = left(s) / (point.sigma * point.sigma);
      if (point.kind == PointKind::at_least) value = std::max(0.0, value);
      if (point.kind == PointKind::at_most) value = std::min(0.0, value);
      result.lambda[static_cast<std::size_t>(s)] = value;
    }
    for (const CovarianceBlock& together : block_.data.blocks()) {
      const std::vector<Eigen::Index> index(together.points.begin(), together.points.end());
      const Eigen::VectorXd solved =
          Eigen::LLT<Eigen::MatrixXd>(together.covariance).solve(left(index));
      for (std::size_t i = 0; i < together.points.size(); ++i)
        result.lambda[together.points[i]] = solved(static_cast<Eigen::Index>(i));
    }
    for (const double nu : relaxed.limits) result.limits.push_back(nu);
    for (Eigen::Index j = 0; j < relaxed.equalities.size(); ++j) {
      const double norm = block_.model.equalities[static_cast<std::size_t>(j)].norm();
      result.equalities.push_back(norm > 0 ? relaxed.equalities(j) / norm : 0.0);
    }
    return result;
  }

  /// Shifts the multipliers to the safe side until the independent check passes.
  void prove(Part& part, const Eigen::MatrixXd& G) const {
    const DualMultipliers exact = part.multipliers;
    double size = 0;
    for (std::size_t s = 0; s < exact.lambda.size(); ++s)
      size += std::abs(exact.lambda[s]) *
              block_.model.forms.columns().col(static_cast<Eigen::Index>(s)).norm();
    double shift = 0;
    for (int attempt = 0; attempt < most_shifts; ++attempt) {
      part.multipliers = exact;
      for (std::size_t s = 0; s < exact.lambda.size(); ++s) {
        const double norm = block_.model.forms.columns().col(static_cast<Eigen::Index>(s)).norm();
        if (!can_bound(block_.data, s) || !(norm > 1e-12 * largest_form_)) continue;
        part.multipliers.lambda[s] -= shift / norm;
      }
      rescale(part.multipliers);
      const CertificateCheck checked =
          check_multipliers(certificate_, part.multipliers, G, data_, model_);
      if (checked.valid) {
        part.bound = checked.bound;
        return;
      }
      shift = attempt == 0 ? first_shift * size : shift * shift_growth;
    }
    part.multipliers = exact;
    std::ranges::fill(part.multipliers.lambda, 0.0);
    std::ranges::fill(part.multipliers.limits, 0.0);
    std::ranges::fill(part.multipliers.equalities, 0.0);
    part.bound = 0;
  }

  /// The best multiple of a set of multipliers, for which all conditions hold as well.
  void rescale(DualMultipliers& m) const {
    const Eigen::Map<const Eigen::VectorXd> lambda(m.lambda.data(),
                                                   static_cast<Eigen::Index>(m.lambda.size()));
    double linear = lambda.dot(block_.data.observed());
    for (const double nu : m.limits) linear -= nu;
    const double square = lambda.dot(covariance_ * lambda);
    const double factor = square > 0 ? std::max(0.0, linear / square) : 0.0;
    for (double& value : m.lambda) value *= factor;
    for (double& value : m.limits) value *= factor;
    for (double& value : m.equalities) value *= factor;
    m.cone *= factor;
  }

  Block block_;
  const FitData& data_;
  const CandidateModel& model_;
  ReducedProblem problem_;
  Eigen::MatrixXd covariance_;
  CertificateBlock certificate_;
  double largest_form_ = 0;
};

/// One cone of directions in the search tree.
struct Cone {
  Eigen::MatrixXd G;
  BlockBound::Part part;
  bool is_split = false;
};

/// The two generators that are farthest apart, the longer one first, and the whole multiple of the
/// second that points between them.
ConeSplit widest_split(const Eigen::MatrixXd& G, std::size_t parent) {
  ConeSplit split;
  split.parent = parent;
  double least = 2;
  for (Eigen::Index i = 0; i < G.cols(); ++i)
    for (Eigen::Index j = 0; j < i; ++j) {
      const double cosine = G.col(i).dot(G.col(j)) / (G.col(i).norm() * G.col(j).norm());
      if (cosine >= least) continue;
      least = cosine;
      const bool longer = G.col(i).norm() >= G.col(j).norm();
      split.first = longer ? i : j;
      split.second = longer ? j : i;
    }
  split.multiple =
      std::max(1.0, std::round(G.col(split.first).norm() / G.col(split.second).norm()));
  return split;
}

/// Best-first splitting of cones; leaves tree and multipliers in the certificate.
void branch(BlockBound& block, const BoundOptions& options, Bound& result,
            BlockBound::Part& weakest) {
  const Eigen::Index r = block.problem().parameters();
  const auto orthants = std::size_t{1} << static_cast<std::size_t>(r - 1);
  // Entries of generators double at most with each split along a path.
  constexpr double longest_generator = 0x1p45;
  std::vector<Cone> cones;
  std::vector<ConeSplit> splits;
  for (std::size_t code = 0; code < orthants; ++code) {
    Cone cone;
    cone.G = Eigen::MatrixXd::Identity(r, r);
    for (Eigen::Index i = 1; i < r; ++i)
      if ((code >> static_cast<std::size_t>(i - 1) & 1U) != 0) cone.G(i, i) = -1;
    cone.part = block.part(cone.G);
    cones.push_back(std::move(cone));
  }
  std::size_t spent = orthants;
  const auto least_cone = [&cones] {
    std::size_t least = cones.size();
    for (std::size_t i = 0; i < cones.size(); ++i)
      if (!cones[i].is_split &&
          (least == cones.size() || cones[i].part.bound < cones[least].part.bound))
        least = i;
    return least;
  };
  std::size_t least = least_cone();
  while (spent + 2 <= options.most_cones) {
    const double bound = cones[least].part.bound;
    if (options.target > 0 && bound > options.target) break;
    if (options.minimum && bound >= *options.minimum - closed_gap * (1 + *options.minimum)) break;
    const Eigen::MatrixXd G = cones[least].G;
    if (G.cwiseAbs().maxCoeff() > longest_generator) break;
    const ConeSplit split = widest_split(G, least);
    cones[least].is_split = true;
    splits.push_back(split);
    for (const Eigen::Index replaced : {split.first, split.second}) {
      Cone child;
      child.G = G;
      child.G.col(replaced) = G.col(split.first) + split.multiple * G.col(split.second);
      child.part = block.part(child.G);
      cones.push_back(std::move(child));
    }
    spent += 2;
    least = least_cone();
  }
  result.cones += spent;
  if (cones[least].part.bound <= weakest.bound) return;
  weakest = cones[least].part;
  block.certificate().splits = std::move(splits);
  block.certificate().multipliers.clear();
  for (Cone& cone : cones)
    if (!cone.is_split) block.certificate().multipliers.push_back(std::move(cone.part.multipliers));
}

/// Points by the unknown they share: fixed scales together, every other scale alone.
std::vector<std::vector<std::size_t>> blocks_of_points(const FitData& data) {
  std::vector<std::vector<std::size_t>> result(data.scales().size() + 1);
  for (std::size_t p = 0; p < data.points().size(); ++p) {
    const std::size_t group = data.points()[p].scale_group;
    const bool fixed = data.scales()[group].knowledge == ScaleKnowledge::fixed;
    result[fixed ? 0 : group + 1].push_back(p);
  }
  std::erase_if(result, [](const std::vector<std::size_t>& points) { return points.empty(); });
  return result;
}

void add_starts(Bound& result, const BlockBound& block, const BlockBound::Part& part) {
  if (part.X.size() == 0) return;
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> eigen(part.X);
  const Eigen::Index r = part.X.rows();
  constexpr Eigen::Index most = 2;
  for (Eigen::Index j = 0; j < std::min(most, r); ++j)
    result.starts.emplace_back(block.problem().basis() * eigen.eigenvectors().col(r - 1 - j) *
                               std::sqrt(std::max(0.0, eigen.eigenvalues()(r - 1 - j))));
}

void add_carriers(Bound& result, const FitData& data, const Eigen::VectorXd& lambda) {
  const Eigen::VectorXd spread = data.covariance() * lambda;
  const double whole = lambda.dot(spread);
  if (!(whole > 0)) return;
  for (Eigen::Index s = 0; s < lambda.size(); ++s) {
    PointShare share;
    share.point = static_cast<std::size_t>(s);
    share.share = lambda(s) * spread(s) / whole;
    result.carriers.push_back(share);
  }
  std::ranges::stable_sort(
      result.carriers, [](const PointShare& a, const PointShare& b) { return a.share > b.share; });
}

}  // namespace

Bound lower_bound(const FitData& data, const CandidateModel& model, const BoundOptions& options) {
  Bound result;
  Eigen::VectorXd lambda = Eigen::VectorXd::Zero(static_cast<Eigen::Index>(data.points().size()));
  const std::vector<std::vector<std::size_t>> lists = blocks_of_points(data);
  for (const std::vector<std::size_t>& points : lists) {
    BlockBound block(block_of(data, model, points), data, model);
    BlockBound::Part part = block.part(Eigen::MatrixXd());
    ++result.cones;
    std::vector<std::size_t> bounded;
    std::ranges::copy_if(points, std::back_inserter(bounded),
                         [&data](std::size_t p) { return can_bound(data, p); });
    if (part.bound == 0 && !bounded.empty() && bounded.size() < points.size()) {
      BlockBound without(block_of(data, model, bounded), data, model);
      BlockBound::Part other = without.part(Eigen::MatrixXd());
      ++result.cones;
      without.certificate().multipliers = {other.multipliers};
      add_starts(result, without, other);
      for (std::size_t i = 0; i < bounded.size(); ++i)
        lambda(static_cast<Eigen::Index>(bounded[i])) = other.multipliers.lambda[i];
      result.certificate.blocks.push_back(without.certificate());
      continue;
    }
    block.certificate().multipliers = {part.multipliers};
    add_starts(result, block, part);
    const bool closed =
        options.minimum && part.bound >= *options.minimum - closed_gap * (1 + *options.minimum);
    const bool reached = options.target > 0 && part.bound > options.target;
    const Eigen::Index r = block.problem().parameters();
    constexpr Eigen::Index most_branched = 12;
    if (lists.size() == 1 && r > 1 && r <= most_branched && !closed && !reached &&
        (std::size_t{1} << static_cast<std::size_t>(r - 1)) <= options.most_cones)
      branch(block, options, result, part);
    for (std::size_t i = 0; i < points.size(); ++i)
      lambda(static_cast<Eigen::Index>(points[i])) = part.multipliers.lambda[i];
    result.certificate.blocks.push_back(block.certificate());
  }
  const CertificateCheck checked = check_certificate(result.certificate, data, model);
  result.value = checked.valid ? checked.bound : 0.0;
  result.certificate.bound = result.value;
  add_carriers(result, data, lambda);
  return result;
}

}  // namespace spinsieve
