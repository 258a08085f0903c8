#pragma once

#include <array>
#include <string>
#include <string_view>

#include "crystal/operation.hpp"

namespace spinsieve {

/// A propagation vector: components on a*, b*, c* (no 2π), exact, perhaps with free parameters.
///
/// k = constant + u·along[0] + v·along[1] + w·along[2]. A parameter is free when its row is not
/// zero; generic (irrational) values are meant, so equalities hold for all u, v, w at once.
struct Wavevector {
  FractionVector constant{};
  std::array<FractionVector, 3> along{};

  Wavevector() = default;
  explicit Wavevector(const FractionVector& k) : constant(k) {}

  int free_parameters() const;  ///< Number of non-zero rows of along.
  bool is_symbolic() const { return free_parameters() > 0; }
  friend bool operator==(const Wavevector& a, const Wavevector& b) = default;
};

Wavevector operator-(const Wavevector& a, const Wavevector& b);
Wavevector operator-(const Wavevector& a);
Wavevector operator+(const Wavevector& a, const FractionVector& K);
/// k R, the row of components after R.
Wavevector row_times(const Wavevector& k, const IntMatrix& R);

/// "1/2", "u", "-u+1/2", "2u", one text per component.
std::array<std::string, 3> component_texts(const Wavevector& k);
std::string to_string(const Wavevector& k);  ///< "1/2, 0, u".

/// Reads one component such as "1/2", "0.25", "u", "-u", "1/2-u", "2u", "u+v" into component i.
/// Throws Error that quotes the text.
void parse_component(std::string_view text, std::size_t i, Wavevector& k);

}  // namespace spinsieve
