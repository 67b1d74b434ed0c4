// wend/motion/pace.hpp - how fast the machine may go: never faster than it can stop in the room it has.
#pragma once

#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Speed limit from the stopping distance v * reaction + v^2 / (2 * braking) <= room. `reaction` is the time before the
/// brakes bite: it has to cover the age of the readings, one whole tick, and the delay of the drive.
struct Pace {
  Parameter top_speed = 0.6F;  ///< metres a second
  Parameter reaction = 0.25F;  ///< seconds
  Parameter braking = 0.8F;    ///< metres a second squared, what the machine surely manages
  Parameter margin = 0.05F;    ///< metres kept to a disc, on top of the stopping distance
  Parameter behind = 0.5F;     ///< cosine: a disc is left behind when the nose is within this of straight away from it

  /// The speed from which the machine can stop in `room` metres: 2 room / (reaction + sqrt(reaction^2 + 2 room /
  /// braking)), the positive root of the stopping law written so that nothing cancels. 0 without room; increasing.
  template <Number S>
  [[nodiscard]] constexpr S stoppable(S const& room) const noexcept {
    S const left = greatest(room, S(0.0F));
    S const sum = S(reaction) + root(S(S(squared(reaction)) + S(2.0F / braking) * left));
    return S(2.0F) * left / sum;
  }

  /// Metres the machine may still need to stop in: the least clearance, less the margin, of the discs that are not left
  /// behind. A disc is left behind when driving straight on leads away from it; without that exception a machine that
  /// was driven too near to something could never leave.
  template <Number S, int N>
  [[nodiscard]] constexpr S room(Percept<S, N> const& percept) const noexcept {
    S room = S(far_away);
    for (Disc<S> const& disc : percept.discs) {
      Vec2<S> const from_disc = percept.pose.position - disc.centre;
      S const distance = length(from_disc);
      mask_t<S> const leaving = dot(from_disc, percept.pose.heading) > S(behind) * distance;
      room = least(select(leaving, S(far_away), S(distance - disc.radius)), room);
    }
    return room - (percept.robot_radius + S(margin));
  }

  /// Metres a second, in [0, top_speed]: what the room and the distance to the goal allow.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return clamp(stoppable(least(percept.goal_distance, room(percept))), S(0.0F), S(top_speed));
  }
};

}  // namespace wend::inline v0
