#pragma once

#include <array>
#include <complex>
#include <string>
#include <string_view>
#include <vector>

#include "arrangement/options.hpp"
#include "crystal/cell.hpp"
#include "crystal/space_group.hpp"
#include "exact/error.hpp"
#include "scattering/measurement.hpp"
#include "scattering/scatterer.hpp"
#include "search/options.hpp"
#include "symmetry/wavevector.hpp"

namespace spinsieve {

/// Something the reader did or doubts, with the place it concerns.
struct Remark {
  Place place;
  std::string text;
};

/// "job.yaml:7:19: text", for a line of a report or of standard error.
std::string to_string(const Remark& remark);

/// One entry of an explicit arrangement: the Fourier component of one atom.
struct ArrangementEntry {
  std::size_t wavevector = 0;  ///< Index into Job::propagation.
  std::size_t site = 0;        ///< Index into Job::magnetic_sites.
  FractionVector position;     ///< Exact, as given: phases count from here.
  /// S on the unit vectors a/|a|, b/|b|, c/|c| in µB; real where 2k is a reciprocal vector.
  std::array<std::complex<double>, 3> moment{};
  Place place;
};

/// All that a job file says, checked and in the types of the stages.
struct Job {
  std::string file;   ///< As shown in messages.
  std::string title;  ///< Empty when not given.
  Place place;        ///< The start of the job, for "this command needs …".

  SpaceGroup group;
  bool cell_given = false;  ///< Always true when there are sites or measurements.
  Cell cell;
  std::vector<MagneticSite> magnetic_sites;
  std::vector<NuclearSite> other_sites;

  bool locate_propagation = false;      ///< `propagation: locate`; the list is empty then.
  std::vector<Wavevector> propagation;  ///< Empty when not given.
  std::vector<Place> propagation_places;

  std::vector<Measurement> measurements;
  std::vector<ArrangementEntry> arrangement;
  EnumerationOptions search;  ///< With the job's `modulation`.
  LocateOptions locate;

  std::vector<Remark> notes;     ///< The setting used, sites moved, fractions offered.
  std::vector<Remark> warnings;  ///< What is likely not meant.
};

/// Reads a job file; paths in it are relative to its folder.
///
/// Throws Error, with file, line and column, on everything that design of the job file forbids:
/// unknown or reserved keys, wrong types, values out of range, contradictions.
Job read_job(const std::string& path);

/// The same from a text; name is what messages call it and where relative paths start.
Job parse_job(std::string_view text, const std::string& name);

}  // namespace spinsieve
