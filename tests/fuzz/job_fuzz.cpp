// Any text is a job or an Error.

#include "fuzz_text.hpp"
#include "input/job.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  try {
    const spinsieve::Job job = spinsieve::parse_job(fuzz_text(data, size), "job.yaml");
    require(job.group.order() > 0);
    require(job.propagation.size() == job.propagation_places.size());
    for (const auto& measurement : job.measurements)
      for (const auto& line : measurement.lines)
        require(line.position.q_low <= line.position.q && line.position.q <= line.position.q_high);
  } catch (const spinsieve::Error& fault) {
    // Whatever is wrong with a job has a place in it.
    require(fault.place().known());
  }
  return 0;
}
