// wend/fields/past_disc.hpp - beside the nearest disc, on the goal's side.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Past the nearest disc: the direction to it plus or minus pi/2, on the side nearer the goal. The side is chosen when
/// the field is entered and kept until it is left; that is what stops the machine from dithering before a disc that
/// stands in its way. A goal exactly behind the disc is passed leaving the disc on the right hand.
///
/// When the direction to the nearest disc jumps by more than 60 degrees from one tick to the next, another disc has
/// become the nearest, on the other flank of a gap as a rule. To keep the hand there would mean to turn back, so the
/// side is chosen again, as the one that the nose already points to, and kept in its turn.
///
/// No opinion where there is no disc, or at the very centre of one.
struct past_disc {
  /// The side that was chosen, and what tells that another disc has become the nearest.
  template <Number S>
  struct Memory {
    Vec2<S> away{S(0.0F), S(0.0F)};  ///< of the tick before; (0, 0) before the first
    mask_t<S> disc_on_right{};  ///< the hand it is kept on; means nothing before the first
  };

  /// Across the direction to the nearest disc, with confidence 1.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    Vec2<S> const& away = percept.away;
    mask_t<S> const some = percept.away_confidence > S(0.0F);
    mask_t<S> const first = !(dot(memory.away, memory.away) > S(0.0F));
    mask_t<S> const another = dot(memory.away, away) < S(0.5F);  // cosine of 60 degrees
    // With the disc on the right hand the machine goes to the right of `away`, which points from the disc to it.
    auto const right_to = [&away](Vec2<S> const& way) noexcept -> mask_t<S> { return cross(away, way) <= S(0.0F); };
    mask_t<S> const disc_on_right = choose(
        first, [&]() noexcept { return right_to(percept.goal_direction); },
        [&]() noexcept {
          return choose(
              another, [&]() noexcept { return right_to(percept.pose.heading); },
              [&]() noexcept { return memory.disc_on_right; });
        });
    assign_where(some, memory.disc_on_right, disc_on_right);
    assign_where(some, memory.away, away);
    Vec2<S> const left = left_of(away);
    Vec2<S> const right = -left;
    return {select(disc_on_right, right, left), percept.away_confidence};
  }
};

}  // namespace wend::inline v0
