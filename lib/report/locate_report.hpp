#pragma once

#include <string>

#include "report/conventions.hpp"
#include "search/wavevector_search.hpp"

namespace spinsieve {

/// What the reports of `locate` need.
struct LocateReport {
  const SearchProblem& problem;
  const SearchResult& result;
  std::string limit;  ///< Empty when every kind was searched to the end.
};

/// The wavevectors that explain the lines, and what was excluded, for people.
std::string locate_text(const LocateReport& report, const ReportOptions& options);
/// The same as a document of schema locate/1.
std::string locate_json(const LocateReport& report, const ReportOptions& options);

}  // namespace spinsieve
