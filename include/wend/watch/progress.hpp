// wend/watch/progress.hpp - whether the machine still gets nearer to its goal.
#pragma once

#include "wend/number.hpp"
#include "wend/percept.hpp"

namespace wend::inline v0 {

/// Stuck when the goal has come no nearer than ever before by `step` metres for `patience` seconds. A detour looks the
/// same, so being stuck is told, not acted on. A new goal needs a fresh memory.
struct Progress {
  Parameter step = 0.10F;      ///< metres
  Parameter patience = 20.0F;  ///< seconds

  /// The best so far. Starts with none.
  template <Number S>
  struct Memory {
    S nearest{S(far_away)};  ///< metres: least distance to the goal so far
    S since{S(0.0F)};        ///< seconds since that was bettered
  };

  /// Whether the machine is stuck. Counts the tick.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    mask_t<S> const nearer = percept.goal_distance < memory.nearest - S(step);
    memory.nearest = select(nearer, percept.goal_distance, memory.nearest);
    memory.since = select(nearer, S(0.0F), least(S(memory.since + percept.dt), S(far_away)));
    return memory.since > S(patience);
  }
};

}  // namespace wend::inline v0
