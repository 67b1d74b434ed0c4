// Progress: stuck after patience without progress, and not before.
#include <limits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/watch/progress.hpp"

using wend::DiscSet;
using wend::Pose;
using wend::Progress;
using wend::Vec2;

namespace {

constexpr Progress progress{.step = 0.125F, .patience = 4.0F};

// One tick at a distance from the goal.
template <typename S>
wend::mask_t<S> at(S const& distance, float dt, Progress::Memory<S>& memory) {
  DiscSet<S, 1> const discs;
  Pose<S> const pose{};
  return progress(wend::look(pose, Vec2<S>(distance, S(0.0F)), discs, S(0.2F), S(dt)), memory);
}

}  // namespace

TEST_CASE_TEMPLATE("who stands still is stuck after patience, and not before", S, WEND_TEST_NUMBERS) {
  Progress::Memory<S> memory;
  CHECK(numbers::none<S>(at(S(3.0F), 0.25F, memory)));  // the first distance is progress
  for (int tick = 1; tick <= 16; ++tick) {               // sixteen quarters of a second: exactly the patience
    CAPTURE(tick);
    CHECK(numbers::none<S>(at(S(3.0F), 0.25F, memory)));
  }
  CHECK(numbers::all<S>(at(S(3.0F), 0.25F, memory)));
  CHECK(numbers::all<S>(at(S(3.0F), 0.25F, memory)));
}

TEST_CASE_TEMPLATE("progress by more than a step clears it, creeping and retreating do not", S, WEND_TEST_NUMBERS) {
  Progress::Memory<S> memory;
  for (int tick = 0; tick < 20; ++tick) {
    static_cast<void>(at(S(3.0F), 0.25F, memory));
  }
  CHECK(numbers::all<S>(at(S(2.9F), 0.25F, memory)));   // nearer, but by less than a step
  CHECK(numbers::all<S>(at(S(4.0F), 0.25F, memory)));
  CHECK(numbers::all<S>(at(S(2.875F), 0.25F, memory)));  // a step exactly
  CHECK(numbers::none<S>(at(S(2.85F), 0.25F, memory)));
  for (int tick = 0; tick < 16; ++tick) {  // a detour counts from the nearest point so far
    CHECK(numbers::none<S>(at(S(3.5F), 0.25F, memory)));
  }
  CHECK(numbers::all<S>(at(S(3.5F), 0.25F, memory)));
}

TEST_CASE_TEMPLATE("slow but steady progress is never stuck", S, WEND_TEST_NUMBERS) {
  Progress::Memory<S> memory;
  for (float distance = 6.0F; distance > 0.0F; distance -= 0.01F) {  // 0.04 m/s: a step takes about 3.2 s
    CHECK(numbers::none<S>(at(S(distance), 0.25F, memory)));
  }
}

TEST_CASE_TEMPLATE("the clock of progress neither runs back nor overflows", S, WEND_TEST_NUMBERS) {
  Progress::Memory<S> memory;
  static_cast<void>(at(S(3.0F), 0.25F, memory));
  for (int tick = 0; tick < 5; ++tick) {
    static_cast<void>(at(S(3.0F), std::numeric_limits<float>::max(), memory));
  }
  CHECK(numbers::all<S>(memory.since >= S(0.0F) && memory.since <= S(wend::far_away)));
  CHECK(numbers::all<S>(at(S(3.0F), std::numeric_limits<float>::quiet_NaN(), memory)));
  CHECK(numbers::all<S>(at(S(3.0F), -100.0F, memory)));  // a negative step takes nothing away
}

TEST_CASE("lanes are stuck one by one") {
  using S = wend::lab::Pack<4>;
  Progress::Memory<S> memory;
  wend::mask_t<S> stuck;
  for (int tick = 0; tick < 40; ++tick) {
    stuck = at(numbers::make<S>([&](int k) { return k % 2 == 0 ? 9.0F : 9.0F - 0.2F * static_cast<float>(tick); }),
               0.25F, memory);
  }
  for (int k = 0; k < 4; ++k) {
    CHECK(stuck[k] == (k % 2 == 0));
  }
}
