#pragma once

#include <cstdint>
#include <random>

#include <Eigen/Dense>

namespace spinsieve {

/// Seeded draws that are the same on every machine: the generator's raw output and our own
/// transformation, since the distributions of the standard library differ between vendors.
class RandomDraws {
 public:
  /// stream: an index (a start, a redraw, a pair) with draws of its own, for parallel loops.
  explicit RandomDraws(std::uint64_t seed, std::uint64_t stream = 0);

  double uniform();  ///< In (0, 1), never an end.
  double normal();   ///< Mean 0, variance 1.
  Eigen::VectorXd normal_vector(Eigen::Index size);

 private:
  std::mt19937_64 generator_;
  double kept_ = 0;
  bool has_kept_ = false;
};

}  // namespace spinsieve
