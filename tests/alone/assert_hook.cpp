// WEND_ASSERT is a hook: a project's own function sees every broken promise, and each check sees what it has to.
namespace {
int broken = 0;  // promises seen to be broken
}
#define WEND_ASSERT(condition) static_cast<void>((condition) ? 0 : ++broken)

#include "check.hpp"
#include "wend/wend.hpp"

namespace {

// How many promises something breaks.
template <typename F>
int breaks(F const& f) {
  broken = 0;
  f();
  return broken;
}

}  // namespace

int main() {
  using namespace wend;
  using alone::check;

  check(breaks([] { static_cast<void>(below(clearance, 0.3F, 0.5F)); }) == 0, "thresholds in order break nothing");
  check(breaks([] { static_cast<void>(below(clearance, 0.5F, 0.3F)); }) == 1, "below: enter over leave");
  check(breaks([] { static_cast<void>(above(clearance, 0.3F, 0.5F)); }) == 1, "above: enter under leave");
  check(breaks([] { static_cast<void>(held(below(clearance, 0.3F, 0.5F), -1.0F)); }) == 1, "held: a negative dwell");
  check(breaks([] { static_cast<void>(ramp(clearance, 1.0F, 1.0F)); }) == 1, "ramp: no width");
  check(breaks([] { static_cast<void>(share(-1.0F, toward_goal{})); }) == 1, "share: a negative weight");

  DiscSet<float, 2> discs;
  discs.add({{1.0F, 0.0F}, 0.1F});
  check(breaks([&discs] { static_cast<void>(discs[0]); }) == 0, "an index in range breaks nothing");
  check(breaks([&discs] { static_cast<void>(discs[1]); }) == 1, "an index past the end");

  // Whatever comes from outside is answered by a status, never by the hook.
  constexpr auto policy = guarded(below(clearance, 0.3F, 0.5F), past_disc{}, toward_goal{});
  constexpr Loop<decltype(policy)> loop{.policy = policy};
  check(breaks([&] {
          memory_t<decltype(loop), float> memory;
          Situation<float> now;
          for (float const x : {0.0F, -1.0F, 3.0e38F, 0.0F / 1.0e-45F}) {
            now.pose.position = {x, -x};
            now.dt = x;
            DiscSet<float, 2> odd;
            odd.add({{x, x}, x});
            static_cast<void>(loop.tick(now, odd, memory));
          }
        }) == 0,
        "no input trips the hook");
  return alone::failures == 0 ? 0 : 1;
}
