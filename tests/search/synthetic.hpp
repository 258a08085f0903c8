#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <random>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "search/wavevector_search.hpp"

namespace spinsieve {

/// A crystal with an invented cell.
struct SyntheticCrystal {
  const char* group;
  Cell cell;
};

inline std::vector<SyntheticCrystal> synthetic_crystals() {
  return {
      {"P -1", Cell(5.1, 5.9, 6.8, 84, 97, 105)},
      {"P 1 2_1/c 1", Cell(5.3, 5.9, 7.4, 90, 103, 90)},
      {"C 1 2/m 1", Cell(8.1, 5.5, 6.2, 90, 108, 90)},
      {"P n m a", Cell(5.74, 7.69, 5.53, 90, 90, 90)},
      {"C m c m", Cell(4.1, 9.3, 6.9, 90, 90, 90)},
      {"I m m m", Cell(4.3, 5.9, 8.8, 90, 90, 90)},
      {"F m m m", Cell(6.1, 7.7, 9.4, 90, 90, 90)},
      {"P 4/n m m", Cell(4.2, 4.2, 8.7, 90, 90, 90)},
      {"I 4_1/a", Cell(5.4, 5.4, 11.3, 90, 90, 90)},
      {"P -3 m 1", Cell(5.6, 5.6, 7.1, 90, 90, 120)},
      {"R -3 c", Cell(5.2, 5.2, 13.1, 90, 90, 120)},
      {"P 6_3/m m c", Cell(5.8, 5.8, 7.9, 90, 90, 120)},
      {"P 2_1 3", Cell(6.4, 6.4, 6.4, 90, 90, 90)},
      {"P m -3 m", Cell(5.9, 5.9, 5.9, 90, 90, 90)},
      {"I a -3 d", Cell(9.8, 9.8, 9.8, 90, 90, 90)},
      {"F d -3 m", Cell(8.4, 8.4, 8.4, 90, 90, 90)},
  };
}

/// Even in [0, 1), the same on every platform.
inline double draw(std::mt19937& random) { return static_cast<double>(random()) / 4294967296.0; }

/// Distinct |Q| of all hkl ± k up to a limit: the definition, without any of the search's code.
inline std::vector<double> satellite_lines(const Cell& cell, const SpaceGroup& group,
                                           const Vector3& k, double largest_q, double merge) {
  std::vector<double> lengths;
  const int reach =
      static_cast<int>(largest_q * std::max({cell.a(), cell.b(), cell.c()}) / 6.283) + 3;
  for (int h = -reach; h <= reach; ++h)
    for (int l = -reach; l <= reach; ++l)
      for (int m = -reach; m <= reach; ++m) {
        if (!group.in_reciprocal_lattice({h, l, m})) continue;
        for (const double sign : {1.0, -1.0}) {
          const double q = cell.q({h + sign * k[0], l + sign * k[1], m + sign * k[2]});
          if (q > 1e-6 && q <= largest_q) lengths.push_back(q);
        }
      }
  std::ranges::sort(lengths);
  std::vector<double> distinct;
  for (const double q : lengths)
    if (distinct.empty() || q > distinct.back() + merge) distinct.push_back(q);
  return distinct;
}

struct SyntheticOptions {
  double relative_tolerance = 0.0006;
  std::size_t lines = 8;
  std::size_t among = 12;  ///< Seen lines are drawn from the first this many.
  bool impurity = false;
};

/// Lines of a known k: some missing, each moved within its tolerance, perhaps one foreign.
inline SearchProblem synthetic_problem(const Cell& cell, const SpaceGroup& group, const Vector3& k,
                                       const SyntheticOptions& options, std::mt19937& random) {
  std::vector<double> all;
  for (double reach = 2; all.size() < options.among; reach += 0.5)
    all = satellite_lines(cell, group, k, reach, 1e-4);
  all.resize(options.among);
  while (all.size() > options.lines)
    all.erase(all.begin() + static_cast<std::ptrdiff_t>(random() % all.size()));
  SearchProblem problem{cell, group, {}, {}, {}};
  if (options.impurity) {
    all.push_back(all.front() + (all.back() - all.front()) * draw(random));
    problem.options.foreign = 1;
  }
  for (const double q : all) {
    // A normal deviate of half the tolerance, cut at the tolerance.
    double noise = 2;
    while (std::abs(noise) > 1) {
      noise = 0;
      for (int i = 0; i < 12; ++i) noise += draw(random);
      noise = (noise - 6) / 2;
    }
    const double tolerance = options.relative_tolerance * q;
    problem.lines.push_back({q + noise * tolerance, tolerance, 0, false, "", {}});
  }
  problem.options.count = 1'000'000;
  return problem;
}

/// Distance in Å⁻¹ between the classes of two k under the lattice's rotations: brute force.
inline double class_distance(const Cell& cell, const SpaceGroup& group, const Vector3& a,
                             const Vector3& b) {
  double least = 1e9;
  for (const IntMatrix& R : holohedry(group)) {
    Vector3 image{};
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < 3; ++j) image[j] += a[i] * R[i][j];
    const Vector3 d = {image[0] - b[0], image[1] - b[1], image[2] - b[2]};
    for (int h = -2; h <= 2; ++h)
      for (int l = -2; l <= 2; ++l)
        for (int m = -2; m <= 2; ++m) {
          const int H = h - static_cast<int>(std::lround(d[0]));
          const int L = l - static_cast<int>(std::lround(d[1]));
          const int M = m - static_cast<int>(std::lround(d[2]));
          if (group.in_reciprocal_lattice({H, L, M}))
            least = std::min(least, cell.q({d[0] + H, d[1] + L, d[2] + M}));
        }
  }
  return least;
}

}  // namespace spinsieve
