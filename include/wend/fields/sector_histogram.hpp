// wend/fields/sector_histogram.hpp - through the valleys of a polar histogram of obstacle density.
#pragma once

#include <array>
#include <cstddef>
#include <numbers>

#include "wend/angle.hpp"
#include "wend/field.hpp"
#include "wend/fields/velocity_cone.hpp"

namespace wend::inline v0 {

namespace detail {

template <int Sectors>
[[nodiscard]] consteval std::array<Bearing, static_cast<std::size_t>(Sectors)> sector_bearings() noexcept {
  std::array<Bearing, static_cast<std::size_t>(Sectors)> all{};
  for (int k = 0; k < Sectors; ++k) {
    all[static_cast<std::size_t>(k)] = bearing(2.0 * std::numbers::pi * k / Sectors);
  }
  return all;
}

// Half a sector as an angle. A function of its own, because clang 14 takes no consteval call with a value that depends
// on a template for a constant one.
template <int Sectors>
[[nodiscard]] consteval Bearing half_a_sector() noexcept {
  return bearing(std::numbers::pi / Sectors);
}

}  // namespace detail

/// The vector field histogram of Borenstein and Koren (1991), IEEE Trans. Robotics and Automation 7(3), made of discs
/// instead of cells of certainty. The plane round the machine is cut in sectors. Each holds a density, the sum of
/// c^2 (a - b d) over all that lies in it, here with c = 1 and a and b such that it falls from 1 at contact to 0 at
/// `reach`, d being the clearance; a disc lies in every sector that it and the machine's radius reach into. Densities
/// are smoothed over neighbours, by weights that rise by steps of 1 to the middle as in the source, but add up to 1.
/// Runs of sectors under the threshold are valleys.
///
/// The course is the goal's direction where it lies deep enough in a valley: `wide / 2` sectors or more from its ends.
/// Else it is the middle of the sector nearest to the goal that lies so deep, and of a valley narrower than `wide`
/// its middle sector. The speed share is the source's 1 - h / `dense` with the density h straight ahead, but not under
/// `slowest`. No opinion without a goal, and where there is no valley.
///
/// Sector 0 lies straight ahead and the others follow counter-clockwise, so that the course turns with the scene.
/// Courses step from sector to sector; sectors wider than a gap hide it.
template <int Sectors = 36>
struct sector_histogram {
  static_assert(Sectors >= 8,
                "wend: sector_histogram<Sectors> needs eight sectors at least; write "
                "sector_histogram<36>");

  Parameter reach = 1.5F;       ///< metres of clearance at which a disc stops to count
  Parameter threshold = 0.25F;  ///< density under which a sector is open
  Parameter margin = 0.05F;     ///< metres by which discs are taken larger
  Parameter dense = 1.0F;       ///< density at which the machine goes slowest
  Parameter slowest = 0.2F;     ///< least speed share
  int wide = Sectors / 4;       ///< sectors; a valley that has more is wide (90 degrees in the source)
  int smoothing = 1;  ///< sectors to either side that are smoothed over, 0 to Sectors / 2 (5 in the source)

  /// One number a sector, counter-clockwise from straight ahead.
  template <Number S>
  using Row = std::array<S, static_cast<std::size_t>(Sectors)>;

  /// The smoothed densities, counter-clockwise from straight ahead.
  template <Number S, int N>
  [[nodiscard]] constexpr Row<S> densities(Percept<S, N> const& percept) const noexcept {
    Row<S> const raw = raw_densities(percept);
    S const per_weight = S(1.0F) / S(static_cast<Parameter>((smoothing + 1) * (smoothing + 1)));
    Row<S> smooth;
    for (int k = 0; k < Sectors; ++k) {
      S sum = S(0.0F);
      for (int j = -smoothing; j <= smoothing; ++j) {
        int const weight = smoothing + 1 - (j < 0 ? -j : j);
        sum = sum + S(static_cast<Parameter>(weight)) * raw[around(k + j)];
      }
      smooth[around(k)] = sum * per_weight;
    }
    return smooth;
  }

  /// The goal's direction, or the middle of a sector of a valley.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Row<S> const density = densities(percept);
    // How many open sectors there are from each on, itself included, to its left and to its right. Twice round.
    Row<S> to_left;
    Row<S> to_right;
    S left = S(0.0F);
    S right = S(0.0F);
    for (int k = 0; k < 2 * Sectors; ++k) {
      std::size_t const up = around(k);
      std::size_t const down = around(-k);
      right = select(density[up] < S(threshold), S(right + S(1.0F)), S(0.0F));
      left = select(density[down] < S(threshold), S(left + S(1.0F)), S(0.0F));
      to_right[up] = right;
      to_left[down] = left;
    }
    int const half_wide = wide / 2;  // rounded down
    S const half = S(static_cast<Parameter>(half_wide));
    Vec2<S> const nose = polar(percept.pose.heading).direction;
    Vec2<S> best = zero2<S>();
    S nearness = S(-2.0F);
    for (int k = 0; k < Sectors; ++k) {
      S const& l = to_left[around(k)];
      S const& r = to_right[around(k)];
      mask_t<S> const deep = l > half && r > half;
      mask_t<S> const narrow = l > S(0.0F) && l + r - S(1.0F) <= half + half;
      mask_t<S> const middle = narrow && l - r <= S(1.0F) && r - l <= S(1.0F);
      Vec2<S> const direction = turned_out_of(nose, middle_of<S>(k));
      S const here = dot(direction, percept.goal_direction);
      mask_t<S> const better = (deep || middle) && here > nearness;
      best = select(better, direction, best);
      nearness = select(better, here, nearness);
    }
    Vec2<S> const way = select(nearness >= S(half_sector.x), percept.goal_direction, best);
    mask_t<S> const some = percept.goal_confidence > S(0.0F);
    S const slow = S(1.0F) - density[0] / S(dense);
    return course_along(Vec2<S>(select(some, way, zero2<S>())), S(1.0F), clamp(slow, S(slowest), S(1.0F)));
  }

 private:
  static constexpr std::array<Bearing, static_cast<std::size_t>(Sectors)> bearings = detail::sector_bearings<Sectors>();
  static constexpr Bearing half_sector = detail::half_a_sector<Sectors>();

  [[nodiscard]] static constexpr std::size_t around(int k) noexcept {
    return static_cast<std::size_t>((k + 2 * Sectors) % Sectors);
  }
  template <Number S>
  [[nodiscard]] static constexpr Vec2<S> middle_of(int k) noexcept {
    Bearing const& middle = bearings[around(k)];
    return {S(middle.x), S(middle.y)};
  }

  template <Number S, int N>
  [[nodiscard]] constexpr Row<S> raw_densities(Percept<S, N> const& percept) const noexcept {
    Row<S> raw;
    raw.fill(S(0.0F));
    for (Disc<S> const& disc : percept.discs) {
      Vec2<S> const offset = disc.centre - percept.pose.position;
      Polar<S> const to_disc = polar(turned_into(percept.pose.heading, offset));
      S const contact = disc.radius + percept.robot_radius;
      VelocityCone<S> const cone = velocity_cone(offset, S(contact + S(margin)));
      // The cosine of half the angle that the grown disc covers, and half a sector more.
      S const reaches = cone.cosine * S(half_sector.x) - cone.sine * S(half_sector.y);
      S const density = clamp(S(S(1.0F) - (to_disc.length - contact) / S(reach)), S(0.0F), S(1.0F));
      for (int k = 0; k < Sectors; ++k) {
        S const here = select(dot(middle_of<S>(k), to_disc.direction) >= reaches, density, S(0.0F));
        raw[around(k)] = raw[around(k)] + here;
      }
    }
    return raw;
  }
};

}  // namespace wend::inline v0
