#pragma once

#include <cstdint>

#include "exact/error.hpp"

namespace spinsieve {

/// 64-bit arithmetic that throws Error instead of wrapping.
inline std::int64_t checked_add(std::int64_t a, std::int64_t b) {
  std::int64_t result = 0;
  if (__builtin_add_overflow(a, b, &result)) throw Error("exact arithmetic exceeds 64 bits");
  return result;
}

inline std::int64_t checked_subtract(std::int64_t a, std::int64_t b) {
  std::int64_t result = 0;
  if (__builtin_sub_overflow(a, b, &result)) throw Error("exact arithmetic exceeds 64 bits");
  return result;
}

inline std::int64_t checked_multiply(std::int64_t a, std::int64_t b) {
  std::int64_t result = 0;
  if (__builtin_mul_overflow(a, b, &result)) throw Error("exact arithmetic exceeds 64 bits");
  return result;
}

/// a modulo n in 0 … n − 1, for n > 0.
inline std::int64_t positive_modulo(std::int64_t a, std::int64_t n) {
  const std::int64_t rest = a % n;
  return rest < 0 ? rest + n : rest;
}

}  // namespace spinsieve
