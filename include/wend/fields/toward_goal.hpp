// wend/fields/toward_goal.hpp - straight to the goal.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Straight to the goal, with confidence 1. No opinion on the goal, nor where its distance is over far_away or not a
/// number.
struct toward_goal {
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    // Bounded above, since the direction of a vector whose length overflows is anything.
    mask_t<S> const some = percept.goal_distance > S(no_length) && percept.goal_distance < S(far_away);
    return {select(some, percept.goal_direction, zero2<S>()), select(some, S(1.0F), S(0.0F))};
  }
};

}  // namespace wend::inline v0
