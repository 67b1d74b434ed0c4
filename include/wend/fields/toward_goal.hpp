// wend/fields/toward_goal.hpp - straight to the goal.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Straight to the goal, with confidence 1. No opinion on the goal, nor where its distance is over far_away or not a
/// number.
struct toward_goal {
  /// Percept::goal_direction, with its confidence.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    return {percept.goal_direction, percept.goal_confidence};
  }
};

}  // namespace wend::inline v0
