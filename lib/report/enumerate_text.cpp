#include "arrangement/bulk_properties.hpp"
#include "report/candidate_text.hpp"
#include "report/enumerate_report.hpp"
#include "report/exact_text.hpp"

namespace spinsieve {
namespace {

constexpr std::size_t name_width = 18;

std::string group_cell(const Candidate& candidate, const BulkProperties& bulk) {
  if (candidate.group) return candidate.group->bns_symbol();
  return "point group " + bulk.magnetic_point_group;
}

std::string parameters_text(const Candidate& candidate) {
  std::string text;
  for (const std::string& name : candidate.parameters) text += (text.empty() ? "" : ",") + name;
  return text;
}

/// M net moment, P newly allowed polarisation, α linear magnetoelectric, Λ piezomagnetic.
std::string effects(const BulkProperties& bulk) {
  std::string text;
  const auto add = [&text](bool allowed, const char* name) {
    if (allowed) text += (text.empty() ? "" : " ") + std::string(name);
  };
  add(bulk.net_moment.allowed(), "M");
  add(bulk.polarisation_newly_allowed, "P");
  add(bulk.linear_magnetoelectric.allowed(), "ME");
  add(bulk.piezomagnetic.allowed(), "PM");
  return text.empty() ? "none" : text;
}

void describe(TextPage& page, const Candidate& candidate, const EnumerateReport& report,
              PhaseSign sign) {
  const BulkProperties bulk = candidate_bulk(candidate, report.wavevectors);
  page.heading(candidate.id + ": " + irreps_text(candidate, report.wavevectors) + ", direction " +
               direction_text(candidate));
  if (candidate.group) {
    const MagneticGroup& group = *candidate.group;
    page.item("Magnetic group",
              group.bns_symbol() + " (BNS " + group.bns_number() + ", OG " + group.og_number() +
                  ", UNI " + std::to_string(group.uni_number()) + ", type " +
                  std::to_string(group.type()) + ")",
              name_width);
    page.item("To standard axes", to_string(group.transformation()), name_width);
  } else {
    std::string text;
    for (const SuperspaceOperation& operation : candidate.superspace)
      text += (text.empty() ? "" : " | ") + superspace_text(operation);
    page.item("Symmetry", text + " | each also primed, with θ+1/2 more", name_width);
  }
  page.item("Point group", bulk.magnetic_point_group, name_width);
  const DomainCount& domains = candidate.domains;
  page.item("Domains",
            std::to_string(domains.total()) + " = " + std::to_string(domains.k) + " (k) × " +
                std::to_string(domains.orientation) + " (orientation) × " +
                std::to_string(domains.translation_reversal) + " (translation, reversal)",
            name_width);
  if (bulk.net_moment.allowed()) page.item("Net moment", to_string(bulk.net_moment), name_width);
  if (bulk.polarisation_newly_allowed)
    page.item("Polarisation", to_string(bulk.polarisation), name_width);
  if (bulk.linear_magnetoelectric.allowed())
    page.item("Magnetoelectric", to_string(bulk.linear_magnetoelectric) + ", " + bulk.frame,
              name_width);
  if (bulk.piezomagnetic.allowed())
    page.item("Piezomagnetic", to_string(bulk.piezomagnetic) + ", " + bulk.frame, name_width);
  page.blank();
  const MomentField field = to_moment_field(candidate.field, report.cell);
  for (const FourierField& arm : field.arms) {
    std::vector<Table::Column> columns = {
        {"site"}, {"atom at"}, {arm.self_conjugate ? "moment, µB" : "Fourier component S, µB"}};
    Table table(columns);
    for (std::size_t j = 0; j < arm.atoms.size(); ++j)
      table.add_row({report.sites[arm.atoms[j].site].label, position_text(arm.atoms[j].position),
                     moment_form(arm, j, candidate.parameters, sign)});
    if (field.arms.size() > 1) page.paragraph("k = (" + to_string(arm.k) + ")");
    page.table(table);
  }
}

}  // namespace

std::string enumerate_text(const EnumerateReport& report, const ReportOptions& options) {
  TextPage page(options.letters);
  start_page(page, "Allowed arrangements", options,
             report.wavevectors.front().little_group.group());
  for (const WavevectorModes& modes : report.wavevectors)
    page.item("Wavevector", "k = (" + to_string(modes.little_group.k()) + ")", 14);
  page.item("Candidates", std::to_string(report.candidates.size()), 14);
  page.blank();
  Table table({{"id"},
               {"irrep"},
               {"direction"},
               {"parameters"},
               {"magnetic group"},
               {"domains", Align::right},
               {"allows"},
               {""}});
  for (const Candidate& candidate : report.candidates) {
    const BulkProperties bulk = candidate_bulk(candidate, report.wavevectors);
    table.add_row({candidate.id, irreps_text(candidate, report.wavevectors),
                   direction_text(candidate), parameters_text(candidate),
                   group_cell(candidate, bulk), std::to_string(candidate.domains.total()),
                   effects(bulk), candidate.maximal ? "maximal" : ""});
  }
  page.table(table);
  page.blank();
  page.paragraph(
      "allows: M net moment, P polarisation that the parent lacks, ME linear magnetoelectric "
      "effect, PM piezomagnetism. maximal: no direction of higher symmetry lies inside.");
  for (const Candidate& candidate : report.candidates)
    describe(page, candidate, report, options.phase);
  end_page(page, options,
           {"operations", "wavevector", "field", "representations", "labels", "moments"});
  return page.text();
}

}  // namespace spinsieve
