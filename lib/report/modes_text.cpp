#include "report/exact_text.hpp"
#include "report/modes_parts.hpp"
#include "report/modes_report.hpp"

namespace spinsieve {
namespace {

constexpr std::size_t name_width = 14;

void tables(TextPage& page, const std::vector<Table::Column>& left,
            const std::vector<Table::Column>& right,
            const std::vector<std::vector<std::string>>& rows) {
  bool first = true;
  for (const Table& table : fitting_tables(left, right, rows, TextPage::width, page.letters())) {
    if (!first) page.blank();
    page.table(table);
    first = false;
  }
}

std::string stratum_text(const Stratum& stratum) {
  return std::string(to_string(stratum.kind)) + " (" + to_string(stratum.k) + ")";
}

/// On which types of wavevector k lies, and which of higher symmetry a small change would reach.
void place_wavevector(TextPage& page, const LittleGroup& little_group) {
  if (little_group.k().is_symbolic()) return;
  const std::vector<Stratum> list = strata(little_group.tables());
  const StratumPosition position =
      stratum_position(little_group.tables(), little_group.k(), list, nearby_reach);
  page.item("Type", stratum_text(list[position.own]), name_width);
  std::string nearby;
  for (std::size_t i = 0; i < position.nearby.size() && i < nearby_listed; ++i)
    nearby += (nearby.empty() ? "" : "; ") + stratum_text(list[position.nearby[i].stratum]) +
              " at (" + to_string(position.nearby[i].k) + ")";
  if (!nearby.empty()) page.item("Close to", nearby + ", of higher symmetry", name_width);
}

void describe_wavevector(TextPage& page, const LittleGroup& little_group,
                         const std::string& modulation) {
  page.heading("k = (" + to_string(little_group.k()) + ")");
  std::string star;
  for (const Wavevector& arm : little_group.star())
    star += (star.empty() ? "(" : "; (") + to_string(arm) + ")";
  const std::size_t arms = little_group.star().size();
  page.item("Star", std::to_string(arms) + (arms == 1 ? " arm: " : " arms: ") + star, name_width);
  std::string kind = modulation;
  if (little_group.self_conjugate())
    kind += "; 2k is a reciprocal-lattice vector";
  else
    kind += little_group.minus_k_in_star() ? "; −k is in the star" : "; −k is not in the star";
  page.item("Modulation", kind, name_width);
  page.item("Little group",
            std::to_string(little_group.order()) + " of the " +
                std::to_string(little_group.group().order()) + " rotations",
            name_width);
  place_wavevector(page, little_group);
  page.item("Labels", "those of the arm (" + to_string(little_group.canonical_k()) + ")",
            name_width);
}

void list_operations(TextPage& page, const LittleGroup& little_group) {
  page.blank();
  std::vector<Table::Column> columns = {{"n", Align::right}, {"operation", Align::left}};
  const bool symbolic = little_group.k().is_symbolic();
  if (symbolic) columns.push_back({"−k·t", Align::left});
  Table table(columns);
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    std::vector<std::string> cells = {
        std::to_string(i + 1),
        to_string(little_group.group().operations()[little_group.operations()[i]])};
    if (symbolic) cells.push_back(little_group.phase_text(i));
    table.add_row(std::move(cells));
  }
  page.table(table);
}

std::string reality_text(const SmallIrrep& irrep, const std::vector<SmallIrrep>& irreps) {
  std::string text = to_string(irrep.reality);
  if (irrep.partner) text += " with " + irreps[*irrep.partner].label;
  return text;
}

void list_irreps(TextPage& page, const WavevectorModes& modes, PhaseSign sign) {
  const LittleGroup& little_group = modes.little_group;
  page.blank();
  page.paragraph(little_group.k().is_symbolic()
                     ? "Small irreps: characters of P(R), D({R|t}) = exp(−2πi k·t) P(R)"
                     : "Small irreps: characters of D({R|t}) for the operations n");
  std::vector<Table::Column> right;
  for (std::size_t i = 0; i < little_group.order(); ++i)
    right.push_back({std::to_string(i + 1), Align::right});
  std::vector<std::vector<std::string>> rows;
  for (const SmallIrrep& irrep : modes.irreps) {
    std::vector<std::string> cells = {irrep.label, std::to_string(irrep.dimension),
                                      reality_text(irrep, modes.irreps)};
    for (std::size_t i = 0; i < little_group.order(); ++i)
      cells.push_back(matrix_text(little_group, i, to_cyclotomic(irrep.characters[i]), sign));
    rows.push_back(std::move(cells));
  }
  tables(page, {{"irrep", Align::left}, {"dim", Align::right}, {"reality", Align::left}}, right,
         rows);
}

void list_matrices(TextPage& page, const WavevectorModes& modes, PhaseSign sign) {
  bool first = true;
  for (const SmallIrrep& irrep : modes.irreps) {
    if (irrep.dimension == 1) continue;
    if (first) {
      page.blank();
      page.paragraph("Matrices, row by row, after the number of the operation");
      first = false;
    }
    std::string text;
    for (std::size_t i = 0; i < irrep.matrices.size(); ++i) {
      const ExactMatrix exact = irrep.matrices[i].to_exact();
      text += (i > 0 ? "  " : "") + std::to_string(i + 1) + ":[";
      for (std::size_t row = 0; row < exact.rows(); ++row) {
        if (row > 0) text += ';';
        for (std::size_t column = 0; column < exact.columns(); ++column)
          text += (column > 0 ? "," : "") +
                  matrix_text(modes.little_group, i, exact(row, column), sign);
      }
      text += ']';
    }
    page.item(irrep.label, text, 5);
  }
}

std::string sum_text(const WavevectorModes& modes, const std::vector<std::size_t>& counts) {
  std::string text;
  for (std::size_t i = 0; i < counts.size(); ++i) {
    if (counts[i] == 0) continue;
    if (!text.empty()) text += " + ";
    if (counts[i] > 1) text += std::to_string(counts[i]) + " ";
    text += modes.irreps[i].label;
  }
  return text.empty() ? "none" : text;
}

void list_sites(TextPage& page, const WavevectorModes& modes, const ModesReport& report) {
  page.blank();
  page.paragraph(
      "Decomposition: moments, the permutation part alone (exchange modes), displacements");
  Table table({{"site"},
               {"position"},
               {"atoms", Align::right},
               {"moments"},
               {"exchange modes"},
               {"displacements"}});
  for (std::size_t s = 0; s < modes.sites.size(); ++s) {
    std::vector<std::size_t> counts;
    for (std::size_t i = 0; i < modes.irreps.size(); ++i)
      counts.push_back(modes.sites[s].multiplicity(i));
    const std::vector<std::size_t> exchange = multiplicities(
        modes.little_group, modes.irreps, modes.sites[s].orbit(), AtomQuantity::scalar);
    const std::vector<std::size_t> displacements = multiplicities(
        modes.little_group, modes.irreps, modes.sites[s].orbit(), AtomQuantity::polar);
    table.add_row({report.sites[s].label, position_text(report.sites[s].position),
                   std::to_string(modes.sites[s].orbit().atoms().size()), sum_text(modes, counts),
                   sum_text(modes, exchange), sum_text(modes, displacements)});
  }
  page.table(table);
}

void list_basis(TextPage& page, const WavevectorModes& modes, const ModesReport& report,
                std::size_t irrep, PhaseSign sign) {
  for (std::size_t s = 0; s < modes.sites.size(); ++s) {
    const MagneticRepresentation& representation = modes.sites[s];
    for (std::size_t part = 0; part < representation.suborbits().size(); ++part) {
      std::vector<Table::Column> right;
      std::vector<std::vector<std::string>> rows;
      for (const std::size_t atom : representation.suborbits()[part].atoms)
        rows.push_back({position_text(representation.orbit().atoms()[atom].position)});
      int number = 0;
      for (const ModeCopy& copy : representation.copies()) {
        if (copy.irrep != irrep || copy.suborbit != part) continue;
        ++number;
        for (std::size_t row = 0; row < static_cast<std::size_t>(modes.irreps[irrep].dimension);
             ++row) {
          right.push_back(
              {"copy " + std::to_string(number) +
                   (modes.irreps[irrep].dimension > 1 ? " row " + std::to_string(row + 1) : ""),
               Align::left});
          const std::vector<BasisEntry> entries =
              basis_entries(modes, representation, copy, row, report.cell, sign);
          for (std::size_t i = 0; i < entries.size(); ++i)
            rows[i].push_back("(" + entries[i].exact[0] + "," + entries[i].exact[1] + "," +
                              entries[i].exact[2] + ")");
        }
      }
      if (right.empty()) continue;
      page.blank();
      page.paragraph("Basis vectors of " + modes.irreps[irrep].label + " on " +
                     report.sites[s].label +
                     (representation.suborbits().size() > 1
                          ? ", atoms joined by the little group, part " + std::to_string(part + 1)
                          : ""));
      tables(page, {{"atom at", Align::left}}, right, rows);
    }
  }
}

}  // namespace

std::string modes_text(const ModesReport& report, const ReportOptions& options) {
  TextPage page(options.letters);
  start_page(page, "Irreps and basis vectors", options,
             report.wavevectors.front().little_group.group());
  for (std::size_t i = 0; i < report.wavevectors.size(); ++i) {
    const WavevectorModes& modes = report.wavevectors[i];
    describe_wavevector(page, modes.little_group, report.modulation[i]);
    list_operations(page, modes.little_group);
    list_irreps(page, modes, options.phase);
    list_matrices(page, modes, options.phase);
    if (modes.sites.empty()) continue;
    list_sites(page, modes, report);
    for (std::size_t irrep = 0; irrep < modes.irreps.size(); ++irrep)
      list_basis(page, modes, report, irrep, options.phase);
  }
  end_page(page, options,
           {"operations", "wavevector", "field", "representations", "labels", "basis"});
  return page.text();
}

std::string wavevector_types_text(const SymmetryTables& tables, std::span<const Stratum> strata,
                                  const ReportOptions& options) {
  TextPage page(options.letters);
  start_page(page, "Types of wavevector", options, tables.group());
  page.blank();
  page.paragraph(
      "One of each star; with free parameters the whole line or plane. The job's propagation: "
      "takes any of them, with numbers in place of u, v, w.");
  page.blank();
  Table table({{"kind"}, {"k"}, {"arms", Align::right}, {"little co-group", Align::right}, {""}});
  for (const Stratum& stratum : strata)
    table.add_row({to_string(stratum.kind), to_string(stratum.k), std::to_string(stratum.arms),
                   std::to_string(stratum.cogroup_order),
                   stratum.isolated ? "" : "lies on a line"});
  page.table(table);
  end_page(page, options, {"operations", "wavevector"});
  return page.text();
}

}  // namespace spinsieve
