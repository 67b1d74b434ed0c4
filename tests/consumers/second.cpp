// The second source of that program: no course where there is no opinion.
#ifdef WEND_SINGLE_HEADER
#include "wend.hpp"
#else
#include <wend/wend.hpp>
#endif

wend::Status elsewhere();

wend::Status elsewhere() {
  constexpr wend::Loop<wend::no_opinion> loop{};
  wend::DiscSet<float, 1> const discs;
  wend::Situation<float> now;
  now.goal = {1.0F, 0.0F};
  wend::memory_t<decltype(loop), float> memory;
  return wend::status_of(loop.tick(now, discs, memory));
}
