// expects: wend: this heading field owns something
#include <vector>

#include "wend/wend.hpp"

struct by_way_points {
#ifdef MENDED
  std::array<wend::Parameter, 4> points{};
#else
  std::vector<wend::Parameter> points{};
#endif

  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return {percept.goal_direction, percept.goal_confidence};
  }
};

[[maybe_unused]] constexpr auto policy = wend::priority(by_way_points{}, wend::toward_goal{});
