// wend/arbiters/sliding.hpp - the motion along a threshold that a hard switch chatters about.
#pragma once

#include "wend/field.hpp"
#include "wend/promise.hpp"

namespace wend::inline v0 {

namespace detail {

// Called only by a constant that must not be one.
inline void wend_sliding_needs_a_width_over_zero() noexcept {}

}  // namespace detail

/// A switch on clearance that does not chatter. Below the threshold one field is heard, above it the other; in a layer
/// of `width` metres round it, where the lower one drives up into the layer and the upper one down into it, the convex
/// combination that leaves the clearance as it is (Filippov 1988, Differential Equations with Discontinuous Righthand
/// Sides, chapter 2, section 4):
///
///     f = alpha above + (1 - alpha) below,  alpha = below_N / (below_N - above_N)
///
/// with _N the part along the direction away from the nearest disc, in which clearance grows by a metre a metre. It is
/// what infinitely fast switching comes to. In the layer alpha leans toward the middle of the layer, by as much of it
/// as the machine is off, so that it does not drift out; where the two do not drive against each other, the side
/// decides. Courses count as direction times confidence; the speed share is combined as they are. A width is not a
/// hysteresis: there is nothing to remember.
template <typename Below, typename Above>
struct sliding_field {
  Parameter threshold;  ///< metres of clearance
  Parameter width;      ///< metres, over 0
  [[no_unique_address]] Below below;  ///< heard below the threshold
  [[no_unique_address]] Above above;  ///< heard above it

  /// What the two remember.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Below, S, sliding_field, 0> below;  ///< of the one below the threshold
    [[no_unique_address]] detail::PlacedMemory<Above, S, sliding_field, 1> above;  ///< of the one above it
  };

  /// The course of the side that the machine is on, or along the threshold.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    Course<S> const low = evaluate(below, percept, memory.below);
    Course<S> const high = evaluate(above, percept, memory.above);
    S const off = (percept.clearance - S(threshold)) / S(width);  // in widths of the layer: -1/2 to 1/2 in it
    S const up = dot(percept.away, low.direction) * low.confidence;
    S const down = -(dot(percept.away, high.direction) * high.confidence);
    mask_t<S> const slides = up > S(0.0F) && down > S(0.0F) && off > S(-0.5F) && off < S(0.5F);
    S const filippov = up / select(slides, S(up + down), S(1.0F));
    S const alpha =
        select(slides, clamp(S(filippov + off), S(0.0F), S(1.0F)), S(select(off < S(0.0F), S(0.0F), S(1.0F))));
    Vec2<S> const sum = scaled(low.direction, S((S(1.0F) - alpha) * low.confidence)) +
                        scaled(high.direction, S(alpha * high.confidence));
    Polar<S> const way = polar(sum);
    S const share = low.speed_share + alpha * (high.speed_share - low.speed_share);
    return course_along(way, least(way.length, S(1.0F)), clamp(share, S(0.0F), S(1.0F)));
  }
};

/// sliding(0.35F, 0.10F, away_from_discs{}, toward_goal{}): away under 0.35 m of clearance, to the goal over it, and
/// along it, on a layer 10 cm wide, where the two would take turns.
template <typename Below, typename Above>
[[nodiscard]] constexpr sliding_field<Below, Above> sliding(Parameter threshold, Parameter width, Below below,
                                                            Above above) noexcept {
  detail::check_field<Below, float>();
  detail::check_field<Above, float>();
  detail::promise(width > 0.0F, detail::wend_sliding_needs_a_width_over_zero);
  return {threshold, width, below, above};
}

}  // namespace wend::inline v0
