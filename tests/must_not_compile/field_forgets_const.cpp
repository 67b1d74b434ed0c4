// expects: wend: this heading field forgets const
#include "wend/wend.hpp"

struct leftwards {
  template <wend::Number S, int N>
#ifdef MENDED
  wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
#else
  wend::Course<S> operator()(wend::Percept<S, N> const& percept) noexcept {
#endif
    return {wend::left_of(percept.goal_direction), percept.goal_confidence};
  }
};

[[maybe_unused]] auto const policy = wend::priority(leftwards{}, wend::toward_goal{});
