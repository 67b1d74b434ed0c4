// wend/fields/velocity_obstacle.hpp - past discs that move, at a set speed.
#pragma once

#include <array>

#include "wend/field.hpp"
#include "wend/fields/velocity_cone.hpp"

namespace wend::inline v0 {

/// The direction nearest to the goal's in which the machine, driving at `speed`, touches no disc within the horizon if
/// all keep their velocities (Fiorini and Shiller 1998, Int. J. Robotics Research 17(7): a velocity is safe where it
/// lies outside every disc's cone, shifted by the disc's velocity). Exact, not a search over samples: the nearest safe
/// direction is the goal's own or one where the circle of the speed crosses the rim of some disc's cone, and all of
/// these are tried. The rim is the two edges of the cone and, where the horizon ends it, an arc. For discs to either
/// side of the goal that are passed with the same detour, the choice hangs on the last bits, and is not remembered.
///
/// The horizon is the time to the goal, kept in [shortest, horizon], so that what stands behind the goal does not bar
/// the way to it. Where no direction is safe, the one of those tried with the longest time to a contact, straight away
/// from the nearest disc among them, with a confidence and a speed share of that time over the horizon; no opinion when
/// all of them are in contact at once. No opinion without a goal.
///
/// Trusts that discs keep their velocities; when they are machines that dodge as well, both may dodge to and fro:
/// `shared_avoidance` is for these. Trusts that the machine drives at the set speed, too: one that its pace slows down
/// because a disc comes near is late, and may come to stand in the way of what does not give way. `reserve` helps, and
/// a pace with a short reaction and strong brakes. Costs up to (6 N + 2) N times of
/// contact for N discs.
struct velocity_obstacle {
  Parameter speed = 0.6F;  ///< metres a second that the machine drives where it may; the top speed of its pace
  Parameter horizon = 4.0F;  ///< seconds; contacts after it do not count
  Parameter shortest = 0.5F;  ///< seconds; least horizon near the goal
  Parameter margin = 0.12F;  ///< metres to stay clear of a disc; more than the margin of the pace, which stops at that
  Parameter reserve = 0.5F;  ///< seconds: a disc that moves is taken larger by its own way in this time

  /// The safe direction of those tried that is nearest to the goal's, or the one that is safe the longest.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    S const set = S(speed);
    S const until = clamp(S(percept.goal_distance / set), S(shortest), S(horizon));
    Choice<S> choice;
    consider(percept, percept.goal_direction, until, choice);
    consider(percept, percept.away, until, choice);
    for (int i = 0; i < percept.discs.size(); ++i) {
      for (Vec2<S> const& velocity : crossings(percept, i, until)) {
        consider(percept, velocity, until, choice);
      }
    }
    S const share = clamp(S(choice.longest / until), S(0.0F), S(1.0F));
    mask_t<S> const some = percept.goal_confidence > S(0.0F);
    S const sure = select(choice.any_safe, S(1.0F), share);
    Vec2<S> const direction = select(choice.any_safe, choice.safe, choice.latest);
    return {select(some, direction, zero2<S>()), select(some, sure, S(0.0F)), sure};
  }

 private:
  // An edge that a velocity lies on is told from one it lies beyond by taking the disc this much smaller: hundreds of
  // roundings in single precision, and less than a tenth of a millimetre for a disc of half a metre.
  static constexpr Parameter rounding = 1.0e-4F;

  template <Number S>
  struct Choice {
    mask_t<S> any_safe{};
    Vec2<S> safe{S(0.0F), S(0.0F)};  // nearest to the goal's direction
    S nearness{S(-2.0F)};  // the cosine between the two
    Vec2<S> latest{S(0.0F), S(0.0F)};  // with the longest time to a contact
    S longest{S(0.0F)};  // seconds
  };

  template <Number S, int N>
  [[nodiscard]] constexpr S grown(Percept<S, N> const& percept, int i) const noexcept {
    S const way = S(reserve) * length(percept.velocity(i));
    return percept.discs[i].radius + percept.robot_radius + S(margin) + way;
  }

  // Keeps the direction of a velocity if it is the best so far. (0, 0) is no candidate, and once there is a safe one,
  // only what is nearer to the goal's direction needs a closer look.
  template <Number S, int N>
  constexpr void consider(Percept<S, N> const& percept, Vec2<S> const& velocity, S const& until,
                          Choice<S>& choice) const noexcept {
    Polar<S> const way = polar(velocity);
    S const nearness = dot(way.direction, percept.goal_direction);
    mask_t<S> const worth = way.length > S(no_length) && (!choice.any_safe || nearness > choice.nearness);
    choice = choose(
        worth, [&]() noexcept { return looked_at(percept, way.direction, nearness, until, choice); },
        [&]() noexcept { return choice; });
  }

  template <Number S, int N>
  [[nodiscard]] constexpr Choice<S> looked_at(Percept<S, N> const& percept, Vec2<S> const& direction, S const& nearness,
                                              S const& until, Choice<S> choice) const noexcept {
    Vec2<S> const planned = scaled(direction, S(speed));
    S contact = S(far_away);
    for (int i = 0; i < percept.discs.size(); ++i) {
      Vec2<S> const offset = percept.discs[i].centre - percept.pose.position;
      S const radius = grown(percept, i) * S(1.0F - rounding);
      contact = least(contact_time(offset, radius, Vec2<S>(planned - percept.velocity(i))), contact);
    }
    mask_t<S> const better = contact >= until && nearness > choice.nearness;
    mask_t<S> const later = contact > choice.longest;
    choice.safe = select(better, direction, choice.safe);
    choice.nearness = select(better, nearness, choice.nearness);
    choice.any_safe = choice.any_safe || better;
    choice.latest = select(later, direction, choice.latest);
    choice.longest = select(later, contact, choice.longest);
    return choice;
  }

  // The velocities of the set speed on the rim of disc i's cone; (0, 0) for each that there is not.
  template <Number S, int N>
  [[nodiscard]] constexpr std::array<Vec2<S>, 6> crossings(Percept<S, N> const& percept, int i,
                                                           S const& until) const noexcept {
    Vec2<S> const offset = percept.discs[i].centre - percept.pose.position;
    Vec2<S> const of_disc = percept.velocity(i);
    S const radius = grown(percept, i);
    S const set_squared = squared(S(speed));
    VelocityCone<S> const cone = velocity_cone(offset, radius);
    std::array<Vec2<S>, 6> found;
    std::size_t count = 0;
    for (Vec2<S> const& edge : {cone.left, cone.right}) {  // |of_disc + k edge| = speed
      S const rest = set_squared - squared(cross(of_disc, edge));
      S const half = root(select(rest > S(0.0F), rest, S(0.0F)));
      for (S const& k : {S(half - dot(of_disc, edge)), S(-half - dot(of_disc, edge))}) {
        Vec2<S> const velocity = of_disc + scaled(edge, k);
        found[count++] = select(rest > S(0.0F), velocity, zero2<S>());
      }
    }
    // At the horizon's end the machine is just in contact: |offset + until (of_disc - velocity)| = radius.
    Polar<S> const middle = polar(Vec2<S>(of_disc + scaled(offset, S(S(1.0F) / until))));
    S const reach = radius / until;
    S const along = S(0.5F) * (middle.length + (set_squared - squared(reach)) / middle.length);
    S const rest = set_squared - squared(along);
    S const half = root(select(rest > S(0.0F), rest, S(0.0F)));
    for (S const& across : {half, S(-half)}) {
      Vec2<S> const velocity = scaled(middle.direction, along) + scaled(left_of(middle.direction), across);
      found[count++] = select(rest > S(0.0F) && middle.length > S(no_length), velocity, zero2<S>());
    }
    return found;
  }
};

}  // namespace wend::inline v0
