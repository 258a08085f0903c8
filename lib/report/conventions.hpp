#pragma once

#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "crystal/space_group.hpp"
#include "report/json.hpp"
#include "report/text.hpp"

namespace spinsieve {

/// Sign of the phase for which Fourier components, basis vectors and representations are printed:
/// exp(+2πi k·L) as everywhere inside, or its conjugate, since refinement programs differ.
enum class PhaseSign { plus, minus };

/// What every report needs beside its result.
struct ReportOptions {
  std::string title;
  Letters letters = Letters::trade;
  PhaseSign phase = PhaseSign::plus;
  std::vector<std::string> notes;     ///< What was done to the input: the setting, sites moved.
  std::vector<std::string> warnings;  ///< What is likely not meant.
};

/// The conventions that results are printed in, as pairs of a key and a sentence.
std::vector<std::pair<std::string, std::string>> conventions(PhaseSign phase);

/// "Pnma (No. 62), setting …": the group as printed in reports.
std::string group_text(const SpaceGroup& group);

/// The head that all JSON documents share: spinsieve, schema, title, conventions, complete, limit.
/// limit is empty when the work is complete.
Json document_head(std::string_view schema, const ReportOptions& options, const SpaceGroup& group,
                   std::string_view limit = {});

/// The first lines of a text report: the title, the group.
void start_page(TextPage& page, std::string_view command, const ReportOptions& options,
                const SpaceGroup& group);
/// The last part of a text report: the conventions, those named by key.
void end_page(TextPage& page, const ReportOptions& options,
              const std::vector<std::string_view>& keys);

}  // namespace spinsieve
