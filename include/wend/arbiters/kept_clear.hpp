// wend/arbiters/kept_clear.hpp - a filter over a field: the nearest velocity to the one it wants that keeps clear of
// discs.
#pragma once

#include "wend/field.hpp"
#include "wend/half_planes.hpp"
#include "wend/promise.hpp"

namespace wend::inline v0 {

namespace detail {

// Called only by a constant that must not be one. With a speed of 0 whatever the field wants would count as standing,
// which is allowed, and pass: there would be no filter.
inline void wend_kept_clear_needs_a_speed_over_zero() noexcept {}
inline void wend_kept_clear_needs_a_rate_of_zero_or_more() noexcept {}

}  // namespace detail

/// A control-barrier filter (Ames, Xu, Grizzle and Tabuada 2017, IEEE Trans. Automatic Control 62(8), as a quadratic
/// programme) for a machine that follows its course at once. With h the clearance less `margin`, every disc allows the
/// velocities u with
///
///     n . (u - v) >= -rate * h        (n: unit, away from the disc; v: the disc's own velocity)
///
/// and the filter takes, of those no faster than `speed`, the one nearest to what the field wants, which is its
/// direction times its speed share times `speed`; exactly, for all discs at once. Where what it wants is allowed, its
/// course passes through unchanged, to the last bit.
///
/// Held for a tick of dt seconds such a velocity leaves h >= (1 - rate * dt) h, because the distance from a point is
/// convex: the set h >= 0 is kept by any rate up to 1 / dt, discs that move included. h is the clearance itself, not
/// its square, so that `rate` is one over the seconds in which a clearance may be used up.
///
/// Where no velocity is allowed (discs close in from several sides, or faster than the machine) it takes the one that
/// breaks the constraints least. A machine that overlaps a disc is sent out of it. A velocity of 0 is no opinion, and
/// the loop stands. At a disc's centre no direction is away, and that disc allows anything: stay out. A field without
/// an opinion wants a velocity of 0, and is only heard where that is not allowed. Costs up to N^2 / 2 steps for N
/// discs, and N^3 / 6 where nothing is allowed.
template <typename Field>
struct kept_clear_field {
  [[no_unique_address]] Field field;  ///< what is filtered
  Parameter speed;   ///< metres a second: what the machine drives at most
  Parameter rate;    ///< 1/s
  Parameter margin;  ///< metres

  /// What the field remembers.
  template <Number S>
  using Memory = memory_t<Field, S>;

  /// The course, filtered.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    Course<S> const wanted = ask(field, percept, memory);
    S const top = S(speed);
    mask_t<S> const opinion = wanted.confidence > S(0.0F);
    S const share = select(opinion, clamp(wanted.speed_share, S(0.0F), S(1.0F)), S(0.0F));
    Vec2<S> const wish = scaled(wanted.direction, S(top * share));
    HalfPlanes<S, N> allowed;
    mask_t<S> slack = !mask_t<S>{};
    for (int i = 0; i < percept.discs.size(); ++i) {
      Disc<S> const& disc = percept.discs[i];
      Polar<S> const away = polar(Vec2<S>(percept.pose.position - disc.centre));
      S const clear = away.length - disc.radius - percept.robot_radius - S(margin);
      S const offset = dot(away.direction, percept.velocity(i)) - S(rate) * clear;
      // Where there is no direction, or a number is none, the disc has no say: it would forbid everything.
      mask_t<S> const counts = away.length > S(no_length) && finite(offset);
      HalfPlane<S> const none;
      HalfPlane<S> const plane{away.direction, select(counts, offset, none.offset)};
      slack = slack && dot(plane.normal, wish) >= plane.offset;
      allowed.add(plane);
    }
    return choose(
        slack, [&]() noexcept { return wanted; },
        [&]() noexcept {
          InHalfPlanes<S> const best = nearest_in_all(allowed, top, wish);
          Vec2<S> const velocity = choose(
              best.found, [&]() noexcept { return best.point; },
              [&]() noexcept { return least_breach(allowed, top).point; });
          Polar<S> const way = polar(velocity);
          return course_along(way, select(opinion, wanted.confidence, S(1.0F)), least(S(way.length / top), S(1.0F)));
        });
  }
};

/// kept_clear(toward_goal{}, 0.6F): what the field wants, as far as it keeps 5 cm clear of every disc. `speed` in
/// metres a second, over 0; `rate` in 1/s, from 0 (no nearer to any disc, ever) to one over the time between ticks;
/// `margin` in metres.
template <typename Field>
[[nodiscard]] constexpr kept_clear_field<Field> kept_clear(Field field, Parameter speed, Parameter rate = 2.0F,
                                                           Parameter margin = 0.05F) noexcept {
  detail::check_field<Field, float>();
  detail::promise(speed > 0.0F, detail::wend_kept_clear_needs_a_speed_over_zero);
  detail::promise(rate >= 0.0F, detail::wend_kept_clear_needs_a_rate_of_zero_or_more);
  return {field, speed, rate, margin};
}

}  // namespace wend::inline v0
