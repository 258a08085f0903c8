#include "symmetry/small_irrep.hpp"

#include <algorithm>
#include <array>
#include <numeric>
#include <stdexcept>

namespace spinsieve {

namespace {

using Trace = IrrepMatrix::Trace;

/// −1, 0, 1 as a comes before, equals or comes after b: larger real part first, then larger
/// imaginary part. Exact although computed in doubles: twice a part of the difference of two
/// traces (sums of at most six 24th roots of unity each) is an algebraic integer whose conjugates
/// are at most 24 in magnitude in a field of degree 4, so if not zero it exceeds 24⁻³ ≈ 7e-5.
int compare(const Trace& a, const Trace& b) {
  if (a == b) return 0;
  static const std::array<std::complex<double>, 8> basis = [] {
    std::array<std::complex<double>, 8> powers;
    for (int k = 0; k < 8; ++k) powers[static_cast<std::size_t>(k)] = Phase(k, 24).factor();
    return powers;
  }();
  constexpr double gap = 1e-6;
  std::complex<double> difference = 0;
  for (std::size_t i = 0; i < 8; ++i) difference += static_cast<double>(a[i] - b[i]) * basis[i];
  if (std::abs(difference.real()) > gap) return difference.real() > 0 ? -1 : 1;
  return difference.imag() > 0 ? -1 : 1;
}

struct CanonicalIrrep {
  ProjectiveIrrep matrices;
  std::vector<Trace> characters;
};

bool listed_before(const CanonicalIrrep& a, const CanonicalIrrep& b) {
  const int dimension_a = a.matrices[0].dimension();
  const int dimension_b = b.matrices[0].dimension();
  if (dimension_a != dimension_b) return dimension_a < dimension_b;
  for (std::size_t i = 0; i < a.characters.size(); ++i)
    if (const int order = compare(a.characters[i], b.characters[i])) return order < 0;
  return false;
}

IntVector row_sum(const IntVector& a, const IntVector& b) {
  return {a[0] + b[0], a[1] + b[1], a[2] + b[2]};
}

IntVector negative(const IntVector& a) { return {-a[0], -a[1], -a[2]}; }

/// K·((R − 1) s + t) in 24ths, with s and t the translations of two operations.
int conjugation_exponent(const SymmetryTables& tables, const IntVector& K, std::size_t of_s,
                         const IntMatrix& R, std::size_t of_t) {
  const IntVector turned = row_sum(row_times(K, R), negative(K));
  return tables.exponent(turned, of_s) + tables.exponent(K, of_t);
}

Reality herring(const LittleGroup& little_group, const std::vector<Trace>& characters) {
  const SymmetryTables& tables = little_group.tables();
  const SpaceGroup& group = little_group.group();
  std::array<int, 8> sum{};
  for (const std::size_t a : little_group.reversing()) {
    // K = kR + k, exact also with parameters, since those cancel.
    const IntMatrix& R = group.operations()[a].rotation;
    const FractionVector k = little_group.k().constant;
    const FractionVector exact = row_times(k, R) + k;
    const IntVector K{static_cast<int>(exact[0].numerator()),
                      static_cast<int>(exact[1].numerator()),
                      static_cast<int>(exact[2].numerator())};
    const std::optional<std::size_t> square = little_group.position(group.product(a, a));
    if (!square)
      throw std::logic_error("the square of a reversing operation left the little group");
    const Trace term = times_root(characters[*square], -tables.exponent(K, a));
    for (std::size_t i = 0; i < 8; ++i) sum[i] += term[i];
  }
  for (std::size_t i = 1; i < 8; ++i)
    if (sum[i] != 0) throw std::logic_error("a Herring sum that is not an integer");
  const int order = static_cast<int>(little_group.order());
  if (sum[0] == order) return Reality::real;
  if (sum[0] == -order) return Reality::pseudoreal;
  if (sum[0] != 0) throw std::logic_error("a Herring sum outside 1, 0, -1");
  return Reality::complex;
}

IntVector reversal_vector(const LittleGroup& little_group, std::size_t a) {
  const FractionVector& k = little_group.k().constant;
  const FractionVector exact = row_times(k, little_group.group().operations()[a].rotation) + k;
  return {static_cast<int>(exact[0].numerator()), static_cast<int>(exact[1].numerator()),
          static_cast<int>(exact[2].numerator())};
}

/// Characters of P of the irrep g → D(a⁻¹ g a)*, with a taking k to −k.
std::vector<Trace> reversed_characters(const LittleGroup& little_group,
                                       const std::vector<Trace>& characters) {
  const SymmetryTables& tables = little_group.tables();
  const SpaceGroup& group = little_group.group();
  const std::size_t a = little_group.reversing().front();
  const std::size_t a_inverse = group.inverse(a);
  // K = kA⁻¹ + k.
  const IntVector K = reversal_vector(little_group, a_inverse);
  std::vector<Trace> result(characters.size());
  for (std::size_t i = 0; i < characters.size(); ++i) {
    const std::size_t g = little_group.operations()[i];
    const std::size_t image = group.product(group.product(a_inverse, g), a);
    const std::optional<std::size_t> position = little_group.position(image);
    if (!position) throw std::logic_error("a conjugate operation left the little group");
    const Trace& of_image = characters[*position];
    Trace conjugate{};
    for (int c = 0; c < 8; ++c) {
      Trace unit{};
      unit[0] = of_image[static_cast<std::size_t>(c)];
      const Trace turned = times_root(unit, -c);
      for (std::size_t d = 0; d < 8; ++d)
        conjugate[d] = static_cast<std::int16_t>(conjugate[d] + turned[d]);
    }
    const int exponent = -tables.exponent(little_group.g(i), a) +
                         conjugation_exponent(tables, K, a, group.operations()[g].rotation, g);
    result[i] = times_root(conjugate, exponent);
  }
  return result;
}

}  // namespace

const char* to_string(Reality reality) {
  switch (reality) {
    case Reality::real:
      return "real";
    case Reality::pseudoreal:
      return "pseudoreal";
    case Reality::complex:
      break;
  }
  return "complex";
}

std::vector<SmallIrrep> small_irreps(const LittleGroup& little_group) {
  const SymmetryTables& tables = little_group.tables();
  const SpaceGroup& group = little_group.group();
  const bool at_canonical =
      little_group.canonical_operation() == 0 && little_group.canonical_shift() == IntVector{};
  std::optional<LittleGroup> moved;
  if (!at_canonical)
    moved.emplace(std::shared_ptr<const SymmetryTables>(std::shared_ptr<void>(), &tables),
                  little_group.canonical_k());
  const LittleGroup& canonical = moved ? *moved : little_group;

  std::vector<CanonicalIrrep> found;
  for (ProjectiveIrrep& matrices : projective_irreps(canonical.factor_system())) {
    CanonicalIrrep irrep;
    irrep.characters.reserve(matrices.size());
    for (const IrrepMatrix& m : matrices) irrep.characters.push_back(m.trace());
    irrep.matrices = std::move(matrices);
    found.push_back(std::move(irrep));
  }
  std::ranges::stable_sort(found, listed_before);

  // P_k(R) = ζ^e P_c(r⁻¹ R r) with e = −g_R·t_r + K·((R − 1) t_r + t).
  const std::size_t r = little_group.canonical_operation();
  const std::size_t r_inverse = group.inverse(r);
  std::vector<std::size_t> source(little_group.order());
  std::vector<int> exponent(little_group.order());
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const std::size_t g = little_group.operations()[i];
    const auto position = canonical.position(group.product(group.product(r_inverse, g), r));
    if (!position) throw std::logic_error("little groups of two arms that are not conjugate");
    source[i] = *position;
    exponent[i] = -tables.exponent(little_group.g(i), r) +
                  conjugation_exponent(tables, little_group.canonical_shift(), r,
                                       group.operations()[g].rotation, g);
  }

  std::vector<SmallIrrep> irreps(found.size());
  for (std::size_t n = 0; n < found.size(); ++n) {
    SmallIrrep& irrep = irreps[n];
    irrep.label = "Γ" + std::to_string(n + 1);
    irrep.dimension = found[n].matrices[0].dimension();
    for (std::size_t i = 0; i < little_group.order(); ++i) {
      irrep.matrices.push_back(found[n].matrices[source[i]].times_root(exponent[i]));
      irrep.characters.push_back(times_root(found[n].characters[source[i]], exponent[i]));
    }
    irrep.reality =
        little_group.minus_k_in_star() ? herring(little_group, irrep.characters) : Reality::complex;
  }
  if (!little_group.minus_k_in_star()) return irreps;
  for (SmallIrrep& irrep : irreps) {
    if (irrep.reality != Reality::complex) continue;
    const std::vector<Trace> wanted = reversed_characters(little_group, irrep.characters);
    const auto partner =
        std::ranges::find_if(irreps, [&](const SmallIrrep& s) { return s.characters == wanted; });
    if (partner == irreps.end()) throw std::logic_error("a complex irrep without its partner");
    irrep.partner = static_cast<std::size_t>(partner - irreps.begin());
  }
  return irreps;
}

std::optional<Reversal> reversal(const LittleGroup& little_group, const SmallIrrep& irrep) {
  if (irrep.reality == Reality::complex) return std::nullopt;
  const SymmetryTables& tables = little_group.tables();
  const SpaceGroup& group = little_group.group();
  Reversal result;
  result.operation = little_group.reversing().front();
  result.sign = irrep.reality == Reality::real ? 1 : -1;
  const std::size_t a = result.operation;
  const std::size_t a_inverse = group.inverse(a);
  const IntVector K = reversal_vector(little_group, a);
  // U P(R)* = ζ^e P(ARA⁻¹) U with e = g_ARA⁻¹·s − (kA + k)·t for a = {A|s}, R's translation t.
  std::vector<IrrepMatrix> left;
  std::vector<IrrepMatrix> right;
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const std::size_t g = little_group.operations()[i];
    const std::optional<std::size_t> image =
        little_group.position(group.product(group.product(a, g), a_inverse));
    if (!image) throw std::logic_error("a conjugate operation left the little group");
    left.push_back(irrep.matrices[*image].times_root(tables.exponent(little_group.g(*image), a) -
                                                     tables.exponent(K, g)));
    right.push_back(irrep.matrices[i].conjugate());
  }
  if (irrep.dimension > 1) result.matrix = unitary_intertwiner(left, right);
  return result;
}

}  // namespace spinsieve
