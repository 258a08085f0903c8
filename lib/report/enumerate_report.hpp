#pragma once

#include <span>
#include <string>

#include "arrangement/candidate.hpp"
#include "crystal/cell.hpp"
#include "report/conventions.hpp"

namespace spinsieve {

/// What the reports of `enumerate` need.
struct EnumerateReport {
  std::span<const WavevectorModes> wavevectors;
  std::span<const Candidate> candidates;
  std::span<const Site> sites;
  Cell cell;
};

/// Every candidate with magnetic group, moment forms, bulk properties and domains, for people.
std::string enumerate_text(const EnumerateReport& report, const ReportOptions& options);
/// The same as a document of schema enumerate/1.
std::string enumerate_json(const EnumerateReport& report, const ReportOptions& options);

}  // namespace spinsieve
