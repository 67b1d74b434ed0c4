// wend/motion/pace.hpp - how fast the machine may go: never faster than it can stop in the room it has.
#pragma once

#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Speed limit from the stopping distance v * reaction + v^2 / (2 * braking) <= room (the textbook law of reaction and
/// braking distance). `reaction` is the time before the brakes bite: it has to cover the age of the readings, one whole
/// tick, and the delay of the drive.
///
/// Of a disc that moves, where the percept knows it, the closing speed counts: while the machine stops, for
/// reaction + v / braking, a disc comes nearer by no more than that time times the part c of its velocity that points
/// from it to the machine, since it moves on a straight line. So v (reaction + c / braking) + v^2 / (2 braking) +
/// c reaction <= room. Then the machine stands before such a disc can reach it (passive safety: what comes on after
/// that comes to a machine at rest). The pace makes no way for anything; fields do.
///
/// How fast a disc may be: as machine and disc pass each other, c grows by up to u (u + v) / d a second (u the disc's
/// speed, d the distance of centres), and the limit falls by that on top of the braking. A machine that manages to
/// brake by B keeps its margin from every disc with u (u + top_speed) <= (B - braking) d at d = the sum of both radii
/// and the margin, less half of that growth times reaction^2. One that comes straight at the machine may have any
/// speed.
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

  /// The same with a disc that comes nearer by `closing` metres a second, at least 0, until the machine stands: never
  /// more than stoppable(room), and 0 from room = closing * reaction down.
  template <Number S>
  [[nodiscard]] constexpr S stoppable(S const& room, S const& closing) const noexcept {
    S const comes = clamp(closing, S(0.0F), S(far_away));
    S const left = clamp(S(room - comes * S(reaction)), S(0.0F), S(far_away));
    S const late = S(reaction) + comes / S(braking);
    S const per_braking = S(2.0F) / S(braking);
    return S(2.0F) * left / (late + root(S(squared(late) + per_braking * left)));
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
    return room(percept, percept.pose.heading);
  }
  /// The same for a machine that moves along `way`, a unit vector, instead of its heading.
  template <Number S, int N>
  [[nodiscard]] constexpr S room(Percept<S, N> const& percept, Vec2<S> const& way) const noexcept {
    S least_gap = S(far_away);
    for (Disc<S> const& disc : percept.discs) {
      Vec2<S> const from_disc = percept.pose.position - disc.centre;
      S const distance = length(from_disc);
      mask_t<S> const leaving = dot(from_disc, way) > S(behind) * distance;
      least_gap = least(select(leaving, S(far_away), S(distance - disc.radius)), least_gap);
    }
    return least_gap - (percept.robot_radius + S(margin) + overrun<S>());
  }

  /// Metres a second, at least 0: what the discs allow that move as the percept knows. One that comes nearer is not
  /// left behind: it is let pass.
  template <Number S, int N>
  [[nodiscard]] constexpr S among_movers(Percept<S, N> const& percept, Vec2<S> const& way) const noexcept {
    S const kept = percept.robot_radius + S(margin) + overrun<S>();
    S allowed = S(far_away);
    for (int i = 0; i < percept.discs.size(); ++i) {
      Disc<S> const& disc = percept.discs[i];
      Vec2<S> const from_disc = percept.pose.position - disc.centre;
      S const distance = length(from_disc);
      // Divided by no less than 1 mm: nearer than that there is no room whatever the disc does.
      S const closing = dot(from_disc, percept.velocity(i)) / greatest(distance, S(1.0e-3F));
      mask_t<S> const leaving = dot(from_disc, way) > S(behind) * distance && !(closing > S(0.0F));
      S const speed = stoppable(S(distance - disc.radius - kept), closing);
      allowed = least(select(leaving, S(far_away), speed), allowed);
    }
    return allowed;
  }

  /// Metres a second, in [0, top_speed]: what the room and the distance to the goal allow. Without velocities in the
  /// percept every disc stands still, and the room is worked out once for all.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return (*this)(percept, percept.pose.heading);
  }
  /// The same for a machine that moves along `way`, a unit vector, instead of its heading.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept, Vec2<S> const& way) const noexcept {
    if (percept.velocities != nullptr) {
      S const allowed = least(stoppable(percept.goal_distance), among_movers(percept, way));
      return clamp(allowed, S(0.0F), S(top_speed));
    }
    return clamp(stoppable(least(percept.goal_distance, room(percept, way))), S(0.0F), S(top_speed));
  }
};

}  // namespace wend::inline v0
