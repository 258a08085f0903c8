#pragma once

#include <array>
#include <string>

#include "input/job.hpp"

namespace spinsieve {

/// A small sound job of six lines; a test replaces one of them.
inline std::string job_text(std::size_t line = 0, const std::string& replacement = "") {
  std::array<std::string, 6> lines{
      "spinsieve: 1",
      "crystal: {space_group: 62, cell: [5.74, 7.69, 5.53, 90, 90, 90]}",
      "magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 1/2]}]",
      "other_sites: [{label: O1, element: O, position: [0.49, 1/4, 0.07]}]",
      "propagation: [[0, 0, 0]]",
      "measurement: {wavelength: 2.41, lines: [{q: 1.157, intensity: 310, sigma: 9}]}"};
  if (line > 0) lines[line - 1] = replacement;
  std::string text;
  for (const std::string& one : lines)
    if (!one.empty()) text += one + "\n";
  return text;
}

inline Job job_with(std::size_t line, const std::string& replacement) {
  return parse_job(job_text(line, replacement), "job.yaml");
}

inline std::string job_fault(const std::string& text) {
  try {
    parse_job(text, "job.yaml");
  } catch (const Error& error) {
    return error.what();
  }
  return "no error";
}

}  // namespace spinsieve
