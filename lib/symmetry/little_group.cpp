#include "symmetry/little_group.hpp"

#include <algorithm>
#include <cstdlib>
#include <limits>
#include <numeric>
#include <stdexcept>

#include "crystal/fraction_matrix.hpp"
#include "exact/checked.hpp"

namespace spinsieve {

namespace {

/// k as integers over one denominator: rows are the constant part and those along u, v, w.
struct IntegerWavevector {
  std::array<IntVector, 4> rows{};
  int denominator = 1;

  friend bool operator==(const IntegerWavevector& a, const IntegerWavevector& b) = default;
};

int to_int(std::int64_t value) {
  if (value > std::numeric_limits<int>::max() || value < std::numeric_limits<int>::min())
    throw Error(
        "a wavevector or translation whose exact form exceeds 32 bits; simpler fractions are "
        "needed");
  return static_cast<int>(value);
}

IntegerWavevector to_integers(const Wavevector& k) {
  IntegerWavevector result;
  std::int64_t denominator = 1;
  const auto include = [&denominator](const FractionVector& v) {
    for (const Fraction f : v)
      denominator =
          checked_multiply(denominator / std::gcd(denominator, f.denominator()), f.denominator());
  };
  include(k.constant);
  for (const FractionVector& row : k.along) include(row);
  // Sums over rows of rotations (entries up to 15 in odd axes) must stay within int.
  constexpr std::int64_t largest_denominator = 1'000'000;
  constexpr std::int64_t largest_component = 1000;
  constexpr std::int64_t largest_numerator = 40'000'000;
  if (denominator > largest_denominator)
    throw Error("the wavevector " + to_string(k) + " has a common denominator of " +
                std::to_string(denominator) + "; at most 1000000 is accepted");
  result.denominator = static_cast<int>(denominator);
  const auto scaled = [&](const FractionVector& v) {
    IntVector row{};
    for (std::size_t i = 0; i < 3; ++i) {
      const std::int64_t value =
          checked_multiply(v[i].numerator(), denominator / v[i].denominator());
      if (std::abs(value) > std::min(largest_numerator, largest_component * denominator))
        throw Error("the wavevector " + to_string(k) + " has the component " + to_string(v[i]) +
                    "; take a reciprocal-lattice vector off, so that components lie near 0");
      row[i] = static_cast<int>(value);
    }
    return row;
  };
  result.rows[0] = scaled(k.constant);
  for (std::size_t p = 0; p < 3; ++p) result.rows[p + 1] = scaled(k.along[p]);
  return result;
}

/// Throws Error when the directions along u, v, w are linearly dependent.
void require_independent_parameters(const Wavevector& k, const IntegerWavevector& ik) {
  std::vector<FractionVector> rows;
  for (std::size_t p = 0; p < 3; ++p)
    if (ik.rows[p + 1] != IntVector{}) rows.push_back(k.along[p]);
  if (rows.size() < 2) return;
  const std::size_t directions = row_echelon(rows).size();
  if (directions == rows.size()) return;
  throw Error("the wavevector " + to_string(k) + " has " + std::to_string(rows.size()) +
              " free parameters along " + std::to_string(directions) +
              (directions == 1 ? " direction" : " directions") +
              "; as many parameters as directions are accepted");
}

IntegerWavevector row_times(const IntegerWavevector& k, const IntMatrix& R) {
  IntegerWavevector result = k;
  for (IntVector& row : result.rows) row = spinsieve::row_times(row, R);
  return result;
}

/// a + sign·b as a reciprocal-lattice vector, if it is one.
std::optional<IntVector> reciprocal_sum(const SymmetryTables& tables, const IntegerWavevector& a,
                                        const IntegerWavevector& b, int sign) {
  for (std::size_t p = 1; p < 4; ++p)
    for (std::size_t i = 0; i < 3; ++i)
      if (a.rows[p][i] + sign * b.rows[p][i] != 0) return std::nullopt;
  IntVector K{};
  for (std::size_t i = 0; i < 3; ++i) {
    const int sum = a.rows[0][i] + sign * b.rows[0][i];
    if (sum % a.denominator != 0) return std::nullopt;
    K[i] = sum / a.denominator;
  }
  if (!tables.in_reciprocal_lattice(K)) return std::nullopt;
  return K;
}

/// Comparable form, equal for equivalent wavevectors: parameters first, so that lines order by
/// direction, then the reduced constant part.
struct ArmKey {
  std::array<IntVector, 4> rows{};
  friend auto operator<=>(const ArmKey& a, const ArmKey& b) = default;
};

ArmKey key(const SymmetryTables& tables, const IntegerWavevector& k) {
  ArmKey result;
  for (std::size_t p = 1; p < 4; ++p) result.rows[p - 1] = k.rows[p];
  result.rows[3] = tables.reduced(k.rows[0], k.denominator);
  return result;
}

Wavevector row_to_wavevector(const IntegerWavevector& k) {
  Wavevector result;
  const auto fractions = [&k](const IntVector& row) {
    FractionVector v;
    for (std::size_t i = 0; i < 3; ++i) v[i] = Fraction(row[i], k.denominator);
    return v;
  };
  result.constant = fractions(k.rows[0]);
  for (std::size_t p = 0; p < 3; ++p) result.along[p] = fractions(k.rows[p + 1]);
  return result;
}

IntMatrix adjugate(const std::array<IntVector, 3>& m) {
  IntMatrix result{};
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j) {
      const std::size_t a = (j + 1) % 3;
      const std::size_t b = (j + 2) % 3;
      const std::size_t c = (i + 1) % 3;
      const std::size_t d = (i + 2) % 3;
      result[i][j] = m[a][c] * m[b][d] - m[a][d] * m[b][c];
    }
  }
  return result;
}

}  // namespace

SymmetryTables::SymmetryTables(SpaceGroup group) : group_(std::move(group)) {
  std::int64_t denominator = 1;
  for (const FractionVector& c : group_.centrings())
    for (const Fraction f : c) denominator = std::lcm(denominator, f.denominator());
  centring_denominator_ = to_int(denominator);
  for (const FractionVector& c : group_.centrings()) {
    IntVector scaled{};
    for (std::size_t i = 0; i < 3; ++i)
      scaled[i] = to_int(c[i].numerator() * (denominator / c[i].denominator()));
    centrings_.push_back(scaled);
  }
  const std::array<FractionVector, 3> basis = primitive_basis(group_);
  primitive_denominator_ = centring_denominator_;
  for (std::size_t r = 0; r < 3; ++r)
    for (std::size_t i = 0; i < 3; ++i)
      primitive_[r][i] = to_int((basis[r][i] * Fraction(primitive_denominator_)).numerator());
  // primitive_/d has determinant 1/n with n centrings; its inverse is n·adjugate/d² .
  const IntMatrix adjoint = adjugate(primitive_);
  const int d = primitive_denominator_;
  const int n = static_cast<int>(centrings_.size());
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) inverse_primitive_[i][j] = adjoint[i][j] * n / (d * d);

  const FractionVector& shift = group_.origin_shift();
  for (const Operation& operation : group_.operations()) {
    FractionVector t = operation.translation;
    if (shift != FractionVector{}) t = t + times(operation.rotation, shift) - shift;
    IntVector scaled{};
    bool found = false;
    for (const FractionVector& c : group_.centrings()) {
      const FractionVector q = Fraction(24) * (t - c);
      if (!is_integer(q)) continue;
      for (std::size_t i = 0; i < 3; ++i) scaled[i] = to_int(positive_modulo(q[i].numerator(), 24));
      found = true;
      break;
    }
    if (!found) throw std::logic_error("a translation outside the 24ths of the shifted origin");
    translation_.push_back(scaled);
  }
}

int SymmetryTables::exponent(const IntVector& K, std::size_t operation) const {
  const IntVector& t = translation_[operation];
  return root_exponent(K[0] % 24 * t[0] + K[1] % 24 * t[1] + K[2] % 24 * t[2]);
}

bool SymmetryTables::in_reciprocal_lattice(const IntVector& K) const {
  return std::ranges::all_of(centrings_, [&](const IntVector& c) {
    return (K[0] * c[0] + K[1] * c[1] + K[2] * c[2]) % centring_denominator_ == 0;
  });
}

IntVector SymmetryTables::reduced(const IntVector& k, int k_denominator) const {
  IntVector result{};
  const int modulus = k_denominator * primitive_denominator_;
  for (std::size_t r = 0; r < 3; ++r) {
    std::int64_t sum = 0;
    for (std::size_t i = 0; i < 3; ++i) sum += static_cast<std::int64_t>(k[i]) * primitive_[r][i];
    result[r] = static_cast<int>(positive_modulo(sum, modulus));
  }
  return result;
}

FractionVector SymmetryTables::conventional(const IntVector& reduced_k, int k_denominator) const {
  // reduced = k Bᵀ with rows B: k = B⁻¹ reduced as columns.
  FractionVector k;
  for (std::size_t i = 0; i < 3; ++i) {
    std::int64_t sum = 0;
    for (std::size_t r = 0; r < 3; ++r)
      sum += static_cast<std::int64_t>(inverse_primitive_[i][r]) * reduced_k[r];
    k[i] = Fraction(sum, static_cast<std::int64_t>(k_denominator) * primitive_denominator_);
  }
  return k;
}

FractionVector SymmetryTables::conventional(const FractionVector& primitive_k) const {
  FractionVector k;
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t r = 0; r < 3; ++r) k[i] += Fraction(inverse_primitive_[i][r]) * primitive_k[r];
  return k;
}

FractionVector SymmetryTables::primitive(const FractionVector& k) const {
  FractionVector result;
  for (std::size_t r = 0; r < 3; ++r)
    for (std::size_t i = 0; i < 3; ++i)
      result[r] += Fraction(primitive_[r][i], primitive_denominator_) * k[i];
  return result;
}

bool SymmetryTables::keeps(const Wavevector& k, const IntMatrix& R) const {
  const Wavevector difference = spinsieve::row_times(k, R) - k;
  return !difference.is_symbolic() && group_.in_reciprocal_lattice(difference.constant);
}

LittleGroup::LittleGroup(std::shared_ptr<const SymmetryTables> tables, const Wavevector& k)
    : tables_(std::move(tables)), k_(k) {
  const SpaceGroup& group = tables_->group();
  const IntegerWavevector ik = to_integers(k);
  require_independent_parameters(k, ik);
  self_conjugate_ = reciprocal_sum(*tables_, ik, ik, 1).has_value();

  std::vector<ArmKey> keys;
  std::size_t canonical = 0;
  for (std::size_t i = 0; i < group.order(); ++i) {
    const IntegerWavevector image = row_times(ik, group.operations()[i].rotation);
    if (const auto g = reciprocal_sum(*tables_, image, ik, -1)) {
      operations_.push_back(i);
      g_.push_back(*g);
    }
    if (const auto K = reciprocal_sum(*tables_, image, ik, 1)) {
      reversing_.push_back(i);
      reversal_vectors_.push_back(*K);
    }
    const ArmKey arm = key(*tables_, image);
    if (std::ranges::find(keys, arm) != keys.end()) continue;
    keys.push_back(arm);
    star_.push_back(i == 0 ? k : row_to_wavevector(image));
    arm_operation_.push_back(group.inverse(i));  // k R = k (R⁻¹)⁻¹
    if (arm < keys[canonical]) canonical = keys.size() - 1;
  }

  // canonical ≡ k R_i, so k ≡ canonical R_i⁻¹: the operation r is the i-th itself.
  const std::size_t i = group.inverse(arm_operation_[canonical]);
  canonical_operation_ = i;
  canonical_k_ = star_[canonical];
  canonical_k_.constant = tables_->conventional(keys[canonical].rows[3], ik.denominator);
  const FractionVector K =
      k.constant -
      spinsieve::row_times(canonical_k_.constant, inverse(group.operations()[i].rotation));
  if (!is_integer(K)) throw std::logic_error("a canonical arm that is not equivalent to k");
  for (std::size_t c = 0; c < 3; ++c) canonical_shift_[c] = to_int(K[c].numerator());
}

std::optional<std::size_t> LittleGroup::position(std::size_t group_operation) const {
  const auto found = std::ranges::lower_bound(operations_, group_operation);
  if (found == operations_.end() || *found != group_operation) return std::nullopt;
  return static_cast<std::size_t>(found - operations_.begin());
}

FactorSystem LittleGroup::factor_system() const {
  FactorSystem system(order());
  std::vector<std::size_t> position_of(group().order());
  for (std::size_t i = 0; i < order(); ++i) position_of[operations_[i]] = i;
  for (std::size_t i = 0; i < order(); ++i)
    for (std::size_t j = 0; j < order(); ++j)
      system.set(i, j, position_of[group().product(operations_[i], operations_[j])],
                 -tables_->exponent(g_[i], operations_[j]));
  return system;
}

Phase LittleGroup::phase(std::size_t i) const {
  if (k_.is_symbolic()) throw std::logic_error("the phase of an operation for a symbolic k");
  const Operation& operation = group().operations()[operations_[i]];
  const FractionVector& s = group().origin_shift();
  Fraction turns = -dot(k_.constant, operation.translation);
  for (std::size_t c = 0; c < 3; ++c) turns -= Fraction(g_[i][c]) * s[c];
  return Phase(turns);
}

std::string LittleGroup::phase_text(std::size_t i) const {
  const Operation& operation = group().operations()[operations_[i]];
  Wavevector phase;  // Only the first component is used.
  phase.constant[0] = -dot(k_.constant, operation.translation);
  for (std::size_t c = 0; c < 3; ++c)
    phase.constant[0] -= Fraction(g_[i][c]) * group().origin_shift()[c];
  phase.constant[0] = phase.constant[0].modulo_one();
  for (std::size_t p = 0; p < 3; ++p) phase.along[p][0] = -dot(k_.along[p], operation.translation);
  return component_texts(phase)[0];
}

}  // namespace spinsieve
