// expects: wend: this steering does not fit this drive
#include "wend/motion/omni.hpp"
#include "wend/wend.hpp"

#ifdef MENDED
using Steering = wend::OmniSteering;
#else
using Steering = wend::Steering;
#endif
using Loop = wend::Loop<wend::toward_goal, wend::no_sensing, wend::Omni<3>, Steering>;

void tick(wend::Situation<float> const& now) {
  Loop const loop{};
  wend::DiscSet<float, 1> const none;
  wend::memory_t<Loop, float> memory;
  static_cast<void>(loop.tick(now, none, memory));
}
