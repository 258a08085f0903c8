#include "ranking/random_draws.hpp"

#include <cmath>
#include <numbers>

namespace spinsieve {
namespace {

/// Makes neighbouring seeds and streams unlike. Source: Steele, Lea & Flood (2014), OOPSLA,
/// the SplitMix64 finaliser.
std::uint64_t mixed(std::uint64_t x) {
  x += 0x9e3779b97f4a7c15U;
  x = (x ^ (x >> 30U)) * 0xbf58476d1ce4e5b9U;
  x = (x ^ (x >> 27U)) * 0x94d049bb133111ebU;
  return x ^ (x >> 31U);
}

}  // namespace

RandomDraws::RandomDraws(std::uint64_t seed, std::uint64_t stream)
    : generator_(mixed(mixed(seed) + stream)) {}

double RandomDraws::uniform() { return (static_cast<double>(generator_() >> 11U) + 0.5) * 0x1p-53; }

double RandomDraws::normal() {  // Box & Muller (1958), Ann. Math. Stat. 29, 610
  if (has_kept_) {
    has_kept_ = false;
    return kept_;
  }
  const double radius = std::sqrt(-2 * std::log(uniform()));
  const double angle = 2 * std::numbers::pi * uniform();
  kept_ = radius * std::sin(angle);
  has_kept_ = true;
  return radius * std::cos(angle);
}

Eigen::VectorXd RandomDraws::normal_vector(Eigen::Index size) {
  Eigen::VectorXd result(size);
  for (double& value : result) value = normal();
  return result;
}

}  // namespace spinsieve
