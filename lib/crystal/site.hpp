#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "exact/error.hpp"

namespace spinsieve {

/// One crystallographic site as given: label and an exact representative position.
struct Site {
  std::string label;
  FractionVector position;
  Place place;
};

/// One atom of an orbit: operation · first position = position + lattice vector.
struct OrbitAtom {
  FractionVector position;    ///< Reduced: components in [0, 1) of the conventional cell.
  std::size_t operation = 0;  ///< Lowest index of SpaceGroup::operations() that leads here.
};

/// All atoms of one site in one primitive cell, the listed position first, then in the order of
/// the operations that first reach them. The first atom's position is as given, not reduced; the
/// others are reduced modulo the integers with the smallest centring image.
class Orbit {
 public:
  Orbit(const SpaceGroup& group, const FractionVector& position);

  std::span<const OrbitAtom> atoms() const noexcept { return atoms_; }
  /// Indices of operations that fix the first atom modulo the lattice: the site group.
  std::span<const std::size_t> site_group() const noexcept { return site_group_; }

  struct Image {
    std::size_t atom;      ///< Where the atom goes.
    FractionVector shift;  ///< Lattice vector a: operation · r_j = r_atom + a, exactly.
  };
  Image image(const SpaceGroup& group, std::size_t operation, std::size_t atom) const;

 private:
  std::vector<OrbitAtom> atoms_;
  std::vector<std::size_t> site_group_;
  std::vector<std::uint8_t> atom_of_operation_;  ///< Where each operation sends the first atom.
};

/// Tolerance, in fractional coordinates, within which a site is moved to a special position.
inline const Fraction snap_tolerance{1, 10000};
/// Atoms of one orbit closer than this, in Å, are an error.
constexpr double shortest_contact = 0.5;

struct SnappedPosition {
  FractionVector position;
  bool moved = false;  ///< True when the position was changed, for the report.
};

/// Moves a position within snap_tolerance of a position of higher site symmetry onto it, exactly.
SnappedPosition snapped(const SpaceGroup& group, const FractionVector& position);

/// Throws Error when two atoms of one orbit, or two sites, are closer than shortest_contact (two
/// atoms of one orbit: offer the nearest simple fractions; two sites: name both labels).
void require_distinct_sites(const SpaceGroup& group, const Cell& cell, std::span<const Site> sites);

/// Independent directions in which the position may move without losing its site group, as
/// lattice-basis rows; empty at a fixed point. For printing (x,0,1/4) forms.
std::vector<FractionVector> free_directions(const SpaceGroup& group, const Orbit& orbit);

}  // namespace spinsieve
