// wend/fields/navigation_function.hpp - downhill on a landscape whose only low is the goal.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// The navigation function of Koditschek and Rimon (1990), Advances in Applied Mathematics 11, on a world of discs in
/// an outer disc: phi = gamma / (gamma^k + beta)^(1/k), where gamma = |q - goal|^2 and beta = beta_0 beta_1 .. beta_n,
/// with beta_0 = R^2 - |q - c|^2 for the outer disc and beta_i = |q - c_i|^2 - r_i^2 for the others, r_i grown by the
/// robot's radius and `margin`. It is 0 on the goal only, and 1 on every edge. For discs that lie within the outer one
/// and apart from each other there is a k from which on the goal is its only low, and each disc adds one saddle: how
/// large, depends on the world. With a k that is too small there are other lows; a larger k makes the way more
/// straight, the pass by a disc closer.
///
/// The course is that of -grad phi, which is along -(k beta grad gamma - gamma grad beta). Divided by beta it is a sum
/// of one term a disc, so no power and no product is formed that could overflow.
///
/// A disc that does not reach into the outer one does not count. Within a grown disc the course is straight out of the
/// one whose edge is farthest, and there is no opinion at its centre; else, outside the outer disc, straight to the
/// outer disc's centre. Discs that overlap, or reach across the outer edge, keep the machine away as ever, but there
/// the promise of a single low is void; so it is for a goal that is not in free space. No opinion on the goal, or
/// without one.
struct navigation_function {
  Parameter centre_x = 0.0F;  ///< metres, of the outer disc, in the percept's frame
  Parameter centre_y = 0.0F;  ///< metres
  Parameter radius = 10.0F;   ///< metres, of the outer disc: where the robot's centre may be
  int k = 4;                  ///< from 1
  Parameter margin = 0.1F;    ///< metres between the robot's edge and a disc's, at least

  /// What phi is made of: square metres, and metres to the power of twice the number of discs and two.
  template <Number S>
  struct Parts {
    S gamma;  ///< squared distance to the goal
    S beta;  ///< product of the discs' factors and the outer disc's; over 0 in free space
  };

  /// gamma, and the product beta: negative or 0 where one of its factors is.
  template <Number S, int N>
  [[nodiscard]] constexpr Parts<S> parts(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const here = percept.pose.position - centre<S>();
    Vec2<S> const to_goal = percept.goal - percept.pose.position;
    Parts<S> all{dot(to_goal, to_goal), within(S(radius), length(here))};
    for (Disc<S> const& disc : percept.discs) {
      S const size = grown(disc, percept.robot_radius);
      S const factor = -within(size, length(Vec2<S>(percept.pose.position - disc.centre)));
      all.beta = all.beta * select(counts(disc, size), factor, S(1.0F));
    }
    return all;
  }

  /// Confidence is the size of the sum over the sum of the sizes: near 0 the ground is level.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    // Half of -grad phi's multiple, over beta and the distance to the goal.
    Polar<S> const inward = polar(Vec2<S>(centre<S>() - percept.pose.position));
    S const outer = within(S(radius), inward.length);
    S const wall = percept.goal_distance * inward.length / greatest(outer, S(least_beta));
    S const pull = S(static_cast<Parameter>(k));
    Vec2<S> sum = scaled(percept.goal_direction, pull) + scaled(inward.direction, wall);
    S sum_of_sizes = pull + wall;
    for (Disc<S> const& disc : percept.discs) {
      S const size = grown(disc, percept.robot_radius);
      Polar<S> const away = polar(Vec2<S>(percept.pose.position - disc.centre));
      S const beta = greatest(S(-within(size, away.length)), S(least_beta));
      S const push = select(counts(disc, size), S(percept.goal_distance * away.length / beta), S(0.0F));
      sum = sum + scaled(away.direction, push);
      sum_of_sizes = sum_of_sizes + push;
    }
    mask_t<S> const slopes = percept.goal_confidence > S(0.0F) && sum_of_sizes < S(most);
    Polar<S> const way = polar(select(slopes, sum, zero2<S>()));
    S const share = least(S(way.length / select(slopes, sum_of_sizes, S(1.0F))), S(1.0F));
    mask_t<S> const in_disc = percept.clearance < S(margin);
    mask_t<S> const out_there = outer <= S(0.0F) && inward.length < S(far_away);
    Polar<S> const out = polar(percept.away);
    Polar<S> const back{select(in_disc, out.direction, inward.direction), select(in_disc, out.length, inward.length)};
    mask_t<S> const astray = in_disc || out_there;
    Polar<S> const taken{select(astray, back.direction, way.direction), select(astray, back.length, way.length)};
    return course_along(taken, select(astray, S(1.0F), share));
  }

 private:
  static constexpr Parameter least_beta = 1.0e-9F;  // square metres; closer to an edge the push grows no further
  static constexpr Parameter most = 1.0e18F;        // its square fits single precision

  template <Number S>
  [[nodiscard]] constexpr Vec2<S> centre() const noexcept {
    return {S(centre_x), S(centre_y)};
  }
  template <Number S>
  [[nodiscard]] constexpr S grown(Disc<S> const& disc, S const& robot_radius) const noexcept {
    return disc.radius + robot_radius + S(margin);
  }
  // size^2 - distance^2, exact near the edge.
  template <Number S>
  [[nodiscard]] static constexpr S within(S const& size, S const& distance) noexcept {
    return (size - distance) * (size + distance);
  }
  // Whether a disc of that size reaches into the outer one.
  template <Number S>
  [[nodiscard]] constexpr mask_t<S> counts(Disc<S> const& disc, S const& size) const noexcept {
    return length(Vec2<S>(disc.centre - centre<S>())) - size < S(radius);
  }
};

}  // namespace wend::inline v0
