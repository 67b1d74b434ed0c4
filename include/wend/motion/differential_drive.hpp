// wend/motion/differential_drive.hpp - two driven wheels on one axle.
#pragma once

#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"

namespace wend::inline v0 {

/// Wheel rates, radians a second, forward positive.
template <Number S>
struct WheelRates {
  S left{S(0.0F)};  ///< of the left wheel
  S right{S(0.0F)};  ///< of the right wheel
};

/// Two wheels side by side.
struct DifferentialDrive {
  Parameter wheel_radius = 0.05F;  ///< metres
  Parameter track = 0.30F;         ///< metres between the wheels' middles
  Parameter max_rate = 20.0F;      ///< radians a second that a wheel can do

  /// The same motion as fast as the wheels can do it: both velocities slowed by one factor, so that the path keeps its
  /// curvature. Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> within_limits(BodyVelocity<S> const& body) const noexcept {
    // The faster wheel turns by |speed| and |turn_rate| track / 2 together, whichever signs they have.
    S const rim = magnitude(body.speed) + S(0.5F) * S(track) * magnitude(body.turn_rate);
    S const fastest = rim / S(wheel_radius);
    S const factor = S(max_rate) / greatest(fastest, S(max_rate));
    mask_t<S> const sound = finite(fastest);
    return {select(sound, S(body.speed * factor), S(0.0F)), select(sound, S(body.turn_rate * factor), S(0.0F))};
  }

  /// Wheel rates for a body velocity: (speed -+ turn_rate * track / 2) / wheel_radius, and no wheel over its limit.
  /// Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr WheelRates<S> wheels(BodyVelocity<S> const& body) const noexcept {
    BodyVelocity<S> const can = within_limits(body);
    S const swing = S(0.5F) * S(track) * can.turn_rate;
    S const limit = S(max_rate);  // a limit is a limit: the clamp takes away a rounding of the factor
    return {clamp(S((can.speed - swing) / S(wheel_radius)), S(-limit), limit),
            clamp(S((can.speed + swing) / S(wheel_radius)), S(-limit), limit)};
  }

  /// The body velocity that given wheel rates make.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> body(WheelRates<S> const& rates) const noexcept {
    S const per_track = S(wheel_radius) / S(track);  // on S: as a Parameter its rounding would show in double
    return {S(0.5F) * S(wheel_radius) * (rates.left + rates.right), per_track * (rates.right - rates.left)};
  }
};

}  // namespace wend::inline v0
