#include <algorithm>

#include "report/candidate_text.hpp"
#include "report/exact_text.hpp"
#include "report/rank_parts.hpp"
#include "report/rank_report.hpp"

namespace spinsieve {
namespace {

constexpr std::size_t name_width = 14;
constexpr std::size_t candidates_shown = 3;  // In the table of observed and computed intensities.

std::string component_text(std::complex<double> value, bool real, PhaseSign sign) {
  if (real) return fixed(value.real(), 3);
  const std::complex<double> shown = in_sign(value, sign);
  const std::string imaginary = fixed(std::abs(shown.imag()), 3);
  return fixed(shown.real(), 3) + (shown.imag() < 0 ? "-" : "+") + imaginary + "i";
}

void table_of_candidates(TextPage& page, const RankReport& report) {
  Table table({{"id", Align::left},
               {"irrep", Align::left},
               {"magnetic group", Align::left},
               {"χ²", Align::right},
               {"bound", Align::right},
               {"par.", Align::right},
               {"weight", Align::right},
               {"verdict", Align::left},
               {"speaks against it", Align::left}});
  for (const RankedArrangement& row : report.ranking.ranking) {
    const Candidate& candidate = report.candidates[row.candidate];
    table.add_row({candidate.id, irreps_text(candidate, report.wavevectors),
                   candidate.group ? candidate.group->bns_symbol() : "modulated",
                   fixed(row.fit.chi2, 1), row.lower_bound ? fixed(*row.lower_bound, 1) : "-",
                   std::to_string(row.fit.effective_parameters), fixed(row.weight, 3),
                   std::string(to_string(row.verdict)), strongest_objection(report.ranking, row)});
  }
  page.table(table);
}

std::string parameters_text(const Candidate& candidate, const RankedArrangement& row) {
  std::string text;
  for (std::size_t p = 0; p < candidate.parameters.size(); ++p)
    text += (p > 0 ? ", " : "") + candidate.parameters[p] + " = " +
            fixed(row.fit.parameters[static_cast<Eigen::Index>(p)], 3);
  return text;
}

/// "the same intensities as 5c (proved by a linear map of the parameters)".
std::string tie_text(const TieWith& tie, const std::string& other) {
  std::string text;
  switch (tie.relation) {
    case TieRelation::first_within_second:
      text = "all its intensities are reached by " + other + " too";
      break;
    case TieRelation::second_within_first:
      text = "reaches all intensities of " + other;
      break;
    case TieRelation::equal:
    case TieRelation::none:
      text = "the same intensities as " + other;
      break;
  }
  return text + (tie.proof == TieProof::proved ? " (proved by a linear map of the parameters)"
                                               : " (tested at random points)");
}

void describe(TextPage& page, const RankedArrangement& row, const RankReport& report,
              PhaseSign sign) {
  const Candidate& candidate = report.candidates[row.candidate];
  page.heading(candidate.id + ": " + irreps_text(candidate, report.wavevectors) + ", direction " +
               direction_text(candidate));
  const bool relative = report.ranking.scale == ScaleMeaning::relative;
  if (!relative) page.item("Parameters", parameters_text(candidate, row) + " µB", name_width);
  for (const std::string& open : row.undetermined) page.item("Left open", open, name_width);
  for (const TieWith& tie : row.ties)
    page.item("Tie", tie_text(tie, report.candidates[tie.candidate].id), name_width);
  page.blank();
  const bool real = std::ranges::all_of(row.moments, &AtomMoment::self_conjugate);
  Table table({{"site", Align::left},
               {"atom at", Align::left},
               {real ? "moment on a, b, c" : "Fourier component S on a, b, c", Align::left},
               {relative ? "size" : "size, µB", Align::right}});
  for (const AtomMoment& atom : row.moments) {
    std::string moment = "(";
    for (std::size_t i = 0; i < 3; ++i)
      moment += (i > 0 ? ", " : "") + component_text(atom.moment[i], real, sign);
    table.add_row(
        {report.sites[atom.site].site.label, position_text(atom.position), moment + ")",
         atom.sigma ? with_uncertainty(atom.magnitude, *atom.sigma) : fixed(atom.magnitude, 3)});
  }
  page.table(table);
}

void observed_and_computed(TextPage& page, const RankReport& report) {
  const std::vector<RankedArrangement>& rows = report.ranking.ranking;
  const std::size_t shown = std::min(candidates_shown, rows.size());
  page.heading("Observed and computed");
  std::vector<Table::Column> columns = {
      {"entry", Align::left}, {"reflections", Align::left}, {"observed", Align::right}};
  std::vector<std::vector<ComparedPoint>> compared;
  for (std::size_t r = 0; r < shown; ++r) {
    columns.push_back({report.candidates[rows[r].candidate].id, Align::right});
    compared.push_back(compared_points(report.ranking, rows[r]));
  }
  Table table(columns);
  for (std::size_t i = 0; i < compared.front().size(); ++i) {
    const ComparedPoint& point = compared.front()[i];
    std::vector<std::string> cells = {point.label, point.contents};
    switch (point.kind) {
      case PointKind::line:
        cells.push_back(with_uncertainty(point.observed, point.sigma));
        break;
      case PointKind::absence:
        cells.push_back("≤ " + significant(limit_per_sigma * point.sigma, 3));
        break;
      case PointKind::at_least:
        cells.push_back("≥ " + significant(point.observed, 3));
        break;
      case PointKind::at_most:
        cells.push_back("≤ " + with_uncertainty(point.observed, point.sigma));
        break;
    }
    for (const auto& candidate : compared) cells.push_back(significant(candidate[i].computed, 3));
    table.add_row(std::move(cells));
  }
  page.table(table);
}

}  // namespace

std::string rank_text(const RankReport& report, const SpaceGroup& group,
                      const ReportOptions& options) {
  const ArrangementRanking& ranking = report.ranking;
  TextPage page(options.letters);
  start_page(page, "Ranking", options, group);
  for (const WavevectorModes& modes : report.wavevectors)
    page.item("Wavevector", "k = (" + to_string(modes.little_group.k()) + ")", name_width);
  const auto surviving =
      std::ranges::count(ranking.ranking, Verdict::survives, &RankedArrangement::verdict);
  page.item("Data",
            std::to_string(ranking.points) + " points (lines and absences; overlapping windows " +
                "count once)",
            name_width);
  page.item("Result",
            std::to_string(surviving) + " of " + std::to_string(ranking.ranking.size()) +
                " candidates survive",
            name_width);
  page.item("Moments",
            ranking.scale == ScaleMeaning::absolute
                ? "in µB, from the given scale"
                : "relative: the largest is 1, since the scale is free",
            name_width);
  for (const std::string& warning : ranking.warnings) page.item("Warning", warning, name_width);
  if (!report.limit.empty()) page.item("Incomplete", "limit reached: " + report.limit, name_width);
  page.blank();
  table_of_candidates(page, report);
  page.blank();
  page.paragraph(
      "χ² of the best fit; bound: no arrangement of this symmetry fits better; par.: parameters "
      "that the intensities feel; weight: Akaike weight. survives: the fit is acceptable; "
      "rejected: "
      "the best fit found is not; excluded: the bound proves that none is; undetermined: as many "
      "parameters as points.");
  if (!ranking.ranking.empty()) observed_and_computed(page, report);
  for (const RankedArrangement& row : ranking.ranking)
    if (row.verdict == Verdict::survives || row.verdict == Verdict::undetermined)
      describe(page, row, report, options.phase);
  page.heading("What such data never tell apart");
  for (const std::string& tie : report.built_in_ties) page.paragraph("- " + tie);
  end_page(page, options, {"wavevector", "field", "labels", "moments", "intensities"});
  return page.text();
}

}  // namespace spinsieve
