#include "command.hpp"

#include <algorithm>
#include <array>

namespace spinsieve {
namespace {

// In the order of a person's work; those that work are in table below.
constexpr std::array<std::string_view, 10> planned = {"start",  "modes", "enumerate", "peaks",
                                                      "locate", "rank",  "separate",  "defend",
                                                      "export", "report"};

constexpr std::string_view modes_help =
    R"(What symmetry says about a wavevector: the little group, its small irreps with their
characters and matrices, how the moments of each site decompose, and basis vectors.
Without magnetic_sites: irreps only. Without propagation: the symmetry points, lines and
planes of the group, to choose a wavevector from.

  spinsieve: 1
  crystal: {space_group: 62, cell: [5.7, 7.7, 5.5, 90, 90, 90]}
  magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 1/2]}]
  propagation: [[0, 0, 0]]
)";

constexpr std::string_view enumerate_help =
    R"(Every arrangement of the moments that symmetry allows at the wavevector, one for each
order-parameter direction of each irrep: id, free parameters, magnetic space group, the
moments of all atoms, what the crystal may show besides (net moment, polarisation,
magnetoelectric and piezomagnetic effects) and its domains.

  spinsieve: 1
  crystal: {space_group: 62, cell: [5.7, 7.7, 5.5, 90, 90, 90]}
  magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 1/2]}]
  propagation: [[0, 0, 0]]
)";

constexpr std::string_view peaks_help =
    R"(Reflections and intensities: of the job's own arrangement, or of one candidate with its
parameters set (--candidate 3a --set u=3.7), or fitted when the job has lines.

  spinsieve: 1
  crystal: {space_group: 62, cell: [5.7, 7.7, 5.5, 90, 90, 90]}
  magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 1/2]}]
  propagation: [[0, 0, 0]]
  measurement: {sample: powder, wavelength: 2.41}
)";

constexpr std::string_view locate_help =
    R"(Every wavevector that explains the positions of the lines, ordered by the chance that it
does so by coincidence, and what was excluded: points, lines and planes of symmetry first,
then the whole zone.

  spinsieve: 1
  crystal: {space_group: 62, cell: [5.7, 7.7, 5.5, 90, 90, 90]}
  propagation: locate
  measurement:
    sample: powder
    wavelength: 2.41
    lines: [{q: 0.731}, {q: 1.157}, {q: 1.392}, {q: 1.644}]
)";

constexpr std::string_view rank_help =
    R"(All candidates against the measured lines and measured absences: the best fit of each,
its verdict, and which candidates the data cannot tell apart.

  spinsieve: 1
  crystal: {space_group: 62, cell: [5.7, 7.7, 5.5, 90, 90, 90]}
  magnetic_sites: [{label: M1, ion: Mn3+, position: [0, 0, 1/2]}]
  propagation: [[0, 0, 0]]
  measurement:
    sample: powder
    wavelength: 2.41
    lines: [{q: 1.392, intensity: 310, sigma: 9}]
    absences: [{q: 0.817, below: 6}]
)";

constexpr std::array<Command, 5> table = {{
    {.name = "modes",
     .summary = "little group, irreps, decomposition and basis vectors of a wavevector",
     .help = modes_help,
     .run = run_modes},
    {.name = "enumerate",
     .summary = "every allowed arrangement, with its magnetic group and free parameters",
     .help = enumerate_help,
     .run = run_enumerate},
    {.name = "peaks",
     .summary = "reflections and intensities of an arrangement or a candidate",
     .help = peaks_help,
     .takes_candidate = true,
     .takes_parameters = true,
     .run = run_peaks},
    {.name = "locate",
     .summary = "wavevectors that explain the positions of the lines",
     .help = locate_help,
     .run = run_locate},
    {.name = "rank",
     .summary = "candidates against the measured lines, with verdicts",
     .help = rank_help,
     .run = run_rank},
}};

}  // namespace

std::span<const Command> commands() { return table; }

const Command* find_command(std::string_view name) {
  const auto* const found = std::ranges::find(table, name, &Command::name);
  return found == table.end() ? nullptr : found;
}

bool is_planned(std::string_view name) {
  return std::ranges::find(planned, name) != planned.end() && find_command(name) == nullptr;
}

}  // namespace spinsieve
