// expects: wend: this is not a heading field: it cannot be called as field(percept), nor as field(percept, memory) with
#include "wend/wend.hpp"

struct patient {
  template <wend::Number S>
#ifdef MENDED
  struct Memory {
#else
  struct Remembered {
#endif
    S waited{S(0.0F)};
  };

  template <wend::Number S, int N>
#ifdef MENDED
  wend::Course<S> operator()(wend::Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
#else
  wend::Course<S> operator()(wend::Percept<S, N> const& percept, Remembered<S>& memory) const noexcept {
#endif
    memory.waited = memory.waited + percept.dt;
    return {percept.goal_direction, percept.goal_confidence};
  }
};

[[maybe_unused]] constexpr auto policy = wend::priority(patient{}, wend::toward_goal{});
