// wend/percept.hpp - what the machine knows this tick, digested once for every field that asks.
#pragma once

#include "wend/disc.hpp"
#include "wend/members.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Everything a field may read, in one frame: the world's or the robot's own. Made by `look`. It refers to the discs
/// it was made from, which must outlive it.
template <Number S, int Capacity>
struct Percept {
  Pose<S> pose;
  Vec2<S> goal;
  DiscSet<S, Capacity> const& discs;
  S robot_radius;  ///< metres
  S dt;            ///< seconds since the last tick, in [0, far_away]; 0 where what was given was not a number

  Vec2<S> goal_direction;  ///< unit, from the robot to the goal; (0, 0) on it, or farther than far_away
  S goal_confidence;       ///< 1, or 0 where goal_direction is (0, 0)
  S goal_distance;         ///< metres, from the robot's centre
  Disc<S> nearest;         ///< the disc with the least clearance; one far away when there is none
  S clearance;             ///< metres from the robot's edge to the nearest disc's; negative when they overlap
  Vec2<S> away;            ///< unit, from the nearest disc's centre to the robot's; (0, 0) when they coincide or
                           ///< there is no disc
  S away_confidence;       ///< 1, or 0 where away is (0, 0)

  Vec2<S> const* velocities = nullptr;  ///< one a disc, metres a second over the ground; null where all stand still

  /// The velocity of disc i of `discs`: metres a second over the ground, along the axes of this frame.
  [[nodiscard]] Vec2<S> velocity(int i) const noexcept { return velocities == nullptr ? zero2<S>() : velocities[i]; }
};

/// Digests what is known: the direction and distance of the goal, the nearest disc, its clearance and the direction
/// away from it. Metres and seconds; pose, goal and discs in one frame. Of two discs equally near, the first counts.
/// Costs one square root a disc and two more. A pose that is not a number sees no disc (a clearance of far_away), and
/// its goal distance is not a number: ask `sound` first, as a loop does.
template <Number S, int Capacity>
[[nodiscard]] Percept<S, Capacity> look(Pose<S> const& pose, Vec2<S> const& goal, DiscSet<S, Capacity> const& discs,
                                        S robot_radius, S dt) noexcept {
  Disc<S> nearest;
  S least_gap = S(far_away);
  // On a plain number the direction is worked out once, at the end. For a set of states it has to be selected as a
  // direction: taken from the hull of two discs' centres it could be any.
  Polar<S> away{zero2<S>(), S(0.0F)};
  for (Disc<S> const& disc : discs) {
    S const here = gap(disc, pose.position);
    mask_t<S> const nearer = here < least_gap;
    assign_where(nearer, nearest, disc);
    if constexpr (!PlainNumber<S>) {
      assign_where(nearer, away, polar(Vec2<S>(pose.position - disc.centre)));
    }
    least_gap = least(here, least_gap);  // on intervals tighter than the hull of both
  }
  Polar<S> const to_goal = polar(Vec2<S>(goal - pose.position));
  if constexpr (PlainNumber<S>) {
    away = polar(Vec2<S>(pose.position - nearest.centre));
  }
  // A goal that far away is none, and its direction may be no number; so far away stands the stand-in for no disc.
  mask_t<S> const some_goal = to_goal.length > S(no_length) && to_goal.length < S(far_away);
  mask_t<S> const some_disc = away.length > S(no_length) && least_gap < S(0.5F * far_away);
  // Component by component: copied whole, g++ 12 stores two halves and then waits to load them as one.
  return {pose,
          goal,
          discs,
          robot_radius,
          clamp(dt, S(0.0F), S(far_away)),
          {select(some_goal, to_goal.direction.x(), S(0.0F)), select(some_goal, to_goal.direction.y(), S(0.0F))},
          select(some_goal, S(1.0F), S(0.0F)),
          to_goal.length,
          nearest,
          least_gap - robot_radius,
          {select(some_disc, away.direction.x(), S(0.0F)), select(some_disc, away.direction.y(), S(0.0F))},
          select(some_disc, S(1.0F), S(0.0F)),
          nullptr};
}

/// The same of discs that move: what is digested is where they are now, and the percept knows how they move.
template <Number S, int Capacity>
[[nodiscard]] Percept<S, Capacity> look(Pose<S> const& pose, Vec2<S> const& goal,
                                        MovingDiscSet<S, Capacity> const& discs, S robot_radius, S dt) noexcept {
  DiscSet<S, Capacity> const& places = discs;
  Percept<S, Capacity> percept = look(pose, goal, places, robot_radius, dt);
  percept.velocities = discs.velocities();
  return percept;
}

/// A percept refers to its discs: give look a set that outlives it.
template <Number S, int Capacity>
Percept<S, Capacity> look(Pose<S> const&, Vec2<S> const&, DiscSet<S, Capacity> const&&, S, S) = delete;
template <Number S, int Capacity>
Percept<S, Capacity> look(Pose<S> const&, Vec2<S> const&, MovingDiscSet<S, Capacity> const&&, S, S) = delete;

}  // namespace wend::inline v0
