// wend/half_planes.hpp - the point of a disc that lies nearest to a wish and in every half-plane; or, where
// there is none, the point that breaks the half-planes least.
#pragma once

#include <array>
#include <cstddef>

#include "wend/members.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// The points v with normal . v >= offset; normal is a unit vector. As it starts out it holds every point within
/// 1e6 of the origin.
template <Number S>
struct HalfPlane {
  Vec2<S> normal{S(0.0F), S(0.0F)};  ///< unit vector into the half-plane
  S offset{S(-1.0e6F)};  ///< of the edge from the origin along the normal; negative when the origin lies inside
};

/// Up to Capacity half-planes.
template <Number S, int Capacity>
struct HalfPlanes {
  /// The first `count` of them count.
  std::array<HalfPlane<S>, static_cast<std::size_t>(Capacity)> planes{};
  int count = 0;  ///< in [0, Capacity]

  /// Adds one half-plane. There has to be room for it: nothing is checked.
  constexpr void add(HalfPlane<S> const& plane) noexcept { planes[static_cast<std::size_t>(count++)] = plane; }
  /// Half-plane i, in [0, count); nothing is checked.
  [[nodiscard]] constexpr HalfPlane<S> const& operator[](int i) const noexcept {
    return planes[static_cast<std::size_t>(i)];
  }
};

/// A point, and whether it is in all of the half-planes.
template <Number S>
struct InHalfPlanes {
  Vec2<S> point;  ///< where `found` does not hold it means nothing
  mask_t<S> found;  ///< whether there is a point in all of them
};

/// A point, and how far it is outside the half-plane that it misses by most; 0 where it is in all of them.
template <Number S>
struct LeastBreach {
  Vec2<S> point;  ///< in the disc; in the unit of the offsets
  S breach;  ///< 0 or more, in the unit of the offsets
};

namespace detail {

// Sines of angles up to this count as 0: the crossing of two lines so nearly parallel lies too far out to matter. So do
// distances between them, in the unit of the points: the same edge twice must not be taken for two with nothing
// between.
inline constexpr Parameter parallel = 1.0e-6F;

// The point nearest to the wish on the edge of half-plane i, in the disc and in the half-planes before i.
template <Number S, int Capacity>
[[nodiscard]] constexpr InHalfPlanes<S> nearest_on_edge(HalfPlanes<S, Capacity> const& all, int i, S const& radius,
                                                        Vec2<S> const& wish) noexcept {
  HalfPlane<S> const& own = all[i];
  Vec2<S> const foot = scaled(own.normal, own.offset);
  Vec2<S> const along = left_of(own.normal);
  S const rest = squared(radius) - squared(own.offset);
  mask_t<S> found = rest > S(0.0F);
  S high = root(select(found, rest, S(0.0F)));
  S low = -high;
  for (int j = 0; j < i; ++j) {
    S const slope = dot(all[j].normal, along);
    S const missing = all[j].offset - dot(all[j].normal, foot);
    S const t = missing / slope;
    low = select(slope > S(parallel), greatest(t, low), low);
    high = select(slope < S(-parallel), least(t, high), high);
    mask_t<S> const crosses = slope > S(parallel) || slope < S(-parallel);
    found = found && (crosses || missing <= S(parallel));
  }
  found = found && low <= high;
  return {foot + scaled(along, clamp(dot(along, wish), low, high)), found};
}

}  // namespace detail

/// The point nearest to `wish` in the disc of `radius` round the origin and in all half-planes, exactly (the
/// incremental way of linear programming in the plane, Seidel 1991, with the squared distance to minimise, and in the
/// order given, not a random one: at most Capacity^2 / 2 steps). Where there is none, the
/// point means nothing.
template <Number S, int Capacity>
[[nodiscard]] constexpr InHalfPlanes<S> nearest_in_all(HalfPlanes<S, Capacity> const& all, S const& radius,
                                                       Vec2<S> const& wish) noexcept {
  Polar<S> const way = polar(wish);
  InHalfPlanes<S> best{select(way.length > radius, scaled(way.direction, radius), wish), !mask_t<S>{}};
  for (int i = 0; i < all.count; ++i) {
    // As long as the best point so far is in the next half-plane it stays the best; else the new best is on its edge.
    mask_t<S> const broken = best.found && dot(all[i].normal, best.point) < all[i].offset;
    InHalfPlanes<S> const next = choose(
        broken, [&]() noexcept { return detail::nearest_on_edge(all, i, radius, wish); },
        [&]() noexcept { return best; });
    best = next;
  }
  return best;
}

/// The point of the disc that breaks the half-planes least: the least greatest normal distance outside any of them,
/// exactly (the same incremental way, one dimension up: at most Capacity^3 / 6 steps). Half-planes whose normals differ
/// by less than 1e-5 count as one direction.
template <Number S, int Capacity>
[[nodiscard]] constexpr LeastBreach<S> least_breach(HalfPlanes<S, Capacity> const& all, S const& radius) noexcept {
  constexpr Parameter same_direction = 1.0e-5F;
  constexpr Parameter far_off = 1.0e6F;  // a wish so far off is a direction
  LeastBreach<S> best{zero2<S>(), S(0.0F)};
  for (int i = 0; i < all.count; ++i) {
    HalfPlane<S> const& own = all[i];
    mask_t<S> const worse = own.offset - dot(own.normal, best.point) > best.breach;
    LeastBreach<S> const next = choose(
        worse,
        [&]() noexcept {
          // Where none of those before is broken more than this one: half-planes again. In these, as far in as can be.
          HalfPlanes<S, Capacity> others;
          for (int j = 0; j < i; ++j) {
            Polar<S> const between = polar(Vec2<S>(all[j].normal - own.normal));
            mask_t<S> const differ = between.length > S(same_direction);
            S const offset = (all[j].offset - own.offset) / select(differ, between.length, S(1.0F));
            HalfPlane<S> const none;
            others.add({select(differ, between.direction, none.normal), select(differ, offset, none.offset)});
          }
          InHalfPlanes<S> const found = nearest_in_all(others, radius, scaled(own.normal, S(far_off)));
          Vec2<S> const point = select(found.found, found.point, best.point);
          return LeastBreach<S>{point, greatest(S(own.offset - dot(own.normal, point)), S(0.0F))};
        },
        [&]() noexcept { return best; });
    best = next;
  }
  return best;
}

}  // namespace wend::inline v0
