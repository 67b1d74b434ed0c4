#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/roam.hpp"

namespace {

constexpr wend::roam about_goal;
constexpr wend::roam about_nose{.about_nose = true};

template <wend::Number S>
double confidence(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.confidence));
}
template <wend::Number S>
double angle(wend::Course<S> const& course) {
  return std::atan2(static_cast<double>(numbers::first(course.direction.y())),
                    static_cast<double>(numbers::first(course.direction.x())));
}

}  // namespace

TEST_CASE_TEMPLATE("roam goes the same way with the same seed, and another way with another", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(5.0F), S(0.0F)};
  wend::memory_t<wend::roam, S> first, second, third;
  constexpr wend::roam other{.seed = 2.0F};
  double apart = 0.0;
  for (int i = 0; i < 200; ++i) {
    double const one = angle(scenes::answer(about_goal, scene, first));
    CHECK(one == angle(scenes::answer(about_goal, scene, second)));
    apart = std::max(apart, std::abs(one - angle(scenes::answer(other, scene, third))));
  }
  CHECK(apart > 0.2);
}

TEST_CASE("lanes wander apart when their memories are seeded apart") {
  using Pack = wend::lab::Pack<8>;
  scenes::Scene<Pack> scene;
  scene.goal = {Pack(5.0F), Pack(0.0F)};
  wend::memory_t<wend::roam, Pack> memory;
  memory.draw.x = Pack([](int k) noexcept { return 1.0F + static_cast<float>(k); });
  for (int i = 0; i < 100; ++i) {
    static_cast<void>(scenes::answer(about_goal, scene, memory));
  }
  for (int k = 1; k < 8; ++k) {
    CHECK(memory.offset[k] != memory.offset[k - 1]);
  }
  wend::memory_t<wend::roam, float> alone;  // lane 4 does what a machine with seed 5 does
  scenes::Scene<float> one;
  one.goal = {5.0F, 0.0F};
  for (int i = 0; i < 100; ++i) {
    static_cast<void>(scenes::answer(wend::roam{.seed = 5.0F}, one, alone));
  }
  CHECK(memory.offset[4] == alone.offset);
}

TEST_CASE("roam turns by 2 atan(X / 2): one for one when small, and never all the way round") {
  scenes::Scene<double> scene;
  scene.goal = {5.0, 0.0};
  scene.dt = 0.0;
  for (double const x : {0.0, 0.1, 0.5, 1.0, -1.0, 1.9}) {
    wend::memory_t<wend::roam, double> memory;
    memory.offset = x;
    CHECK(angle(scenes::answer(about_goal, scene, memory)) == doctest::Approx(2.0 * std::atan(0.5 * x)));
    CHECK(memory.offset == x);  // no time has passed
  }
  CHECK(2.0 * std::atan(0.05) == doctest::Approx(0.1).epsilon(0.001));
}

TEST_CASE("roam keeps within four spreads, whatever is in its memory") {
  scenes::Scene<float> scene;
  scene.goal = {5.0F, 0.0F};
  wend::memory_t<wend::roam, float> memory;
  memory.offset = 1.0e6F;
  float widest = 0.0F;
  for (int i = 0; i < 1000; ++i) {
    static_cast<void>(scenes::answer(about_goal, scene, memory));
    widest = std::max(widest, std::abs(memory.offset));
  }
  CHECK(widest == 2.0F);
  CHECK(std::abs(memory.offset) < 2.0F);
}

TEST_CASE("what roam keeps of its offset is exp(-dt / settling), or more by less than a sixth of its third power") {
  for (double const dt : {0.02, 0.1, 0.5, 1.0, 2.0, 5.0}) {
    scenes::Scene<double> scene;
    scene.goal = {5.0, 0.0};
    scene.dt = dt;
    wend::memory_t<wend::roam, double> low, high;  // with the same draw
    low.offset = -0.01;
    high.offset = 0.01;
    static_cast<void>(scenes::answer(about_goal, scene, low));
    static_cast<void>(scenes::answer(about_goal, scene, high));
    double const kept = (high.offset - low.offset) / 0.02;
    double const x = dt / 2.0;
    CHECK(kept > std::exp(-x));
    CHECK(kept < std::exp(-x) + x * x * x / 6.0);
  }
}

TEST_CASE_TEMPLATE("roam wanders about the goal's direction or the nose", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(0.0F), S(5.0F)};
  for (int i = 0; i < 20; ++i) {
    wend::memory_t<wend::roam, S> goal, nose;
    double const a = angle(scenes::answer(about_goal, scene, goal));
    double const b = angle(scenes::answer(about_nose, scene, nose));
    CHECK(a - b == doctest::Approx(1.5707963).epsilon(1e-5));
  }
  scene.goal = scene.pose.position;
  CHECK(confidence(scenes::answer(about_goal, scene)) == 0.0);
  CHECK(confidence(scenes::answer(about_nose, scene)) == 1.0);
}

TEST_CASE_TEMPLATE("roam at its degenerate points", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(5.0F), S(0.0F)};
  scene.dt = S(0.0F);  // no time, no wandering
  wend::memory_t<wend::roam, S> memory;
  for (int i = 0; i < 10; ++i) {
    CHECK(angle(scenes::answer(about_goal, scene, memory)) == 0.0);
  }
  scene.dt = S(wend::far_away);  // so long a time that nothing is left of what was: noise within its bounds
  CHECK(std::abs(angle(scenes::answer(about_goal, scene, memory))) < 0.87);
  scene.dt = S(scenes::nan);
  CHECK(confidence(scenes::answer(about_goal, scene, memory)) == 1.0);
  scene.dt = S(0.05F);
  constexpr wend::roam straight{.spread = 0.0F};
  CHECK(angle(scenes::answer(straight, scene)) == 0.0);
  constexpr wend::roam without_memory{.settling = 0.0F};
  CHECK(confidence(scenes::answer(without_memory, scene)) == 1.0);
  scene.put(S(0.0F), S(0.0F), S(0.3F));  // discs are not its business
  CHECK(confidence(scenes::answer(about_goal, scene)) == 1.0);
}
