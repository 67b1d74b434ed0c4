// wend/fields/through_gap.hpp - through a gap between discs.
#pragma once

#include <array>

#include "wend/angle.hpp"
#include "wend/field.hpp"
#include "wend/fields/velocity_cone.hpp"

namespace wend::inline v0 {

/// Straight to the goal where nothing stands in the way to it, else through a gap: the gap method as in Sezer and
/// Gokasan (2012), Robotics and Autonomous Systems 60(9), with gaps between tangents to discs instead of between
/// readings. A disc, grown by the machine's radius and the margin, bars the directions between its two tangents; a gap
/// runs from the left tangent of one disc to the right tangent of the next, counter-clockwise. So whatever gap there is
/// can be driven through on a straight line.
///
/// The course is the middle of a gap, or, in one wider than two `inset`, the direction `inset` off one of its ends. Of
/// all these the one with the largest score counts: cosine of the angle to the goal, plus `keeping` times that of the
/// angle to the nose, plus `width` times the gap's width in half turns. What keeps the machine from dithering between
/// two gaps that are as good is its own nose, not a memory.
///
/// Discs farther than `reach`, or behind the goal, bar nothing. One that touches the machine bars the half-plane it
/// lies in. No opinion without a goal, at the very centre of a disc, and where no gap is left. Costs N^2 for N discs,
/// three times each.
struct through_gap {
  Parameter reach = 1.5F;  ///< metres of clearance up to which a disc counts
  Parameter margin = 0.05F;  ///< metres by which discs are taken larger
  Parameter keeping = 0.4F;  ///< weight of going on as the nose points
  Parameter width = 0.3F;  ///< weight of a gap's width
  Bearing inset = bearing(0.2);  ///< unit vector at the angle from a wide gap's end, under pi/4

  /// Straight to the goal, or through the gap with the largest score.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    std::array<Bar<S>, static_cast<std::size_t>(N)> bars;
    int const count = percept.discs.size();
    mask_t<S> centred{};
    for (int i = 0; i < count; ++i) {
      Disc<S> const& disc = percept.discs[i];
      Vec2<S> const offset = disc.centre - percept.pose.position;
      Polar<S> const to_disc = polar(offset);
      S const edge = to_disc.length - disc.radius;
      VelocityCone<S> const cone = velocity_cone(offset, S(disc.radius + percept.robot_radius + S(margin)));
      mask_t<S> const at_centre = !(to_disc.length > S(no_length));
      at(bars, i) = {to_disc.direction, cone,
                     !at_centre && edge - percept.robot_radius < S(reach) && edge < percept.goal_distance};
      centred = centred || at_centre;
    }
    Choice<S> choice;
    for (int i = 0; i < count; ++i) {
      consider_gap_from(percept, bars, i, choice);
    }
    mask_t<S> const some = percept.goal_confidence > S(0.0F) && !centred;
    Vec2<S> const way = select(open(bars, count, percept.goal_direction), percept.goal_direction, choice.direction);
    return course_along(Vec2<S>(select(some, way, zero2<S>())), S(1.0F));
  }

 private:
  // A direction on a tangent is told from one that is barred by this much of a cosine: some roundings in single
  // precision.
  static constexpr Parameter rounding = 1.0e-6F;

  template <Number S>
  struct Bar {
    Vec2<S> axis{S(0.0F), S(0.0F)};
    VelocityCone<S> cone{};
    mask_t<S> counts{};
  };
  template <Number S>
  struct Choice {
    Vec2<S> direction{S(0.0F), S(0.0F)};
    S score{S(-far_away)};
  };

  template <typename Array>
  [[nodiscard]] static constexpr auto& at(Array& all, int i) noexcept {
    return all[static_cast<std::size_t>(i)];
  }

  // Whether no bar lies across a direction.
  template <Number S, typename Bars>
  [[nodiscard]] static constexpr mask_t<S> open(Bars const& bars, int count, Vec2<S> const& direction) noexcept {
    mask_t<S> barred{};
    for (int k = 0; k < count; ++k) {
      Bar<S> const& bar = at(bars, k);
      barred = barred || (bar.counts && dot(direction, bar.axis) > bar.cone.cosine + S(rounding));
    }
    return !barred;
  }

  // Grows with the angle from one direction to another, counter-clockwise: 0 to 4 for a whole turn, 2 for half of one.
  template <Number S>
  [[nodiscard]] static constexpr S turn_of(Vec2<S> const& from, Vec2<S> const& to) noexcept {
    S const c = dot(from, to);
    S const s = cross(from, to);
    S const size = magnitude(s);
    S const t = size / (magnitude(c) + size);
    S const half = select(c < S(0.0F), S(S(2.0F) - t), t);
    return select(s < S(0.0F), S(S(4.0F) - half), half);
  }

  template <Number S, int N, typename Bars>
  constexpr void consider_gap_from(Percept<S, N> const& percept, Bars const& bars, int i,
                                   Choice<S>& choice) const noexcept {
    int const count = percept.discs.size();
    Vec2<S> const& left_end = at(bars, i).cone.left;
    mask_t<S> const ends = at(bars, i).counts && open(bars, count, left_end);
    S turn = S(5.0F);
    Vec2<S> right_end = zero2<S>();
    for (int j = 0; j < count; ++j) {
      Bar<S> const& bar = at(bars, j);
      S const here = turn_of(left_end, bar.cone.right);
      mask_t<S> const nearer = bar.counts && here < turn;
      turn = select(nearer, here, turn);
      right_end = select(nearer, bar.cone.right, right_end);
    }
    Vec2<S> const in{S(inset.x), S(inset.y)};
    Vec2<S> const after = turned_out_of(left_end, in);
    Vec2<S> const before = turned_out_of(right_end, Vec2<S>{in.x(), -in.y()});
    // In a narrow gap the two have passed each other, so that `after` is not before `before`.
    mask_t<S> const wide = turn > S(2.0F) || (dot(left_end, right_end) < in.x() * in.x() - in.y() * in.y());
    Vec2<S> const middle = polar(Vec2<S>(left_end + right_end)).direction;
    for (Vec2<S> const& candidate : {Vec2<S>(select(wide, after, middle)), Vec2<S>(select(wide, before, middle))}) {
      S const score = dot(candidate, percept.goal_direction) + S(keeping) * dot(candidate, percept.pose.heading) +
                      S(width) * S(0.5F) * turn;
      mask_t<S> const better = ends && open(bars, count, candidate) && score > choice.score;
      choice.direction = select(better, candidate, choice.direction);
      choice.score = select(better, score, choice.score);
    }
  }
};

}  // namespace wend::inline v0
