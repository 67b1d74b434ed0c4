// wend/motion/omni.hpp - a machine on omnidirectional wheels: it goes any way without turning its nose there.
#pragma once

#include <array>
#include <cstddef>
#include <numbers>

#include "wend/angle.hpp"
#include "wend/field.hpp"
#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Rates of N wheels, radians a second; positive drives the body counter-clockwise.
template <Number S, int N>
struct OmniRates {
  /// Counter-clockwise round the body, in the order of Omni::at.
  std::array<S, static_cast<std::size_t>(N)> rates{};
};

/// Where the wheels sit, seen from the centre: N of them at even angles, the first at `first` radians,
/// counter-clockwise from the nose.
template <int N>
[[nodiscard]] consteval std::array<Bearing, static_cast<std::size_t>(N)> wheels_round(double first) noexcept {
  std::array<Bearing, static_cast<std::size_t>(N)> at{};
  for (int i = 0; i < N; ++i) {
    at[static_cast<std::size_t>(i)] = bearing(first + 2.0 * std::numbers::pi * i / N);
  }
  return at;
}

/// Goes straight along the course from where it stands, and turns the nose towards it as it goes; with a gain of 0 the
/// nose stays as it is.
struct OmniSteering {
  Parameter gain = 3.0F;           ///< radians a second for an error with sine 1
  Parameter max_turn_rate = 1.5F;  ///< radians a second

  /// `heading` and course in one frame; `allowed` in metres a second. Body rates held over a tick while the nose turns
  /// lead off the course by half of that turn, which the next tick sees. The nose is turned leftwards to a course
  /// exactly astern. A course without direction gives no motion, nor does one that is not a number.
  template <Number S>
  [[nodiscard]] constexpr PlanarVelocity<S> operator()(Course<S> const& course, Vec2<S> const& heading,
                                                       S const& allowed) const noexcept {
    S const ahead = dot(heading, course.direction);
    S const left = cross(heading, course.direction);
    S const full = select(left < S(0.0F), S(-1.0F), S(1.0F));
    S const turn = clamp(S(S(gain) * select(ahead < S(0.0F), full, left)), -S(max_turn_rate), S(max_turn_rate));
    S const speed = greatest(S(allowed * clamp(course.speed_share, S(0.0F), S(1.0F))), S(0.0F));
    mask_t<S> const sound = finite(S(speed * ahead)) && finite(S(speed * left));
    return {select(sound, S(speed * ahead), S(0.0F)), select(sound, S(speed * left), S(0.0F)),
            select(sound, turn, S(0.0F))};
  }

  /// The way the body moves, for the pace: along the course, wherever the nose points.
  template <Number S>
  [[nodiscard]] constexpr Vec2<S> way(Course<S> const& course, Vec2<S> const& /*heading*/) const noexcept {
    return course.direction;
  }
};

/// N wheels whose rollers let them slip along their axles, which point at the centre of the body (three at 120 degrees
/// or four at 90, say). Each wheel takes the part of the motion along its own rolling direction: rate = (-sin(a) speed
/// + cos(a) lateral + distance turn_rate) / wheel_radius for a wheel at angle a (Pin and Killough 1994, A new family of
/// omnidirectional and holonomic wheeled platforms for mobile robots; in other axes).
template <int N = 3>
struct Omni {
  static_assert(N >= 3, "wend: Omni<N> needs three wheels at least to go every way; write Omni<3>");
  /// How a loop steers it, unless told otherwise.
  using Steering = OmniSteering;
  /// How its body can move: forward, sideways and turning at once.
  template <Number S>
  using Body = PlanarVelocity<S>;

  std::array<Bearing, static_cast<std::size_t>(N)> at = wheels_round<N>(std::numbers::pi / N);  ///< unit vectors
  Parameter distance = 0.15F;  ///< metres from the centre to each wheel
  Parameter wheel_radius = 0.04F;  ///< metres
  Parameter max_rate = 25.0F;  ///< radians a second that a wheel can do

  /// The same motion as fast as the wheels can do it: all three velocities slowed by one factor, so that direction and
  /// path stay. Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr PlanarVelocity<S> within_limits(PlanarVelocity<S> const& body) const noexcept {
    S fastest = S(max_rate);
    mask_t<S> sound = finite(body.speed) && finite(body.lateral) && finite(body.turn_rate);
    for (Bearing const& wheel : at) {
      S const rate = rate_of(wheel, body);
      sound = sound && finite(rate);
      fastest = greatest(magnitude(rate), fastest);
    }
    S const factor = S(max_rate) / fastest;
    return {select(sound, S(body.speed * factor), S(0.0F)), select(sound, S(body.lateral * factor), S(0.0F)),
            select(sound, S(body.turn_rate * factor), S(0.0F))};
  }

  /// Wheel rates for a body velocity, none over its limit. Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr OmniRates<S, N> wheels(PlanarVelocity<S> const& body) const noexcept {
    PlanarVelocity<S> const can = within_limits(body);
    OmniRates<S, N> wheels;
    for (std::size_t i = 0; i < at.size(); ++i) {
      wheels.rates[i] = clamp(rate_of(at[i], can), S(-max_rate), S(max_rate));
    }
    return wheels;
  }

  /// The body velocity that given wheel rates make; of four or more that do not fit together, the one that is nearest
  /// in the sense of least squares (the normal equations, solved by Cramer's rule). Wheels all at one bearing, which
  /// cannot go every way, give not-a-number.
  template <Number S>
  [[nodiscard]] constexpr PlanarVelocity<S> body(OmniRates<S, N> const& wheels) const noexcept {
    // Row (-y, x, 1) for each wheel, of the unknowns speed, lateral and distance * turn_rate.
    S xx = S(0.0F), xy = xx, yy = xx, x1 = xx, y1 = xx, bx = xx, by = xx, b1 = xx;
    for (std::size_t i = 0; i < at.size(); ++i) {
      S const x = -S(at[i].y);
      S const y = S(at[i].x);
      S const rim = wheels.rates[i] * S(wheel_radius);
      xx = xx + x * x, xy = xy + x * y, yy = yy + y * y, x1 = x1 + x, y1 = y1 + y;
      bx = bx + x * rim, by = by + y * rim, b1 = b1 + rim;
    }
    S const n = S(static_cast<Parameter>(N));
    S const a = yy * n - y1 * y1;
    S const b = x1 * y1 - xy * n;
    S const c = xy * y1 - yy * x1;
    S const d = xx * n - x1 * x1;
    S const e = xy * x1 - xx * y1;
    S const f = xx * yy - xy * xy;
    S const determinant = xx * a + xy * b + x1 * c;
    return {(a * bx + b * by + c * b1) / determinant, (b * bx + d * by + e * b1) / determinant,
            (c * bx + e * by + f * b1) / determinant / S(distance)};
  }

 private:
  template <Number S>
  [[nodiscard]] constexpr S rate_of(Bearing const& wheel, PlanarVelocity<S> const& body) const noexcept {
    S const rim = S(wheel.x) * body.lateral - S(wheel.y) * body.speed + S(distance) * body.turn_rate;
    return rim / S(wheel_radius);
  }
};

}  // namespace wend::inline v0
