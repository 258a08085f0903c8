#include "search/wavevector_search.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <numbers>
#include <tuple>
#include <utility>

#include "search/family_search.hpp"
#include "search/presentation.hpp"

namespace spinsieve {

namespace {

// Half width over position beyond which a window says nothing about a lattice.
constexpr double largest_relative_tolerance = 0.1;
// A kind of which this part of all vectors matches by coincidence is reported as undetermined.
constexpr double hopeless = 0.2;
// More surviving boxes than this are not worth listing one by one.
constexpr double most_leaves = 4e6;
// Density of predicted lines is counted up to this multiple of a line's |Q|.
constexpr double density_reach = 4.0 / 3.0;
constexpr double largest_harmonic = 3;

std::string number_text(double value) {
  std::array<char, 32> text{};
  const int length = std::snprintf(text.data(), text.size(), "%.4g", value);
  return {text.data(), static_cast<std::size_t>(length)};
}

std::string line_text(const SearchLine& line) {
  return line.text.empty() ? "q " + number_text(line.q) : line.text;
}

void check(const SearchProblem& problem) {
  if (problem.lines.empty())
    throw Error("no line positions to locate a wavevector from; at least one line is needed");
  for (const SearchLine& line : problem.lines) {
    const std::string name = "line '" + line_text(line) + "'";
    if (!(line.q > 0) || !std::isfinite(line.q))
      throw Error(line.place, name + " at |Q| = " + number_text(line.q) +
                                  " Å⁻¹; a position must be positive and finite");
    if (!(line.tolerance > 0))
      throw Error(line.place, name + " with position tolerance " + number_text(line.tolerance) +
                                  " Å⁻¹; it must be positive");
    if (!(line.tolerance <= largest_relative_tolerance * line.q))
      throw Error(line.place, name + " with position tolerance " + number_text(line.tolerance) +
                                  " Å⁻¹; accepted is at most a tenth of its |Q|, " +
                                  number_text(largest_relative_tolerance * line.q) + " Å⁻¹");
  }
  const LocateOptions& options = problem.options;
  if (options.foreign < 0)
    throw Error("foreign: " + std::to_string(options.foreign) + "; it must be 0 or more");
  if (options.count < 1)
    throw Error("count: " + std::to_string(options.count) + "; it must be 1 or more");
  if (!(options.cell_tolerance >= 0 && options.cell_tolerance <= 0.1))
    throw Error("cell_tolerance: " + number_text(options.cell_tolerance) +
                "; it must lie between 0 and 0.1");
  const auto required = static_cast<std::size_t>(
      std::ranges::count_if(problem.lines, [](const SearchLine& l) { return !l.foreign; }));
  if (required <= static_cast<std::size_t>(options.foreign))
    throw Error("foreign: " + std::to_string(options.foreign) + " of " + std::to_string(required) +
                " lines that must be explained; it must leave at least one");
}

class Search {
 public:
  Search(const SearchProblem& problem, Executor& executor)
      : problem_(problem), executor_(executor), space_(problem.cell, problem.group) {
    for (const SearchLine& line : problem.lines) {
      question_.lines.push_back({line.q, line.tolerance, line.shift, !line.foreign});
      required_ += line.foreign ? 0 : 1;
      largest_q_ = std::max(largest_q_, line.q + line.tolerance + std::abs(line.shift));
      narrowest_ = std::min(narrowest_, line.tolerance);
      result_.coverage.tolerance = std::max(result_.coverage.tolerance, line.tolerance / line.q);
    }
    for (const SearchAbsence& absence : problem.absences)
      absences_.push_back({absence.q_low, absence.q_high});
    question_.missing = static_cast<std::size_t>(problem.options.foreign);
    question_.cell_tolerance = problem.options.cell_tolerance;
    question_.box_limit = problem.box_limit;
    families_ = fixed_subspaces(problem.group, space_.rotations());
    double farthest = 0;
    for (const FixedSubspace& family : families_) {
      zones_.push_back(search_zone(family, space_));
      const SearchZone& zone = zones_.back();
      farthest =
          std::max(farthest, norm(zone.from_frame(zone.bounds.centre)) + norm(zone.bounds.half));
    }
    try {
      points_ = space_.points(largest_q_ * density_reach + largest_harmonic * farthest);
    } catch (const Error& error) {
      const auto last = std::ranges::max_element(problem.lines, {}, &SearchLine::q);
      throw Error(last->place,
                  "line '" + line_text(*last) + "' lies beyond the range: " + error.message());
    }
  }

  SearchResult run() {
    std::vector<FoundRegion> regions = search_harmonics({1});
    if (regions.empty()) {
      for (const KindCoverage& kind : std::exchange(kinds_, {}))
        result_.coverage.kinds.push_back(kind);
      // The lattice itself coexisting with k, the third harmonic, and both.
      const std::vector<std::vector<int>> further = {{0, 1}, {1, 3}, {0, 1, 3}};
      for (const std::vector<int>& harmonics : further) {
        std::vector<FoundRegion> more = search_harmonics(harmonics);
        for (FoundRegion& region : more) {
          region.evidence.expected *= static_cast<double>(further.size());
          region.evidence.chance = -std::expm1(-region.evidence.expected);
          regions.push_back(std::move(region));
        }
        kinds_.clear();
      }
      if (!regions.empty())
        result_.notes.emplace_back(
            "no single k explains the lines; the solutions listed take k together with the "
            "lattice itself (harmonic 0) or its third harmonic");
    } else {
      result_.coverage.kinds = kinds_;
    }
    std::ranges::stable_sort(regions, [](const FoundRegion& a, const FoundRegion& b) {
      return std::tie(a.evidence.expected, a.dimension, a.fit.rms_q) <
             std::tie(b.evidence.expected, b.dimension, b.fit.rms_q);
    });
    result_.found = regions.size();
    const std::size_t listed =
        std::min(regions.size(), static_cast<std::size_t>(problem_.options.count));
    result_.solutions.resize(listed);
    executor_.for_each(listed, [&](std::size_t i) { result_.solutions[i] = solution(regions[i]); });
    finish();
    return std::move(result_);
  }

 private:
  // All distinct regions for one set of harmonics, with their evidence.
  std::vector<FoundRegion> search_harmonics(const std::vector<int>& harmonics) {
    question_.harmonics = harmonics;
    std::vector<FoundRegion> regions;
    for (std::size_t dimension = 0; dimension <= static_cast<std::size_t>(problem_.deepest);
         ++dimension)
      search_kind(dimension, regions);
    regions = without_repetitions(std::move(regions), zones_, space_, 0.1 * narrowest_);
    executor_.for_each(regions.size(), [&](std::size_t i) {
      regions[i].harmonics = harmonics;
      judge(regions[i]);
    });
    return regions;
  }

  void search_kind(std::size_t dimension, std::vector<FoundRegion>& regions) {
    KindCoverage kind;
    kind.kind = static_cast<StratumKind>(dimension);
    kind.searched = true;
    double volume = 0;
    double surviving = 0;
    for (std::size_t f = 0; f < families_.size(); ++f) {
      if (families_[f].dimension() != dimension) continue;
      ++kind.families;
      volume += zones_[f].volume;
    }
    if (kind.families == 0) return;
    kind.note = obstacle(dimension, volume);
    if (!kind.note.empty()) {
      kind.searched = false;
      kind.complete = false;
      kinds_.push_back(kind);
      // Wider questions meet the same obstacle; it is said once.
      if (question_.harmonics.size() > 1) return;
      for (const FixedSubspace& family : families_)
        if (family.dimension() == dimension) result_.undetermined.push_back(family.k);
      result_.notes.push_back(kind.note);
      return;
    }
    for (std::size_t f = 0; f < families_.size(); ++f) {
      if (families_[f].dimension() != dimension) continue;
      FamilyAnswer answer = family_search(zones_[f], space_, points_, question_, executor_);
      kind.complete = kind.complete && answer.complete;
      kind.boxes += answer.boxes;
      kind.distances += answer.distances;
      kind.regions += answer.regions.size();
      surviving += answer.surviving_volume;
      for (FoundRegion& region : answer.regions) {
        region.family = f;
        regions.push_back(std::move(region));
      }
    }
    trials_[dimension] = volume;
    kind.excluded_fraction = std::max(0.0, 1 - surviving / volume);
    if (!kind.complete) {
      kind.note = "the limit of " + std::to_string(problem_.box_limit) +
                  " boxes was reached for wavevectors of kind " + to_string(kind.kind);
      result_.notes.push_back(kind.note);
    }
    kinds_.push_back(kind);
  }

  // Why the lines cannot fix a kind; empty when they can.
  std::string obstacle(std::size_t dimension, double volume) const {
    const std::size_t effective = required_ - question_.missing;
    const std::string kind = spinsieve::to_string(static_cast<StratumKind>(dimension));
    if (effective < dimension)
      return std::to_string(effective) + " line" + (effective == 1 ? "" : "s") +
             " that must match cannot fix the " + std::to_string(dimension) +
             " free components of a k of kind " + kind + "; its families are listed undetermined";
    if (dimension == 0) return {};
    // Expected coincidences of a k on a typical family of the kind.
    double cogroup = 1;
    for (const FixedSubspace& family : families_)
      if (family.dimension() == dimension)
        cogroup = std::max(cogroup, static_cast<double>(family.cogroup.size()));
    const auto harmonics = static_cast<double>(question_.harmonics.size());
    std::vector<double> matches;
    for (const LineWindow& window : line_windows(question_, space_)) {
      const double middle = (window.low + window.high) / 2;
      const double density =
          harmonics * 4 * std::numbers::pi * middle * middle / space_.cell_volume() / cogroup;
      matches.push_back(-std::expm1(-density * (window.high - window.low)));
    }
    const double coincidence = at_least(effective, matches);
    const double leaf = narrowest_ / 2;
    const double leaves = coincidence * volume / std::pow(leaf, static_cast<double>(dimension));
    if (coincidence < hopeless && leaves < most_leaves) return {};
    return "a random k of kind " + kind + " matches all lines with probability " +
           number_text(coincidence) +
           ": for this cell nearly everything matches, and its families are listed undetermined; "
           "smaller tolerances or more lines at low |Q| would decide";
  }

  void judge(FoundRegion& region) const {
    const SearchZone& zone = zones_[region.family];
    std::vector<double> lengths;
    for (const Satellite& satellite :
         satellites_of(zone, points_, region.harmonics, largest_q_ * density_reach))
      lengths.push_back(norm(satellite.start + satellite.factor * region.fit.x));
    region.predicted =
        distinct_lines(std::move(lengths), largest_q_ * density_reach, narrowest_ / 2);
    double trials = trials_[region.dimension];
    if (region.dimension > 0) {
      const std::vector<Satellite> satellites =
          satellites_of(zone, points_, region.harmonics, largest_q_);
      const LineFitter full(zone, space_, satellites, question_.lines, question_.cell_tolerance);
      trials = std::max(1.0, trials / full.resolution_volume(region.fit));
    }
    region.evidence = coincidence(region.fit, question_.lines, region.predicted, absences_, trials,
                                  region.dimension);
  }

  Solution solution(const FoundRegion& region) const {
    const FixedSubspace& family = families_[region.family];
    Solution result;
    result.kind = static_cast<StratumKind>(region.dimension);
    result.vector = presented(region.k, family, space_);
    result.harmonics = region.harmonics;
    result.reach = region.reach;
    result.matched = region.fit.matched;
    result.of = question_.lines.size();
    result.rms_q = region.fit.rms_q;
    result.chance = region.evidence.chance;
    result.expected = region.evidence.expected;
    result.absences_met = region.evidence.absences_met;
    result.zero_shift = region.fit.errors.zero_shift;
    result.strain = region.fit.errors.strain;
    result.deviations = region.fit.deviations;
    for (const double q : region.predicted)
      if (q <= largest_q_) result.predicted.push_back(q);
    result.tied_with = tied_stars(result.vector, problem_.group, space_);
    if (region.dimension > 0) result.commensurate = commensurate(region, result.vector);
    return result;
  }

  std::optional<FractionVector> commensurate(const FoundRegion& region,
                                             const LocatedVector& vector) const {
    constexpr int largest_denominator = 12;
    const SearchZone& zone = zones_[region.family];
    const std::vector<Satellite> satellites =
        satellites_of(zone, points_, region.harmonics, largest_q_);
    const LineFitter fitter(zone, space_, satellites, question_.lines, question_.cell_tolerance);
    for (int denominator = 1; denominator <= largest_denominator; ++denominator) {
      const FractionVector member = nearest_member(vector.family, vector.k, denominator);
      const Vector3 step = space_.cartesian(to_double(member) - vector.k);
      if (norm(step) > region.reach) continue;
      // The step is taken from the presented image, so the image of k there must be used.
      const Vector3 x = zone.to_frame(space_.cartesian(to_double(member)) - zone.origin);
      if (fitter.at(x, region.fit.errors).matched >= region.fit.matched) return member;
    }
    return std::nullopt;
  }

  void finish() {
    Coverage& coverage = result_.coverage;
    for (const KindCoverage& kind : coverage.kinds) {
      coverage.complete = coverage.complete && kind.complete;
      if (kind.searched) coverage.excluded_fraction = kind.excluded_fraction;
    }
    if (result_.solutions.empty() && coverage.complete)
      result_.notes.push_back("no wavevector explains the lines within the stated tolerance");
    if (result_.found > result_.solutions.size())
      result_.notes.push_back(std::to_string(result_.found) + " solutions, of which the first " +
                              std::to_string(result_.solutions.size()) + " are listed");
  }

  const SearchProblem& problem_;
  Executor& executor_;
  ReciprocalSpace space_;
  FamilyQuestion question_;
  std::vector<LineWindowAbsence> absences_;
  std::size_t required_ = 0;
  double largest_q_ = 0;
  double narrowest_ = 1e9;
  std::vector<FixedSubspace> families_;
  std::vector<SearchZone> zones_;
  std::vector<LatticePoint> points_;
  std::vector<KindCoverage> kinds_;  // of the harmonics in question
  std::array<double, 4> trials_{};
  SearchResult result_;
};

}  // namespace

SearchResult locate(const SearchProblem& problem, Executor& executor) {
  check(problem);
  return Search(problem, executor).run();
}

}  // namespace spinsieve
