#pragma once

#include <array>
#include <complex>
#include <optional>
#include <string>
#include <vector>

#include "arrangement/candidate.hpp"
#include "arrangement/magnetic_group.hpp"
#include "crystal/cell.hpp"

namespace spinsieve {

/// An atom of the parent structure as a CIF lists it.
struct MagneticCifAtom {
  std::string label;        ///< "M1"; a second atom of the same label gets a suffix.
  std::string type;         ///< Symbol with charge, "Mn3+".
  FractionVector position;  ///< Parent coordinates, exact.
  double occupancy = 1;
  std::optional<double> b_iso;  ///< Å².
};

/// What both kinds of magnetic CIF say about the parent.
struct MagneticCifParent {
  std::string title;  ///< Becomes the name of the data block.
  Cell cell;
  int number = 0;      ///< Space group, 0 when not to be stated.
  std::string symbol;  ///< Hermann-Mauguin symbol of the setting in use.
  std::vector<FractionVector> propagation;
};

/// A commensurate arrangement. The atoms must hold at least one of each orbit of the magnetic
/// group; all atoms of a magnetic cell will do, the file lists each orbit once.
struct CommensurateStructure {
  MagneticCifParent parent;
  MagneticGroup group;
  std::vector<MagneticCifAtom> atoms;
  /// One for each atom, zero for those without: µB along a/|a|, b/|b|, c/|c| of the parent.
  std::vector<Vector3> moments;
};

/// A modulated arrangement with one wavevector: m_j(L) = S_j exp(2πi k·L) + complex conjugate.
struct ModulatedStructure {
  MagneticCifParent parent;  ///< With one propagation vector.
  std::vector<SuperspaceOperation> operations;
  std::vector<FractionVector> centrings;  ///< Of the parent lattice, the zero vector included.
  std::vector<MagneticCifAtom> atoms;     ///< At least one of each orbit, as above.
  /// One for each atom: µB along a/|a|, b/|b|, c/|c|, counted from the listed position.
  std::vector<std::array<std::complex<double>, 3>> components;
};

/// The cell in which a commensurate arrangement is written: multiples of the parent's axes when
/// all operations are integer matrices there, otherwise the standard BNS setting.
BasisTransformation magnetic_cell(const MagneticGroup& group);

/// Text of a magnetic CIF. Source: IUCr magnetic CIF dictionary (COMCIFS), with the modulated
/// structures dictionary for the second: cosine amplitude 2 Re S', sine amplitude −2 Im S', where
/// S'_j = S_j exp(−2πi k·r_j) refers to x4 = k·r.
/// Throws std::logic_error when equivalent atoms have moments that do not follow from each other.
std::string magnetic_cif(const CommensurateStructure& structure);
std::string magnetic_cif(const ModulatedStructure& structure);

/// "-x1,-x2,x3+1/2,x1-x4+1/4,-1": how the operation acts in superspace, x4 = k·r.
std::string superspace_text(const SuperspaceOperation& operation, const FractionVector& k);

}  // namespace spinsieve
