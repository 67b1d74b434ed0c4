// wend/sensing/reading.hpp - what one reading of a ranger says, and how many of a row say what.
#pragma once

#include <bit>
#include <concepts>
#include <cstdint>
#include <limits>
#include <type_traits>

#include "wend/disc.hpp"
#include "wend/number.hpp"

namespace wend::inline v0 {

/// How many readings of a row were what. The counts add up to the number of beams.
struct RingCount {
  int echoes = 0;        ///< a range between the least and the greatest this ranger can measure
  int no_echo = 0;       ///< the ranger's own sign that nothing came back
  int not_a_number = 0;  ///< not one, nor the ranger's sign for no echo
  int infinite = 0;      ///< either infinity, where it is not the ranger's sign for no echo
  int zero = 0;          ///< either zero, where it is not the ranger's sign for no echo
  int negative = 0;  ///< under zero, and not the ranger's sign for no echo
  int too_near = 0;      ///< positive, but nearer than the ranger can measure
  int too_far = 0;       ///< finite, but farther than it can measure

  /// Beams that show that the sensor works. A row without one is a dead sensor, not an empty world.
  [[nodiscard]] constexpr int alive() const noexcept { return echoes + no_echo + too_far; }
};

namespace detail {

enum class Reading : std::uint8_t { echo, no_echo, not_a_number, infinite, zero, negative, too_near, too_far };

// A reading that says nothing, as against one that says that something is not there, or not where echoes are counted.
[[nodiscard]] constexpr bool is_broken(Reading reading) noexcept {
  return reading == Reading::not_a_number || reading == Reading::infinite || reading == Reading::zero ||
         reading == Reading::negative;
}

constexpr void tally(RingCount& count, Reading reading) noexcept {
  switch (reading) {
    case Reading::echo: ++count.echoes; break;
    case Reading::no_echo: ++count.no_echo; break;
    case Reading::not_a_number: ++count.not_a_number; break;
    case Reading::infinite: ++count.infinite; break;
    case Reading::zero: ++count.zero; break;
    case Reading::negative: ++count.negative; break;
    case Reading::too_near: ++count.too_near; break;
    case Reading::too_far: ++count.too_far; break;
  }
}

// The limits of one ranger on the number its readings come in.
template <PlainNumber S>
struct Limits {
  using Bits = std::conditional_t<std::same_as<S, double>, std::uint64_t, std::uint32_t>;

  S nearest;
  S farthest;
  std::uint32_t no_echo;

  // Limits that are not numbers admit no echo. Beyond far_away a square would overflow single precision.
  [[nodiscard]] static constexpr Limits from(Parameter min_range, Parameter max_range, Parameter no_echo) noexcept {
    return {S(min_range), S(max_range > far_away ? far_away : max_range), std::bit_cast<std::uint32_t>(no_echo)};
  }

  // A reading in double is compared with the sign for no echo as a Parameter, so that a sign like 65.535 is met.
  [[nodiscard]] constexpr Reading operator()(S range) const noexcept {
    constexpr S infinity = std::numeric_limits<S>::infinity();
    if (std::bit_cast<std::uint32_t>(static_cast<Parameter>(range)) == no_echo) {
      return Reading::no_echo;
    }
    if (!finite(range)) {  // by its bits, which -ffast-math cannot argue away; the shift takes the sign off
      bool const infinite = (std::bit_cast<Bits>(range) << 1U) == (std::bit_cast<Bits>(infinity) << 1U);
      return infinite ? Reading::infinite : Reading::not_a_number;
    }
    if (range <= S(0.0F)) {
      return range < S(0.0F) ? Reading::negative : Reading::zero;
    }
    if (!(range >= nearest)) {
      return Reading::too_near;
    }
    return range <= farthest ? Reading::echo : Reading::too_far;
  }
};

}  // namespace detail

}  // namespace wend::inline v0
