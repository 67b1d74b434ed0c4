// wend/arbiters/signal.hpp - signals: what a guard or a ramp looks at, functors from a percept to a number.
#pragma once

#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

namespace signals {

/// The type of wend::clearance.
struct clearance {
  /// Metres, as in Percept::clearance.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return percept.clearance;
  }
};

/// The type of wend::goal_distance.
struct goal_distance {
  /// Metres, as in Percept::goal_distance.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return percept.goal_distance;
  }
};

/// The type of wend::heading_error.
struct heading_error {
  /// Chord of the angle from the nose to the goal's direction, in [0, 2].
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return length(Vec2<S>(percept.goal_direction - percept.pose.heading));
  }
};

/// The type of wend::disc_before_goal.
struct disc_before_goal {
  /// Cosine of the angle between the ways to the nearest disc and to the goal, in [-1, 1].
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return -dot(percept.away, percept.goal_direction);
  }
};

}  // namespace signals

/// Metres from the robot's edge to the nearest disc's; negative when they overlap; about far_away when there is none.
inline constexpr signals::clearance clearance{};

/// Metres from the robot's centre to the goal.
inline constexpr signals::goal_distance goal_distance{};

/// How far the nose is off the goal's direction, as the chord of the angle on the unit circle, in [0, 2]: within 1 % of
/// the angle in radians up to 0.5. Give thresholds as chord(angle). 1 on the goal, where there is no direction.
inline constexpr signals::heading_error heading_error{};

/// Cosine of the angle between the directions to the nearest disc and to the goal: 1 when the disc stands straight
/// before the goal, 0 abeam, -1 when the goal lies straight away from it. 0 without a disc's or a goal's direction.
inline constexpr signals::disc_before_goal disc_before_goal{};

}  // namespace wend::inline v0
