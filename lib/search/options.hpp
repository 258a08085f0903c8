#pragma once

namespace spinsieve {

/// The job's `locate`.
struct LocateOptions {
  int foreign = 0;            ///< Unexplained lines allowed.
  double cell_tolerance = 0;  ///< Relative uncertainty of the cell lengths.
  int count = 20;             ///< Solutions listed.
};

}  // namespace spinsieve
