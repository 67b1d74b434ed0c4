// tests/rows.hpp - rows of a campaign, written down.
#pragma once

#include <cstdint>

#include "wend/lab/run_row.hpp"

/// What became of one run; the rest of the row is as by default. Seconds, metres.
inline wend::lab::RunRow row(std::uint64_t run, wend::lab::Ending ending, double time, double clearance) {
  wend::lab::RunRow result;
  result.run = run;
  result.ending = ending;
  result.time = time;
  result.least_clearance = clearance;
  return result;
}
