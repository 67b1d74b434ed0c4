// wend/motion/differential_drive.hpp - two driven wheels on one axle.
#pragma once

#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"

namespace wend::inline v0 {

/// Wheel rates, radians a second, forward positive.
template <Number S>
struct WheelRates {
  S left{S(0.0F)};
  S right{S(0.0F)};
};

/// Two wheels side by side.
struct DifferentialDrive {
  Parameter wheel_radius = 0.05F;  ///< metres
  Parameter track = 0.30F;         ///< metres between the wheels' middles
  Parameter max_rate = 20.0F;      ///< radians a second that a wheel can do

  /// Wheel rates for a body velocity: (speed -+ turn_rate * track / 2) / wheel_radius. When a wheel would be too fast
  /// both are slowed by one factor, so that the path keeps its curvature. Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr WheelRates<S> wheels(BodyVelocity<S> const& body) const noexcept {
    S const swing = S(0.5F * track) * body.turn_rate;
    S const left = (body.speed - swing) / S(wheel_radius);
    S const right = (body.speed + swing) / S(wheel_radius);
    S const fastest = greatest(magnitude(left), magnitude(right));
    mask_t<S> const sound = finite(left) && finite(right);
    S const factor = select(fastest > S(max_rate), S(S(max_rate) / fastest), S(1.0F));
    // The last clamp takes away a rounding of the product: a limit is a limit.
    S const limit = S(max_rate);
    return {select(sound, clamp(S(left * factor), S(-limit), limit), S(0.0F)),
            select(sound, clamp(S(right * factor), S(-limit), limit), S(0.0F))};
  }

  /// The body velocity that given wheel rates make.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> body(WheelRates<S> const& rates) const noexcept {
    return {S(0.5F * wheel_radius) * (rates.left + rates.right), S(wheel_radius / track) * (rates.right - rates.left)};
  }
};

}  // namespace wend::inline v0
