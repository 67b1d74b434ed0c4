// wend/angle.hpp - angles: for the rim of the library, where people and sensors speak in angles. Radians,
// counter-clockwise. Nothing between a percept and a course uses an angle.
#pragma once

#include <cmath>
#include <concepts>
#include <cstddef>
#include <limits>
#include <numbers>
#include <span>

#include "wend/number.hpp"

namespace wend::inline v0 {

namespace detail {

// A whole turn as the sum of two numbers of one precision. The remainder by the first part alone is off by the second
// part for every whole turn taken away: 0.03 rad in single precision for an angle of 1e6.
template <std::floating_point S>
struct Turn;
template <>
struct Turn<float> {
  static constexpr float high = 6.2831854820251465F;
  static constexpr float low = -1.7484556000744883e-07F;
};
template <>
struct Turn<double> {
  static constexpr double high = 6.283185307179586;
  static constexpr double low = 2.4492935982947064e-16;
};

}  // namespace detail

/// The angle in (-pi, pi] that points the same way as x. Exact to a rounding or two up to 1e6 rad; beyond, the result
/// stays in range but means as little as the input. Not-a-number and infinities give not-a-number.
template <std::floating_point S>
[[nodiscard]] S wrap(S x) noexcept {
  constexpr S pi = std::numbers::pi_v<S>;
  constexpr S turn = detail::Turn<S>::high;
  if (!finite(x)) {
    return std::numeric_limits<S>::quiet_NaN();
  }
  S const near = std::remainder(x, turn);  // exact by definition, so the same bits everywhere
  S const turns = std::nearbyint((x - near) / turn);
  S const rest = std::remainder(near - turns * detail::Turn<S>::low, turn);
  return rest <= -pi ? pi : rest;
}

/// The shortest turn from one heading to another: radians, counter-clockwise positive, in (-pi, pi]; pi when they are
/// exactly opposite.
template <std::floating_point S>
[[nodiscard]] S turn(S from, S to) noexcept {
  return wrap(wrap(to) - wrap(from));
}

/// What circular_mean returns.
template <std::floating_point S>
struct CircularMean {
  S direction;         ///< radians in (-pi, pi]; 0 where the angles cancel to rounding or there are none
  S resultant_length;  ///< in [0, 1]: 1 when all agree, 0 when they cancel to rounding
};

/// Mean direction and mean resultant length of angles in radians (Mardia and Jupp 2000, Directional Statistics,
/// eq. 2.2.3 and 2.2.4). Both are not-a-number when an angle is not finite.
template <std::floating_point S>
[[nodiscard]] CircularMean<S> circular_mean(std::span<S const> angles) noexcept {
  if (angles.empty()) {
    return {S{0}, S{0}};
  }
  S c{0};
  S s{0};
  for (S const angle : angles) {
    c += std::cos(angle);
    s += std::sin(angle);
  }
  S const n = static_cast<S>(angles.size());
  S const size = std::sqrt(c * c + s * s) / n;
  if (size <= S{2} * std::numeric_limits<S>::epsilon()) {
    return {S{0}, S{0}};  // what is left of a sum that cancels is rounding (the sine of a rounded pi is not 0)
  }
  return {wrap(std::atan2(s, c)), size > S{1} ? S{1} : size};
}

/// Cosine and sine of one angle: a unit vector in a form that can be a constant.
struct Bearing {
  Parameter x = 1.0F;  ///< the cosine
  Parameter y = 0.0F;  ///< the sine; positive to the left
};

/// The unit vector at an angle in radians, worked out by the compiler, so that the bits do not depend on a C library.
/// Off by no more than its own rounding to a Parameter for |angle| up to 100; a component under 1e-7 by up to 1e-14.
[[nodiscard]] consteval Bearing bearing(double angle) noexcept {
  constexpr double turn = 2.0 * std::numbers::pi;
  double const turns = angle / turn;
  double const whole = static_cast<double>(static_cast<long long>(turns + (turns < 0.0 ? -0.5 : 0.5)));
  double const x = angle - whole * turn;  // in [-pi, pi]
  double c = 0.0;
  double s = 0.0;
  double term = 1.0;
  for (int k = 0; k < 32; k += 2) {  // Taylor: pi^32 / 32! is under 1e-19
    c += term;
    term *= x / (k + 1);
    s += term;
    term *= -x / (k + 2);
  }
  return {static_cast<Parameter>(c), static_cast<Parameter>(s)};
}

/// The chord of an angle, 2 sin(|angle| / 2): what the signal `heading_error` measures. For thresholds written in
/// radians: `below(heading_error, chord(0.2), chord(0.3))`. Increasing on [0, pi].
[[nodiscard]] consteval Parameter chord(double angle) noexcept {
  double const half = angle < 0.0 ? -angle / 2.0 : angle / 2.0;
  return 2.0F * bearing(half).y;
}

}  // namespace wend::inline v0
