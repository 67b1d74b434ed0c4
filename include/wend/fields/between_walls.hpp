// wend/fields/between_walls.hpp - along a corridor, in its middle.
#pragma once

#include <array>
#include <cstddef>
#include <numbers>

#include "wend/angle.hpp"
#include "wend/field.hpp"

namespace wend::inline v0 {

namespace detail {

// Beams to the left, from the first to the last angle off the nose, evenly.
template <int Beams>
[[nodiscard]] consteval std::array<Bearing, static_cast<std::size_t>(Beams)> fan(double first, double last) noexcept {
  std::array<Bearing, static_cast<std::size_t>(Beams)> all{};
  for (int k = 0; k < Beams; ++k) {
    all[static_cast<std::size_t>(k)] = bearing(Beams == 1 ? first : first + (last - first) * k / (Beams - 1));
  }
  return all;
}

}  // namespace detail

/// Along the nose, and toward where walls to the left and to the right are equally far (common practice, no source).
/// Where only one side has a wall within reach, at the set distance from that; no opinion where neither has.
///
/// Beams are cast among the discs on either side, and of each the distance to the side counts, which is the range times
/// the sine of the beam's angle; the least on a side is that side's. The beams have to look ahead of abeam: a range
/// straight to the side knows where the machine is but not where it is heading, and steering by that alone is an
/// oscillator without damping. Walls are chains of discs; where gaps in them are wider than the fan of beams it sees
/// through.
///
/// The course leans from the nose by `lean` for each metre off, and by 45 degrees at most. A goal is not looked at, so
/// the machine goes on the way it faces. No opinion without a heading.
template <int Beams = 3>
struct between_walls {
  static_assert(Beams >= 1, "wend: between_walls<Beams> needs a beam on either side; write between_walls<3>");

  Parameter distance = 0.4F;  ///< metres from the machine's edge to a wall that stands alone
  Parameter reach = 2.0F;  ///< metres to the side, from the machine's edge, beyond which there is no wall
  Parameter lean = 1.5F;  ///< slope of the course to the nose, a metre
  /// Unit vectors off the nose, to the left; those to the right mirror them.
  std::array<Bearing, static_cast<std::size_t>(Beams)> beams =
      detail::fan<Beams>(40.0 * std::numbers::pi / 180.0, 80.0 * std::numbers::pi / 180.0);

  /// Along the nose, leaning toward the middle.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const nose = polar(percept.pose.heading).direction;
    S left = S(far_away);
    S right = S(far_away);
    for (Bearing const& beam : beams) {
      Vec2<S> const to_left = turned_out_of(nose, Vec2<S>{S(beam.x), S(beam.y)});
      Vec2<S> const to_right = turned_out_of(nose, Vec2<S>{S(beam.x), -S(beam.y)});
      for (Disc<S> const& disc : percept.discs) {
        left = least(S(ray_to_disc(percept.pose.position, to_left, disc) * S(beam.y)), left);
        right = least(S(ray_to_disc(percept.pose.position, to_right, disc) * S(beam.y)), right);
      }
    }
    return between(percept.pose.heading, S(left - percept.robot_radius), S(right - percept.robot_radius));
  }

  /// The same from two distances, for a machine with a ranger on either side: metres to the side, from its edge, on
  /// beams that look ahead of abeam (range times sine of the beam's angle). No opinion where one is not a number.
  template <Number S>
  [[nodiscard]] constexpr Course<S> between(Vec2<S> const& heading, S const& left, S const& right) const noexcept {
    mask_t<S> const wall_left = left < S(reach);
    mask_t<S> const wall_right = right < S(reach);
    S const beside_left = left - S(distance);
    S const beside_right = S(distance) - right;
    S const beside = select(wall_left, beside_left, beside_right);
    // How far the wanted line lies to the left.
    S const off = select(wall_left && wall_right, S(S(0.5F) * (left - right)), beside);
    mask_t<S> const some = finite(off) && (wall_left || wall_right);
    Vec2<S> const nose = polar(heading).direction;
    Vec2<S> const way = nose + scaled(left_of(nose), clamp(S(S(lean) * off), S(-1.0F), S(1.0F)));
    return course_along(Vec2<S>(select(some, way, zero2<S>())), S(1.0F));
  }
};

}  // namespace wend::inline v0
