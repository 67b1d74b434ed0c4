// wend/lab/heading_range.hpp - all unit vectors at the angles of an interval, for boxes of states.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <numbers>

#include "wend/lab/interval.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

namespace detail {

// Whether the peaks of a cosine can be told from its ends: less than a turn, and no angle so large that pi shows its
// rounding.
[[nodiscard]] inline bool is_short_turn(Interval const& angle) noexcept {
  return angle.width() < 2.0 * std::numbers::pi && angle.mag() < 1e6;
}

// Encloses cos(angle - peak) from its values at both ends of the angle. The C library's cosine is taken to be right to
// 4 units in the last place (glibc promises 1).
template <typename I>
[[nodiscard]] I wave_over(Interval const& angle, double peak, double at_low, double at_high) noexcept {
  constexpr double slack = 1e-15;
  double low = std::max(std::min(at_low, at_high) - slack, -1.0);
  double high = std::min(std::max(at_low, at_high) + slack, 1.0);
  // A multiple of pi past the peak is a peak (even) or a trough (odd); to be sure one a hair outside counts too.
  auto const first = static_cast<std::int64_t>(std::ceil((angle.low() - peak - 1e-9) / std::numbers::pi));
  auto const last = static_cast<std::int64_t>(std::floor((angle.high() - peak + 1e-9) / std::numbers::pi));
  for (std::int64_t k = first; k <= last; ++k) {
    (k % 2 == 0 ? high : low) = k % 2 == 0 ? 1.0 : -1.0;
  }
  return I(low, high);
}

}  // namespace detail

/// Encloses the cosine of every angle in an interval, radians. [-1, 1] for a whole turn, and beyond 1e6.
template <typename I>
[[nodiscard]] I cosine_over(Interval const& angle) noexcept {
  return detail::is_short_turn(angle) ? detail::wave_over<I>(angle, 0.0, std::cos(angle.low()), std::cos(angle.high()))
                                      : I(-1.0, 1.0);
}

/// Encloses (cos, sin) of every angle in an interval.
template <typename I = Interval>
[[nodiscard]] Vec2<I> headings_over(Interval const& angle) noexcept {
  if (!detail::is_short_turn(angle)) {
    return {I(-1.0, 1.0), I(-1.0, 1.0)};
  }
  return {detail::wave_over<I>(angle, 0.0, std::cos(angle.low()), std::cos(angle.high())),
          detail::wave_over<I>(angle, std::numbers::pi / 2.0, std::sin(angle.low()), std::sin(angle.high()))};
}

}  // namespace wend::inline v0::lab
