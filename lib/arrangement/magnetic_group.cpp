#include "arrangement/magnetic_group.hpp"

#include <algorithm>
#include <optional>
#include <tuple>

#include "arrangement/magnetic_database.hpp"
#include "exact/error.hpp"

namespace spinsieve {
namespace {

/// How the primitive coordinates y of a group go to those of a reference: A y + a.
struct Match {
  const MagneticReference* reference = nullptr;
  IntMatrix A;
  std::vector<Fraction> right_side;  ///< Of the congruences for a.
};

/// axes(reference) · N · axes(group)⁻¹ when it is an integer matrix.
std::optional<IntMatrix> basis_change(const PrimitiveMagneticGroup& group,
                                      const MagneticReference& reference, const IntMatrix& N) {
  const IntMatrix X = group.axes();
  const int index = determinant(X);
  IntMatrix adjugate{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      adjugate[i][j] = X[(j + 1) % 3][(i + 1) % 3] * X[(j + 2) % 3][(i + 2) % 3] -
                       X[(j + 1) % 3][(i + 2) % 3] * X[(j + 2) % 3][(i + 1) % 3];
  IntMatrix A = product(product(reference.group.axes(), N), adjugate);
  for (auto& row : A)
    for (int& x : row) {
      if (x % index != 0) return std::nullopt;
      x /= index;
    }
  return A;
}

/// The match with this change of axes, when every generator of the reference is an operation of the
/// group and an origin exists for all of them together.
std::optional<Match> match(const PrimitiveMagneticGroup& group, const MagneticReference& reference,
                           const IntMatrix& N) {
  const std::optional<IntMatrix> A = basis_change(group, reference, N);
  if (!A) return std::nullopt;
  if (group.antitranslation() &&
      !is_integer(times(*A, *group.antitranslation()) - *reference.group.antitranslation()))
    return std::nullopt;
  const IntMatrix inverse_A = inverse(*A);
  Match result{&reference, *A, {}};
  result.right_side.reserve(3 * reference.generators.size());
  for (const auto& generator : reference.generators) {
    const auto* element = group.find(product(inverse_A, product(generator.rotation, *A)));
    if (element == nullptr || element->primed != generator.primed) return std::nullopt;
    const FractionVector rest = generator.translation - times(*A, element->translation);
    result.right_side.insert(result.right_side.end(), rest.begin(), rest.end());
  }
  if (!reference.origin.solvable(result.right_side)) return std::nullopt;
  return result;
}

/// Smaller for a plainer matrix or vector: few entries, small ones, few signs.
template <typename Entries>
std::tuple<int, Fraction, int> plainness(const Entries& entries) {
  int nonzero = 0;
  int negative = 0;
  Fraction size;
  for (const Fraction x : entries) {
    if (x.is_zero()) continue;
    ++nonzero;
    if (x < Fraction(0)) ++negative;
    size += (x < Fraction(0) ? -x : x) + Fraction(x.denominator() - 1);
  }
  return {nonzero, size, negative};
}

std::array<Fraction, 9> entries(const FractionMatrix& matrix) {
  std::array<Fraction, 9> result;
  for (std::size_t i = 0; i < 9; ++i) result.at(i) = matrix[i / 3][i % 3];
  return result;
}

FractionMatrix basis_matrix(const PrimitiveMagneticGroup& group, const Match& match) {
  return product(
      group.lattice().columns(),
      product(to_fractions(inverse(match.A)), inverse(match.reference->group.lattice().columns())));
}

/// Moves p along the free directions until as many components as possible vanish.
FractionVector without_free_part(FractionVector p, std::vector<FractionVector> directions) {
  for (std::size_t i = 0; i < directions.size(); ++i) {
    const auto pivot = static_cast<std::size_t>(
        std::ranges::find_if(directions[i], [](Fraction x) { return !x.is_zero(); }) -
        directions[i].begin());
    if (pivot == 3) continue;
    p = p - (p[pivot] / directions[i][pivot]) * directions[i];
    for (std::size_t j = i + 1; j < directions.size(); ++j)
      directions[j] = directions[j] - (directions[j][pivot] / directions[i][pivot]) * directions[i];
  }
  return p;
}

/// The plainest origin shift, in parent coordinates, among all that do for this match.
FractionVector plainest_origin(const PrimitiveMagneticGroup& group, const Match& match) {
  const FractionMatrix back = product(group.lattice().columns(), to_fractions(inverse(match.A)));
  std::vector<FractionVector> directions;
  for (const IntVector& v : match.reference->origin.free_directions())
    directions.push_back(
        times(back, FractionVector{Fraction(v[0]), Fraction(v[1]), Fraction(v[2])}));
  std::optional<FractionVector> best;
  for (const FractionVector& a : match.reference->origin.solutions(match.right_side)) {
    // x_parent = B A⁻¹ (y_reference − a), so the standard origin y = 0 lies at −B A⁻¹ a.
    const FractionVector start =
        group.lattice().reduced(without_free_part(Fraction(-1) * times(back, a), directions));
    for (int corner = 0; corner < 8; ++corner) {
      FractionVector p = start;
      for (std::size_t i = 0; i < 3; ++i)
        if ((corner >> i & 1) != 0) p = p - group.lattice().basis()[i];
      p = without_free_part(p, directions);
      if (!best || std::tuple(plainness(p), p) < std::tuple(plainness(*best), *best)) best = p;
    }
  }
  return best.value();
}

std::string combination(const FractionVector& coefficients) {
  std::string result;
  for (std::size_t i = 0; i < 3; ++i) {
    const Fraction x = coefficients[i];
    if (x.is_zero()) continue;
    if (x < Fraction(0))
      result += '-';
    else if (!result.empty())
      result += '+';
    const Fraction size = x < Fraction(0) ? -x : x;
    if (size != Fraction(1)) result += to_string(size);
    result += static_cast<char>('a' + static_cast<char>(i));
  }
  return result;
}

/// The standard operations, by (P, p), are those of the group: none missing, none left over.
bool reproduces(const PrimitiveMagneticGroup& group, std::span<const PrimedOperation> operations,
                const MagneticReference& reference, const BasisTransformation& transformation) {
  if (group.elements().size() != reference.group.elements().size() ||
      group.type() != reference.group.type())
    return false;
  const RationalLattice& lattice = reference.group.lattice();
  return std::ranges::all_of(operations, [&](const PrimedOperation& given) {
    const Operation standard = transformed(given.operation, transformation);
    const auto rotation = to_integers(lattice.in_basis(standard.rotation));
    const auto* element = rotation ? reference.group.find(*rotation) : nullptr;
    if (element == nullptr) return false;
    FractionVector rest = lattice.coordinates(standard.translation) - element->translation;
    if (reference.group.antitranslation()) {
      if (given.primed) rest = rest - *reference.group.antitranslation();
    } else if (given.primed != element->primed) {
      return false;
    }
    return is_integer(rest);
  });
}

std::vector<PrimedOperation> parent_operations(const PrimitiveMagneticGroup& group) {
  const RationalLattice& lattice = group.lattice();
  const FractionMatrix to_coordinates = inverse(lattice.columns());
  std::vector<PrimedOperation> result;
  for (const auto& element : group.elements()) {
    Operation operation;
    operation.rotation =
        to_integers(
            product(lattice.columns(), product(to_fractions(element.rotation), to_coordinates)))
            .value();
    operation.translation = lattice.vector(element.translation);
    result.push_back({operation, element.primed});
  }
  if (group.antitranslation()) {
    const std::size_t count = result.size();
    for (std::size_t i = 0; i < count; ++i) {
      Operation operation = result[i].operation;
      operation.translation =
          lattice.vector(modulo_one(group.elements()[i].translation + *group.antitranslation()));
      result.push_back({operation, true});
    }
  }
  return result;
}

}  // namespace

std::string to_string(const BasisTransformation& transformation) {
  const FractionMatrix vectors = transpose(transformation.P);
  std::string result;
  for (std::size_t i = 0; i < 3; ++i) result += (i == 0 ? "" : ",") + combination(vectors[i]);
  for (std::size_t i = 0; i < 3; ++i) {
    result += i == 0 ? ';' : ',';
    result += to_string(transformation.p[i]);
  }
  return result;
}

Operation transformed(const Operation& operation, const BasisTransformation& transformation) {
  const FractionMatrix inverse_P = inverse(transformation.P);
  const std::optional<IntMatrix> R =
      to_integers(product(inverse_P, product(to_fractions(operation.rotation), transformation.P)));
  if (!R)
    throw Error("operation " + to_string(operation) + " has no integer matrix in the basis " +
                to_string(transformation));
  return {*R, times(inverse_P, operation.apply(transformation.p) - transformation.p)};
}

MagneticGroup MagneticGroup::from_operations(std::span<const PrimedOperation> operations,
                                             std::span<const FractionVector> lattice_generators) {
  const PrimitiveMagneticGroup group(operations, lattice_generators);
  std::vector<Match> matches;
  for (const MagneticReference& reference : magnetic_references(group)) {
    for (const IntMatrix& N : axis_changes(group.system()))
      if (auto found = match(group, reference, N)) matches.push_back(*std::move(found));
    if (!matches.empty()) break;
  }
  if (matches.empty())
    throw Error("the " + std::to_string(operations.size()) +
                " operations given are not those of a magnetic space group");

  std::vector<FractionMatrix> matrices;
  for (const Match& candidate : matches) matrices.push_back(basis_matrix(group, candidate));
  const auto plain = [](const FractionMatrix& matrix) {
    return std::tuple(plainness(entries(matrix)), -(matrix[0][0] + matrix[1][1] + matrix[2][2]));
  };
  const auto least = plain(*std::ranges::min_element(matrices, {}, plain));
  std::optional<BasisTransformation> best;
  for (std::size_t i = 0; i < matches.size(); ++i) {
    if (plain(matrices[i]) != least) continue;
    const BasisTransformation candidate{matrices[i], plainest_origin(group, matches[i])};
    const auto rank = [](const BasisTransformation& t) {
      return std::tuple(plainness(t.p), entries(t.P), t.p);
    };
    if (!best || rank(candidate) < rank(*best)) best = candidate;
  }

  MagneticGroup result;
  result.uni_number_ = matches.front().reference->uni_number;
  result.type_ = group.type();
  result.transformation_ = *best;
  result.lattice_ = group.lattice();
  result.operations_ = parent_operations(group);
  if (!reproduces(group, result.operations_, *matches.front().reference, *best))
    throw Error("the " + std::to_string(operations.size()) +
                " operations given are not closed under multiplication");
  return result;
}

std::string MagneticGroup::bns_number() const {
  return std::string(magnetic_symbols(uni_number_).bns_number);
}

std::string MagneticGroup::bns_symbol() const {
  return std::string(magnetic_symbols(uni_number_).bns_symbol);
}

std::string MagneticGroup::og_number() const {
  return std::string(magnetic_symbols(uni_number_).og_number);
}

std::string MagneticGroup::og_symbol() const {
  return std::string(magnetic_symbols(uni_number_).og_symbol);
}

}  // namespace spinsieve
