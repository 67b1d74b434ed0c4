// wend/fields/to_dock.hpp - to a pose, not just to a point.
#pragma once

#include "wend/angle.hpp"
#include "wend/field.hpp"

namespace wend::inline v0 {

/// To the goal so that the machine arrives with its nose along `heading`, forwards only. After Aicardi, Casalino,
/// Bicchi and Balestrino (1995), IEEE Robotics and Automation Magazine 2(1): polar coordinates about the dock, speed in
/// proportion to the distance, a Lyapunov function. Their law has angles in it; this one has their tangents.
///
/// Let t be the angle from the line of sight (machine to dock) to the dock's heading. The course deviates from the line
/// of sight by the angle a to the other side, with tan a = bend tan(t / 2): sine and cosine of t / 2 are the cross and
/// dot products of the line of sight and the bisector of the two directions. Since a stays under pi/2 the distance e
/// only falls. A machine on its course has de/dt = -v cos a and dt/dt = -(v / e) sin a, hence sin(t / 2) is in
/// proportion to e^(bend / 2): with bend 2 it comes in on arcs that end with a finite curvature, over 2 with none.
///
/// A unicycle that steers by turn rate = -K sin(n), n being the angle from course to nose, with K constant, at speed
/// v = g e cos(n) with g <= G (no motion with the course abeam or behind), has the Lyapunov function, for bend 2,
///
///     V = ln(1 + (e / slow_within)^2) / 4 - 8 ln cos(t / 2) + (1 - cos n).
///
/// With s, c = sin, cos of t / 2, D^2 = c^2 + 4 s^2, X = s cos n and Y = |sin n|, its derivative is no more than
/// -8 g X^2 / D + 5 g X Y / D - (K - 2 g) Y^2 - g (c / D) cos(n)^2 (e^2 / (e^2 + slow_within^2)) / 2, which is negative
/// for K > 2.8 G. Here G = speed allowed / slow_within; `Steering` has K = its gain as long as its largest turn rate
/// does not bind, and never less than the smaller of the two. To first order in the angles it is Aicardi's law with
/// k = K - G and h = bend K / (2 G).
///
/// Within `close` of the dock the course is `heading` with a speed share of 0: a machine that can turns on the spot.
/// On the line straight ahead of the dock, where both ways round are equal, the dock is left on the left hand. No
/// opinion without a goal. `heading` is a direction in the frame of the percept, so that has to be one that stays put.
struct to_dock {
  Bearing heading{};  ///< unit vector: where the nose points when docked
  Parameter bend = 2.0F;  ///< 1 to 4: larger ones swing out more and straighten earlier
  Parameter slow_within = 0.5F;  ///< metres from the dock within which the speed share falls in proportion
  Parameter close = 0.02F;  ///< metres at which it has arrived, but for the heading

  /// Toward the dock on an arc that ends along `heading`, with confidence 1.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const& sight = percept.goal_direction;
    Vec2<S> const docked{S(heading.x), S(heading.y)};
    Polar<S> const bisector = polar(Vec2<S>(sight + docked));
    mask_t<S> const opposite = !(bisector.length > S(no_length));
    S const cosine = greatest(dot(sight, bisector.direction), S(0.0F));
    S const sine = select(opposite, S(1.0F), cross(sight, bisector.direction));
    Vec2<S> const way = scaled(sight, cosine) - scaled(left_of(sight), S(S(bend) * sine));
    mask_t<S> const there = percept.goal_distance <= S(close);
    S const share = clamp(S(percept.goal_distance / S(slow_within)), S(0.0F), S(1.0F));
    return course_along(Vec2<S>(select(there, docked, way)), S(1.0F), select(there, S(0.0F), share));
  }
};

}  // namespace wend::inline v0
