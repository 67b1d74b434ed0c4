// wend/fields/toward_goal.hpp - straight to the goal.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Straight to the goal, with confidence 1. On the goal: no opinion.
struct toward_goal {
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    return {percept.goal_direction, select(percept.goal_distance > S(0.0F), S(1.0F), S(0.0F))};
  }
};

}  // namespace wend::inline v0
