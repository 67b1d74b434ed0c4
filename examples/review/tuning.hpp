// review --tune: the composed policy's thresholds by search.
#pragma once

#include <cstdint>

#include <wend/lab/scene_file.hpp>

namespace review {

/// How many runs a candidate drives, from what seed, on how many threads.
struct TuningWanted {
  std::uint64_t runs = 400;
  std::uint64_t seed = 1;
  int threads = 1;
};

/// Searches and prints. The exit code of the program: 0, or 130 when it was interrupted.
int tune(wend::lab::SceneFile const& scene, TuningWanted const& wanted);

}  // namespace review
