// quickstart: a policy of two lines, a loop, and one tick.
#include <cstdio>

#include <wend/wend.hpp>

using namespace wend;

constexpr auto policy = guarded(below(clearance, 0.30F, 0.50F),  // nearer than 30 cm, until farther than 50 cm:
                                past_disc{},                     // pass beside the disc, on the goal's side
                                toward_goal{});                  // else straight to the goal

constexpr Loop<decltype(policy)> loop{.policy = policy};  // parameters only: lives in flash

int main() {
  DiscSet<float, 8> discs;
  discs.add({{0.7F, 0.1F}, 0.3F});  // centre and radius in metres, x forward, y left

  Situation<float> now;  // where the machine is: at the origin, nose along x
  now.goal = {4.0F, 0.0F};
  now.dt = 0.05F;
  memory_t<decltype(loop), float> memory;  // all that changes from tick to tick: 24 bytes
  Command<float> const command = loop.tick(now, discs, memory);

  std::printf("%s: wheels %.2f and %.2f rad/s\n", text(status_of(command)), static_cast<double>(command.wheels.left),
              static_cast<double>(command.wheels.right));
}
