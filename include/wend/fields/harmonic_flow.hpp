// wend/fields/harmonic_flow.hpp - downstream: the flow into a sink at the goal, past every disc.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// A uniform stream past a disc: the circle theorem (Milne-Thomson 1940, Proc. Camb. Phil. Soc. 36) gives for the
/// stream U, a disc of radius a and a point r e from its centre the velocity U - a^2/r^2 (2 (U . e) e - U). Of the unit
/// of `stream`; tangent on the edge, of size 2 |U| sin(theta), theta being the angle from U to e. Within the disc as at
/// the place of its edge straight outside; (0, 0) at its centre.
template <Number S>
[[nodiscard]] constexpr Vec2<S> stream_past(Disc<S> const& disc, Vec2<S> const& stream, Vec2<S> const& point) noexcept {
  Polar<S> const out = polar(Vec2<S>(point - disc.centre));
  S const share = squared(S(disc.radius / greatest(greatest(out.length, disc.radius), S(no_length))));
  Vec2<S> const doublet = scaled(out.direction, S(S(2.0F) * dot(stream, out.direction))) - stream;
  return select(out.length > S(no_length), Vec2<S>(stream - scaled(doublet, share)), zero2<S>());
}

/// The flow of an ideal fluid into a sink at the goal, as a way there: harmonic functions for this are due to Connolly,
/// Burns and Weiss (1990) and Kim and Khosla (1992), stream functions and the circle theorem to Waydo and Murray (2003,
/// Vehicle motion planning using stream functions). Each disc is grown by the robot's radius and `margin`. A sink at g
/// outside a disc of radius a around c has its images in the disc: a sink at c + a^2 (g - c) / |g - c|^2, and a source
/// of the same strength at c.
///
/// With one disc, or none, this flow is exact: both components of the velocity are harmonic outside the disc, so that
/// its potential has no low but the goal; it is tangent on the edge, and stands still only where the line from the goal
/// through the disc's centre meets the edge, in two saddles.
///
/// With several, each disc's flow counts by the inverse of the gap to its edge (Shepard 1968; for two discs, Waydo and
/// Murray's weights). On the edge of each disc its own flow alone is left, so the flow is tangent on every one, and
/// near an edge the part into it is of the order of the gap. It is no longer harmonic: nothing rules out a place
/// between discs that draws it in, and the notch of two grown discs that overlap, on the side away from the goal, is
/// one.
///
/// What rounding leaves of it into an edge grows with the distance to the goal, since a sink far away and its image
/// nearly cancel: in single precision, at an edge of a metre's radius, about 3e-7 of a unit for each metre to the goal.
///
/// Within a grown disc the course is straight out of the one whose edge is farthest, and there is no opinion at its
/// centre. Where two edges meet, both flows count by half. A disc that the goal stands in has no images: it is run
/// into, to its edge. No opinion on the goal, without one, and where the flow stands still.
struct harmonic_flow {
  Parameter margin = 0.1F;  ///< metres between the robot's edge and a disc's, at least

  /// The velocity, times the distance to the goal: without discs a unit vector, the goal's direction. Goes on within a
  /// disc, where it means nothing.
  template <Number S, int N>
  [[nodiscard]] constexpr Vec2<S> flow(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const free = percept.goal_direction;
    Vec2<S> sum = free;
    S apart = S(far_away);  // one over the sum of one over the gaps
    bool first = true;
    for (Disc<S> const& disc : percept.discs) {
      S const radius = disc.radius + percept.robot_radius + S(margin);
      Vec2<S> const here = percept.pose.position - disc.centre;
      Vec2<S> const goal = percept.goal - disc.centre;
      S const goal_squared = dot(goal, goal);
      Vec2<S> const image = scaled(goal, S(squared(radius) / greatest(goal_squared, S(least_square))));
      Vec2<S> const bent = from_source(here) - from_source(Vec2<S>(here - image));
      mask_t<S> const outside = goal_squared >= squared(radius);
      Vec2<S> const one = select(outside, Vec2<S>(free + scaled(bent, percept.goal_distance)), free);
      S const edge = greatest(S(length(here) - radius), S(no_length));
      S const both = apart + edge;
      sum = first ? one : Vec2<S>(scaled(sum, S(edge / both)) + scaled(one, S(apart / both)));
      apart = first ? edge : S(apart * edge / both);
      first = false;
    }
    return sum;
  }

  /// The direction of the flow. Confidence is its speed over that of the flow without discs, at most 1: near 0 it
  /// stands still.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const down = flow(percept);
    mask_t<S> const runs = percept.goal_confidence > S(0.0F) && magnitude(down.x()) < S(far_away) &&
                           magnitude(down.y()) < S(far_away);
    mask_t<S> const within = percept.clearance < S(margin);
    Polar<S> const way = polar(select(within, percept.away, select(runs, down, zero2<S>())));
    return course_along(way, least(way.length, S(1.0F)));
  }

 private:
  static constexpr Parameter least_square = 1.2e-38F;  // of no_length

  // The velocity at a place as seen from a source; (0, 0) on it.
  template <Number S>
  [[nodiscard]] static constexpr Vec2<S> from_source(Vec2<S> const& v) noexcept {
    return scaled(v, S(S(1.0F) / greatest(S(squared(v.x()) + squared(v.y())), S(least_square))));
  }
};

}  // namespace wend::inline v0
