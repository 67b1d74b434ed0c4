// wend/motion/point_ahead.hpp - steers a point ahead of the axle, which can be moved any way at once.
#pragma once

#include "wend/field.hpp"
#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Moves a point on the nose's line, `distance` ahead of the axle, exactly along the course: with u the velocity wanted
/// of it, speed = u . heading and turn_rate = heading x u / distance (input-output linearisation of two driven wheels;
/// for example Yun and Yamamoto 1992, On feedback linearization of mobile robots). An alternative to Steering for a
/// drive that can turn in place: `Loop<Policy, Sensing, DifferentialDrive, PointAhead>`.
///
/// What is exact is the velocity of the point, given the heading, wherever it may go faster than `creep`. The axle
/// follows as a trailer does, and with `reverses` it backs away from a course that lies behind until the nose has come
/// round. The percept, and so the policy, still look from the axle.
struct PointAhead {
  Parameter distance = 0.20F;  ///< metres ahead of the axle, over 0; shorter turns harder
  Parameter max_turn_rate = 1.5F;  ///< radians a second: where more is wanted, the point goes slower, not another way
  Parameter creep =
      0.05F;  ///< metres a second: sideways the point may always go this fast, lest a blocked one stays so
  bool reverses = false;  ///< whether the axle may back up; without, the point swings round the axle instead

  /// `heading` and course in one frame; `allowed` in metres a second: the point goes no faster, and so neither does the
  /// axle. A course exactly astern that must not be backed to is turned to leftwards. A course without direction gives
  /// no motion, nor does one that is not a number, or a distance of 0.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> operator()(Course<S> const& course, Vec2<S> const& heading,
                                                     S const& allowed) const noexcept {
    S const ahead = dot(heading, course.direction);
    S const left = cross(heading, course.direction);
    S const goes = greatest(S(allowed * clamp(course.speed_share, S(0.0F), S(1.0F))), S(0.0F));
    S const speed = goes * ahead;
    S const turn_rate = greatest(goes, S(creep)) * left / S(distance);
    S const factor = S(max_turn_rate) / greatest(magnitude(turn_rate), S(max_turn_rate));
    BodyVelocity<S> exact{S(speed * factor), S(turn_rate * factor)};
    if (!reverses) {
      // Behind, the point cannot go along the course; the body turns to it in place, whatever room there is.
      S const full = select(left < S(0.0F), S(-max_turn_rate), S(max_turn_rate));
      mask_t<S> const behind = ahead < S(0.0F);
      exact.speed = select(behind, S(0.0F), exact.speed);
      exact.turn_rate = select(behind, full, exact.turn_rate);
    }
    mask_t<S> const sound = finite(exact.speed) && finite(exact.turn_rate);
    return {select(sound, exact.speed, S(0.0F)), select(sound, exact.turn_rate, S(0.0F))};
  }

  /// The way the axle moves, for the pace: nose first, or tail first where it backs up.
  template <Number S>
  [[nodiscard]] constexpr Vec2<S> way(Course<S> const& course, Vec2<S> const& heading) const noexcept {
    mask_t<S> backs{};
    if (reverses) {
      backs = dot(heading, course.direction) < S(0.0F);
    }
    return select(backs, Vec2<S>(-heading), heading);
  }
};

}  // namespace wend::inline v0
