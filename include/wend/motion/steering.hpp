// wend/motion/steering.hpp - from a course to a body velocity, by cross and dot products.
#pragma once

#include "wend/field.hpp"
#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Turns toward the course at a rate proportional to the sine of the error, full rate when the course lies behind, and
/// drives with the cosine of the error times the course's share of the speed allowed: in place when the course is abeam
/// or behind.
struct Steering {
  Parameter gain = 3.0F;  ///< radians a second for an error with sine 1
  Parameter max_turn_rate = 1.5F;  ///< radians a second

  /// `heading` and course in one frame; `allowed` in metres a second. A course exactly astern is turned to leftwards.
  /// A course without direction gives no motion, nor does one that is not a number.
  template <Number S>
  [[nodiscard]] constexpr BodyVelocity<S> operator()(Course<S> const& course, Vec2<S> const& heading,
                                                     S const& allowed) const noexcept {
    S const ahead = dot(heading, course.direction);
    S const left = cross(heading, course.direction);
    S const full = select(left < S(0.0F), S(-1.0F), S(1.0F));
    S const wanted = S(gain) * select(ahead < S(0.0F), full, left);
    S const turn_rate = clamp(wanted, -S(max_turn_rate), S(max_turn_rate));
    S const share = clamp(course.speed_share, S(0.0F), S(1.0F));
    // greatest takes a product that is not a number for 0; clamp would take it for a full turn to the right.
    return {greatest(S(allowed * share * ahead), S(0.0F)), select(finite(wanted), turn_rate, S(0.0F))};
  }
};

}  // namespace wend::inline v0
