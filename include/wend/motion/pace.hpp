// wend/motion/pace.hpp - how fast the machine may go: never faster than it can stop in the room it has.
#pragma once

#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Speed limit from the stopping distance v * reaction + v^2 / (2 * braking) <= room (the textbook law of reaction and
/// braking distance). `reaction` is the time before the brakes bite: it has to cover the age of the readings, one whole
/// tick, and the delay of the drive.
struct Pace {
  Parameter top_speed = 0.6F;  ///< metres a second
  Parameter reaction = 0.25F;  ///< seconds
  Parameter braking = 0.8F;  ///< metres a second squared, what the machine surely manages
  Parameter margin = 0.05F;  ///< metres kept to a disc, on top of the stopping distance
  Parameter behind = 0.5F;  ///< cosine: a disc is left behind when the nose is within this of straight away from it

  /// The speed from which the machine can stop in `room` metres: 2 room / (reaction + sqrt(reaction^2 + 2 room /
  /// braking)), the positive root of the stopping law written so that nothing cancels. Increasing; 0 without room, also
  /// when room is not a number; more room than far_away counts as far_away.
  template <Number S>
  [[nodiscard]] constexpr S stoppable(S const& room) const noexcept {
    S const left = clamp(room, S(0.0F), S(far_away));
    S const per_braking = S(2.0F) / S(braking);  // on S: as a Parameter its rounding would show in double
    S const sum = S(reaction) + root(S(squared(S(reaction)) + per_braking * left));
    return S(2.0F) * left / sum;
  }

  /// braking * reaction^2 / 2, metres: what the machine drives in excess of its present limit before the brakes bite,
  /// because it still does a speed it was allowed when there was more room. It cannot be faster than the limit by more
  /// than it will brake off meanwhile, so this is all of it: a machine that follows this pace late keeps the margin.
  template <Number S>
  [[nodiscard]] constexpr S overrun() const noexcept {
    return S(0.5F) * S(braking) * squared(S(reaction));
  }

  /// Metres the machine may still need to stop in: the least clearance, less the margin and the overrun, of the discs
  /// that are not left behind. A disc is left behind when driving straight on leads away from it; without that
  /// exception a machine that was driven too near to something could never leave.
  template <Number S, int N>
  [[nodiscard]] constexpr S room(Percept<S, N> const& percept) const noexcept {
    S least_gap = S(far_away);
    for (Disc<S> const& disc : percept.discs) {
      Vec2<S> const from_disc = percept.pose.position - disc.centre;
      S const distance = length(from_disc);
      mask_t<S> const leaving = dot(from_disc, percept.pose.heading) > S(behind) * distance;
      least_gap = least(select(leaving, S(far_away), S(distance - disc.radius)), least_gap);
    }
    return least_gap - (percept.robot_radius + S(margin) + overrun<S>());
  }

  /// Metres a second, in [0, top_speed]: what the room and the distance to the goal allow.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return clamp(stoppable(least(percept.goal_distance, room(percept))), S(0.0F), S(top_speed));
  }
};

}  // namespace wend::inline v0
