#include "input/job.hpp"

#include <array>
#include <filesystem>

#include "input/job_parts.hpp"

namespace spinsieve {

namespace {

constexpr std::array<std::string_view, 11> top_keys{
    "spinsieve",  "title",       "crystal",     "magnetic_sites", "other_sites", "propagation",
    "modulation", "measurement", "arrangement", "search",         "locate"};

void read_search(const Node& node, EnumerationOptions& search) {
  constexpr std::array<std::string_view, 4> keys{"arms", "combine", "directions", "equal_moments"};
  constexpr std::array<std::string_view, 2> arms{"single", "all"};
  constexpr std::array<std::string_view, 2> directions{"all", "maximal"};
  const Fields fields(node, "search", keys);
  if (const Node* value = fields.find("arms"))
    search.arms = choice_of(*value, "arms", arms) == 0 ? Arms::single : Arms::all;
  if (const Node* value = fields.find("combine"))
    search.combine = integer_of(*value, "combine", 1, 8);
  if (const Node* value = fields.find("directions"))
    search.directions = choice_of(*value, "directions", directions) == 0 ? DirectionFilter::all
                                                                         : DirectionFilter::maximal;
  if (const Node* value = fields.find("equal_moments"))
    search.equal_moments = truth_of(*value, "equal_moments");
}

void read_locate(const Node& node, LocateOptions& locate) {
  constexpr std::array<std::string_view, 3> keys{"foreign", "cell_tolerance", "count"};
  const Fields fields(node, "locate", keys);
  if (const Node* value = fields.find("foreign"))
    locate.foreign = integer_of(*value, "foreign", 0, 1000);
  if (const Node* value = fields.find("cell_tolerance"))
    locate.cell_tolerance = number_of(*value, "cell_tolerance", {.at_least = 0, .at_most = 0.1});
  if (const Node* value = fields.find("count"))
    locate.count = integer_of(*value, "count", 1, 100000);
}

void require_version(const Node& root) {
  if (root.kind != NodeKind::mapping)
    throw Error(root.place, "a job is a mapping of keys to values; it starts with 'spinsieve: 1'");
  const Node* version = root.find("spinsieve");
  if (version == nullptr)
    throw Error(root.place, "the key 'spinsieve' is missing; a job starts with 'spinsieve: 1'");
  if (text_of(*version, "spinsieve") != "1")
    throw Error(version->place, "version " + in_quotes(version->text) +
                                    " of the job file is unknown; accepted is 1");
}

/// A largest moment says something only where the moments are absolute.
void warn_of_idle_limits(Job& job) {
  if (job.measurements.empty()) return;
  for (const Measurement& measurement : job.measurements)
    if (measurement.scale != ScaleKind::free) return;
  for (const MagneticSite& site : job.magnetic_sites)
    if (site.moment_limit)
      job.warnings.push_back(
          {site.site.place, "moment_limit of " + site.site.label +
                                " has no content: every scale is free, so that only ratios of "
                                "moments are measured"});
}

Job read(TextFile file) {
  Job job;
  job.file = *file.name;
  const std::filesystem::path folder = std::filesystem::path(job.file).parent_path();
  const Node root = parse_yaml(std::move(file));
  job.place = root.place;
  require_version(root);
  const Fields fields(root, "the job", top_keys);
  if (const Node* title = fields.find("title")) job.title = trimmed(text_of(*title, "title"));
  const std::optional<CifStructure> cif = read_crystal(fields.require("crystal"), folder, job);
  read_sites(fields, cif ? &*cif : nullptr, job);
  if (const Node* node = fields.find("modulation")) {
    constexpr std::array<std::string_view, 3> words{"auto", "commensurate", "incommensurate"};
    constexpr std::array<Modulation, 3> values{Modulation::automatic, Modulation::commensurate,
                                               Modulation::incommensurate};
    job.search.modulation = values[choice_of(*node, "modulation", words)];
  }
  if (const Node* node = fields.find("propagation")) read_propagation(*node, job);
  if (const Node* node = fields.find("search")) read_search(*node, job.search);
  if (const Node* node = fields.find("locate")) read_locate(*node, job.locate);
  if (const Node* node = fields.find("measurement")) read_measurements(*node, folder, job);
  if (const Node* node = fields.find("arrangement")) read_arrangement(*node, job);
  warn_of_idle_limits(job);
  return job;
}

}  // namespace

std::string to_string(const Remark& remark) {
  if (!remark.place.known()) return remark.text;
  return remark.place.file() + ":" + std::to_string(remark.place.line()) + ":" +
         std::to_string(remark.place.column()) + ": " + remark.text;
}

Job read_job(const std::string& path) { return read(read_text_file(path)); }

Job parse_job(std::string_view text, const std::string& name) {
  return read({std::make_shared<const std::string>(name), std::string(text)});
}

}  // namespace spinsieve
