// wend/lab/random.hpp - random numbers by counting, so that run k is the same whoever draws it, and when.
#pragma once

#include <array>
#include <cmath>
#include <cstdint>
#include <numbers>

namespace wend::inline v0::lab {

/// Philox4x32-10 (Salmon, Moraes, Dror and Shaw 2011, "Parallel random numbers: as easy as 1, 2, 3"): four words from a
/// counter and a key, with no state at all.
[[nodiscard]] constexpr std::array<std::uint32_t, 4> philox(std::array<std::uint32_t, 4> counter,
                                                            std::array<std::uint32_t, 2> key) noexcept {
  constexpr std::uint64_t multiplier0 = 0xD2511F53U;
  constexpr std::uint64_t multiplier1 = 0xCD9E8D57U;
  constexpr std::uint32_t step0 = 0x9E3779B9U;  // the golden ratio
  constexpr std::uint32_t step1 = 0xBB67AE85U;  // sqrt(3) - 1
  for (int round = 0; round < 10; ++round) {
    std::uint64_t const p0 = multiplier0 * counter[0];
    std::uint64_t const p1 = multiplier1 * counter[2];
    counter = {static_cast<std::uint32_t>(p1 >> 32U) ^ counter[1] ^ key[0], static_cast<std::uint32_t>(p1),
               static_cast<std::uint32_t>(p0 >> 32U) ^ counter[3] ^ key[1], static_cast<std::uint32_t>(p0)};
    key = {key[0] + step0, key[1] + step1};
  }
  return counter;
}

/// Draws for one run: addressed by what they are for, never by how many came before.
class Draws {
 public:
  /// Of run `run` in a campaign with this seed. Nothing is kept but the two.
  Draws(std::uint64_t seed, std::uint64_t run) noexcept
      : key_{static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32U)}, run_(run) {}

  /// What a draw is for, and which of many: two draws with another address are independent.
  struct Address {
    std::uint32_t purpose;  ///< under 65536; as many runs as fit 48 bits then have addresses of their own
    std::uint32_t tick = 0;  ///< number of the tick, 0 for what is drawn once a run
    std::uint32_t item = 0;  ///< which of many on that tick, such as a beam or a disc
  };

  /// A number drawn evenly from (0, 1).
  [[nodiscard]] double uniform(Address a) const noexcept { return to_unit(words(a)[0]); }

  /// A number drawn evenly from (low, high).
  [[nodiscard]] double between(double low, double high, Address a) const noexcept {
    return low + (high - low) * uniform(a);
  }

  /// A number from the standard normal distribution (Box and Muller 1958).
  [[nodiscard]] double normal(Address a) const noexcept {
    auto const w = words(a);
    return std::sqrt(-2.0 * std::log(to_unit(w[1]))) * std::cos(2.0 * std::numbers::pi * to_unit(w[2]));
  }

 private:
  [[nodiscard]] std::array<std::uint32_t, 4> words(Address a) const noexcept {
    // The run's high half shares a word with the purpose: 16 bits each.
    return philox({static_cast<std::uint32_t>(run_), a.tick, a.item,
                   (a.purpose << 16U) ^ static_cast<std::uint32_t>(run_ >> 32U)},
                  key_);
  }
  [[nodiscard]] static double to_unit(std::uint32_t word) noexcept {
    return (static_cast<double>(word) + 0.5) * 0x1p-32;
  }

  std::array<std::uint32_t, 2> key_;
  std::uint64_t run_;
};

}  // namespace wend::inline v0::lab
