// wend/motion/ackermann.hpp - a car: driven on the rear axle, steered in front, with a least radius.
#pragma once

#include <cmath>
#include <concepts>

#include "wend/angle.hpp"
#include "wend/field.hpp"
#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// What a steered machine is told: how fast, and how far the wheel is turned that stands in for both front wheels.
template <Number S>
struct SteeredWheels {
  S speed{S(0.0F)};    ///< metres a second, of the rear axle's middle, forward positive
  S tangent{S(0.0F)};  ///< of the steering angle, to the left positive
};

/// The steering angle for a servo: radians, counter-clockwise positive, in (-pi/2, pi/2). This is the rim: its bits
/// depend on the C library.
template <std::floating_point S>
[[nodiscard]] S steering_angle(SteeredWheels<S> const& wheels) noexcept {
  return std::atan(wheels.tangent);
}

/// The tangent of an angle in radians in (-pi/2, pi/2), for a constant: `.max_tangent = tangent(0.5)`.
[[nodiscard]] consteval Parameter tangent(double angle) noexcept {
  Bearing const b = bearing(angle);
  return b.y / b.x;
}

/// Tangents of the angles of two front wheels, each to the left positive.
template <Number S>
struct FrontWheels {
  S left{S(0.0F)};  ///< tangent of its angle
  S right{S(0.0F)};  ///< tangent of its angle
};

/// How a car is steered to a course. It turns by driving, never in place: a course abeam or behind is driven to by the
/// tightest arc. Ahead, the arc is the one that meets the course line again after `look_ahead`, of curvature
/// 2 sin(error) / look_ahead (pure pursuit: Coulter 1992, Implementation of the pure pursuit path tracking algorithm),
/// if the wheels can be turned that far. With a look_ahead of up to twice the least radius nothing jumps abeam.
///
/// One that `reverses` drives to a course behind tail first, by the same law. Abeam both ways lead off the boundary
/// between them, so it does not dither there; and where a policy leads away from what blocks the nose, it backs off,
/// and goes on nose first once its course is ahead again: a turn in three moves. Its sensors have to look backward too.
struct ArcSteering {
  Parameter look_ahead = 0.6F;  ///< metres, at least 1 mm; shorter steers harder
  Parameter least_share = 0.3F;  ///< share of the speed that is kept where the course is not ahead, over 0
  Parameter max_turn_rate = 1.5F;  ///< radians a second: a tight arc is driven no faster than this
  bool reverses = false;  ///< whether it may drive backward

  /// `heading` and course in one frame; `allowed` in metres a second. A course exactly astern is turned to leftwards.
  /// A course without direction gives no motion, nor does one that is not a number.
  template <Number S, typename Car>
  [[nodiscard]] constexpr BodyVelocity<S> operator()(Course<S> const& course, Vec2<S> const& heading, S const& allowed,
                                                     Car const& car) const noexcept {
    Vec2<S> const goes = way(course, heading);
    S const ahead = dot(goes, course.direction);
    S const left = cross(goes, course.direction);
    S const tightest = car.template max_curvature<S>();
    S const full = select(left < S(0.0F), S(-tightest), tightest);
    S const pursuit = S(2.0F) * left / greatest(S(look_ahead), S(1.0e-3F));
    S const curvature = clamp(select(ahead > S(0.0F), pursuit, full), S(-tightest), tightest);
    S const share = clamp(course.speed_share, S(0.0F), S(1.0F));
    mask_t<S> const some = squared(ahead) + squared(left) > S(0.25F) && finite(curvature);
    S const wanted = greatest(S(allowed * share * greatest(ahead, S(least_share))), S(0.0F));
    S const rate = magnitude(curvature) * wanted;
    S const speed = wanted * S(max_turn_rate) / greatest(rate, S(max_turn_rate));
    mask_t<S> const sound = some && finite(speed);
    S const turn_rate = select(sound, S(curvature * speed), S(0.0F));
    S const along = select(sound, speed, S(0.0F));
    if (!reverses) {
      return {along, turn_rate};
    }
    return {select(backs(course, heading), S(-along), along), turn_rate};
  }

  /// The way it drives, for the pace: nose first, or tail first where it reverses.
  template <Number S>
  [[nodiscard]] constexpr Vec2<S> way(Course<S> const& course, Vec2<S> const& heading) const noexcept {
    return reverses ? select(backs(course, heading), Vec2<S>(-heading), heading) : heading;
  }

 private:
  template <Number S>
  [[nodiscard]] constexpr mask_t<S> backs(Course<S> const& course, Vec2<S> const& heading) const noexcept {
    return dot(heading, course.direction) < S(0.0F);
  }
};

/// A car, as the one-track model with its reference point on the rear axle: turn_rate = speed tangent / wheelbase.
/// It rolls without slipping, forward or backward, and cannot turn in place.
struct Ackermann {
  /// How a loop steers it, unless told otherwise.
  using Steering = ArcSteering;

  Parameter wheelbase = 0.30F;  ///< metres from the rear axle to the front one
  Parameter track = 0.25F;  ///< metres between the front wheels' pivots
  Parameter max_tangent = tangent(0.5);  ///< of the greatest steering angle, over 0
  Parameter max_speed = 2.0F;  ///< metres a second that the motor can do

  /// One over the least radius, 1/m.
  template <Number S>
  [[nodiscard]] constexpr S max_curvature() const noexcept {
    return S(max_tangent) / S(wheelbase);
  }

  /// The same path as fast as the motor can do it, and where it bends too much, the tightest arc at that speed. A turn
  /// in place is no motion at all. Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> within_limits(BodyVelocity<S> const& body) const noexcept {
    S const factor = S(max_speed) / greatest(magnitude(body.speed), S(max_speed));
    S const speed = body.speed * factor;
    S const sharpest = magnitude(speed) * max_curvature<S>();
    S const turn_rate = clamp(S(body.turn_rate * factor), S(-sharpest), sharpest);
    mask_t<S> const sound = finite(body.speed) && finite(body.turn_rate);
    return {select(sound, speed, S(0.0F)), select(sound, turn_rate, S(0.0F))};
  }

  /// Speed and steering for a body velocity: tangent = turn_rate wheelbase / speed, and neither over its limit. What
  /// stands still has its wheels straight ahead. Zero for what is not finite.
  template <Number S>
  [[nodiscard]] constexpr SteeredWheels<S> wheels(BodyVelocity<S> const& body) const noexcept {
    BodyVelocity<S> const can = within_limits(body);
    mask_t<S> const moves = magnitude(can.speed) > S(no_length);
    S const wanted = can.turn_rate / select(moves, can.speed, S(1.0F)) * S(wheelbase);
    S const limit = S(max_tangent);  // a limit is a limit: the clamps take away roundings
    return {clamp(can.speed, S(-max_speed), S(max_speed)), select(moves, clamp(wanted, S(-limit), limit), S(0.0F))};
  }

  /// The body velocity that a speed and a steering make.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> body(SteeredWheels<S> const& wheels) const noexcept {
    return {wheels.speed, wheels.speed * wheels.tangent / S(wheelbase)};
  }

  /// How far each front wheel has to be turned so that none slips: both axles' lines meet in the centre of the turn,
  /// cot(outer) - cot(inner) = track / wheelbase (Ackermann's condition, 1818). tangent / (1 -+ tangent track /
  /// (2 wheelbase)). The centre must lie outside the track, as it does for every steering up to 2 wheelbase / track.
  template <Number S>
  [[nodiscard]] constexpr FrontWheels<S> front(SteeredWheels<S> const& wheels) const noexcept {
    S const offset = S(0.5F) * S(track) * wheels.tangent / S(wheelbase);
    return {wheels.tangent / (S(1.0F) - offset), wheels.tangent / (S(1.0F) + offset)};
  }
};

}  // namespace wend::inline v0
