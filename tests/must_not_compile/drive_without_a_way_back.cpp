// expects: wend: this is not a drive: beside wheels(body) it needs within_limits(body) and body(wheels)
#include "wend/wend.hpp"

struct Screws {
  float left = 0.0F, right = 0.0F;
};
struct Boat {
  template <wend::Number S>
  constexpr Screws wheels(wend::BodyVelocity<S> const&) const noexcept {
    return {};
  }
#ifdef MENDED
  template <wend::Number S>
  constexpr wend::BodyVelocity<S> within_limits(wend::BodyVelocity<S> const& body) const noexcept {
    return body;
  }
  constexpr wend::BodyVelocity<float> body(Screws const&) const noexcept { return {}; }
#endif
};

void tick(wend::Situation<float> const& now) {
  wend::Loop<wend::toward_goal, wend::no_sensing, Boat> const loop{};
  wend::DiscSet<float, 1> const none;
  wend::memory_t<wend::Loop<wend::toward_goal, wend::no_sensing, Boat>, float> memory;
  static_cast<void>(loop.tick(now, none, memory));
}
