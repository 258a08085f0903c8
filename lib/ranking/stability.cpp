#include "ranking/stability.hpp"

#include <algorithm>
#include <cmath>

#include "ranking/random_draws.hpp"
#include "ranking/verdict.hpp"

namespace spinsieve {
namespace {

/// Redrawn data move a minimum little: the old one and a few others suffice as starts.
constexpr std::size_t redraw_starts = 8;

/// Criteria that differ by less than this share a place.
constexpr double shared_place = 1e-6;

Fit refit(const FitData& data, const CandidateModel& model, const Eigen::VectorXd& start,
          std::uint64_t seed) {
  FitOptions options;
  options.seed = seed;
  options.most_starts = redraw_starts;
  options.starts = {start};
  return fit(data, model, options);
}

}  // namespace

FitData redrawn(const FitData& data, const Eigen::VectorXd& centre, std::uint64_t seed,
                std::uint64_t stream) {
  RandomDraws random(seed, stream);
  Eigen::VectorXd values = random.normal_vector(centre.size());
  const Eigen::VectorXd draws = values;
  for (std::size_t i = 0; i < data.points().size(); ++i)
    values(static_cast<Eigen::Index>(i)) *= data.points()[i].sigma;
  for (const CovarianceBlock& block : data.blocks()) {
    const std::vector<Eigen::Index> index(block.points.begin(), block.points.end());
    const Eigen::VectorXd own = draws(index);
    const Eigen::VectorXd joint = Eigen::LLT<Eigen::MatrixXd>(block.covariance).matrixL() * own;
    values(index) = joint;
  }
  // A bound that was not measured is not redrawn.
  for (std::size_t i = 0; i < data.points().size(); ++i)
    if (is_one_sided(data.points()[i].kind))
      values(static_cast<Eigen::Index>(i)) =
          data.points()[i].observed - centre(static_cast<Eigen::Index>(i));
  return data.with_observed(centre + values);
}

std::vector<std::optional<double>> stability(const FitData& data,
                                             std::span<const CandidateModel> candidates,
                                             std::span<const Fit> fits, std::size_t draws,
                                             std::uint64_t seed, Executor& executor) {
  std::vector<std::optional<double>> result(candidates.size());
  if (candidates.empty() || draws == 0) return result;
  const std::size_t points = data.points().size();
  std::vector<double> criteria;
  for (const Fit& f : fits) criteria.push_back(akaike(f.chi2, points, f.effective_parameters));
  const double best = *std::ranges::min_element(criteria);
  std::vector<std::size_t> contenders;
  for (std::size_t i = 0; i < criteria.size(); ++i)
    if (criteria[i] <= best + contender_range) contenders.push_back(i);
  std::vector<std::vector<double>> shares(draws);
  executor.for_each(draws, [&](std::size_t draw) {
    const FitData other = redrawn(data, data.observed(), seed, draw + 1);
    std::vector<double> own;
    for (const std::size_t i : contenders) {
      const Fit f = refit(other, candidates[i], fits[i].parameters, seed + draw);
      own.push_back(akaike(f.chi2, points, f.effective_parameters));
    }
    const double least = *std::ranges::min_element(own);
    const auto at_top = [&](double value) {
      return value <= least + shared_place * (1 + std::abs(least));
    };
    const auto count = static_cast<double>(std::ranges::count_if(own, at_top));
    for (const double value : own) shares[draw].push_back(at_top(value) ? 1 / count : 0.0);
  });
  for (std::size_t k = 0; k < contenders.size(); ++k) {
    double sum = 0;
    for (const std::vector<double>& share : shares) sum += share[k];
    result[contenders[k]] = sum / static_cast<double>(draws);
  }
  return result;
}

NestedComparison nested_comparison(const FitData& data, const CandidateModel& inner,
                                   const CandidateModel& outer, std::size_t draws,
                                   std::uint64_t seed, Executor& executor) {
  const Fit small = fit(data, inner);
  const Fit large = fit(data, outer);
  NestedComparison result;
  result.improvement = small.chi2 - large.chi2;
  std::vector<char> as_large(draws, 0);
  executor.for_each(draws, [&](std::size_t draw) {
    const FitData other = redrawn(data, small.computed, seed, draw + 1);
    const double improvement = refit(other, inner, small.parameters, seed + draw).chi2 -
                               refit(other, outer, large.parameters, seed + draw).chi2;
    as_large[draw] = improvement >= result.improvement ? 1 : 0;
  });
  const auto more = static_cast<double>(std::ranges::count(as_large, char{1}));
  result.p_value = (1 + more) / (1 + static_cast<double>(draws));
  return result;
}

}  // namespace spinsieve
