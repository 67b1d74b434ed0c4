// wend/lab/lanes.hpp - one lane or many, written once: a float is a row of one.
#pragma once

#include <cstddef>
#include <cstdint>
#include <type_traits>

#include "wend/lab/pack.hpp"
#include "wend/number.hpp"

namespace wend::inline v0::lab {

/// The number whose values are rows of `Lanes` machines: float for one.
template <int Lanes>
struct LanesOf {
  /// A Pack of so many lanes.
  using type = Pack<Lanes>;
};
/// A row of one is no pack.
template <>
struct LanesOf<1> {
  /// The number itself.
  using type = float;
};
/// Pack of so many lanes, or float for one.
template <int Lanes>
using lanes_t = typename LanesOf<Lanes>::type;

/// How many lanes a number has.
template <Number S>
[[nodiscard]] constexpr int lane_count() noexcept {
  if constexpr (std::is_same_v<S, float>) {
    return 1;
  } else {
    return S::width();
  }
}

/// The value in one lane.
[[nodiscard]] inline float lane(float x, int) noexcept { return x; }
/// The yes or no in one lane.
[[nodiscard]] inline bool lane(bool x, int) noexcept { return x; }
/// The value in lane k, in [0, W).
template <int W>
[[nodiscard]] float lane(Pack<W> const& x, int k) noexcept {
  return x[k];
}
/// The yes or no in lane k of a pack's mask.
template <typename Mask>
  requires requires(Mask const& m) { m.bits(); }
[[nodiscard]] bool lane(Mask const& x, int k) noexcept {
  return x[k];
}

/// x, with another value in one lane.
inline void set_lane(float& x, int, float value) noexcept { x = value; }
/// The same of a pack, in lane k of [0, W).
template <int W>
void set_lane(Pack<W>& x, int k, float value) noexcept {
  x.set(k, value);
}

/// Yes in the lanes of which f says so.
template <Number S, typename F>
[[nodiscard]] mask_t<S> lane_mask(F const& f) noexcept {
  if constexpr (std::is_same_v<S, float>) {
    return f(0);
  } else {
    return S([&f](int k) noexcept { return f(k) ? 1.0F : 0.0F; }) > S(0.0F);
  }
}

/// Whether any lane says yes.
[[nodiscard]] inline bool any(bool mask) noexcept { return mask; }
/// Whether any lane of a pack's mask says yes.
template <typename Mask>
  requires requires(Mask const& m) { m.bits(); }
[[nodiscard]] bool any(Mask const& mask) noexcept {
  auto const bits = mask.bits();
  std::int32_t one = 0;
  for (std::size_t k = 0; k < sizeof(bits) / sizeof(std::int32_t); ++k) {
    one |= bits[k];
  }
  return one != 0;
}

/// A sum that loses nothing of many small parts (Kahan 1965, "Further remarks on reducing truncation errors"). Needs a
/// compiler that keeps the order of operations: no -ffast-math.
template <Number S>
struct CarefulSum {
  S value{S(0.0F)};  ///< the sum so far, rounded
  S carry{S(0.0F)};  ///< by how much value is too large

  /// Adds one part.
  void operator+=(S const& part) noexcept {
    S const wanted = part - carry;
    S const sum = value + wanted;
    carry = (sum - value) - wanted;
    value = sum;
  }
};

}  // namespace wend::inline v0::lab
