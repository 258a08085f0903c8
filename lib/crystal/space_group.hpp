#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "crystal/operation.hpp"

namespace spinsieve {

/// A space group in one definite setting, with the tables every later stage reads.
///
/// operations() holds one representative of each coset of the translation lattice, identity first,
/// translations reduced into one primitive cell in a canonical way (see lattice_reduced). The
/// lattice is the integers plus centrings(). A group may come from the 530 tabulated Hall settings
/// or from any list of operations, e.g. of a CIF in an odd setting.
class SpaceGroup {
 public:
  /// The tabulated setting 1 … 530 (order of International Tables B, A1.4.2.7).
  /// Throws Error outside that range.
  static SpaceGroup from_hall_number(int hall_number);

  /// The International Tables standard setting of a number 1 … 230: unique axis b and cell choice
  /// 1, hexagonal axes, origin 2. Throws Error outside the range.
  static SpaceGroup from_number(int number);

  /// From a closed or generating list of operations, centring translations included. Any axes, any
  /// origin. Throws Error when the list does not generate a space group on this lattice (more than
  /// 48 rotations, a translation of unbounded denominator, a rotation that breaks the lattice).
  static SpaceGroup from_operations(std::span<const Operation> operations);

  int number() const noexcept { return number_; }            ///< 1 … 230.
  int hall_number() const noexcept { return hall_number_; }  ///< 0 when in no tabulated setting.
  const std::string& symbol() const noexcept { return symbol_; }  ///< Full Hermann-Mauguin, spaced.
  const std::string& short_symbol() const noexcept { return short_symbol_; }
  const std::string& hall_symbol() const noexcept { return hall_symbol_; }
  const std::string& setting() const noexcept { return setting_; }  ///< "b1", "2", "H", "cab", "".

  std::span<const Operation> operations() const noexcept { return operations_; }
  std::size_t order() const noexcept { return operations_.size(); }  ///< Of the point group.
  std::span<const FractionVector> centrings() const noexcept { return centrings_; }  ///< First: 0.

  /// Index of R_a R_b among operations().
  std::size_t product(std::size_t a, std::size_t b) const { return product_[a * order() + b]; }
  std::size_t inverse(std::size_t a) const { return inverse_[a]; }
  std::optional<std::size_t> find_rotation(const IntMatrix& R) const;

  /// A shift s such that in coordinates x − s every translation is a multiple of 1/24 modulo the
  /// lattice. Zero for all tabulated settings.
  const FractionVector& origin_shift() const noexcept { return origin_shift_; }

  bool in_lattice(const FractionVector& v) const;  ///< Integer or a centring, modulo integers.
  FractionVector lattice_reduced(const FractionVector& v) const;  ///< Canonical modulo the lattice.
  /// Integer product with every lattice vector.
  bool in_reciprocal_lattice(const FractionVector& k) const;

  bool is_centrosymmetric() const;
  /// Some direction is kept by every rotation: true for the 10 polar point groups.
  bool is_polar() const;

 private:
  friend class SpaceGroupBuilder;
  int number_ = 1;
  int hall_number_ = 0;
  std::string symbol_, short_symbol_, hall_symbol_, setting_;
  std::vector<Operation> operations_;
  std::vector<FractionVector> centrings_;
  std::vector<std::uint8_t> product_, inverse_;
  FractionVector origin_shift_{};
};

/// Finds a setting from a number ("62"), a Hermann-Mauguin symbol (short or full, with or without
/// spaces, letter case of the lattice letter free, settings ":1 :2 :H :R", "P b n m") or a Hall
/// symbol ("-P 2ac 2n"). Without a suffix the International Tables standard is meant.
/// Throws Error that quotes the text and names the nearest known symbols.
SpaceGroup parse_space_group(std::string_view text);

/// Finds a setting from its Hall symbol alone; some, such as "P 2", also read as Hermann-Mauguin
/// symbols of another setting, which parse_space_group prefers. Throws Error that quotes the text.
SpaceGroup parse_hall_symbol(std::string_view text);

/// Rotations, in the axes of the group, of every symmetry of its lattice: the integer matrices
/// that keep the lattice and every metric tensor the group allows. Identity first.
std::vector<IntMatrix> holohedry(const SpaceGroup& group);

/// Rows: a basis of the primitive lattice, in conventional fractional coordinates, right-handed.
std::array<FractionVector, 3> primitive_basis(const SpaceGroup& group);

}  // namespace spinsieve
