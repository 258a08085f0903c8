#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "exact/error.hpp"
#include "exact/executor.hpp"
#include "search/options.hpp"
#include "symmetry/strata.hpp"

namespace spinsieve {

/// One observed position.
struct SearchLine {
  double q = 0;          ///< Å⁻¹.
  double tolerance = 0;  ///< Å⁻¹: a predicted line within q ± tolerance explains it.
  double shift = 0;      ///< Å⁻¹: what the largest allowed zero shift does to q.
  bool foreign = false;  ///< May belong to an impurity: need not be explained.
  std::string text;      ///< As the user wrote it, for messages.
  Place place;
};

/// A range of |Q| in which no line is seen, Å⁻¹.
struct SearchAbsence {
  double q_low = 0;
  double q_high = 0;
};

struct SearchProblem {
  Cell cell;
  SpaceGroup group;
  std::vector<SearchLine> lines;
  std::vector<SearchAbsence> absences;
  LocateOptions options;
  StratumKind deepest = StratumKind::general;  ///< Kinds with more free components are left out.
  std::uint64_t box_limit = 40'000'000;        ///< Boxes examined at most for one family.
};

/// A wavevector with its family: an exact point, or a line, plane or general form with values.
struct LocatedVector {
  Wavevector family;                    ///< Exact; with free parameters unless a point.
  Vector3 k{};                          ///< Components on a*, b*, c*.
  std::optional<FractionVector> exact;  ///< Points: k itself.
};

struct Solution {
  StratumKind kind = StratumKind::point;
  LocatedVector vector;
  /// The simplest k with denominators up to 12 that explains as many lines, where k is not a point.
  std::optional<FractionVector> commensurate;
  std::vector<int> harmonics = {1};  ///< Multiples of k that carry lines; 0 is the lattice itself.
  double reach = 0;  ///< Å⁻¹: the k of this solution that the tolerances allow are within it.
  std::size_t matched = 0;
  std::size_t of = 0;
  double rms_q = 0;     ///< Of the matched lines, Å⁻¹.
  double chance = 0;    ///< That some vector of the kind matches as well by coincidence.
  double expected = 0;  ///< Expected number of such vectors; chance = 1 − exp(−expected).
  std::size_t absences_met = 0;
  double zero_shift = 0;  ///< Fitted part of the allowed zero shift, −1 … 1.
  Vector3 strain{};       ///< Fitted relative changes of a, b, c.
  std::vector<std::optional<double>> deviations;  ///< Predicted − observed, Å⁻¹, for each line.
  std::vector<double> predicted;         ///< Distinct lines up to the last observed one, Å⁻¹.
  std::vector<LocatedVector> tied_with;  ///< Other stars of the group with the same positions.
};

/// What was searched of one kind.
struct KindCoverage {
  StratumKind kind = StratumKind::point;
  bool searched = false;         ///< False when the lines cannot fix the kind; `note` says why.
  bool complete = true;          ///< False when the limit of boxes was reached.
  double excluded_fraction = 0;  ///< Of the zone's points, length, area or volume.
  std::size_t families = 0;      ///< Points, lines, planes of the holohedry, one per star.
  std::size_t regions = 0;       ///< Connected surviving regions.
  std::uint64_t boxes = 0;
  std::uint64_t distances = 0;
  std::string note;
};

struct Coverage {
  bool complete = true;          ///< Every k up to the deepest kind is listed or excluded.
  double excluded_fraction = 0;  ///< Of the deepest kind searched.
  double tolerance = 0;          ///< Largest relative position tolerance, ΔQ/Q half width.
  std::vector<KindCoverage> kinds;
};

struct SearchResult {
  std::vector<Solution> solutions;  ///< At most options.count, most significant first.
  std::size_t found = 0;            ///< Before that cut.
  Coverage coverage;
  std::vector<Wavevector> undetermined;  ///< Families the lines cannot fix.
  std::vector<std::string> notes;        ///< For the reader, in words.
};

/// Every wavevector class that explains the lines, with the statement of what was excluded.
///
/// A required line (not foreign) is explained when some |τ ± k| lies within its tolerance, widened
/// by the zero shift and the cell tolerance; up to options.foreign required lines may stay
/// unexplained. Positions depend on the lattice alone: classes are those of its holohedry, and
/// further stars of the group appear under tied_with. When no single k explains the lines, k with
/// the lattice itself (k = 0 coexisting) and k with its third harmonic are tried, equally complete.
/// Symmetry points, lines, planes and the whole zone are searched by interval branch and bound, so
/// no class outside the list explains the lines when the coverage is complete and found ≤
/// options.count. Throws Error on no lines, a position or tolerance out of range, or lines beyond
/// the range.
SearchResult locate(const SearchProblem& problem, Executor& executor);

}  // namespace spinsieve
