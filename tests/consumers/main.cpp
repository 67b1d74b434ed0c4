// A small program of somebody else's: one decision, printed.
#include <cstdio>

#ifdef WEND_SINGLE_HEADER
#include "wend.hpp"
#else
#include <wend/wend.hpp>
#endif

namespace {

constexpr auto policy =
    wend::guarded(wend::held(wend::below(wend::clearance, 0.30F, 0.50F), 0.4F), wend::past_disc{},
                  wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{}, wend::toward_goal{}));
constexpr wend::Loop<decltype(policy)> loop{.policy = policy};

}  // namespace

wend::Status elsewhere();  // in second.cpp: two sources with the library link

int main() {
  wend::DiscSet<float, 8> discs;
  discs.add({{0.7F, 0.1F}, 0.3F});
  wend::Situation<float> now;
  now.goal = {4.0F, 0.0F};
  wend::memory_t<decltype(loop), float> memory;
  auto const command = loop.tick(now, discs, memory);
  std::printf("%s, %s: %.3f %.3f\n", wend::text(wend::status_of(command)), wend::text(elsewhere()),
              static_cast<double>(command.wheels.left), static_cast<double>(command.wheels.right));
  return 0;
}
