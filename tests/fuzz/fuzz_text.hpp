#pragma once

#include <cstddef>
#include <cstdint>
#include <string>

/// The input of libFuzzer as text.
inline std::string fuzz_text(const std::uint8_t* data, std::size_t size) {
  std::string text;
  text.reserve(size);
  for (std::size_t i = 0; i < size; ++i) text += static_cast<char>(data[i]);
  return text;
}

/// A law that does not hold is a crash for libFuzzer.
inline void require(bool law) {
  if (!law) __builtin_trap();
}
