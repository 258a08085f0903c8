#include "ranking/ties.hpp"

#include <algorithm>
#include <cmath>

#include "ranking/bound.hpp"
#include "ranking/effective_parameters.hpp"
#include "ranking/fit.hpp"
#include "ranking/random_draws.hpp"
#include "ranking/reduced_problem.hpp"

namespace spinsieve {
namespace {

/// Forms this small against the largest are extinct lines, as in the reduction of the problem.
constexpr double extinct_form = 1e-12;
/// Eigenvalues of the normal matrix of the linear system below this part of the squared forms
/// belong to solutions: squares of relative residuals of 1e-6, far above rounding and below any
/// real change.
constexpr double solution_tolerance = 1e-12;
/// A map with a smaller singular value relative to the largest counts as singular.
constexpr double singular_map = 1e-6;
constexpr std::uint64_t map_seed = 20240611;
/// One missed minimum among all random points would hide a tie: basins of a percent are searched.
constexpr std::size_t thorough_starts = 100;

double largest_norm(const FormFamily& forms) {
  return forms.size() > 0 ? forms.columns().colwise().norm().maxCoeff() : 0.0;
}

/// Coordinates in which Σ w_s M_s is the unit matrix: c = V z, z = W c.
struct Whitened {
  Eigen::MatrixXd V;
  Eigen::MatrixXd W;
  FormFamily forms;
};

Whitened whitened(const FormFamily& forms, const Eigen::VectorXd& weights) {
  const Eigen::Index n = forms.parameters();
  Eigen::MatrixXd A(n, n);
  Eigen::Map<Eigen::VectorXd>(A.data(), n * n) = forms.columns() * weights;
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> eigen(A);
  Eigen::Index hidden = 0;
  while (hidden < n && !(eigen.eigenvalues()(hidden) > extinct_form * eigen.eigenvalues()(n - 1)))
    ++hidden;
  Whitened result;
  const Eigen::MatrixXd E = eigen.eigenvectors().rightCols(n - hidden);
  const Eigen::VectorXd root = eigen.eigenvalues().tail(n - hidden).cwiseSqrt();
  result.V = E * root.cwiseInverse().asDiagonal();
  result.W = root.asDiagonal() * E.transpose();
  result.forms = forms.pulled_back(result.V);
  return result;
}

/// The factor of each point's group between the two families, from traces that no congruence
/// changes: tr(A₀⁻¹ A_g). None when the absorbed group does not see all directions.
std::optional<Eigen::VectorXd> group_factors(const FitData& data, const FormFamily& from,
                                             const FormFamily& to, const Eigen::VectorXd& weights) {
  const std::vector<std::optional<std::size_t>> slot_of = scale_slots(data);
  const auto slots = static_cast<std::size_t>(
      std::ranges::count_if(slot_of, [](const auto& slot) { return slot.has_value(); }));
  Eigen::VectorXd result = Eigen::VectorXd::Ones(from.size());
  if (slots == 0) return result;
  std::vector<Eigen::VectorXd> traces;
  for (const FormFamily* forms : {&from, &to}) {
    const Eigen::Index n = forms->parameters();
    std::vector<Eigen::MatrixXd> A(slots + 1, Eigen::MatrixXd::Zero(n, n));
    for (Eigen::Index s = 0; s < forms->size(); ++s) {
      const auto& slot = slot_of[data.points()[static_cast<std::size_t>(s)].scale_group];
      A[slot ? *slot + 1 : 0] += weights(s) * forms->form(s);
    }
    const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> eigen(A[0]);
    if (!(eigen.eigenvalues()(0) > extinct_form * eigen.eigenvalues()(n - 1))) return std::nullopt;
    Eigen::VectorXd own(static_cast<Eigen::Index>(slots));
    for (std::size_t k = 0; k < slots; ++k)
      own(static_cast<Eigen::Index>(k)) = A[0].ldlt().solve(A[k + 1]).trace();
    traces.push_back(own);
  }
  for (Eigen::Index s = 0; s < from.size(); ++s) {
    const auto& slot = slot_of[data.points()[static_cast<std::size_t>(s)].scale_group];
    if (!slot) continue;
    const auto k = static_cast<Eigen::Index>(*slot);
    if (traces[0](k) > 0 && traces[1](k) > 0) result(s) = traces[0](k) / traces[1](k);
  }
  return result;
}

FormFamily scaled(const FormFamily& forms, const Eigen::VectorXd& factors) {
  std::vector<Eigen::MatrixXd> list;
  for (Eigen::Index s = 0; s < forms.size(); ++s) list.emplace_back(factors(s) * forms.form(s));
  return {static_cast<std::size_t>(forms.parameters()), list};
}

/// Random combinations of both families with the same coefficients, enough to span them.
void mix(const FormFamily& a, const FormFamily& b, std::vector<Eigen::MatrixXd>& of_a,
         std::vector<Eigen::MatrixXd>& of_b, const Eigen::VectorXd& weights) {
  const Eigen::Index r = a.parameters();
  const Eigen::Index count = std::min(a.size(), r * (r + 1) / 2);
  RandomDraws random(map_seed);
  for (Eigen::Index k = 0; k < count; ++k) {
    const Eigen::VectorXd draw = random.normal_vector(a.size()).cwiseProduct(weights);
    Eigen::MatrixXd first(r, r);
    Eigen::MatrixXd second(r, r);
    Eigen::Map<Eigen::VectorXd>(first.data(), r * r) = a.columns() * draw;
    Eigen::Map<Eigen::VectorXd>(second.data(), r * r) = b.columns() * draw;
    of_a.push_back(first);
    of_b.push_back(second);
  }
}

/// An orthogonal U with U N = N′ U for all pairs, by the null space of the linear system.
std::optional<Eigen::MatrixXd> intertwiner(const std::vector<Eigen::MatrixXd>& N,
                                           const std::vector<Eigen::MatrixXd>& N_other) {
  const Eigen::Index r = N.front().rows();
  // ‖U N − N′ U‖² = uᵀ K u with K = Σ N²⊗1 + 1⊗N′² − 2 N⊗N′ on u = vec(U).
  Eigen::MatrixXd K = Eigen::MatrixXd::Zero(r * r, r * r);
  for (std::size_t k = 0; k < N.size(); ++k) {
    const Eigen::MatrixXd square = N[k] * N[k];
    const Eigen::MatrixXd square_other = N_other[k] * N_other[k];
    for (Eigen::Index i = 0; i < r; ++i)
      for (Eigen::Index j = 0; j < r; ++j) {
        K.block(i * r, j * r, r, r) -= 2 * N[k](i, j) * N_other[k];
        if (i == j) K.block(i * r, i * r, r, r) += square_other;
        K.block(i * r, j * r, r, r).diagonal().array() += square(i, j);
      }
  }
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> eigen(K);
  double size = 0;
  for (std::size_t k = 0; k < N.size(); ++k) size += N[k].squaredNorm() + N_other[k].squaredNorm();
  Eigen::Index solutions = 0;
  while (solutions < r * r && eigen.eigenvalues()(solutions) <= solution_tolerance * size)
    ++solutions;
  if (solutions == 0) return std::nullopt;
  RandomDraws random(map_seed, 1);
  const Eigen::VectorXd vector =
      eigen.eigenvectors().leftCols(solutions) * random.normal_vector(solutions);
  const Eigen::Map<const Eigen::MatrixXd> T(vector.data(), r, r);
  const Eigen::JacobiSVD<Eigen::MatrixXd> svd(T, Eigen::ComputeFullU | Eigen::ComputeFullV);
  if (!(svd.singularValues()(r - 1) > singular_map * svd.singularValues()(0))) return std::nullopt;
  return svd.matrixU() * svd.matrixV().transpose();
}

/// Weights that are the same for both families, so that congruence is kept.
std::optional<Eigen::VectorXd> common_weights(const FormFamily& a, const FormFamily& b) {
  const double largest_a = largest_norm(a);
  const double largest_b = largest_norm(b);
  Eigen::VectorXd weights = Eigen::VectorXd::Zero(a.size());
  for (Eigen::Index s = 0; s < a.size(); ++s) {
    const double norm_a = a.columns().col(s).norm();
    const double norm_b = b.columns().col(s).norm();
    const bool seen_a = norm_a > extinct_form * largest_a;
    const bool seen_b = norm_b > extinct_form * largest_b;
    if (seen_a != seen_b) return std::nullopt;
    if (seen_a) weights(s) = 1 / std::sqrt(norm_a * norm_b);
  }
  return weights;
}

/// Searches L with Lᵀ M_to L = M_from by a global fit of its entries: each entry of the equation is
/// a quadratic form in them.
std::optional<Eigen::MatrixXd> containing_map(const FitData& data, const FormFamily& from,
                                              const FormFamily& to) {
  constexpr Eigen::Index most_unknowns = 12;
  const Eigen::Index n = from.parameters();
  const Eigen::Index m = to.parameters();
  if (n * m > most_unknowns || data.scales().size() > 1) return std::nullopt;
  std::vector<Eigen::MatrixXd> forms;
  std::vector<MeasuredPoint> points;
  const double largest = largest_norm(from);
  for (Eigen::Index s = 0; s < from.size(); ++s)
    for (Eigen::Index i = 0; i < n; ++i)
      for (Eigen::Index j = 0; j <= i; ++j) {
        Eigen::MatrixXd form = Eigen::MatrixXd::Zero(n * m, n * m);
        form.block(i * m, j * m, m, m) += 0.5 * to.form(s);
        form.block(j * m, i * m, m, m) += 0.5 * to.form(s);
        forms.push_back(form);
        MeasuredPoint point;
        point.observed = from.form(s)(i, j);
        point.sigma = 1e-3 * largest;  // residuals of a solution are rounding, any unit will do
        points.push_back(point);
      }
  CandidateModel model;
  model.forms = FormFamily(static_cast<std::size_t>(n * m), forms);
  FitOptions options;
  options.most_starts = 24;
  options.lower_bound = 0;
  const Fit found = fit(FitData(points, {{ScaleKnowledge::fixed, 1, 0}}), model, options);
  const Eigen::Map<const Eigen::MatrixXd> L(found.parameters.data(), m, n);
  if (carries(data, from, to, L)) return L;
  return std::nullopt;
}

/// Whether `other` reaches the intensities of random parameter vectors of `model`.
bool reaches(const FitData& data, const CandidateModel& model, const CandidateModel& other,
             const TieOptions& options, std::uint64_t stream) {
  RandomDraws random(options.seed, stream);
  // Relative to the line itself, and to a hundredth of the strongest for weak lines.
  constexpr double weak_line = 0.01;
  constexpr double unit = 1e-3;
  std::vector<ScaleGroup> scales = data.scales();
  for (ScaleGroup& scale : scales)  // ranges are compared, whatever the value of the scale
    if (scale.knowledge == ScaleKnowledge::measured) scale.knowledge = ScaleKnowledge::free;
  for (std::size_t k = 0; k < options.points; ++k) {
    const Eigen::VectorXd c = random_parameters(model, random);
    const Eigen::VectorXd exact = model.forms.intensities(c);
    const double strongest = exact.cwiseAbs().maxCoeff();
    if (!(strongest > 0)) return true;
    std::vector<MeasuredPoint> points = data.points();
    for (std::size_t s = 0; s < points.size(); ++s) {
      const ScaleGroup& scale = scales[points[s].scale_group];
      const double factor = scale.knowledge == ScaleKnowledge::fixed ? scale.value : 1.0;
      const double value = factor * exact(static_cast<Eigen::Index>(s));
      points[s].observed = value;
      points[s].sigma = unit * (std::abs(value) + weak_line * factor * strongest);
      points[s].kind = PointKind::line;
    }
    const double allowed =
        std::pow(tested_tolerance / unit, 2) * static_cast<double>(data.points().size());
    const FitData target(std::move(points), scales);
    const Bound bound = lower_bound(target, other);
    if (bound.value > allowed) return false;  // certainly out of reach
    FitOptions search;
    search.seed = options.seed + k;
    search.least_starts = thorough_starts;
    search.starts = bound.starts;
    search.lower_bound = 0;
    if (!(fit(target, other, search).chi2 <= allowed)) return false;
  }
  return true;
}

}  // namespace

bool carries(const FitData& data, const FormFamily& from, const FormFamily& to,
             const Eigen::MatrixXd& L) {
  if (L.rows() != to.parameters() || L.cols() != from.parameters() || from.size() != to.size())
    return false;
  const FormFamily pulled = to.pulled_back(L);
  const std::vector<std::optional<std::size_t>> slot_of = scale_slots(data);
  Eigen::VectorXd with_itself = Eigen::VectorXd::Zero(static_cast<Eigen::Index>(slot_of.size()));
  Eigen::VectorXd with_other = with_itself;
  for (Eigen::Index s = 0; s < from.size(); ++s) {
    const auto group =
        static_cast<Eigen::Index>(data.points()[static_cast<std::size_t>(s)].scale_group);
    with_itself(group) += pulled.columns().col(s).squaredNorm();
    with_other(group) += pulled.columns().col(s).dot(from.columns().col(s));
  }
  const double allowed = map_tolerance * largest_norm(from);
  for (Eigen::Index s = 0; s < from.size(); ++s) {
    const std::size_t group = data.points()[static_cast<std::size_t>(s)].scale_group;
    const auto g = static_cast<Eigen::Index>(group);
    const double factor = slot_of[group] && with_other(g) > 0 ? with_other(g) / with_itself(g) : 1;
    if (!((factor * pulled.columns().col(s) - from.columns().col(s)).norm() <= allowed))
      return false;
  }
  return true;
}

std::optional<Eigen::MatrixXd> linear_map(const FitData& data, const FormFamily& from,
                                          const FormFamily& to) {
  if (from.size() != to.size() || from.size() == 0) return std::nullopt;
  const std::optional<Eigen::VectorXd> weights = common_weights(from, to);
  if (!weights) return std::nullopt;
  const std::optional<Eigen::VectorXd> factors = group_factors(data, from, to, *weights);
  if (!factors) return std::nullopt;
  const Whitened a = whitened(from, *weights);
  const Whitened b = whitened(scaled(to, *factors), *weights);
  if (a.V.cols() != b.V.cols()) return std::nullopt;
  if (a.V.cols() == 0) return Eigen::MatrixXd::Zero(to.parameters(), from.parameters());
  std::vector<Eigen::MatrixXd> N;
  std::vector<Eigen::MatrixXd> N_other;
  mix(a.forms, b.forms, N, N_other, *weights);
  const std::optional<Eigen::MatrixXd> U = intertwiner(N, N_other);
  if (!U) return std::nullopt;
  Eigen::MatrixXd L = b.V * *U * a.W;
  if (!carries(data, from, to, L)) return std::nullopt;
  return L;
}

Tie tie(const FitData& data, const CandidateModel& first, const CandidateModel& second,
        const TieOptions& options) {
  Tie result;
  if (first.equalities.empty() && second.equalities.empty()) {
    result.proof = TieProof::proved;
    if (const auto L = linear_map(data, first.forms, second.forms)) {
      result.relation = TieRelation::equal;
      result.map = *L;
      return result;
    }
    for (const Eigen::MatrixXd& L : options.suggested)
      if (carries(data, first.forms, second.forms, L)) {
        result.relation = TieRelation::first_within_second;
        result.map = L;
        return result;
      }
  }
  result.proof = TieProof::tested;
  const std::size_t rank_first = effective_parameters(data, first);
  const std::size_t rank_second = effective_parameters(data, second);
  const bool within = rank_first <= rank_second && reaches(data, first, second, options, 1);
  const bool around = rank_second <= rank_first && reaches(data, second, first, options, 2);
  if (within && around) result.relation = TieRelation::equal;
  if (within == around) return result;
  result.relation = within ? TieRelation::first_within_second : TieRelation::second_within_first;
  if (!first.equalities.empty() || !second.equalities.empty()) return result;
  const auto L = within ? containing_map(data, first.forms, second.forms)
                        : containing_map(data, second.forms, first.forms);
  if (!L) return result;
  result.proof = TieProof::proved;
  result.map = *L;
  return result;
}

}  // namespace spinsieve
