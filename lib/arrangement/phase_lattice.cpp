#include "arrangement/phase_lattice.hpp"

#include <numeric>

namespace spinsieve {

namespace {

/// x, y with a x + b y = gcd(a, b) ≥ 0.
struct Bezout {
  std::int64_t gcd = 0;
  std::int64_t x = 0;
  std::int64_t y = 0;
};

Bezout bezout(std::int64_t a, std::int64_t b) {
  std::int64_t x = 1;
  std::int64_t y = 0;
  std::int64_t next_x = 0;
  std::int64_t next_y = 1;
  while (b != 0) {
    const std::int64_t q = a / b;
    a -= q * b;
    std::swap(a, b);
    x -= q * next_x;
    std::swap(x, next_x);
    y -= q * next_y;
    std::swap(y, next_y);
  }
  return a < 0 ? Bezout{-a, -x, -y} : Bezout{a, x, y};
}

}  // namespace

PhaseLattice::PhaseLattice(const SymmetryTables& tables, const FractionVector& k) {
  const std::array<FractionVector, 3> basis = primitive_basis(tables.group());
  const FractionVector primitive = tables.primitive(k);
  std::int64_t denominator = 1;
  for (const Fraction f : primitive) denominator = std::lcm(denominator, f.denominator());
  // p·j ≡ g modulo the denominator, g the common divisor of p and the denominator.
  std::array<std::int64_t, 3> p{};
  for (std::size_t i = 0; i < 3; ++i)
    p[i] = primitive[i].modulo_one().numerator() *
           (denominator / primitive[i].modulo_one().denominator());
  const Bezout first = bezout(p[0], p[1]);
  const Bezout second = bezout(first.gcd, p[2]);
  const Bezout whole = bezout(second.gcd, denominator);
  const std::int64_t g = whole.gcd;
  order_ = denominator / g;
  const std::array<std::int64_t, 3> j{first.x * second.x * whole.x, first.y * second.x * whole.x,
                                      second.y * whole.x};
  for (std::size_t i = 0; i < 3; ++i) unit_ = unit_ + Fraction(j[i]) * basis[i];
  // Kernel: e_i − (p_i/g) unit, and order · unit.
  std::vector<FractionVector> generators{Fraction(order_) * unit_};
  for (std::size_t i = 0; i < 3; ++i) generators.push_back(basis[i] - Fraction(p[i] / g) * unit_);
  kernel_ = RationalLattice(generators);
  unit_ = kernel_.reduced(unit_);
}

std::optional<FractionVector> PhaseLattice::translation(Phase phase) const {
  const Fraction multiple = phase.turns() * Fraction(order_);
  if (!multiple.is_integer()) return std::nullopt;
  return kernel_.reduced(multiple * unit_);
}

std::vector<FractionVector> PhaseLattice::classes() const {
  std::vector<FractionVector> result;
  for (std::int64_t n = 0; n < order_; ++n) result.push_back(kernel_.reduced(Fraction(n) * unit_));
  return result;
}

}  // namespace spinsieve
