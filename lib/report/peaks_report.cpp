#include "report/peaks_report.hpp"

#include <algorithm>

#include "report/json.hpp"

namespace spinsieve {
namespace {

std::string parameters_text(const PeaksReport& report) {
  std::string text;
  for (const auto& parameter : report.parameters)
    text += (text.empty() ? "" : ", ") + parameter.first + " = " + fixed(parameter.second, 4);
  return text + " µB (" + report.parameters_from + ")";
}

Json index_entry(const ReflectionIndex& index, bool several) {
  Json entry = Json::object();
  entry.set("hkl", Json::array_of(index.hkl));
  entry.set("k_sign", index.k_sign);
  if (several) entry.set("k", index.wavevector + 1);
  return entry;
}

Json peak_entry(const Peak& peak, bool several) {
  Json entry = Json::object();
  entry.set("q", peak.q);
  entry.set("d", peak.d);
  entry.set("two_theta", peak.two_theta_degrees ? Json(*peak.two_theta_degrees) : Json());
  entry.set("multiplicity", peak.multiplicity);
  entry.set("indices", Json::array_of(peak.indices, [several](const ReflectionIndex& index) {
              return index_entry(index, several);
            }));
  entry.set("f_perp_squared", peak.f_perp_squared);
  entry.set("magnetic_barn", peak.magnetic_barn);
  entry.set("nuclear_barn", peak.nuclear_barn ? Json(*peak.nuclear_barn) : Json());
  return entry;
}

}  // namespace

std::string peaks_text(const PeaksReport& report, const SpaceGroup& group,
                       const ReportOptions& options) {
  TextPage page(options.letters);
  start_page(page, "Peaks", options, group);
  for (const Wavevector& k : report.propagation)
    page.item("Wavevector", "k = (" + to_string(k) + ")", 14);
  page.item("Arrangement", report.arrangement, 14);
  if (!report.parameters.empty()) page.item("Parameters", parameters_text(report), 14);
  page.item("Range", "Q up to " + fixed(report.q_max, 3) + " Å⁻¹", 14);
  page.blank();
  const bool has_angle = std::ranges::any_of(
      report.peaks, [](const Peak& peak) { return peak.two_theta_degrees.has_value(); });
  const bool has_nuclear = std::ranges::any_of(
      report.peaks, [](const Peak& peak) { return peak.nuclear_barn.has_value(); });
  std::vector<Table::Column> columns = {
      {"reflections", Align::left}, {"Q, Å⁻¹", Align::right}, {"d, Å", Align::right}};
  if (has_angle) columns.push_back({"2θ, °", Align::right});
  columns.push_back({"|F⊥|², µB²", Align::right});
  columns.push_back({"magnetic, barn", Align::right});
  if (has_nuclear) columns.push_back({"nuclear, barn", Align::right});
  Table table(columns);
  for (const Peak& peak : report.peaks) {
    std::vector<std::string> cells = {peak.label, fixed(peak.q, 4), fixed(peak.d, 4)};
    if (has_angle)
      cells.push_back(peak.two_theta_degrees ? fixed(*peak.two_theta_degrees, 3) : "-");
    cells.push_back(fixed(peak.f_perp_squared, 4));
    cells.push_back(fixed(peak.magnetic_barn, 5));
    if (has_nuclear) cells.push_back(peak.nuclear_barn ? fixed(*peak.nuclear_barn, 5) : "-");
    table.add_row(std::move(cells));
  }
  page.table(table);
  end_page(page, options, {"wavevector", "field", "intensities"});
  return page.text();
}

std::string peaks_json(const PeaksReport& report, const SpaceGroup& group,
                       const ReportOptions& options) {
  Json document = document_head("peaks/1", options, group);
  document.set("arrangement", report.arrangement);
  Json parameters = Json::object();
  for (const auto& parameter : report.parameters) parameters.set(parameter.first, parameter.second);
  document.set("parameters", std::move(parameters));
  document.set("parameters_from", report.parameters_from);
  document.set("propagation", Json::array_of(report.propagation, [](const Wavevector& k) {
                 return Json::array_of(component_texts(k));
               }));
  document.set("q_max", report.q_max);
  document.set("lines", Json::array_of(report.peaks, [&report](const Peak& peak) {
                 return peak_entry(peak, report.propagation.size() > 1);
               }));
  return document.text(options.letters);
}

}  // namespace spinsieve
