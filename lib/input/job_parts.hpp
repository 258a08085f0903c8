#pragma once

#include <filesystem>
#include <optional>
#include <string>
#include <vector>

#include "input/cif.hpp"
#include "input/fields.hpp"
#include "input/job.hpp"

namespace spinsieve {

/// Parts of the job file, each read into the job by a source file of its own, in this order: later
/// parts use what earlier ones found.
std::optional<CifStructure> read_crystal(const Node& node, const std::filesystem::path& folder,
                                         Job& job);
/// cif: where the crystal came from, or nullptr. Its atoms that are not named in the job become
/// other sites.
void read_sites(const Fields& root, const CifStructure* cif, Job& job);
void read_propagation(const Node& node, Job& job);
void read_measurements(const Node& node, const std::filesystem::path& folder, Job& job);
void read_arrangement(const Node& node, Job& job);

/// What the lists of one measurement are read with.
struct MeasurementContext {
  const Job* job;
  const Measurement* measurement;  ///< With its settings read, its lists not yet.
  Place resolution_place;
  std::filesystem::path folder;
};
std::vector<ObservedLine> read_lines(const Node& node, const MeasurementContext& context);
std::vector<Absence> read_absences(const Node& node, const MeasurementContext& context);
std::vector<ScannedRange> read_scanned(const Node& node, const MeasurementContext& context);
std::vector<NuclearLine> read_nuclear_lines(const Node& node, const MeasurementContext& context);

}  // namespace spinsieve
