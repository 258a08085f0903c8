#include "crystal/site.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdio>
#include <limits>

#include "crystal/fraction_matrix.hpp"

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

namespace {

/// A finite group of exact operations about one point, kept closed.
class PointStabiliser {
 public:
  /// Adds an operation and closes. False, and no change, when the group would not fix a point.
  bool add(const Operation& operation) {
    std::vector<Operation> trial = operations_;
    std::vector<Operation> fresh{operation};
    while (!fresh.empty()) {
      const Operation next = fresh.back();
      fresh.pop_back();
      const auto known = std::find_if(trial.begin(), trial.end(), [&next](const Operation& o) {
        return o.rotation == next.rotation;
      });
      if (known != trial.end()) {
        if (known->translation != next.translation) return false;  // A translation: no fixed point.
        continue;
      }
      trial.push_back(next);
      const std::size_t count = trial.size();
      for (std::size_t i = 0; i < count; ++i) {
        fresh.push_back(trial[i] * next);
        fresh.push_back(next * trial[i]);
      }
    }
    operations_ = std::move(trial);
    return true;
  }

  /// The mean of all images of a position, a point that every operation fixes.
  FractionVector fixed_point(const FractionVector& position) const {
    FractionVector sum{};
    for (const Operation& operation : operations_) sum = sum + operation.apply(position);
    return Fraction(1, static_cast<std::int64_t>(operations_.size())) * sum;
  }

 private:
  std::vector<Operation> operations_{Operation{}};
};

Fraction largest_component(const FractionVector& v) {
  Fraction largest;
  for (const Fraction x : v) largest = std::max(largest, std::max(x, -x));
  return largest;
}

struct NearbyImage {
  Fraction distance;  ///< Largest component of operation · position − position.
  Operation operation;
};

/// Operations, with lattice vectors, that move the position by at most the limit; nearest first.
std::vector<NearbyImage> nearby_images(const SpaceGroup& group, const FractionVector& position,
                                       Fraction limit) {
  std::vector<NearbyImage> images;
  for (const Operation& operation : group.operations())
    for (const FractionVector& centring : group.centrings()) {
      Operation moved = operation;
      moved.translation = moved.translation + centring;
      const FractionVector step = moved.apply(position) - position;
      for (std::size_t i = 0; i < 3; ++i)
        moved.translation[i] -= Fraction((step[i] + Fraction(1, 2)).floor());
      const Fraction distance = largest_component(moved.apply(position) - position);
      if (distance <= limit) images.push_back({distance, moved});
    }
  std::stable_sort(images.begin(), images.end(), [](const NearbyImage& a, const NearbyImage& b) {
    return a.distance < b.distance;
  });
  return images;
}

/// The special position of highest site symmetry within the tolerance, built up greedily.
FractionVector special_position(const SpaceGroup& group, const FractionVector& position,
                                Fraction tolerance) {
  PointStabiliser stabiliser;
  FractionVector best = position;
  // A point x within the tolerance e of a fixed point moves by at most (1 + Σ|R|) e per component,
  // and no row of a rotation in crystal axes exceeds 2 in sum: three of them are allowed for.
  for (const NearbyImage& image : nearby_images(group, position, Fraction(4) * tolerance)) {
    PointStabiliser trial = stabiliser;
    if (!trial.add(image.operation)) continue;
    const FractionVector fixed = trial.fixed_point(position);
    if (largest_component(fixed - position) > tolerance) continue;
    stabiliser = std::move(trial);
    best = fixed;
  }
  return best;
}

}  // namespace

SnappedPosition snapped(const SpaceGroup& group, const FractionVector& position) {
  const FractionVector special = special_position(group, position, snap_tolerance);
  return {special, special != position};
}

namespace {

std::string two_decimals(double value) {
  std::array<char, 32> text{};
  const int length = std::snprintf(text.data(), text.size(), "%.2f", value);
  return {text.data(), static_cast<std::size_t>(length)};
}

/// The shortest distance between two positions over all lattice vectors between nearby cells; the
/// images of one position onto itself are left out by the caller.
double shortest_distance(const SpaceGroup& group, const Cell& cell, const FractionVector& a,
                         const FractionVector& b) {
  double shortest = std::numeric_limits<double>::infinity();
  for (const FractionVector& centring : group.centrings()) {
    const Vector3 start = to_double(modulo_one(a - b + centring));
    for (int i = -2; i <= 1; ++i)
      for (int j = -2; j <= 1; ++j)
        for (int k = -2; k <= 1; ++k)
          shortest = std::min(shortest, cell.distance({start[0] + i, start[1] + j, start[2] + k}));
  }
  return shortest;
}

void require_open_orbit(const SpaceGroup& group, const Cell& cell, const Site& site,
                        const Orbit& orbit) {
  for (std::size_t j = 1; j < orbit.atoms().size(); ++j) {
    const double distance =
        shortest_distance(group, cell, site.position, orbit.atoms()[j].position);
    if (distance >= shortest_contact) continue;
    const double shortest_axis = std::min({cell.a(), cell.b(), cell.c()});
    // Two images at distance d surround a special position at d/2 or a little more.
    const Fraction reach(static_cast<std::int64_t>(std::ceil(1000 * distance / shortest_axis)),
                         1000);
    const FractionVector offered = special_position(group, site.position, reach);
    std::string message = "site " + site.label + " at " + to_string(site.position) +
                          ": two of its symmetry-equivalent atoms are " + two_decimals(distance) +
                          " Å apart; at least " + two_decimals(shortest_contact) + " Å are needed";
    if (offered != site.position)
      message += ", write " + to_string(offered) + " for the special position nearby";
    throw Error(site.place, message);
  }
}

}  // namespace

void require_distinct_sites(const SpaceGroup& group, const Cell& cell,
                            std::span<const Site> sites) {
  std::vector<Orbit> orbits;
  for (const Site& site : sites) {
    orbits.emplace_back(group, site.position);
    require_open_orbit(group, cell, site, orbits.back());
  }
  for (std::size_t i = 0; i < sites.size(); ++i)
    for (std::size_t j = 0; j < i; ++j)
      for (const OrbitAtom& atom : orbits[j].atoms()) {
        const double distance = shortest_distance(group, cell, sites[i].position, atom.position);
        if (distance < shortest_contact)
          throw Error(sites[i].place, "sites " + sites[j].label + " and " + sites[i].label +
                                          " are " + two_decimals(distance) + " Å apart; at least " +
                                          two_decimals(shortest_contact) +
                                          " Å are needed between two sites");
      }
}

std::vector<FractionVector> free_directions(const SpaceGroup& group, const Orbit& orbit) {
  std::vector<FractionVector> rows;
  for (const std::size_t g : orbit.site_group()) {
    const FractionMatrix R = to_fractions(group.operations()[g].rotation);
    for (std::size_t i = 0; i < 3; ++i) {
      FractionVector row = R[i];
      row[i] -= Fraction(1);
      rows.push_back(row);
    }
  }
  return null_space(rows);
}

}  // namespace spinsieve
