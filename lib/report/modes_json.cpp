#include "report/exact_text.hpp"
#include "report/json.hpp"
#include "report/modes_parts.hpp"
#include "report/modes_report.hpp"

namespace spinsieve {
namespace {

Json exact_vector(const FractionVector& v) {
  return Json::array_of(v, [](Fraction x) { return Json(to_string(x)); });
}

Json wavevector(const Wavevector& k) { return Json::array_of(component_texts(k)); }

Json type_entry(const Stratum& stratum) {
  Json entry = Json::object();
  entry.set("kind", to_string(stratum.kind));
  entry.set("k", wavevector(stratum.k));
  return entry;
}

/// Sets wavevector_type, lies_on and close_to, unless k has free parameters.
void place_wavevector(Json& entry, const LittleGroup& little_group) {
  if (little_group.k().is_symbolic()) return;
  const std::vector<Stratum> list = strata(little_group.tables());
  const StratumPosition position =
      stratum_position(little_group.tables(), little_group.k(), list, nearby_reach);
  entry.set("wavevector_type", type_entry(list[position.own]));
  entry.set("lies_on",
            Json::array_of(position.lies_on, [&](std::size_t i) { return type_entry(list[i]); }));
  entry.set("close_to", Json::array_of(position.nearby, [&](const NearbyStratum& nearby) {
              Json item = type_entry(list[nearby.stratum]);
              item.set("at", wavevector(nearby.k));
              return item;
            }));
}

Json operations(const LittleGroup& little_group) {
  Json list = Json::array();
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const Operation& operation = little_group.group().operations()[little_group.operations()[i]];
    Json entry = Json::object();
    entry.set("rotation", Json::array_of(operation.rotation,
                                         [](const IntVector& row) { return Json::array_of(row); }));
    entry.set("translation", exact_vector(operation.translation));
    entry.set("xyz", to_string(operation));
    entry.set("phase", little_group.phase_text(i));
    list.push(std::move(entry));
  }
  return list;
}

Json matrix(const LittleGroup& little_group, std::size_t operation, const IrrepMatrix& P,
            PhaseSign sign) {
  const ExactMatrix exact = P.to_exact();
  Json rows = Json::array();
  for (std::size_t i = 0; i < exact.rows(); ++i) {
    Json row = Json::array();
    for (std::size_t j = 0; j < exact.columns(); ++j)
      row.push(Json(matrix_value(little_group, operation, exact(i, j), sign)));
    rows.push(std::move(row));
  }
  return rows;
}

Json irreps(const WavevectorModes& modes, PhaseSign sign) {
  const LittleGroup& little_group = modes.little_group;
  Json list = Json::array();
  for (const SmallIrrep& irrep : modes.irreps) {
    Json entry = Json::object();
    entry.set("label", irrep.label);
    entry.set("dimension", irrep.dimension);
    entry.set("reality", to_string(irrep.reality));
    entry.set("partner", irrep.partner ? Json(modes.irreps[*irrep.partner].label) : Json());
    Json characters = Json::array();
    Json exact = Json::array();
    Json matrices = Json::array();
    for (std::size_t i = 0; i < little_group.order(); ++i) {
      const Cyclotomic trace = to_cyclotomic(irrep.characters[i]);
      characters.push(Json(matrix_value(little_group, i, trace, sign)));
      exact.push(matrix_text(little_group, i, trace, sign));
      matrices.push(matrix(little_group, i, irrep.matrices[i], sign));
    }
    entry.set("characters", std::move(characters));
    entry.set("characters_exact", std::move(exact));
    entry.set("matrices", std::move(matrices));
    list.push(std::move(entry));
  }
  return list;
}

Json decomposition(const WavevectorModes& modes, const std::vector<std::size_t>& multiplicities) {
  Json list = Json::array();
  for (std::size_t i = 0; i < multiplicities.size(); ++i) {
    if (multiplicities[i] == 0) continue;
    Json entry = Json::object();
    entry.set("irrep", modes.irreps[i].label);
    entry.set("multiplicity", multiplicities[i]);
    list.push(std::move(entry));
  }
  return list;
}

Json sites(const WavevectorModes& modes, const ModesReport& report) {
  Json list = Json::array();
  for (std::size_t s = 0; s < modes.sites.size(); ++s) {
    const MagneticRepresentation& representation = modes.sites[s];
    std::vector<std::size_t> counts;
    for (std::size_t i = 0; i < modes.irreps.size(); ++i)
      counts.push_back(representation.multiplicity(i));
    Json entry = Json::object();
    entry.set("label", report.sites[s].label);
    entry.set("position", exact_vector(report.sites[s].position));
    entry.set("atoms_in_primitive_cell", representation.orbit().atoms().size());
    entry.set("suborbits", Json::array_of(representation.suborbits(), [&](const SubOrbit& part) {
                return Json::array_of(part.atoms, [&](std::size_t atom) {
                  return exact_vector(representation.orbit().atoms()[atom].position);
                });
              }));
    entry.set("decomposition", decomposition(modes, counts));
    entry.set("exchange_decomposition",
              decomposition(modes, multiplicities(modes.little_group, modes.irreps,
                                                  representation.orbit(), AtomQuantity::scalar)));
    entry.set("displacement_decomposition",
              decomposition(modes, multiplicities(modes.little_group, modes.irreps,
                                                  representation.orbit(), AtomQuantity::polar)));
    list.push(std::move(entry));
  }
  return list;
}

Json basis(const WavevectorModes& modes, const ModesReport& report, PhaseSign sign) {
  Json list = Json::array();
  for (std::size_t irrep = 0; irrep < modes.irreps.size(); ++irrep) {
    for (std::size_t s = 0; s < modes.sites.size(); ++s) {
      std::vector<int> copies(modes.sites[s].suborbits().size(), 0);
      for (const ModeCopy& copy : modes.sites[s].copies()) {
        if (copy.irrep != irrep) continue;
        const int number = ++copies[copy.suborbit];
        for (std::size_t row = 0; row < static_cast<std::size_t>(modes.irreps[irrep].dimension);
             ++row) {
          Json entry = Json::object();
          entry.set("irrep", modes.irreps[irrep].label);
          entry.set("site", report.sites[s].label);
          entry.set("suborbit", copy.suborbit + 1);
          entry.set("copy", number);
          entry.set("row", row + 1);
          entry.set("atoms", Json::array_of(
                                 basis_entries(modes, modes.sites[s], copy, row, report.cell, sign),
                                 [](const BasisEntry& atom) {
                                   Json values = Json::object();
                                   values.set("position", exact_vector(atom.position));
                                   values.set("moment", Json::array_of(atom.moment));
                                   values.set("exact", Json::array_of(atom.exact));
                                   return values;
                                 }));
          list.push(std::move(entry));
        }
      }
    }
  }
  return list;
}

}  // namespace

std::string modes_json(const ModesReport& report, const ReportOptions& options) {
  Json propagation = Json::array();
  for (std::size_t i = 0; i < report.wavevectors.size(); ++i) {
    const WavevectorModes& modes = report.wavevectors[i];
    const LittleGroup& little_group = modes.little_group;
    Json entry = Json::object();
    entry.set("k", wavevector(little_group.k()));
    entry.set("modulation", report.modulation[i]);
    entry.set("arms", little_group.star().size());
    entry.set("star", Json::array_of(little_group.star(), wavevector));
    entry.set("minus_k_in_star", little_group.minus_k_in_star());
    entry.set("little_cogroup_order", little_group.order());
    place_wavevector(entry, little_group);
    entry.set("labels_of", wavevector(little_group.canonical_k()));
    entry.set("operations", operations(little_group));
    entry.set("irreps", irreps(modes, options.phase));
    entry.set("sites", sites(modes, report));
    entry.set("basis", basis(modes, report, options.phase));
    propagation.push(std::move(entry));
  }
  const SpaceGroup& group = report.wavevectors.front().little_group.group();
  Json document = document_head("modes/1", options, group);
  document.set("propagation", std::move(propagation));
  return document.text(options.letters);
}

std::string wavevector_types_json(const SymmetryTables& tables, std::span<const Stratum> strata,
                                  const ReportOptions& options) {
  Json document = document_head("modes/1", options, tables.group());
  document.set("wavevector_types", Json::array_of(strata, [](const Stratum& stratum) {
                 Json entry = Json::object();
                 entry.set("kind", to_string(stratum.kind));
                 entry.set("k", wavevector(stratum.k));
                 entry.set("arms", stratum.arms);
                 entry.set("little_cogroup_order", stratum.cogroup_order);
                 entry.set("isolated", stratum.isolated);
                 return entry;
               }));
  return document.text(options.letters);
}

}  // namespace spinsieve
