#include "ranking/arrangement_ranking.hpp"

#include <algorithm>

#include "ranking/observed.hpp"

namespace spinsieve {

namespace {

/// Phases round half a turn at which a modulated moment is held below its limit; between two the
/// moment exceeds the largest sampled one by less than 1 %.
constexpr std::size_t limit_phases = 12;

std::vector<Arm> arms_of(std::span<const Candidate> candidates) {
  std::vector<Arm> arms;
  for (const Candidate& candidate : candidates)
    for (std::size_t a = 0; a < candidate.field.arms.size(); ++a) {
      const FractionVector& k = candidate.field.arms[a].k;
      const bool known = std::ranges::any_of(arms, [&](const Arm& arm) { return arm.k == k; });
      if (!known)
        arms.push_back({k, candidate.parts[std::min(a, candidate.parts.size() - 1)].wavevector});
    }
  return arms;
}

std::vector<ScaleGroup> scales_of(std::span<const Measurement> measurements) {
  std::vector<ScaleGroup> scales;
  for (const Measurement& measurement : measurements) {
    ScaleGroup scale;
    switch (measurement.scale) {
      case ScaleKind::free:
        break;
      case ScaleKind::fixed:
        scale.knowledge = ScaleKnowledge::fixed;
        scale.value = measurement.scale_value;
        break;
      case ScaleKind::nuclear:
        throw Error(measurement.place,
                    "'scale: nuclear' is not acted on yet; accepted are free and a number");
    }
    scales.push_back(scale);
  }
  return scales;
}

}  // namespace

ArrangementRanking rank_arrangements(const ArrangementData& input,
                                     const ArrangementRankingOptions& options, Executor& executor) {
  ArrangementRanking result;
  const MagneticScatterers scatterers(input.cell, input.group, input.sites);
  const std::vector<Arm> arms = arms_of(input.candidates);
  for (const Measurement& measurement : input.measurements)
    result.plans.emplace_back(input.cell, input.group, arms, measurement);
  result.data = observed_data(result.plans, scales_of(input.measurements));
  result.points =
      static_cast<std::size_t>(std::ranges::count_if(result.data.points(), [](const auto& point) {
        return point.kind == PointKind::line || point.kind == PointKind::absence;
      }));
  if (result.points == 0)
    throw Error(input.measurements.empty() ? Place() : input.measurements[0].place,
                "no line with an intensity and no absence to rank against; give lines, absences or "
                "scanned ranges");
  result.scale = result.data.scale_is_relative() ? ScaleMeaning::relative : ScaleMeaning::absolute;
  const bool limited = std::ranges::any_of(
      input.sites, [](const MagneticSite& site) { return site.moment_limit.has_value(); });
  if (limited && result.scale == ScaleMeaning::relative)
    result.warnings.emplace_back(
        "moment_limit has no effect without an absolute scale; give scale a number");

  std::vector<MomentField> fields(input.candidates.size());
  std::vector<CandidateModel> models(input.candidates.size());
  executor.for_each(input.candidates.size(), [&](std::size_t i) {
    fields[i] = to_moment_field(input.candidates[i].field, input.cell);
    const MomentField& field = fields[i];
    std::vector<std::vector<DataPoint>> points;
    for (const ObservationPlan& plan : result.plans)
      points.push_back(data_points(plan, scatterers, field));
    CandidateModel& model = models[i];
    model.forms = observed_forms(field.parameters, points);
    if (result.scale == ScaleMeaning::absolute)
      for (std::size_t s = 0; s < input.sites.size(); ++s)
        if (input.sites[s].moment_limit)
          std::ranges::move(
              moment_limits(field, input.cell, s, *input.sites[s].moment_limit, limit_phases),
              std::back_inserter(model.limits));
    if (options.equal_moments) model.equalities = equal_moment_conditions(field, input.cell);
  });

  RankingOptions ranking_options;
  ranking_options.significance = options.significance;
  ranking_options.seed = options.seed;
  Ranking judged = ranking(result.data, models, ranking_options, executor);
  result.ranking.resize(judged.candidates.size());
  executor.for_each(judged.candidates.size(), [&](std::size_t i) {
    RankedCandidate& from = judged.candidates[i];
    RankedArrangement& row = result.ranking[i];
    const MomentField& field = fields[from.candidate];
    row.candidate = from.candidate;
    row.fit = std::move(from.fit);
    if (from.bound) row.lower_bound = from.bound->value;
    row.verdict = from.verdict;
    row.p_value = from.p_value;
    row.weight = from.weight;
    row.ties = std::move(from.ties);
    row.moments = fitted_moments(field, input.cell, row.fit, result.scale);
    row.undetermined = undetermined_in_words(field, input.cell, row.fit,
                                             input.candidates[row.candidate].parameters);
    if (result.scale == ScaleMeaning::relative)
      row.undetermined.emplace_back("overall size of the moments");
  });
  return result;
}

std::vector<std::string> built_in_ties(Sample sample) {
  std::vector<std::string> ties{
      "global phase of a modulation whose 2k is not a reciprocal-lattice vector",
      "reversal of all moments",
      "hand: a helix and its mirror image",
      "domains: symmetry-equivalent orientations of one arrangement",
  };
  if (sample == Sample::powder)
    ties.emplace_back(
        "several arms of the star in one domain against one arm in each of several domains");
  return ties;
}

}  // namespace spinsieve
