#include "report/locate_report.hpp"

#include <algorithm>
#include <cmath>

#include "report/json.hpp"

namespace spinsieve {
namespace {

/// Three texts: exact fractions of a point, decimals otherwise.
std::array<std::string, 3> components(const LocatedVector& vector) {
  std::array<std::string, 3> texts;
  for (std::size_t i = 0; i < 3; ++i)
    texts[i] = vector.exact ? to_string((*vector.exact)[i]) : fixed(vector.k[i], 5);
  return texts;
}

std::string vector_text(const LocatedVector& vector) {
  const std::array<std::string, 3> texts = components(vector);
  return "(" + texts[0] + ", " + texts[1] + ", " + texts[2] + ")";
}

std::string several(const std::vector<LocatedVector>& vectors) {
  std::string text;
  for (const LocatedVector& vector : vectors)
    text += (text.empty() ? "" : "; ") + vector_text(vector);
  return text;
}

std::string chance_text(double chance) {
  return chance < 1e-12 ? "< 1e-12" : significant(chance, 2);
}

/// "1e-3", with fewer than all excluded never shown as 100 %.
std::string percent(double fraction) {
  if (fraction >= 1) return "100 %";
  return fixed(std::min(100 * fraction, 99.9999), 4) + " %";
}

Json vector_entry(const LocatedVector& vector) { return Json::array_of(components(vector)); }

Json solution_entry(const Solution& solution, const SearchProblem& problem) {
  Json entry = Json::object();
  entry.set("k", vector_entry(solution.vector));
  entry.set("k_value", Json::array_of(solution.vector.k));
  entry.set("family", Json::array_of(component_texts(solution.vector.family)));
  entry.set("kind", to_string(solution.kind));
  entry.set("matched", solution.matched);
  entry.set("of", solution.of);
  entry.set("rms_q", solution.rms_q);
  entry.set("chance", solution.chance);
  entry.set("tied_with", Json::array_of(solution.tied_with, vector_entry));
  entry.set("commensurate",
            solution.commensurate
                ? Json::array_of(*solution.commensurate, [](Fraction x) { return to_string(x); })
                : Json());
  entry.set("harmonics", Json::array_of(solution.harmonics));
  entry.set("reach", solution.reach);
  entry.set("absences_met", solution.absences_met);
  Json lines = Json::array();
  for (std::size_t i = 0; i < solution.deviations.size(); ++i) {
    Json line = Json::object();
    line.set("line", problem.lines[i].text);
    line.set("deviation_q", solution.deviations[i] ? Json(*solution.deviations[i]) : Json());
    lines.push(std::move(line));
  }
  entry.set("lines", std::move(lines));
  return entry;
}

}  // namespace

std::string locate_text(const LocateReport& report, const ReportOptions& options) {
  const SearchResult& result = report.result;
  TextPage page(options.letters);
  start_page(page, "Wavevectors that explain the lines", options, report.problem.group);
  page.item("Lines", std::to_string(report.problem.lines.size()), 14);
  page.item("Tolerance", "ΔQ/Q up to ± " + significant(result.coverage.tolerance, 3), 14);
  page.item("Solutions",
            std::to_string(result.found) +
                (result.found > result.solutions.size()
                     ? ", of which " + std::to_string(result.solutions.size()) + " are listed"
                     : ""),
            14);
  if (!report.limit.empty()) page.item("Incomplete", "limit reached: " + report.limit, 14);
  page.blank();
  if (result.solutions.empty()) {
    page.paragraph("No wavevector explains the lines within their tolerances.");
  } else {
    Table table({{"k", Align::left},
                 {"kind", Align::left},
                 {"lines", Align::right},
                 {"rms ΔQ, Å⁻¹", Align::right},
                 {"chance", Align::right},
                 {"near", Align::left},
                 {"tied with", Align::left}});
    for (const Solution& solution : result.solutions)
      table.add_row({vector_text(solution.vector), to_string(solution.kind),
                     std::to_string(solution.matched) + " of " + std::to_string(solution.of),
                     fixed(solution.rms_q, 5), chance_text(solution.chance),
                     solution.commensurate ? "(" + to_string(*solution.commensurate) + ")" : "",
                     several(solution.tied_with)});
    page.table(table);
    page.blank();
    page.paragraph(
        "chance: that some vector of the kind matches as many lines as well by coincidence. near: "
        "the simplest commensurate vector that explains as many. tied with: other stars of the "
        "group with the same positions.");
  }
  page.heading("What was searched");
  Table covered({{"kind", Align::left},
                 {"families", Align::right},
                 {"excluded", Align::right},
                 {"", Align::left}});
  for (const KindCoverage& kind : result.coverage.kinds) {
    std::string remark = kind.note;
    if (!kind.complete) remark += (remark.empty() ? "" : "; ") + std::string("not to the end");
    covered.add_row({to_string(kind.kind), std::to_string(kind.families),
                     kind.searched ? percent(kind.excluded_fraction) : "-", remark});
  }
  page.table(covered);
  for (const std::string& note : result.notes) page.paragraph(note);
  if (!result.undetermined.empty()) {
    std::string families;
    for (const Wavevector& family : result.undetermined)
      families += (families.empty() ? "(" : "; (") + to_string(family) + ")";
    page.paragraph("Families that so few lines cannot fix: " + families);
  }
  end_page(page, options, {"wavevector"});
  return page.text();
}

std::string locate_json(const LocateReport& report, const ReportOptions& options) {
  const SearchResult& result = report.result;
  Json document = document_head("locate/1", options, report.problem.group, report.limit);
  document.set("solutions", Json::array_of(result.solutions, [&](const Solution& solution) {
                 return solution_entry(solution, report.problem);
               }));
  document.set("found", result.found);
  Json coverage = Json::object();
  coverage.set("complete", result.coverage.complete);
  coverage.set("excluded_fraction", result.coverage.excluded_fraction);
  coverage.set("tolerance", result.coverage.tolerance);
  coverage.set("kinds", Json::array_of(result.coverage.kinds, [](const KindCoverage& kind) {
                 Json entry = Json::object();
                 entry.set("kind", to_string(kind.kind));
                 entry.set("searched", kind.searched);
                 entry.set("complete", kind.complete);
                 entry.set("excluded_fraction", kind.excluded_fraction);
                 entry.set("families", kind.families);
                 entry.set("regions", kind.regions);
                 entry.set("note", kind.note);
                 return entry;
               }));
  document.set("coverage", std::move(coverage));
  document.set("undetermined", Json::array_of(result.undetermined, [](const Wavevector& family) {
                 return Json::array_of(component_texts(family));
               }));
  document.set("remarks", Json::array_of(result.notes));
  return document.text(options.letters);
}

}  // namespace spinsieve
