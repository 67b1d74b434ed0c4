// expects: wend: this heading field returns something else than a wend::Course<S>
#include "wend/wend.hpp"

struct leftwards {
  template <wend::Number S, int N>
  auto operator()(wend::Percept<S, N> const& percept) const noexcept {
#ifdef MENDED
    return wend::Course<S>{wend::left_of(percept.goal_direction), percept.goal_confidence};
#else
    return percept.goal_distance;
#endif
  }
};

[[maybe_unused]] auto const policy = wend::guarded(wend::below(wend::clearance, 0.3F, 0.5F), leftwards{}, leftwards{});
