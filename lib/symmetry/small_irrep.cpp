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

/// A character of P at some position times ζ^exponent.
struct Term {
  std::size_t position = 0;
  int exponent = 0;
};

std::size_t required_position(const LittleGroup& little_group, std::size_t operation) {
  const std::optional<std::size_t> position = little_group.position(operation);
  if (!position) throw std::logic_error("an operation outside the little group");
  return *position;
}

/// The squares of the reversing operations {R|t}: tr D = exp(−2πi (kR + k)·t) tr P(R²).
std::vector<Term> herring_terms(const LittleGroup& little_group) {
  const SpaceGroup& group = little_group.group();
  std::vector<Term> terms;
  for (std::size_t i = 0; i < little_group.reversing().size(); ++i) {
    const std::size_t a = little_group.reversing()[i];
    terms.push_back({required_position(little_group, group.product(a, a)),
                     -little_group.tables().exponent(little_group.reversal_vector(i), a)});
  }
  return terms;
}

Reality herring(const std::vector<Term>& terms, const std::vector<Trace>& characters) {
  Trace sum{};
  for (const Term& term : terms) {
    const Trace turned = times_root(characters[term.position], term.exponent);
    for (std::size_t i = 0; i < 8; ++i) sum[i] = static_cast<std::int16_t>(sum[i] + turned[i]);
  }
  for (std::size_t i = 1; i < 8; ++i)
    if (sum[i] != 0) throw std::logic_error("a Herring sum that is not an integer");
  const int order = static_cast<int>(characters.size());
  if (sum[0] == order) return Reality::real;
  if (sum[0] == -order) return Reality::pseudoreal;
  if (sum[0] != 0) throw std::logic_error("a Herring sum outside 1, 0, -1");
  return Reality::complex;
}

/// The irrep g → D(a⁻¹ g a)*, with a the first operation that takes k to −k: its P has the
/// conjugate characters at these positions times these roots.
std::vector<Term> reversed_terms(const LittleGroup& little_group) {
  const SymmetryTables& tables = little_group.tables();
  const SpaceGroup& group = little_group.group();
  const std::size_t a = little_group.reversing().front();
  const std::size_t a_inverse = group.inverse(a);
  std::size_t of_inverse = 0;
  while (little_group.reversing()[of_inverse] != a_inverse) ++of_inverse;
  const IntVector& K = little_group.reversal_vector(of_inverse);  // kA⁻¹ + k
  std::vector<Term> terms;
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const std::size_t g = little_group.operations()[i];
    terms.push_back({required_position(little_group, group.product(group.product(a_inverse, g), a)),
                     -tables.exponent(little_group.g(i), a) +
                         conjugation_exponent(tables, K, a, group.operations()[g].rotation, g)});
  }
  return terms;
}

Trace conjugate(const Trace& trace) {
  Trace result{};
  for (int c = 0; c < 8; ++c)
    if (const int factor = trace[static_cast<std::size_t>(c)]; factor != 0)
      add_root(result, root_exponent(-c), factor);
  return result;
}

bool is_reversed(const std::vector<Term>& terms, const std::vector<Trace>& characters,
                 const std::vector<Trace>& partner) {
  for (std::size_t i = 0; i < terms.size(); ++i)
    if (times_root(conjugate(characters[terms[i].position]), terms[i].exponent) != partner[i])
      return false;
  return true;
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

  const std::vector<Term> squares = herring_terms(little_group);
  std::vector<SmallIrrep> irreps(found.size());
  for (std::size_t n = 0; n < found.size(); ++n) {
    SmallIrrep& irrep = irreps[n];
    irrep.label = "Γ" + std::to_string(n + 1);
    irrep.dimension = found[n].matrices[0].dimension();
    irrep.matrices.reserve(little_group.order());
    irrep.characters.reserve(little_group.order());
    for (std::size_t i = 0; i < little_group.order(); ++i) {
      irrep.matrices.push_back(found[n].matrices[source[i]].times_root(exponent[i]));
      irrep.characters.push_back(times_root(found[n].characters[source[i]], exponent[i]));
    }
    irrep.reality =
        little_group.minus_k_in_star() ? herring(squares, irrep.characters) : Reality::complex;
  }
  if (!little_group.minus_k_in_star()) return irreps;
  const std::vector<Term> reversed = reversed_terms(little_group);
  for (SmallIrrep& irrep : irreps) {
    if (irrep.reality != Reality::complex) continue;
    const auto partner = std::ranges::find_if(irreps, [&](const SmallIrrep& other) {
      return other.dimension == irrep.dimension &&
             is_reversed(reversed, irrep.characters, other.characters);
    });
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
  const IntVector& K = little_group.reversal_vector(0);
  // U P(R)* = ζ^e P(ARA⁻¹) U with e = g_ARA⁻¹·s − (kA + k)·t for a = {A|s}, R's translation t.
  std::vector<IrrepMatrix> left;
  std::vector<IrrepMatrix> right;
  for (std::size_t i = 0; i < little_group.order(); ++i) {
    const std::size_t g = little_group.operations()[i];
    const std::size_t image =
        required_position(little_group, group.product(group.product(a, g), a_inverse));
    left.push_back(irrep.matrices[image].times_root(tables.exponent(little_group.g(image), a) -
                                                    tables.exponent(K, g)));
    right.push_back(irrep.matrices[i].conjugate());
  }
  if (irrep.dimension > 1) result.matrix = unitary_intertwiner(left, right);
  return result;
}

}  // namespace spinsieve
