#include "ranking/effective_parameters.hpp"

#include <algorithm>
#include <cstdint>
#include <optional>
#include <vector>

#include "ranking/random_draws.hpp"
#include "ranking/reduced_problem.hpp"

namespace spinsieve {
namespace {

constexpr std::uint64_t rank_seed = 20240607;

/// The rank is maximal outside a set of measure zero; more points guard against bad conditioning.
constexpr int rank_points = 3;

/// Lines below this part of the strongest form are extinct; as in the reduction of the problem.
constexpr double extinct_form = 1e-12;

/// Newton steps onto the equalities; quadratic convergence needs about six.
constexpr int equality_steps = 50;

/// ∂(cᵀ E c)/∂c of all equalities, and their values.
Eigen::MatrixXd slopes_of_equalities(const CandidateModel& model, const Eigen::VectorXd& c,
                                     Eigen::VectorXd& values) {
  const auto count = static_cast<Eigen::Index>(model.equalities.size());
  Eigen::MatrixXd slopes(count, c.size());
  values.resize(count);
  for (Eigen::Index i = 0; i < count; ++i) {
    const Eigen::MatrixXd& E = model.equalities[static_cast<std::size_t>(i)];
    slopes.row(i) = ((E + E.transpose()) * c).transpose();
    values(i) = c.dot(E * c);
  }
  return slopes;
}

/// Directions that stay on the equalities at c, to first order.
Eigen::MatrixXd tangent(const CandidateModel& model, const Eigen::VectorXd& c) {
  if (model.equalities.empty()) return Eigen::MatrixXd::Identity(c.size(), c.size());
  Eigen::VectorXd values;
  const Eigen::MatrixXd slopes = slopes_of_equalities(model, c, values);
  const Eigen::JacobiSVD<Eigen::MatrixXd> svd(slopes, Eigen::ComputeFullV);
  Eigen::Index rank = 0;
  while (rank < svd.singularValues().size() &&
         svd.singularValues()(rank) > rank_tolerance * svd.singularValues()(0))
    ++rank;
  return svd.matrixV().rightCols(c.size() - rank);
}

}  // namespace

Eigen::VectorXd random_parameters(const CandidateModel& model, RandomDraws& random) {
  Eigen::VectorXd c = random.normal_vector(model.forms.parameters());
  if (model.equalities.empty()) return c;
  Eigen::VectorXd values;
  for (int step = 0; step < equality_steps; ++step) {
    const Eigen::MatrixXd slopes = slopes_of_equalities(model, c, values);
    c -= slopes.completeOrthogonalDecomposition().solve(values);
  }
  return c;
}

std::size_t effective_parameters(const FitData& data, const CandidateModel& model) {
  const FormFamily& forms = model.forms;
  const std::vector<std::optional<std::size_t>> slot_of = scale_slots(data);
  Eigen::Index slots = 0;
  Eigen::Index measured_slots = 0;
  for (std::size_t g = 0; g < slot_of.size(); ++g) {
    if (!slot_of[g]) continue;
    ++slots;
    if (data.scales()[g].knowledge == ScaleKnowledge::measured) ++measured_slots;
  }
  const Eigen::VectorXd norms = forms.columns().colwise().norm();
  const double largest = norms.size() > 0 ? norms.maxCoeff() : 0.0;
  RandomDraws random(rank_seed);
  std::size_t best = 0;
  for (int attempt = 0; attempt < rank_points; ++attempt) {
    const Eigen::VectorXd c = random_parameters(model, random);
    const Eigen::MatrixXd T = tangent(model, c);
    const Eigen::MatrixXd slopes = forms.jacobian(c);
    const Eigen::Index n = T.cols();
    Eigen::MatrixXd jacobian = Eigen::MatrixXd::Zero(forms.size() + measured_slots, n + slots);
    for (Eigen::Index s = 0; s < forms.size(); ++s) {
      const MeasuredPoint& point = data.points()[static_cast<std::size_t>(s)];
      if (is_one_sided(point.kind) || !(norms(s) > extinct_form * largest)) continue;
      jacobian.row(s).head(n).noalias() = slopes.row(s) * T / norms(s);
      const std::optional<std::size_t>& slot = slot_of[point.scale_group];
      if (slot)
        jacobian(s, n + static_cast<Eigen::Index>(*slot)) = 0.5 * slopes.row(s).dot(c) / norms(s);
    }
    Eigen::Index row = forms.size();
    for (std::size_t g = 0; g < slot_of.size(); ++g)
      if (slot_of[g] && data.scales()[g].knowledge == ScaleKnowledge::measured)
        jacobian(row++, n + static_cast<Eigen::Index>(*slot_of[g])) = 1;
    Eigen::ColPivHouseholderQR<Eigen::MatrixXd> qr(jacobian);
    qr.setThreshold(rank_tolerance);
    best = std::max(best, static_cast<std::size_t>(qr.rank()));
  }
  return best - std::min(best, static_cast<std::size_t>(measured_slots));
}

}  // namespace spinsieve
