#include "arrangement/bulk_properties.hpp"
#include "report/candidate_text.hpp"
#include "report/enumerate_report.hpp"
#include "report/exact_text.hpp"
#include "report/json.hpp"

namespace spinsieve {
namespace {

Json exact_vector(const FractionVector& v) {
  return Json::array_of(v, [](Fraction x) { return Json(to_string(x)); });
}

Json magnetic_group(const MagneticGroup& group) {
  Json entry = Json::object();
  entry.set("uni_number", group.uni_number());
  entry.set("bns_number", group.bns_number());
  entry.set("bns_symbol", group.bns_symbol());
  entry.set("og_number", group.og_number());
  entry.set("og_symbol", group.og_symbol());
  entry.set("type", group.type());
  entry.set("transformation", to_string(group.transformation()));
  entry.set("operations", Json::array_of(group.operations(), [](const PrimedOperation& operation) {
              Json item = Json::object();
              item.set("xyz", to_string(operation.operation));
              item.set("primed", operation.primed);
              return item;
            }));
  return entry;
}

Json superspace(const Candidate& candidate, const BulkProperties& bulk) {
  Json entry = Json::object();
  // Half a period of the modulation undoes time reversal, so every operation also comes primed.
  Json operations = Json::array();
  for (const bool reversed : {false, true}) {
    for (const SuperspaceOperation& operation : candidate.superspace) {
      Json item = Json::object();
      item.set("xyz", to_string(operation.operation));
      item.set("theta", operation.reversing ? -1 : 1);
      item.set("phase", to_string(reversed ? operation.phase + Phase(1, 2) : operation.phase));
      item.set("primed", operation.primed != reversed);
      operations.push(std::move(item));
    }
  }
  entry.set("operations", std::move(operations));
  entry.set("magnetic_point_group", bulk.magnetic_point_group);
  return entry;
}

Json tensor(const TensorForm& form) {
  Json rows = Json::array();
  for (std::size_t i = 0; i < form.rows; ++i) {
    Json row = Json::array();
    for (std::size_t j = 0; j < form.columns; ++j) row.push(form.entries[i * form.columns + j]);
    rows.push(std::move(row));
  }
  return rows;
}

Json allows(const BulkProperties& bulk) {
  Json entry = Json::object();
  entry.set("net_moment", bulk.net_moment.allowed());
  entry.set("polarisation", bulk.polarisation_newly_allowed);
  entry.set("linear_magnetoelectric", bulk.linear_magnetoelectric.allowed());
  entry.set("piezomagnetic", bulk.piezomagnetic.allowed());
  entry.set("net_moment_form", tensor(bulk.net_moment));
  entry.set("polarisation_form", tensor(bulk.polarisation));
  entry.set("linear_magnetoelectric_form", tensor(bulk.linear_magnetoelectric));
  entry.set("piezomagnetic_form", tensor(bulk.piezomagnetic));
  entry.set("tensor_frame", bulk.frame);
  return entry;
}

Json sites(const Candidate& candidate, const EnumerateReport& report, PhaseSign sign) {
  const MomentField field = to_moment_field(candidate.field, report.cell);
  Json list = Json::array();
  for (std::size_t s = 0; s < report.sites.size(); ++s) {
    Json atoms = Json::array();
    for (const FourierField& arm : field.arms) {
      for (std::size_t j = 0; j < arm.atoms.size(); ++j) {
        if (arm.atoms[j].site != s) continue;
        Json atom = Json::object();
        atom.set("position", exact_vector(arm.atoms[j].position));
        if (field.arms.size() > 1) atom.set("k", exact_vector(arm.k));
        atom.set("moment_form", moment_form(arm, j, candidate.parameters, sign));
        Json parts = Json::object();
        for (std::size_t p = 0; p < candidate.parameters.size(); ++p)
          parts.set(candidate.parameters[p],
                    Json::array_of(arm.component(p, j), [&](std::complex<double> value) {
                      return Json(in_sign(value, sign));
                    }));
        atom.set("per_parameter", std::move(parts));
        atoms.push(std::move(atom));
      }
    }
    Json site = Json::object();
    site.set("label", report.sites[s].label);
    site.set("atoms", std::move(atoms));
    list.push(std::move(site));
  }
  return list;
}

Json domains(const DomainCount& count) {
  Json entry = Json::object();
  entry.set("total", count.total());
  entry.set("k", count.k);
  entry.set("orientation", count.orientation);
  entry.set("translation_reversal", count.translation_reversal);
  return entry;
}

Json candidate_entry(const Candidate& candidate, const EnumerateReport& report, PhaseSign sign) {
  const BulkProperties bulk = candidate_bulk(candidate, report.wavevectors);
  const Wavevector& k = report.wavevectors[candidate.parts.front().wavevector].little_group.k();
  Json entry = Json::object();
  entry.set("id", candidate.id);
  entry.set("k", Json::array_of(component_texts(k)));
  entry.set("irreps", Json::array_of(irrep_labels(candidate, report.wavevectors)));
  entry.set("direction", direction_text(candidate));
  entry.set("arms", candidate.field.arms.size());
  entry.set("free_parameters", candidate.parameters.size());
  entry.set("parameters", Json::array_of(candidate.parameters));
  entry.set("effective_parameters", Json());
  entry.set("maximal", candidate.maximal);
  entry.set("magnetic_group", candidate.group ? magnetic_group(*candidate.group) : Json());
  if (!candidate.group) entry.set("superspace", superspace(candidate, bulk));
  entry.set("magnetic_point_group", bulk.magnetic_point_group);
  entry.set("sites", sites(candidate, report, sign));
  entry.set("allows", allows(bulk));
  entry.set("domains", domains(candidate.domains));
  return entry;
}

}  // namespace

std::string enumerate_json(const EnumerateReport& report, const ReportOptions& options) {
  Json document =
      document_head("enumerate/1", options, report.wavevectors.front().little_group.group());
  document.set("candidates", Json::array_of(report.candidates, [&](const Candidate& candidate) {
                 return candidate_entry(candidate, report, options.phase);
               }));
  return document.text(options.letters);
}

}  // namespace spinsieve
