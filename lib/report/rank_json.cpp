#include "report/candidate_text.hpp"
#include "report/exact_text.hpp"
#include "report/json.hpp"
#include "report/rank_parts.hpp"
#include "report/rank_report.hpp"

namespace spinsieve {
namespace {

Json moment_entry(const AtomMoment& atom, const RankReport& report, PhaseSign sign) {
  Json entry = Json::object();
  entry.set("site", report.sites[atom.site].site.label);
  entry.set("position", Json::array_of(atom.position, [](Fraction x) { return to_string(x); }));
  entry.set("moment", Json::array_of(atom.moment, [&](std::complex<double> value) {
              return atom.self_conjugate ? Json(value.real()) : Json(in_sign(value, sign));
            }));
  entry.set("magnitude", atom.magnitude);
  entry.set("sigma", atom.sigma ? Json(*atom.sigma) : Json());
  return entry;
}

Json row_entry(const RankedArrangement& row, const RankReport& report, PhaseSign sign) {
  const Candidate& candidate = report.candidates[row.candidate];
  Json entry = Json::object();
  entry.set("id", candidate.id);
  entry.set("irreps", Json::array_of(irrep_labels(candidate, report.wavevectors)));
  entry.set("magnetic_group", candidate.group ? Json(candidate.group->bns_symbol()) : Json());
  entry.set("chi2", row.fit.chi2);
  entry.set("chi2_lower_bound", row.lower_bound ? Json(*row.lower_bound) : Json());
  entry.set("points", report.ranking.points);
  entry.set("free_parameters", candidate.parameters.size());
  entry.set("effective_parameters", row.fit.effective_parameters);
  entry.set("p_value", row.p_value ? Json(*row.p_value) : Json());
  entry.set("weight", row.weight);
  entry.set("verdict", to_string(row.verdict));
  Json ties = Json::array();
  for (const TieWith& tie : row.ties) {
    if (tie.relation != TieRelation::equal) continue;
    Json item = Json::object();
    item.set("id", report.candidates[tie.candidate].id);
    item.set("proof", tie.proof == TieProof::proved ? "proved" : "tested");
    ties.push(std::move(item));
  }
  entry.set("tied_with", std::move(ties));
  Json parameters = Json::object();
  for (std::size_t p = 0; p < candidate.parameters.size(); ++p)
    parameters.set(candidate.parameters[p], row.fit.parameters[static_cast<Eigen::Index>(p)]);
  entry.set("parameters", std::move(parameters));
  entry.set("moments", Json::array_of(row.moments, [&](const AtomMoment& atom) {
              return moment_entry(atom, report, sign);
            }));
  entry.set("undetermined", Json::array_of(row.undetermined));
  entry.set("computed", Json::array_of(compared_points(report.ranking, row),
                                       [](const ComparedPoint& point) { return point.computed; }));
  return entry;
}

}  // namespace

std::string rank_json(const RankReport& report, const SpaceGroup& group,
                      const ReportOptions& options) {
  const ArrangementRanking& ranking = report.ranking;
  Json document = document_head("rank/1", options, group, report.limit);
  document.set("moment_scale", ranking.scale == ScaleMeaning::absolute ? "absolute" : "relative");
  document.set("points", ranking.points);
  Json data = Json::array();
  if (!ranking.ranking.empty()) {
    for (const ComparedPoint& point : compared_points(ranking, ranking.ranking.front())) {
      Json entry = Json::object();
      entry.set("measurement", point.measurement + 1);
      entry.set("label", point.label);
      entry.set("contents", point.contents);
      entry.set("kind", to_string(point.kind));
      entry.set("observed", point.observed);
      entry.set("sigma", point.sigma);
      data.push(std::move(entry));
    }
  }
  document.set("data", std::move(data));
  document.set("ranking", Json::array_of(ranking.ranking, [&](const RankedArrangement& row) {
                 return row_entry(row, report, options.phase);
               }));
  document.set("built_in_ties", Json::array_of(report.built_in_ties));
  return document.text(options.letters);
}

}  // namespace spinsieve
