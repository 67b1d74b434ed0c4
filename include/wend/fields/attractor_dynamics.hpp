// wend/fields/attractor_dynamics.hpp - the heading as a dynamical system, drawn to the goal and pushed off by discs.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// The heading phi as the state of a dynamical system (Schoener and Dose 1992, Robotics and Autonomous Systems 10):
///
///     d phi / dt = -attraction sin(phi - psi_goal) + sum over discs of push (phi - psi) window(phi - psi)
///
/// with an attractor at the goal's bearing psi_goal and a repellor at each disc's bearing psi. Where several act, fixed
/// points arise and vanish: two discs far apart leave an attractor between them, two that are near make one repellor.
///
/// The source's exponentials are replaced, so that the same bits come out everywhere and nothing needs a C library:
/// - exp(-x) by (1 + x/4)^-4, which has its value and slope at 0 and is nowhere smaller, so nothing repels less;
/// - phi - psi by its sine, its square by 2 (1 - cosine), so that no angle is needed;
/// - the width by the sine of half the angle that a disc and the machine's radius cover.
///
/// With them push = repulsion (1 + clearance / (4 fade))^-4 and window = (1 + (1 - cosine) / (4 width^2))^-4.
///
/// The course is the present heading turned by the angle whose sine is `lead` times the rate. Steered with a gain of
/// 1 / lead (the gain of Steering, whose default fits this one's) the machine turns at that very rate, up to 0.96 /
/// lead: so the state is the heading itself, there is nothing to remember, and nothing to drift from what the machine
/// really does. Exactly away from the goal it does not turn, as in the source. No opinion without a goal.
struct attractor_dynamics {
  Parameter attraction = 1.2F;  ///< radians a second
  Parameter repulsion = 10.0F;  ///< radians a second, at contact
  Parameter fade = 0.4F;  ///< metres of clearance over which the push falls to four tenths
  Parameter margin = 0.05F;  ///< metres by which discs are taken larger when their width is asked for
  Parameter lead = 1.0F / 3.0F;  ///< seconds

  /// d phi / dt: radians a second, counter-clockwise.
  template <Number S, int N>
  [[nodiscard]] constexpr S rate(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const nose = polar(percept.pose.heading).direction;
    S total = S(attraction) * cross(nose, percept.goal_direction);
    for (Disc<S> const& disc : percept.discs) {
      Polar<S> const to_disc = polar(Vec2<S>(disc.centre - percept.pose.position));
      S const contact = disc.radius + percept.robot_radius;
      S const room = greatest(S(to_disc.length - contact), S(0.0F));
      S const push = S(repulsion) * falling(S(room / S(fade)));
      // No more than 1: a disc that is touched covers half of all directions.
      S const width = least(S((contact + S(margin)) / to_disc.length), S(1.0F));
      S const off = greatest(S(S(1.0F) - dot(to_disc.direction, nose)), S(0.0F));
      S const window = falling(S(off / squared(width)));
      total = total + push * cross(to_disc.direction, nose) * window;
    }
    return total;
  }

  /// The heading that `rate` leads to in `lead` seconds, off the nose by the angle whose sine is rate times lead, up to
  /// 74 degrees. With confidence 1.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    constexpr Parameter sharpest = 0.96F;  // the sine of 74 degrees, and its cosine is 0.28
    S const sine = clamp(S(S(lead) * rate(percept)), S(-sharpest), S(sharpest));
    Vec2<S> const turned{root(S(S(1.0F) - squared(sine))), sine};
    Vec2<S> const way = turned_out_of(percept.pose.heading, turned);
    return course_along(Vec2<S>(select(percept.goal_confidence > S(0.0F), way, zero2<S>())), S(1.0F));
  }

 private:
  // (1 + x/4)^-4, for x >= 0.
  template <Number S>
  [[nodiscard]] static constexpr S falling(S const& x) noexcept {
    return S(1.0F) / squared(S(squared(S(S(1.0F) + S(0.25F) * x))));
  }
};

}  // namespace wend::inline v0
