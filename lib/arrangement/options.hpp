#pragma once

namespace spinsieve {

enum class Arms { single, all };
enum class DirectionFilter { all, maximal };
enum class Modulation { automatic, commensurate, incommensurate };

/// Common denominator of k up to which `modulation: auto` takes it as commensurate.
constexpr int commensurate_denominator = 12;

/// What to enumerate: the job's `search` and `modulation`.
struct EnumerationOptions {
  Arms arms = Arms::single;
  int combine = 1;  ///< Irreps mixed at most.
  DirectionFilter directions = DirectionFilter::all;
  bool equal_moments = false;
  Modulation modulation = Modulation::automatic;
};

}  // namespace spinsieve
