#include "search/family_search.hpp"

#include <algorithm>
#include <cmath>
#include <optional>

#include <Eigen/Dense>

namespace spinsieve {

namespace {

constexpr double coarse_leaf = 0.5;
constexpr double fine_leaf = 0.05;
constexpr std::size_t most_starts = 12;

double box_volume(const Box& box, std::size_t dimension) {
  double volume = 1;
  for (std::size_t i = 0; i < dimension; ++i) volume *= 2 * box.half[i];
  return volume;
}

// The largest relative change of any |Q| when each of a, b, c changes by at most the tolerance:
// the largest stretch is a convex function of the three factors, so a corner has it.
struct Stretch {
  double longer = 1;
  double shorter = 1;
};

Stretch largest_stretch(const ReciprocalSpace& space, double tolerance) {
  if (tolerance <= 0) return {};
  Eigen::Matrix3d B;  // rows a*, b*, c*
  for (Eigen::Index i = 0; i < 3; ++i)
    for (Eigen::Index j = 0; j < 3; ++j)
      B(i, j) = space.basis()[static_cast<std::size_t>(i)][static_cast<std::size_t>(j)];
  const Eigen::Matrix3d inverse = B.inverse();
  Stretch result;
  for (int corner = 0; corner < 8; ++corner) {
    Eigen::Vector3d lengths;
    for (int i = 0; i < 3; ++i) lengths(i) = (corner >> i & 1) != 0 ? 1 + tolerance : 1 - tolerance;
    const Eigen::Matrix3d outward = inverse * lengths.cwiseInverse().asDiagonal() * B;
    const Eigen::Matrix3d inward = inverse * lengths.asDiagonal() * B;
    result.longer = std::max(result.longer, outward.jacobiSvd().singularValues()(0));
    result.shorter = std::max(result.shorter, inward.jacobiSvd().singularValues()(0));
  }
  return result;
}

// Search for the best point of one region.
class BestPoint {
 public:
  BestPoint(const SearchZone& zone, const ReciprocalSpace& space,
            std::span<const Satellite> satellites, const FamilyQuestion& question,
            std::span<const LineWindow> windows, std::vector<Box>& boxes)
      : zone_(zone),
        windows_(windows),
        boxes_(boxes),
        missing_(question.missing),
        widened_(widened_lines(question)),
        satellites_(near_satellites(satellites, widened_, windows, boxes)),
        fitter_(zone, space, satellites_, question.lines, question.cell_tolerance),
        widened_fitter_(zone, space, satellites_, widened_, 0) {
    for (const Box& box : boxes) largest_half_ = std::max(largest_half_, norm(box.half));
  }

  // Absent when the region holds no point after all.
  std::optional<LineFit> found() {
    std::optional<LineFit> best;
    const std::size_t stride = (boxes_.size() + most_starts - 1) / most_starts;
    for (std::size_t i = 0; i < boxes_.size(); i += stride)
      consider(fitter_.fit(boxes_[i].centre), best);
    for (std::size_t i = 0; i < boxes_.size() && !best.has_value(); ++i)
      consider(fitter_.at(boxes_[i].centre, {}), best);
    return best.has_value() ? best : finer();
  }

 private:
  static std::vector<FitLine> widened_lines(const FamilyQuestion& question) {
    std::vector<FitLine> lines = question.lines;
    for (FitLine& line : lines) {
      line.tolerance = line.tolerance * (1 + 2 * fine_leaf) + std::abs(line.shift) +
                       2 * question.cell_tolerance * line.q;
      line.shift = 0;
    }
    return lines;
  }

  // Those that can come near a line from some point of the region; a fit that would need others
  // has left the region.
  static std::vector<Satellite> near_satellites(std::span<const Satellite> satellites,
                                                std::span<const FitLine> lines,
                                                std::span<const LineWindow> windows,
                                                const std::vector<Box>& boxes) {
    Box hull = boxes.front();
    for (std::size_t i = 0; i < 3; ++i) {
      double low = hull.centre[i];
      double high = hull.centre[i];
      for (const Box& box : boxes) {
        low = std::min(low, box.centre[i] - 2 * box.half[i]);
        high = std::max(high, box.centre[i] + 2 * box.half[i]);
      }
      hull.centre[i] = (low + high) / 2;
      hull.half[i] = (high - low) / 2;
    }
    constexpr double margin = 1e-9;  // far above the rounding of a square root
    std::vector<Satellite> near;
    for (const Satellite& satellite : satellites) {
      const SquaredRange range = squared_range(satellite, hull);
      const double low = std::sqrt(range.low);
      const double high = std::sqrt(range.high);
      const bool meets_line = std::ranges::any_of(lines, [low, high](const FitLine& line) {
        return high >= line.q - 2 * line.tolerance && low <= line.q + 2 * line.tolerance;
      });
      const bool meets_window = std::ranges::any_of(windows, [low, high](const LineWindow& window) {
        return high >= window.low * (1 - margin) && low <= window.high * (1 + margin);
      });
      if (meets_line || meets_window) near.push_back(satellite);
    }
    return near;
  }

  void consider(const LineFit& fit, std::optional<LineFit>& best) const {
    if (fit.missing > missing_ || !region_holds(boxes_, fit.x, largest_half_)) return;
    const bool improves =
        !best.has_value() || fit.matched > best->matched ||
        (fit.matched == best->matched && fit.rms_in_tolerances < best->rms_in_tolerances);
    if (improves) best = fit;
  }

  // No start led to a point within the tolerances: smaller boxes decide whether there is one.
  std::optional<LineFit> finer() {
    std::vector<Box> smaller;
    for (const Box& box : boxes_) {
      BranchLimits limits;
      limits.missing = missing_;
      limits.leaf_fraction = fine_leaf;
      const BranchResult part = enclosed_in(box, zone_, satellites_, windows_, limits);
      smaller.insert(smaller.end(), part.boxes.begin(), part.boxes.end());
    }
    boxes_ = std::move(smaller);
    std::optional<LineFit> best;
    for (const Box& box : boxes_) {
      const LineFit fit = widened_fitter_.at(box.centre, {});
      if (!best.has_value() || fit.matched > best->matched ||
          (fit.matched == best->matched && fit.rms_in_tolerances < best->rms_in_tolerances))
        best = fit;
    }
    return best;
  }

  const SearchZone& zone_;
  std::span<const LineWindow> windows_;
  std::vector<Box>& boxes_;
  std::size_t missing_;
  std::vector<FitLine> widened_;
  std::vector<Satellite> satellites_;
  LineFitter fitter_;
  LineFitter widened_fitter_;
  double largest_half_ = 0;
};

}  // namespace

std::vector<LineWindow> line_windows(const FamilyQuestion& question, const ReciprocalSpace& space) {
  const Stretch stretch = largest_stretch(space, question.cell_tolerance);
  std::vector<LineWindow> windows;
  for (const FitLine& line : question.lines) {
    if (!line.required) continue;
    const double half = line.tolerance + std::abs(line.shift);
    windows.push_back(
        {std::max(line.q - half, 0.0) / stretch.longer, (line.q + half) * stretch.shorter});
  }
  return windows;
}

std::vector<Satellite> satellites_of(const SearchZone& zone, std::span<const LatticePoint> points,
                                     std::span<const int> harmonics, double largest_q) {
  std::vector<Satellite> result;
  for (const int harmonic : harmonics)
    for (const LatticePoint& point : points) {
      const double factor = harmonic;
      const Satellite satellite{zone.to_frame(point.q + factor * zone.origin), factor};
      if (squared_range(satellite, zone.bounds).low <= largest_q * largest_q * (1 + 1e-9))
        result.push_back(satellite);
    }
  return result;
}

FamilyAnswer family_search(const SearchZone& zone, const ReciprocalSpace& space,
                           std::span<const LatticePoint> points, const FamilyQuestion& question,
                           Executor& executor) {
  const std::vector<LineWindow> windows = line_windows(question, space);
  double largest_q = 0;
  for (const LineWindow& window : windows) largest_q = std::max(largest_q, window.high);
  for (const FitLine& line : question.lines)
    largest_q = std::max(largest_q, line.q + line.tolerance + std::abs(line.shift));
  const std::vector<Satellite> satellites =
      satellites_of(zone, points, question.harmonics, largest_q);

  BranchLimits limits;
  limits.missing = question.missing;
  limits.leaf_fraction = coarse_leaf;
  limits.boxes = question.box_limit;
  const BranchResult branch = zone.dimension == 0
                                  ? enclosed_in(zone.bounds, zone, satellites, windows, limits)
                                  : enclosed(zone, satellites, windows, limits, executor);
  FamilyAnswer answer;
  answer.complete = branch.complete;
  answer.boxes = branch.examined;
  answer.distances = branch.distances;
  std::vector<std::vector<Box>> regions = connected_regions(branch.boxes, zone.dimension);
  std::vector<std::optional<LineFit>> fits(regions.size());
  executor.for_each(regions.size(), [&](std::size_t i) {
    fits[i] = BestPoint(zone, space, satellites, question, windows, regions[i]).found();
  });
  for (std::size_t i = 0; i < regions.size(); ++i) {
    for (const Box& box : regions[i]) answer.surviving_volume += box_volume(box, zone.dimension);
    if (!fits[i].has_value()) continue;
    FoundRegion region;
    region.dimension = zone.dimension;
    region.fit = *fits[i];
    region.k = space.components(zone.from_frame(region.fit.x));
    region.reach = region_reach(regions[i], region.fit.x);
    region.signature = signature(region.k, space);
    region.boxes = std::move(regions[i]);
    answer.regions.push_back(std::move(region));
  }
  return answer;
}

}  // namespace spinsieve
