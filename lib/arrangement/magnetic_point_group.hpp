#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "crystal/spglib.hpp"

namespace spinsieve {

/// A point operation on the crystal axes, with or without time reversal.
struct PrimedRotation {
  IntMatrix rotation = Operation{}.rotation;
  bool primed = false;

  /// First b, then a.
  friend PrimedRotation operator*(const PrimedRotation& a, const PrimedRotation& b) {
    return {product(a.rotation, b.rotation), a.primed != b.primed};
  }
  friend bool operator==(const PrimedRotation& a, const PrimedRotation& b) = default;
};

/// The rotation parts of operations, each once; those of a group with a primed translation come
/// primed and unprimed.
std::vector<PrimedRotation> point_operations(std::span<const PrimedOperation> operations);

/// One of the 122 crystallographic magnetic point groups, on any axes.
class MagneticPointGroup {
 public:
  /// All operations of the group, in any order. Throws Error when they are not one of the 122.
  explicit MagneticPointGroup(std::span<const PrimedRotation> operations);

  std::span<const PrimedRotation> operations() const noexcept { return operations_; }
  /// "4'/mmm'", "mmm1'"; the orientation of the axes does not show in it.
  const std::string& symbol() const noexcept { return symbol_; }
  int type() const noexcept { return type_; }  ///< 1 no primes, 2 grey, 3 black and white.
  /// Number of different rotations, primes ignored.
  std::size_t rotation_count() const;
  /// A small set of operations that generates all others.
  std::vector<PrimedRotation> generators() const;

 private:
  std::vector<PrimedRotation> operations_;
  std::string symbol_;
  int type_ = 1;
};

/// A row of the table of magnetic point groups: symbol and operations on standard axes.
struct TabulatedPointGroup {
  std::string symbol;
  int type = 1;
  std::vector<PrimedRotation> operations;
};

/// All 122. Source: International Tables A (2016), 3.6; Litvin, Magnetic Group Tables (2013).
std::span<const TabulatedPointGroup> magnetic_point_groups();

}  // namespace spinsieve
