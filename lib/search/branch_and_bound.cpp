#include "search/branch_and_bound.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <numeric>
#include <unordered_map>

namespace spinsieve {

namespace {

struct SquaredWindow {
  double low = 0;
  double high = 0;
  double half_width = 0;  // of |Q|, Å⁻¹
};

std::vector<SquaredWindow> squared_windows(std::span<const LineWindow> windows,
                                           std::span<const Satellite> satellites, const Box& box) {
  double largest = 0;
  for (const Satellite& satellite : satellites)
    largest = std::max(largest, squared_range(satellite, box).high);
  std::vector<SquaredWindow> result;
  for (const LineWindow& window : windows) {
    const double allowance = rounding_allowance * (largest + window.high * window.high);
    result.push_back({window.low * window.low - allowance, window.high * window.high + allowance,
                      (window.high - window.low) / 2});
  }
  return result;
}

// The part of the arena that holds the satellites still able to reach one window.
struct Segment {
  std::size_t begin = 0;
  std::size_t end = 0;
  bool certain = false;  // reached from every point of the box
};

// Depth-first search below one box; the arena grows and shrinks with the recursion.
class Branch {
 public:
  Branch(const SearchZone& zone, std::span<const Satellite> satellites,
         const std::vector<SquaredWindow>& windows, const BranchLimits& limits,
         std::uint64_t box_limit)
      : zone_(zone),
        satellites_(satellites),
        windows_(windows),
        limits_(limits),
        box_limit_(box_limit) {
    for (const Satellite& satellite : satellites)
      largest_factor_ = std::max(largest_factor_, satellite.factor);
  }

  void run(const Box& box) {
    arena_.resize(satellites_.size());
    std::iota(arena_.begin(), arena_.end(), 0U);
    order_.resize(windows_.size());
    std::iota(order_.begin(), order_.end(), std::size_t{0});
    visit(box, std::vector<Segment>(windows_.size(), {0, satellites_.size(), false}));
  }

  BranchResult result;

 private:
  void visit(const Box& box, const std::vector<Segment>& parent) {
    if (zone_.excludes(box)) return;
    if (result.examined >= box_limit_) {
      result.complete = false;
      result.boxes.push_back(box);
      return;
    }
    ++result.examined;
    const std::size_t mark = arena_.size();
    std::vector<Segment> segments = parent;
    std::size_t empty = 0;
    std::size_t certain = 0;
    double narrowest = 0;
    for (std::size_t position = 0; position < order_.size(); ++position) {
      const std::size_t line = order_[position];
      Segment& segment = segments[line];
      if (!segment.certain) filter(box, line, segment);
      if (segment.certain) {
        ++certain;
      } else if (segment.begin == segment.end) {
        if (++empty > limits_.missing) {
          // The line that dropped this box is likely to drop its neighbours.
          std::rotate(order_.begin(), order_.begin() + static_cast<std::ptrdiff_t>(position),
                      order_.begin() + static_cast<std::ptrdiff_t>(position) + 1);
          arena_.resize(mark);
          return;
        }
      } else if (narrowest == 0 || windows_[line].half_width < narrowest) {
        narrowest = windows_[line].half_width;
      }
    }
    if (certain + limits_.missing >= windows_.size() || narrowest == 0 ||
        largest_factor_ * norm(box.half) <= limits_.leaf_fraction * narrowest) {
      result.boxes.push_back(box);
    } else {
      for (const Box& part : halves(box)) visit(part, segments);
    }
    arena_.resize(mark);
  }

  // Copies the satellites that still reach the window behind the arena's end.
  void filter(const Box& box, std::size_t line, Segment& segment) {
    const SquaredWindow& window = windows_[line];
    const std::size_t begin = arena_.size();
    bool certain = false;
    for (std::size_t i = segment.begin; i < segment.end && !certain; ++i) {
      const std::uint32_t index = arena_[i];
      const SquaredRange range = squared_range(satellites_[index], box);
      ++result.distances;
      if (range.high < window.low || range.low > window.high) continue;
      certain = range.low >= window.low && range.high <= window.high;
      arena_.push_back(index);
    }
    segment = {begin, arena_.size(), certain};
  }

  static std::array<Box, 2> halves(const Box& box) {
    const std::size_t axis = static_cast<std::size_t>(
        std::max_element(box.half.begin(), box.half.end()) - box.half.begin());
    std::array<Box, 2> parts = {box, box};
    const double quarter = box.half[axis] / 2;
    parts[0].half[axis] = parts[1].half[axis] = quarter;
    parts[0].centre[axis] -= quarter;
    parts[1].centre[axis] += quarter;
    return parts;
  }

  const SearchZone& zone_;
  std::span<const Satellite> satellites_;
  const std::vector<SquaredWindow>& windows_;
  const BranchLimits& limits_;
  std::uint64_t box_limit_;
  double largest_factor_ = 0;
  std::vector<std::uint32_t> arena_;
  std::vector<std::size_t> order_;  // lines in the order they are tried
};

std::vector<Box> root_boxes(const SearchZone& zone) {
  constexpr std::array<std::size_t, 4> per_axis = {1, 16, 12, 8};
  const std::size_t n = per_axis[zone.dimension];
  std::vector<Box> roots = {zone.bounds};
  for (std::size_t axis = 0; axis < zone.dimension; ++axis) {
    std::vector<Box> finer;
    for (const Box& box : roots)
      for (std::size_t i = 0; i < n; ++i) {
        Box part = box;
        const auto whole = static_cast<double>(n);
        part.half[axis] = box.half[axis] / whole;
        part.centre[axis] =
            box.centre[axis] + box.half[axis] * ((2 * static_cast<double>(i) + 1) / whole - 1);
        // A breath more than its share, so that rounding leaves no gap between neighbours.
        part.half[axis] *= 1 + 1e-12;
        finer.push_back(part);
      }
    roots = std::move(finer);
  }
  std::erase_if(roots, [&zone](const Box& box) { return zone.excludes(box); });
  return roots;
}

using BinPlace = std::array<std::int64_t, 3>;

struct BinHash {
  std::size_t operator()(const BinPlace& place) const {
    std::uint64_t hash = 0;
    for (const std::int64_t i : place)
      hash = (hash ^ static_cast<std::uint64_t>(i)) * 0x9E3779B97F4A7C15U;
    return hash ^ (hash >> 29U);
  }
};

using Grid = std::unordered_map<BinPlace, std::vector<std::size_t>, BinHash>;

std::int64_t bin_of(double x, double edge) {
  return static_cast<std::int64_t>(std::floor(x / edge));
}

std::size_t root_of(std::vector<std::size_t>& parents, std::size_t i) {
  while (parents[i] != i) i = parents[i] = parents[parents[i]];
  return i;
}

}  // namespace

BranchResult enclosed(const SearchZone& zone, std::span<const Satellite> satellites,
                      std::span<const LineWindow> windows, const BranchLimits& limits,
                      Executor& executor) {
  constexpr std::size_t batch = 32;
  const std::vector<SquaredWindow> squared = squared_windows(windows, satellites, zone.bounds);
  const std::vector<Box> roots = root_boxes(zone);
  std::vector<BranchResult> parts(roots.size());
  for (std::size_t start = 0; start < roots.size(); start += batch) {
    executor.for_each(std::min(batch, roots.size() - start), [&](std::size_t i) {
      Branch branch(zone, satellites, squared, limits, limits.boxes / roots.size() + 1);
      branch.run(roots[start + i]);
      parts[start + i] = std::move(branch.result);
    });
    executor.progress("wavevector search",
                      static_cast<double>(std::min(start + batch, roots.size())) /
                          static_cast<double>(roots.size()));
  }
  BranchResult result;
  for (const BranchResult& part : parts) {
    result.boxes.insert(result.boxes.end(), part.boxes.begin(), part.boxes.end());
    result.complete = result.complete && part.complete;
    result.examined += part.examined;
    result.distances += part.distances;
  }
  return result;
}

BranchResult enclosed_in(const Box& box, const SearchZone& zone,
                         std::span<const Satellite> satellites, std::span<const LineWindow> windows,
                         const BranchLimits& limits) {
  const std::vector<SquaredWindow> squared = squared_windows(windows, satellites, box);
  Branch branch(zone, satellites, squared, limits, limits.boxes);
  branch.run(box);
  return std::move(branch.result);
}

std::vector<std::vector<Box>> connected_regions(std::span<const Box> boxes, std::size_t dimension) {
  constexpr double contact = 1e-9;  // Å⁻¹
  const auto touch = [dimension](const Box& a, const Box& b) {
    for (std::size_t i = 0; i < dimension; ++i)
      if (std::abs(a.centre[i] - b.centre[i]) > a.half[i] + b.half[i] + contact) return false;
    return true;
  };
  // Boxes of one size class lie in a grid as wide as they are, so that bins hold few of them.
  // Larger boxes go in first; each box then looks for those of its size and above.
  const auto size_class = [](const Box& box) {
    return std::ilogb(std::max({box.half[0], box.half[1], box.half[2], contact}));
  };
  std::vector<int> classes;
  for (const Box& box : boxes) classes.push_back(size_class(box));
  std::vector<std::size_t> order(boxes.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::ranges::stable_sort(
      order, [&classes](std::size_t a, std::size_t b) { return classes[a] > classes[b]; });
  std::map<int, Grid> grids;
  std::vector<std::size_t> parents(boxes.size());
  std::iota(parents.begin(), parents.end(), std::size_t{0});
  for (const std::size_t i : order) {
    for (auto& [level, grid] : grids) {
      const double edge = std::ldexp(4.0, level);  // at least the full width of its boxes
      std::array<std::int64_t, 3> first{};
      std::array<std::int64_t, 3> last{};
      for (std::size_t axis = 0; axis < dimension; ++axis) {
        const double reach = boxes[i].half[axis] + edge / 2 + 2 * contact;
        first[axis] = bin_of(boxes[i].centre[axis] - reach, edge);
        last[axis] = bin_of(boxes[i].centre[axis] + reach, edge);
      }
      for (std::int64_t a = first[0]; a <= last[0]; ++a)
        for (std::int64_t b = first[1]; b <= last[1]; ++b)
          for (std::int64_t c = first[2]; c <= last[2]; ++c) {
            const auto bin = grid.find({a, b, c});
            if (bin == grid.end()) continue;
            for (const std::size_t other : bin->second) {
              const std::size_t root = root_of(parents, i);
              const std::size_t other_root = root_of(parents, other);
              if (root != other_root && touch(boxes[i], boxes[other]))
                parents[std::max(root, other_root)] = std::min(root, other_root);
            }
          }
    }
    const double edge = std::ldexp(4.0, classes[i]);
    BinPlace place{};
    for (std::size_t axis = 0; axis < dimension; ++axis)
      place[axis] = bin_of(boxes[i].centre[axis], edge);
    grids[classes[i]][place].push_back(i);
  }
  std::map<std::size_t, std::vector<Box>> regions;  // by the first member
  for (std::size_t i = 0; i < boxes.size(); ++i) regions[root_of(parents, i)].push_back(boxes[i]);
  std::vector<std::vector<Box>> result;
  for (auto& [first, members] : regions) result.push_back(std::move(members));
  return result;
}

}  // namespace spinsieve
