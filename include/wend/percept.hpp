// wend/percept.hpp - what the machine knows this tick, digested once for every field that asks.
#pragma once

#include <concepts>

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
  Pose<S> pose;  ///< of the machine, in the frame of the percept
  Vec2<S> goal;  ///< metres, in the same frame
  DiscSet<S, Capacity> const& discs;  ///< in the same frame; not owned
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

namespace detail {

// A vector with its length. On float and double it is not divided yet: whether it has a direction at all is asked
// first, once. A guest takes the vector apart by itself, which may be tighter.
template <Number S>
[[nodiscard]] Polar<S> with_length(Vec2<S> const& v) noexcept {
  if constexpr (std::floating_point<S>) {
    return {v, length(v)};
  } else {
    return polar(v);
  }
}

// Such a vector as a percept has it: its direction and confidence 1, or (0, 0) and 0 where the mask does not hold.
template <Number S>
struct Sure {
  Vec2<S> direction{S(0.0F), S(0.0F)};
  S confidence{S(0.0F)};
};
template <Number S>
[[nodiscard]] Sure<S> sure_where(mask_t<S> const& some, Polar<S> const& way) noexcept {
  if constexpr (std::floating_point<S>) {
    Sure<S> sure;
    if (some) {
      sure.direction = scaled(way.direction, S(S(1.0F) / way.length));
      sure.confidence = S(1.0F);
    }
    return sure;
  } else {
    return {select(some, way.direction, zero2<S>()), select(some, S(1.0F), S(0.0F))};
  }
}

}  // namespace detail

/// Digests what is known: the direction and distance of the goal, the nearest disc, its clearance and the direction
/// away from it. Metres and seconds; pose, goal and discs in one frame. Of two discs equally near, the first counts.
/// Costs one square root a disc and one more. A pose that is not a number sees no disc (a clearance of far_away), and
/// its goal distance is not a number: ask `sound` first, as a loop does.
template <Number S, int Capacity>
[[nodiscard]] Percept<S, Capacity> look(Pose<S> const& pose, Vec2<S> const& goal, DiscSet<S, Capacity> const& discs,
                                        S robot_radius, S dt) noexcept {
  Disc<S> nearest;
  S least_gap = S(far_away);
  // The way to the nearest disc is kept, so that nothing has to be worked out twice. For a set of states it has to be
  // selected as a direction: taken from the hull of two discs' centres it could be any.
  Polar<S> from_nearest{zero2<S>(), S(0.0F)};
  for (Disc<S> const& disc : discs) {
    S const here = gap(disc, pose.position);
    mask_t<S> const nearer = here < least_gap;
    assign_where(nearer, nearest, disc);
    auto const from_disc = [&]() noexcept { return detail::with_length(Vec2<S>(pose.position - disc.centre)); };
    if constexpr (PlainNumber<S> && !std::floating_point<S>) {
      if (nearer) {  // a guest with plain masks, to whom it is dear
        from_nearest = from_disc();
      }
    } else {
      assign_where(nearer, from_nearest, from_disc());
    }
    least_gap = least(here, least_gap);  // on intervals tighter than the hull of both
  }
  Polar<S> const to_goal = detail::with_length(Vec2<S>(goal - pose.position));
  // A goal that far away is none, and its direction may be no number; so far away stands the stand-in for no disc.
  mask_t<S> const some_goal = to_goal.length > S(no_length) && to_goal.length < S(far_away);
  mask_t<S> const some_disc = from_nearest.length > S(no_length) && least_gap < S(0.5F * far_away);
  detail::Sure<S> const goalward = detail::sure_where(some_goal, to_goal);
  detail::Sure<S> const away = detail::sure_where(some_disc, from_nearest);
  return {pose,
          goal,
          discs,
          robot_radius,
          clamp(dt, S(0.0F), S(far_away)),
          goalward.direction,
          goalward.confidence,
          to_goal.length,
          nearest,
          least_gap - robot_radius,
          away.direction,
          away.confidence,
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
/// Nor one of discs that move.
template <Number S, int Capacity>
Percept<S, Capacity> look(Pose<S> const&, Vec2<S> const&, MovingDiscSet<S, Capacity> const&&, S, S) = delete;

}  // namespace wend::inline v0
