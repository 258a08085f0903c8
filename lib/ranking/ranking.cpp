#include "ranking/ranking.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>
#include <tuple>
#include <utility>

#include "ranking/stability.hpp"

namespace spinsieve {
namespace {

/// Two candidates can be tied only when their best fits agree; fits converge far below this.
constexpr double same_chi2 = 1e-5;

/// Containment is looked for among this many classes of survivors at most; more than this is no
/// ranking yet, and the pairs grow with the square.
constexpr std::size_t most_compared = 40;

/// Candidates between two reports of progress.
constexpr std::size_t progress_chunk = 64;

void judge(RankedCandidate& ranked, const FitData& data, const CandidateModel& model,
           const RankingOptions& options) {
  const std::size_t points = data.points().size();
  FitOptions search;
  search.seed = options.seed;
  if (options.bounds != BoundEffort::none) {
    ranked.bound = lower_bound(data, model);
    search.starts = ranked.bound->starts;
    search.lower_bound = ranked.bound->value;
  }
  ranked.fit = fit(data, model, search);
  const auto verdict_now = [&] {
    return verdict(ranked.fit.chi2,
                   ranked.bound ? std::optional(ranked.bound->value) : std::nullopt, points,
                   ranked.fit.effective_parameters, options.significance);
  };
  ranked.verdict = verdict_now();
  if (ranked.verdict == Verdict::rejected && options.bounds == BoundEffort::branching) {
    const double quantile = chi_squared_quantile(options.significance, points);
    if (ranked.fit.chi2 > quantile) {
      BoundOptions deeper;
      deeper.most_cones = options.most_cones;
      deeper.target = quantile;
      deeper.minimum = ranked.fit.chi2;
      Bound bound = lower_bound(data, model, deeper);
      if (bound.value > ranked.bound->value) ranked.bound = std::move(bound);
      ranked.verdict = verdict_now();
    }
  }
  ranked.p_value = p_value(ranked.fit.chi2, points, ranked.fit.effective_parameters);
  ranked.criterion =
      akaike(ranked.fit.chi2, points, ranked.fit.effective_parameters, options.errors);
}

bool may_be_equal(const Fit& a, const Fit& b) {
  return a.effective_parameters == b.effective_parameters &&
         std::abs(a.chi2 - b.chi2) <= same_chi2 * (1 + std::min(a.chi2, b.chi2));
}

/// Runs of candidates in order of (effective parameters, χ²) whose neighbours may be equal.
std::vector<std::vector<std::size_t>> possible_ties(const std::vector<RankedCandidate>& ranked) {
  std::vector<std::size_t> order(ranked.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::ranges::stable_sort(order, [&](std::size_t a, std::size_t b) {
    return std::tuple(ranked[a].fit.effective_parameters, ranked[a].fit.chi2) <
           std::tuple(ranked[b].fit.effective_parameters, ranked[b].fit.chi2);
  });
  std::vector<std::vector<std::size_t>> runs;
  for (std::size_t i = 0; i < order.size(); ++i) {
    if (i == 0 || !may_be_equal(ranked[order[i - 1]].fit, ranked[order[i]].fit))
      runs.emplace_back();
    runs.back().push_back(order[i]);
  }
  for (std::vector<std::size_t>& run : runs) std::ranges::sort(run);
  return runs;
}

/// Members of one class reach the same intensities; the first stands for all.
struct TieClass {
  std::vector<std::size_t> members;
  std::vector<TieProof> proofs;  ///< Of each member's tie with the first.
};

std::vector<TieClass> classes_of(const std::vector<std::size_t>& run, const FitData& data,
                                 std::span<const CandidateModel> candidates,
                                 const std::vector<RankedCandidate>& ranked,
                                 const RankingOptions& options) {
  TieOptions search;
  search.seed = options.seed;
  search.points = options.tie_points;
  std::vector<TieClass> classes;
  for (const std::size_t i : run) {
    bool found = false;
    for (TieClass& c : classes) {
      const std::size_t head = c.members.front();
      if (!may_be_equal(ranked[head].fit, ranked[i].fit)) continue;
      const Tie relation = tie(data, candidates[head], candidates[i], search);
      if (relation.relation != TieRelation::equal) continue;
      c.members.push_back(i);
      c.proofs.push_back(relation.proof);
      found = true;
      break;
    }
    if (!found) classes.push_back({{i}, {TieProof::proved}});
  }
  return classes;
}

TieProof weaker(TieProof a, TieProof b) {
  return a == TieProof::proved && b == TieProof::proved ? TieProof::proved : TieProof::tested;
}

/// Adds the relation of every member of one class with every member of another (or the same).
void connect(std::vector<RankedCandidate>& ranked, const TieClass& a, const TieClass& b,
             TieRelation relation, TieProof proof) {
  for (std::size_t i = 0; i < a.members.size(); ++i)
    for (std::size_t j = 0; j < b.members.size(); ++j) {
      if (a.members[i] == b.members[j]) continue;
      TieWith tie_with;
      tie_with.candidate = b.members[j];
      tie_with.relation = relation;
      tie_with.proof = weaker(proof, weaker(a.proofs[i], b.proofs[j]));
      ranked[a.members[i]].ties.push_back(tie_with);
    }
}

TieRelation reversed(TieRelation relation) {
  if (relation == TieRelation::first_within_second) return TieRelation::second_within_first;
  if (relation == TieRelation::second_within_first) return TieRelation::first_within_second;
  return relation;
}

bool stands(const RankedCandidate& ranked) {
  return ranked.verdict == Verdict::survives || ranked.verdict == Verdict::undetermined;
}

void add_ties(std::vector<RankedCandidate>& ranked, const FitData& data,
              std::span<const CandidateModel> candidates, const RankingOptions& options,
              Executor& executor) {
  const std::vector<std::vector<std::size_t>> runs = possible_ties(ranked);
  std::vector<std::vector<TieClass>> by_run(runs.size());
  executor.for_each(runs.size(), [&](std::size_t i) {
    by_run[i] = classes_of(runs[i], data, candidates, ranked, options);
  });
  std::vector<TieClass> standing;
  for (const std::vector<TieClass>& classes : by_run)
    for (const TieClass& c : classes) {
      connect(ranked, c, c, TieRelation::equal, TieProof::proved);
      if (stands(ranked[c.members.front()])) standing.push_back(c);
    }
  std::ranges::sort(standing, {}, [](const TieClass& c) { return c.members.front(); });
  if (standing.size() > most_compared) standing.clear();
  std::vector<std::pair<std::size_t, std::size_t>> pairs;
  for (std::size_t i = 0; i < standing.size(); ++i)
    for (std::size_t j = i + 1; j < standing.size(); ++j) pairs.emplace_back(i, j);
  std::vector<Tie> found(pairs.size());
  TieOptions search;
  search.seed = options.seed;
  search.points = options.tie_points;
  executor.for_each(pairs.size(), [&](std::size_t k) {
    found[k] = tie(data, candidates[standing[pairs[k].first].members.front()],
                   candidates[standing[pairs[k].second].members.front()], search);
  });
  for (std::size_t k = 0; k < pairs.size(); ++k) {
    if (found[k].relation == TieRelation::none) continue;
    const TieClass& a = standing[pairs[k].first];
    const TieClass& b = standing[pairs[k].second];
    connect(ranked, a, b, found[k].relation, found[k].proof);
    connect(ranked, b, a, reversed(found[k].relation), found[k].proof);
  }
  for (RankedCandidate& r : ranked) std::ranges::stable_sort(r.ties, {}, &TieWith::candidate);
}

void put_in_order(std::vector<RankedCandidate>& ranked,
                  std::span<const CandidateModel> candidates) {
  std::ranges::stable_sort(ranked, [](const RankedCandidate& a, const RankedCandidate& b) {
    return std::tuple(a.verdict, a.criterion) < std::tuple(b.verdict, b.criterion);
  });
  const auto same_place = [](const RankedCandidate& a, const RankedCandidate& b) {
    return a.verdict == b.verdict &&
           (a.criterion == b.criterion ||
            std::abs(a.criterion - b.criterion) <= same_criterion * (1 + std::abs(a.criterion)));
  };
  for (std::size_t begin = 0; begin < ranked.size();) {
    std::size_t end = begin + 1;
    while (end < ranked.size() && same_place(ranked[end - 1], ranked[end])) ++end;
    const auto first = ranked.begin() + static_cast<std::ptrdiff_t>(begin);
    const auto last = ranked.begin() + static_cast<std::ptrdiff_t>(end);
    std::stable_sort(first, last, [&](const RankedCandidate& a, const RankedCandidate& b) {
      return std::tuple(a.fit.effective_parameters, candidates[a.candidate].forms.parameters(),
                        a.candidate) < std::tuple(b.fit.effective_parameters,
                                                  candidates[b.candidate].forms.parameters(),
                                                  b.candidate);
    });
    begin = end;
  }
}

}  // namespace

Ranking ranking(const FitData& data, std::span<const CandidateModel> candidates,
                const RankingOptions& options, Executor& executor) {
  Ranking result;
  result.points = data.points().size();
  result.candidates.resize(candidates.size());
  for (std::size_t begin = 0; begin < candidates.size(); begin += progress_chunk) {
    const std::size_t count = std::min(progress_chunk, candidates.size() - begin);
    executor.for_each(count, [&](std::size_t i) {
      result.candidates[begin + i].candidate = begin + i;
      judge(result.candidates[begin + i], data, candidates[begin + i], options);
    });
    executor.progress("fitting candidates",
                      static_cast<double>(begin + count) / static_cast<double>(candidates.size()));
  }
  std::vector<double> criteria;
  for (const RankedCandidate& ranked : result.candidates) criteria.push_back(ranked.criterion);
  const std::vector<double> weights = akaike_weights(criteria);
  for (std::size_t i = 0; i < weights.size(); ++i) result.candidates[i].weight = weights[i];
  add_ties(result.candidates, data, candidates, options, executor);
  if (options.stability_draws > 0) {
    std::vector<Fit> fits;
    for (const RankedCandidate& ranked : result.candidates) fits.push_back(ranked.fit);
    const std::vector<std::optional<double>> shares =
        stability(data, candidates, fits, options.stability_draws, options.seed, executor);
    for (std::size_t i = 0; i < shares.size(); ++i) result.candidates[i].stability = shares[i];
  }
  put_in_order(result.candidates, candidates);
  return result;
}

}  // namespace spinsieve
