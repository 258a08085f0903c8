#pragma once

#include <ostream>
#include <string>

#include "symmetry/small_irrep.hpp"

namespace spinsieve {

/// Small irreps as a GAP record, for compare_characters.g: the space-group number, k, a basis of
/// the translations, the operations of the little group as augmented 4×4 matrices of rationals, and
/// for every irrep the characters of D on them. REQUIRES: k without free parameters.
class GapCases {
 public:
  explicit GapCases(std::ostream& out) : out_(out) { out_ << "cases:=[\n"; }
  GapCases(const GapCases&) = delete;
  GapCases& operator=(const GapCases&) = delete;
  ~GapCases() { out_ << "];;\n"; }

  void add(const LittleGroup& little_group) {
    const SpaceGroup& group = little_group.group();
    out_ << "rec(it:=" << group.number() << ",k:=" << text(little_group.k().constant)
         << ",lattice:=[";
    for (const FractionVector& row : primitive_basis(group)) out_ << text(row) << ",";
    out_ << "],\noperations:=[";
    for (const std::size_t i : little_group.operations())
      out_ << text(group.operations()[i]) << ",";
    out_ << "],\nirreps:=[";
    for (const SmallIrrep& irrep : small_irreps(little_group)) {
      out_ << "[";
      for (std::size_t i = 0; i < little_group.order(); ++i)
        out_ << text(little_group.phase(i), irrep.characters[i]) << ",";
      out_ << "],\n";
    }
    out_ << "]),\n";
  }

 private:
  static std::string text(const FractionVector& v) {
    return "[" + to_string(v[0]) + "," + to_string(v[1]) + "," + to_string(v[2]) + "]";
  }

  static std::string text(const Operation& g) {
    std::string rows = "[";
    for (std::size_t i = 0; i < 3; ++i) {
      rows += "[";
      for (const int entry : g.rotation[i]) rows += std::to_string(entry) + ",";
      rows += to_string(g.translation[i]) + "],";
    }
    return rows + "[0,0,0,1]]";
  }

  static std::string text(Phase phase, const IrrepMatrix::Trace& trace) {
    std::string sum;
    for (std::size_t i = 0; i < trace.size(); ++i)
      if (trace[i] != 0) sum += "+(" + std::to_string(trace[i]) + ")*E(24)^" + std::to_string(i);
    if (sum.empty()) return "0";
    return "E(" + std::to_string(phase.denominator()) + ")^" + std::to_string(phase.numerator()) +
           "*(" + sum.substr(1) + ")";
  }

  std::ostream& out_;
};

}  // namespace spinsieve
