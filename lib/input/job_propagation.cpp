#include <algorithm>
#include <array>
#include <numeric>
#include <utility>

#include "input/job_parts.hpp"

namespace spinsieve {

namespace {

/// Largest denominator with which a wavevector can be meant as commensurate.
constexpr std::int64_t largest_commensurate_denominator = 1000;

std::string in_brackets(const Wavevector& k) { return "k = (" + to_string(k) + ")"; }

/// Least common denominator, or more than the limit when it exceeds it.
std::int64_t common_denominator(const FractionVector& k, std::int64_t limit) {
  std::int64_t common = 1;
  for (const Fraction component : k) {
    const std::int64_t factor = component.denominator() / std::gcd(common, component.denominator());
    if (factor > limit / common) return limit + 1;
    common *= factor;
  }
  return common;
}

/// Number of independent rows.
int rank(std::array<FractionVector, 3> rows) {
  std::size_t found = 0;
  for (std::size_t column = 0; column < 3; ++column) {
    std::size_t pivot = found;
    while (pivot < 3 && rows[pivot][column].is_zero()) ++pivot;
    if (pivot == 3) continue;
    std::swap(rows[found], rows[pivot]);
    for (std::size_t row = found + 1; row < 3; ++row)
      rows[row] = rows[row] - rows[row][column] / rows[found][column] * rows[found];
    ++found;
  }
  return static_cast<int>(found);
}

void require_sound_parameters(const Node& node, const Wavevector& k) {
  constexpr std::string_view names = "uvw";
  for (std::size_t p = 0; p < names.size(); ++p) {
    const bool written = std::ranges::any_of(node.items, [names, p](const Node& item) {
      return item.text.find(names[p]) != std::string::npos;
    });
    if (written && k.along[p] == FractionVector{})
      throw Error(node.place, "the parameter " + std::string(1, names[p]) + " cancels in " +
                                  in_brackets(k) + "; leave it out");
  }
  if (rank(k.along) < k.free_parameters())
    throw Error(node.place, in_brackets(k) + " has " + std::to_string(k.free_parameters()) +
                                " free parameters but varies in " + std::to_string(rank(k.along)) +
                                (rank(k.along) == 1 ? " direction" : " directions") +
                                "; accepted is one parameter for each, such as (u, u, 0) or "
                                "(u, v, 0)");
}

Wavevector wavevector_of(const Node& node, Job& job) {
  if (node.kind == NodeKind::text)
    throw Error(node.place, "a propagation vector is a list of 3 components; write [[0, 0, 1/2]]");
  Wavevector k;
  const std::span<const Node> items = list_of(node, "a propagation vector", 3);
  for (std::size_t i = 0; i < 3; ++i) {
    const Node& item = items[i];
    try {
      parse_component(text_of(item, "a component of a propagation vector"), i, k);
    } catch (const Error& fault) {
      throw fault.at(item.place);
    }
    const Fraction value = k.constant[i];
    if (value.denominator() > largest_denominator || value > Fraction(1000) ||
        value < Fraction(-1000))
      throw Error(item.place,
                  "component " + in_quotes(item.text) +
                      " of a propagation vector is out of range; accepted is a fraction "
                      "or a decimal of at most 9 digits within ±1000");
    if (item.text.find_first_not_of("+-.0123456789 ") != std::string::npos) continue;
    const Fraction few = likely_fraction(item.text, 6, 2);
    const Fraction likely = few == value ? likely_fraction(item.text, 12, 3) : few;
    if (likely != value)
      job.notes.push_back({item.place, "component " + in_quotes(item.text) + " is taken as " +
                                           to_string(value) + " exactly; write " +
                                           to_string(likely) + " if that is meant"});
  }
  require_sound_parameters(node, k);
  return k;
}

void apply_modulation(const Node& node, const Wavevector& k, Job& job) {
  const std::int64_t denominator = common_denominator(k.constant, largest_denominator);
  if (job.search.modulation == Modulation::commensurate) {
    if (k.is_symbolic())
      throw Error(node.place, in_brackets(k) +
                                  " has free parameters, so that it is not "
                                  "commensurate; give numbers or another modulation");
    if (denominator > largest_commensurate_denominator)
      throw Error(node.place,
                  in_brackets(k) + " has the common denominator " +
                      (denominator > largest_denominator ? "above 1000000000"
                                                         : std::to_string(denominator)) +
                      "; commensurate is accepted up to " +
                      std::to_string(largest_commensurate_denominator));
  }
  if (job.search.modulation != Modulation::automatic || k.is_symbolic()) return;
  if (denominator > commensurate_denominator)
    job.notes.push_back({node.place, in_brackets(k) +
                                         " is taken as incommensurate: its common "
                                         "denominator is above " +
                                         std::to_string(commensurate_denominator)});
}

bool lattice_equal(const SpaceGroup& group, const Wavevector& a, const Wavevector& b) {
  return a.along == b.along && group.in_reciprocal_lattice(a.constant - b.constant);
}

/// Repeated vectors are errors, further arms of a star only doubtful.
void compare_vectors(const Node& node, Job& job) {
  for (std::size_t j = 1; j < job.propagation.size(); ++j) {
    for (std::size_t i = 0; i < j; ++i) {
      const Wavevector& a = job.propagation[i];
      const Wavevector& b = job.propagation[j];
      const std::string pair =
          "propagation vectors " + std::to_string(i + 1) + " and " + std::to_string(j + 1);
      if (lattice_equal(job.group, a, b) || lattice_equal(job.group, -a, b))
        throw Error(
            node.items[j].place,
            pair + " are the same up to a reciprocal-lattice vector and a sign; leave one out");
      for (const Operation& operation : job.group.operations()) {
        const Wavevector image = row_times(a, operation.rotation);
        if (!lattice_equal(job.group, image, b) && !lattice_equal(job.group, -image, b)) continue;
        job.warnings.push_back(
            {node.items[j].place,
             pair + " belong to one star; 'arms: all' treats a star as a whole"});
        break;
      }
    }
  }
}

/// The atom of a magnetic site at a position, lattice vectors apart.
struct FoundAtom {
  std::size_t site = 0;
  FractionVector position;
};

FoundAtom atom_at(const Node& node, const Job& job) {
  const FractionVector given = position_of(node, "position");
  const FractionVector position = snapped(job.group, given).position;
  for (std::size_t s = 0; s < job.magnetic_sites.size(); ++s) {
    const Orbit orbit(job.group, job.magnetic_sites[s].site.position);
    for (const OrbitAtom& atom : orbit.atoms())
      if (job.group.in_lattice(position - atom.position)) return {s, position};
  }
  std::string choices;
  for (const MagneticSite& site : job.magnetic_sites)
    choices += (choices.empty() ? "" : ", ") + site.site.label + " at (" +
               to_string(site.site.position) + ")";
  throw Error(node.place, "no magnetic atom is at (" + to_string(given) +
                              "); accepted are atoms equivalent to " + choices);
}

std::array<std::complex<double>, 3> moment_of(const Node& node, const Wavevector& k,
                                              const SpaceGroup& group) {
  constexpr Limits limits{.at_least = -100, .at_most = 100, .unit = "µB"};
  const bool real = group.in_reciprocal_lattice(Fraction(2) * k.constant);
  const std::span<const Node> items = list_of(node, "moment", 3);
  std::array<std::complex<double>, 3> moment{};
  for (std::size_t i = 0; i < 3; ++i) {
    if (items[i].kind == NodeKind::text) {
      moment[i] = number_of(items[i], "moment component", limits);
      continue;
    }
    const std::span<const Node> parts = list_of(items[i], "moment component", 2);
    moment[i] = {number_of(parts[0], "moment component", limits),
                 number_of(parts[1], "moment component", limits)};
    if (real && moment[i].imag() != 0)
      throw Error(parts[1].place, "imaginary part " + in_quotes(parts[1].text) + ", but with " +
                                      in_brackets(k) +
                                      " every moment is real (2k is a reciprocal-lattice vector); "
                                      "accepted is 0");
  }
  return moment;
}

}  // namespace

void read_propagation(const Node& node, Job& job) {
  if (node.kind == NodeKind::text) {
    if (node.text != "locate")
      throw Error(node.place, "propagation " + in_quotes(node.text) +
                                  " is unknown; accepted is a list of vectors such as "
                                  "[[0, 0, 1/2]], or locate");
    job.locate_propagation = true;
    return;
  }
  for (const Node& item : list_of(node, "propagation")) {
    const Wavevector k = wavevector_of(item, job);
    apply_modulation(item, k, job);
    job.propagation.push_back(k);
    job.propagation_places.push_back(item.place);
  }
  try {
    compare_vectors(node, job);
  } catch (const Error& fault) {
    throw fault.at(node.place);
  }
}

void read_arrangement(const Node& node, Job& job) {
  if (job.propagation.empty())
    throw Error(node.place, "an arrangement needs 'propagation' with at least one vector");
  if (job.magnetic_sites.empty()) throw Error(node.place, "an arrangement needs 'magnetic_sites'");
  constexpr std::array<std::string_view, 3> keys{"k", "position", "moment"};
  for (const Node& item : list_of(node, "arrangement")) {
    const Fields fields(item, "an arrangement entry", keys);
    ArrangementEntry entry;
    entry.place = item.place;
    const int count = static_cast<int>(job.propagation.size());
    const Node* index = count == 1 ? fields.find("k") : &fields.require("k");
    if (index != nullptr)
      entry.wavevector = static_cast<std::size_t>(integer_of(*index, "k", 1, count)) - 1;
    const Wavevector& k = job.propagation[entry.wavevector];
    if (k.is_symbolic())
      throw Error(item.place,
                  in_brackets(k) + " has free parameters; an arrangement needs numbers");
    try {
      const FoundAtom atom = atom_at(fields.require("position"), job);
      entry.site = atom.site;
      entry.position = atom.position;
    } catch (const Error& fault) {
      throw fault.at(item.place);
    }
    entry.moment = moment_of(fields.require("moment"), k, job.group);
    for (const ArrangementEntry& other : job.arrangement)
      if (other.wavevector == entry.wavevector &&
          job.group.in_lattice(other.position - entry.position))
        throw Error(item.place, "the atom at (" + to_string(entry.position) +
                                    ") is listed already, on line " +
                                    std::to_string(other.place.line()) +
                                    "; accepted is one entry for each atom of a primitive cell");
    job.arrangement.push_back(entry);
  }
}

}  // namespace spinsieve
