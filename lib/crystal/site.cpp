#include "crystal/site.hpp"

#include <algorithm>
#include <array>

namespace spinsieve {

Orbit::Orbit(const SpaceGroup& group, const FractionVector& position) {
  const FractionVector first = group.lattice_reduced(position);
  std::vector<FractionVector> reduced;
  atom_of_operation_.resize(group.order());
  for (std::size_t g = 0; g < group.order(); ++g) {
    const FractionVector image = group.lattice_reduced(group.operations()[g].apply(position));
    const auto found = std::find(reduced.begin(), reduced.end(), image);
    atom_of_operation_[g] = static_cast<std::uint8_t>(found - reduced.begin());
    if (found == reduced.end()) {
      reduced.push_back(image);
      atoms_.push_back({g == 0 ? position : image, g});
    }
    if (image == first) site_group_.push_back(g);
  }
}

Orbit::Image Orbit::image(const SpaceGroup& group, std::size_t operation, std::size_t atom) const {
  // Operation atoms_[atom].operation sends the first atom to this one, modulo the lattice.
  const std::size_t to = atom_of_operation_[group.product(operation, atoms_[atom].operation)];
  const FractionVector moved = group.operations()[operation].apply(atoms_[atom].position);
  return {to, moved - atoms_[to].position};
}

}  // namespace spinsieve
