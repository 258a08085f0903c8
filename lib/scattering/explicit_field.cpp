#include "scattering/explicit_field.hpp"

#include <algorithm>

namespace spinsieve {

MomentField explicit_field(const SpaceGroup& group, std::span<const ListedComponent> components) {
  MomentField field;
  field.parameters = 1;
  for (const ListedComponent& listed : components) {
    auto arm = std::ranges::find(field.arms, listed.k, &FourierField::k);
    if (arm == field.arms.end()) {
      FourierField& added = field.arms.emplace_back();
      added.k = listed.k;
      added.self_conjugate = group.in_reciprocal_lattice(listed.k + listed.k);
      arm = field.arms.end() - 1;
    }
    const bool imaginary = std::ranges::any_of(
        listed.moment, [](const std::complex<double>& S) { return S.imag() != 0; });
    if (arm->self_conjugate && imaginary)
      throw Error(listed.place, "imaginary part of a moment at " + to_string(listed.position) +
                                    "; 2k is a reciprocal-lattice vector, so that components are "
                                    "real moments");
    for (const FieldAtom& other : arm->atoms) {
      if (group.in_lattice(other.position - listed.position))
        throw Error(listed.place, "the atom at " + to_string(listed.position) +
                                      " is listed twice for one wavevector; list each atom of a "
                                      "primitive cell once");
    }
    arm->atoms.push_back({listed.site, listed.position});
    arm->components.push_back(listed.moment);
  }
  return field;
}

}  // namespace spinsieve
