#pragma once

#include <array>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "crystal/cell.hpp"
#include "exact/error.hpp"

namespace spinsieve {

enum class Sample { powder, single_crystal };

/// What an intensity of the list means. lorentz_removed: |F⊥|² summed over the reflections of the
/// line, multiplicity still in; integrated: with the Lorentz factor of the geometry.
enum class IntensityKind { lorentz_removed, integrated };

struct ConstantWavelength {
  double wavelength_angstrom = 0;
};
struct Flight {
  double two_theta_degrees = 0;  ///< Bank angle.
};
using Geometry =
    std::variant<std::monostate, ConstantWavelength, Flight>;  ///< monostate: not given.

/// Full width at half maximum H² = u tan²θ + v tanθ + w, degrees².
/// Source: Caglioti, Paoletti & Ricci (1958), Nucl. Instrum. 3, 223.
struct Caglioti {
  double u = 0;
  double v = 0;
  double w = 0;
};
using Resolution = std::variant<double, Caglioti>;  ///< A double is the full width Δd/d = ΔQ/Q.
constexpr double default_resolution = 0.008;

/// One reflection hkl + k_sign·k; hkl and sign as the user gave them.
struct ReflectionIndex {
  std::array<int, 3> hkl{};
  int k_sign = 0;              ///< −1, 0, +1.
  std::size_t wavevector = 0;  ///< Which of the job's propagation vectors.
};

/// A position of the list: Q with the window it owns, Å⁻¹. For lists by hkl the Q is computed.
struct LinePosition {
  double q = 0;
  double q_low = 0;  ///< Window, from the line's own width or the resolution.
  double q_high = 0;
  std::optional<ReflectionIndex> index;
  std::string text;  ///< As the user wrote it, for messages and tables: "q 1.157", "2θ 21.4°".
  Place place;
};

struct ObservedLine {
  LinePosition position;
  std::optional<double> intensity;    ///< Absent when only seen (above).
  double sigma = 0;                   ///< > 0 when intensity is present.
  std::optional<double> above;        ///< Seen, at least this strong.
  std::optional<double> tolerance_q;  ///< Position tolerance for locate; default resolution/5.
  bool foreign = false;               ///< May belong to an impurity.
};

struct Absence {
  LinePosition position;
  double below = 0;  ///< Upper limit at 95 %; enters as 0 ± below/1.645.
};

/// Nothing but the listed entries in this range.
struct ScannedRange {
  double q_min = 0;
  double q_max = 0;
  double below = 0;
  Place place;
};

enum class ScaleKind { free, fixed, nuclear };

struct NuclearLine {
  LinePosition position;
  double intensity = 0;
  double sigma = 0;
};

/// One list of the job with its own scale, geometry and temperature.
struct Measurement {
  Sample sample = Sample::powder;
  Geometry geometry;
  std::optional<double> temperature_kelvin;
  Resolution resolution = default_resolution;
  IntensityKind intensity = IntensityKind::lorentz_removed;
  ScaleKind scale = ScaleKind::free;
  double scale_value = 1;  ///< Intensity per barn, for ScaleKind::fixed.
  double zero_shift_degrees = 0;
  std::vector<ObservedLine> lines;
  std::vector<Absence> absences;
  std::vector<ScannedRange> scanned;
  std::vector<NuclearLine> nuclear_lines;
  Place place;
};

}  // namespace spinsieve
