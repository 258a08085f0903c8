#include "exact/phase.hpp"

#include <numbers>

#include "exact/checked.hpp"

namespace spinsieve {

Phase::Phase(std::int64_t numerator, std::int64_t denominator) {
  if (denominator <= 0)
    throw Error("denominator " + std::to_string(denominator) + " of a phase; it must be positive");
  turns_ = Fraction(positive_modulo(numerator, denominator), denominator);
}

Phase::Phase(Fraction turns) : turns_(turns.modulo_one()) {}

std::complex<double> Phase::factor() const {
  switch (denominator()) {
    case 1:
      return {1, 0};
    case 2:
      return {-1, 0};
    case 4:
      return {0, numerator() == 1 ? 1.0 : -1.0};
    default:
      return std::polar(1.0, 2 * std::numbers::pi * turns_.to_double());
  }
}

Phase Phase::operator-() const { return Phase(-turns_); }
Phase operator+(Phase a, Phase b) { return Phase(a.turns_ + b.turns_); }
Phase operator-(Phase a, Phase b) { return Phase(a.turns_ - b.turns_); }
Phase operator*(std::int64_t n, Phase a) {
  return Phase(Fraction(positive_modulo(n, a.denominator())) * a.turns_);
}

std::string to_string(Phase phase) { return to_string(phase.turns()); }

}  // namespace spinsieve
