// wend/fields/potential_field.hpp - attraction by the goal, repulsion by every disc.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// The artificial potential field of Khatib (1986), Int. J. Robotics Research 5(1): the goal attracts with
/// U = attraction/2 * d^2, and each disc nearer than `influence` repels with U = repulsion/2 * (1/rho - 1/influence)^2
/// (his FIRAS function), rho being the clearance from the robot's edge. Its known faults are part of it: it comes to
/// rest where the two cancel (a goal straight behind a disc), and it cannot reach a goal that stands too near a disc.
///
/// With `goal_power` n over 0 the repulsion is weighted by the distance d to the goal,
/// U = repulsion/2 * (1/rho - 1/influence)^2 * d^n (Ge and Cui 2000, IEEE Trans. Robotics and Automation 16(5), eq. 7):
/// it fades on the way there, so that the goal is the lowest place however near a disc it stands. The traps behind
/// discs stay. With `conic_beyond` the attraction is a cone from that distance on, attraction * conic_beyond * (d -
/// conic_beyond / 2), and quadratic within (the usual combination: Latombe 1991, Robot Motion Planning, chapter 7): far
/// from the goal the pull grows no further, and a disc is felt as much as near it.
struct potential_field {
  Parameter attraction = 1.0F;  ///< newton a metre, if you think of it as a force
  Parameter repulsion = 0.05F;  ///< newton square metre
  Parameter influence = 1.0F;  ///< metres: beyond, a disc is not felt
  Parameter closest = 0.01F;  ///< metres: clearance below which the repulsion grows no further
  int goal_power = 0;  ///< Ge and Cui's n, from 0 (Khatib) to 4; 2 leaves no jerk on the goal
  Parameter conic_beyond = far_away;  ///< metres from the goal, over 0

  /// The sum of the forces, and the sum of their sizes.
  template <Number S>
  struct Force {
    Vec2<S> sum;  ///< newton, if you think of it as a force
    S sum_of_sizes;  ///< newton; no less than the size of the sum
  };

  /// -grad U (Khatib's eq. 10 and 17; Ge and Cui's eq. 9 to 11). Towards the goal -attraction * (x - goal); away from a
  /// disc repulsion * (1/rho - 1/influence) / rho^2 * d^n; and towards the goal once more
  /// n/2 * repulsion * (1/rho - 1/influence)^2 * d^(n-1).
  template <Number S, int N>
  [[nodiscard]] constexpr Force<S> force(Percept<S, N> const& percept) const noexcept {
    S const distance = percept.goal_distance;
    S const pull = S(attraction) * select(distance > S(conic_beyond), S(conic_beyond), distance);
    Force<S> total{scaled(percept.goal_direction, pull), pull};
    if (goal_power > 0) {
      add_pushes<true>(percept, total);
    } else {
      add_pushes<false>(percept, total);
    }
    return total;
  }

  /// The direction of the force. Confidence is the size of the sum over the sum of the sizes: near 0 the forces cancel.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Force<S> const total = force(percept);
    Polar<S> const way = polar(total.sum);
    S const share = way.length / select(way.length > S(0.0F), total.sum_of_sizes, S(1.0F));
    return course_along(way, least(share, S(1.0F)));
  }

 private:
  // Apart for the weight, so that Khatib's own pays nothing for it a disc.
  template <bool weighted, Number S, int N>
  constexpr void add_pushes(Percept<S, N> const& percept, Force<S>& total) const noexcept {
    [[maybe_unused]] S weight = S(1.0F);  // d^n
    [[maybe_unused]] S slope = S(0.0F);  // n d^(n-1)
    if constexpr (weighted) {
      for (int i = 0; i < goal_power && i < 4; ++i) {
        slope = slope * percept.goal_distance + weight;
        weight = weight * percept.goal_distance;
      }
    }
    // Divided in S: the quotient of two Parameters would leave a push at the edge of the influence in double.
    S const edge = S(1.0F) / S(influence);
    for (Disc<S> const& disc : percept.discs) {
      Polar<S> const away = polar(Vec2<S>(percept.pose.position - disc.centre));
      S const rho = greatest(S(away.length - disc.radius - percept.robot_radius), S(closest));
      S const push = S(repulsion) * (S(1.0F) / rho - edge) / squared(rho);
      S felt = select(rho < S(influence), push, S(0.0F));
      if constexpr (weighted) {
        felt = felt * weight;
      }
      total.sum = total.sum + scaled(away.direction, felt);
      total.sum_of_sizes = total.sum_of_sizes + felt;
      if constexpr (weighted) {
        S const excess = select(rho < S(influence), S(S(1.0F) / rho - edge), S(0.0F));
        S const homeward = S(0.5F) * S(repulsion) * squared(excess) * slope;
        total.sum = total.sum + scaled(percept.goal_direction, homeward);
        total.sum_of_sizes = total.sum_of_sizes + homeward;
      }
    }
  }
};

}  // namespace wend::inline v0
