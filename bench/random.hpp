// bench/random.hpp - the scenes of a benchmark, the same with every standard library.
#pragma once

#include <cstdint>

namespace bench {

// Steele, Lea and Flood (2014), Fast splittable pseudorandom number generators: the mixing function they call
// SplitMix64, so that the scenes are the same with every standard library.
class Random {
 public:
  float between(float low, float high) noexcept {
    state_ += 0x9e3779b97f4a7c15U;
    std::uint64_t z = state_;
    z = (z ^ (z >> 30U)) * 0xbf58476d1ce4e5b9U;
    z = (z ^ (z >> 27U)) * 0x94d049bb133111ebU;
    z ^= z >> 31U;
    return low + (high - low) * static_cast<float>(z >> 40U) * 0x1p-24F;
  }

 private:
  std::uint64_t state_ = 2024;
};

}  // namespace bench
