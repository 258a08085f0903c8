#pragma once

#include <optional>
#include <span>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "modes/wavevector_modes.hpp"
#include "report/conventions.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {

/// A type of wavevector is "close" when its nearest k differs by less in every component: what a
/// rounded number or a slight modulation amounts to.
inline const Fraction nearby_reach{1, 20};
constexpr std::size_t nearby_listed = 3;  ///< In a text; JSON has them all.

/// What the reports of `modes` need beside the wavevectors.
struct ModesReport {
  std::span<const WavevectorModes> wavevectors;
  std::vector<std::string> modulation;  ///< "commensurate" or "incommensurate", one each.
  std::span<const Site> sites;
  std::optional<Cell> cell;
};

/// Little group, irreps, decomposition and basis vectors for people.
std::string modes_text(const ModesReport& report, const ReportOptions& options);
/// The same as a document of schema modes/1.
std::string modes_json(const ModesReport& report, const ReportOptions& options);

/// Without a wavevector: the symmetry points, lines and planes of the group.
std::string wavevector_types_text(const SymmetryTables& tables, std::span<const Stratum> strata,
                                  const ReportOptions& options);
std::string wavevector_types_json(const SymmetryTables& tables, std::span<const Stratum> strata,
                                  const ReportOptions& options);

}  // namespace spinsieve
