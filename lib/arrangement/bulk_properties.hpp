#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <vector>

#include "arrangement/crystal_frame.hpp"
#include "arrangement/magnetic_point_group.hpp"

namespace spinsieve {

/// What symmetry leaves of a vector or tensor: each entry as a combination of independent ones.
struct TensorForm {
  std::size_t rows = 0;
  std::size_t columns = 0;
  std::size_t independent = 0;       ///< Number of free components; 0: forbidden.
  std::vector<std::string> entries;  ///< Row by row: "0", "xx", "-xy", "2mx".

  bool allowed() const noexcept { return independent > 0; }
};

/// "(mx,2mx,0)" for one row; otherwise rows in brackets: "[xx xy 0; -xy xx 0; 0 0 zz]".
std::string to_string(const TensorForm& form);

/// What a set of operations leaves of a moment, an axial vector that time reversal turns over: mx,
/// my, mz on the unit vectors along a, b, c. The operations need not be a whole group.
TensorForm moment_form(std::span<const PrimedRotation> operations);

/// Macroscopic effects that a magnetic point group allows.
///
/// Under an operation of rotation part R, with sign −1 for a primed one where the quantity changes
/// sign in time, moment and field H: axial, odd in time; polarisation and field E: polar, even;
/// stress: symmetric, even. Source: Nye, Physical Properties of Crystals (1985); Borovik-Romanov &
/// Grimmer, International Tables D (2003), 1.5.
struct BulkProperties {
  std::string magnetic_point_group;
  TensorForm net_moment;    ///< 1 × 3 on the unit vectors along a, b, c: mx, my, mz.
  TensorForm polarisation;  ///< 1 × 3 likewise: px, py, pz.
  /// The polarisation has more free components than in the parent group.
  bool polarisation_newly_allowed = false;
  /// M_i = Σ_j α_ij E_j, Cartesian; entry names are the indices ij.
  TensorForm linear_magnetoelectric;
  /// M_i = Σ_jk Λ_ijk σ_jk, Cartesian, rows i, columns jk = xx yy zz yz xz xy; entry names are the
  /// indices ijk, tensor components without the factor 2 of contracted notation.
  TensorForm piezomagnetic;
  std::string frame;  ///< The Cartesian frame of the two tensors, see CrystalFrame.
};

/// parent_rotations: all rotations of the paramagnetic group, on the same axes.
BulkProperties bulk_properties(const MagneticPointGroup& group,
                               std::span<const IntMatrix> parent_rotations);

}  // namespace spinsieve
