#include "report/conventions.hpp"

#include <algorithm>
#include <array>

#include "report/version.hpp"

namespace spinsieve {

std::vector<std::pair<std::string, std::string>> conventions(PhaseSign phase) {
  const std::string sign = phase == PhaseSign::plus ? "+" : "−";
  const std::string opposite = phase == PhaseSign::plus ? "−" : "+";
  return {
      {"operations", "x' = R x + t on fractional coordinates of the conventional cell"},
      {"wavevector",
       "k is a row of components on a*, b*, c* (no 2π); Q = 2π(hkl + k_sign·k) in Å⁻¹"},
      {"field",
       "m_j(L) = S_j exp(" + sign +
           "2πi k·L), plus the complex conjugate unless 2k is a reciprocal-lattice vector; "
           "L is the lattice vector (centrings included) counted from the listed atom j"},
      {"representations",
       "D({E|T}) = exp(" + opposite +
           "2πi k·T); an operation that sends atom j to atom j' plus the lattice "
           "vector a sends S_j to det(R) R S_j exp(" +
           opposite + "2πi k·a) on j'"},
      {"labels",
       "small irreps Γ1, Γ2, … are numbered by dimension, then by their characters; a label "
       "holds for one setting of the group and the k printed, and its characters define it"},
      {"basis",
       "basis vectors are on the lattice basis a, b, c, scaled so that the first non-zero entry is "
       "1; e(x) = exp(2πi x)"},
      {"moments", "µB along the unit vectors a/|a|, b/|b|, c/|c|"},
      {"intensities",
       "|F⊥|² in µB² and p²|F⊥|² in barn, p = 2.695 fm per µB, per conventional parent "
       "cell, summed over the reflections of one domain in the line"},
  };
}

std::string group_text(const SpaceGroup& group) {
  std::string text = group.symbol() + " (No. " + std::to_string(group.number()) + ")";
  if (!group.setting().empty()) text += ", setting " + group.setting();
  if (!group.hall_symbol().empty()) text += ", Hall symbol " + group.hall_symbol();
  return text;
}

Json document_head(std::string_view schema, const ReportOptions& options, const SpaceGroup& group,
                   std::string_view limit) {
  Json sentences = Json::object();
  for (const auto& entry : conventions(options.phase)) sentences.set(entry.first, entry.second);
  Json head = Json::object();
  head.set("spinsieve", version());
  head.set("schema", schema);
  head.set("title", options.title);
  head.set("conventions", std::move(sentences));
  head.set("complete", limit.empty());
  if (!limit.empty()) head.set("limit", limit);
  Json setting = Json::object();
  setting.set("number", group.number());
  setting.set("symbol", group.symbol());
  setting.set("hall_number", group.hall_number() > 0 ? Json(group.hall_number()) : Json());
  setting.set("hall_symbol", group.hall_symbol());
  setting.set("setting", group.setting());
  head.set("space_group", std::move(setting));
  head.set("notes", Json::array_of(options.notes));
  head.set("warnings", Json::array_of(options.warnings));
  return head;
}

void start_page(TextPage& page, std::string_view command, const ReportOptions& options,
                const SpaceGroup& group) {
  page.heading(options.title.empty() ? std::string(command)
                                     : std::string(command) + ": " + options.title);
  page.item("Space group", group_text(group), 14);
  for (const std::string& note : options.notes) page.item("Note", note, 14);
  for (const std::string& warning : options.warnings) page.item("Warning", warning, 14);
}

void end_page(TextPage& page, const ReportOptions& options,
              const std::vector<std::string_view>& keys) {
  page.heading("Conventions");
  for (const auto& entry : conventions(options.phase))
    if (std::ranges::find(keys, entry.first) != keys.end())
      page.item(entry.first, entry.second, 17);
}

}  // namespace spinsieve
