#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <random>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/arbiters/guarded.hpp"

namespace {

constexpr auto policy = wend::guarded(field_list::near_a_disc, wend::past_disc{}, wend::toward_goal{});

// A machine at a clearance (metres) from a disc straight ahead; the goal to the left.
template <wend::Number S>
scenes::Scene<S> at(S const& clearance) {
  scenes::Scene<S> scene;
  scene.put(clearance + S(0.5F), S(0.0F), S(0.3F));
  scene.goal = {S(0.0F), S(2.0F)};
  scene.pose.heading = {S(0.0F), S(1.0F)};
  return scene;
}

// Counts how often it was asked since it was entered.
struct counts {
  template <wend::Number S>
  struct Memory {
    S asked{S(0.0F)};
  };
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const&, Memory<S>& memory) const noexcept {
    memory.asked = memory.asked + S(1.0F);
    return wend::course_along(wend::Vec2<S>{S(1.0F), S(0.0F)}, S(S(1.0F) / memory.asked));
  }
};

}  // namespace

TEST_CASE_TEMPLATE("guarded asks the inner field from enter to leave, and the outer elsewhere", S, WEND_TEST_NUMBERS) {
  wend::memory_t<decltype(policy), S> memory;
  // Clearances, and whether the inner field is asked; thresholds 0.30 and 0.50.
  struct Step {
    float clearance;
    bool inside;
  };
  for (Step const& step : {Step{0.8F, false},
                           {0.4F, false},
                           {0.31F, false},
                           {0.29F, true},
                           {0.4F, true},
                           {0.49F, true},
                           {0.51F, false},
                           {0.31F, false},
                           {0.2F, true},
                           {-0.1F, true},
                           {0.6F, false}}) {
    scenes::Scene<S> scene = at<S>(S(step.clearance));
    scene.goal = {S(-2.0F), S(2.0F)};
    wend::Course<S> const course = scenes::answer(policy, scene, memory);
    CAPTURE(step.clearance);
    // past_disc goes straight left here, toward_goal 45 degrees further round.
    CHECK((numbers::first(course.direction.x()) == 0) == step.inside);
  }
}

TEST_CASE_TEMPLATE("a field that guarded enters anew has forgotten, and the one in use has not", S, WEND_TEST_NUMBERS) {
  constexpr auto counting = wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), counts{}, counts{});
  wend::memory_t<decltype(counting), S> memory;
  // Every lane switches at ticks of its own: lane k is inside when (tick / (k + 2)) is odd.
  std::array<int, 8> asked{};
  std::array<bool, 8> was_inside{};
  for (int tick = 0; tick < 60; ++tick) {
    auto const inside = [tick](int k) { return tick / (k + 2) % 2 == 1; };
    S const clearance = numbers::make<S>([&](int k) { return inside(k) ? 0.1F : 0.9F; });
    wend::Course<S> const course = scenes::answer(counting, at<S>(clearance), memory);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      auto const i = static_cast<std::size_t>(k);
      asked[i] = inside(k) == was_inside[i] ? asked[i] + 1 : 1;
      was_inside[i] = inside(k);
      CHECK(std::abs(static_cast<double>(numbers::lane(course.confidence, k)) * asked[i] - 1.0) < 1.0e-6);
    }
  }
}

TEST_CASE("guarded never switches back sooner than top speed can cross its band") {
  // Clearance cannot change faster than the machine moves (the distance to a set is 1-Lipschitz: common practice, no
  // source), so two switches are at least (leave - enter) / top speed apart. Smooth random paths past discs.
  constexpr double top_speed = 0.6;
  constexpr double dt = 0.005;
  double const bound = (static_cast<double>(0.50F) - static_cast<double>(0.30F)) / top_speed;
  std::mt19937 random(17);
  auto const uniform = [&random](double lowest, double highest) {
    return lowest + (highest - lowest) * (static_cast<double>(random()) / 4294967296.0);
  };
  double least_time = 1.0e9;
  int switches = 0;
  for (int run = 0; run < 40; ++run) {
    scenes::Scene<double> scene;
    for (int i = 0; i < scenes::disc_count; ++i) {
      scene.put(uniform(-1.5, 1.5), uniform(-1.5, 1.5), uniform(0.05, 0.3));
    }
    scene.goal = {uniform(-2.0, 2.0), uniform(-2.0, 2.0)};
    // Every other run drives at top speed through a disc and back: the fastest change of clearance there can be.
    bool const aimed = run % 2 == 1;
    std::array<double, 4> phase{uniform(0.0, 6.0), uniform(0.0, 6.0), uniform(0.5, 2.0), uniform(0.5, 2.0)};
    wend::memory_t<decltype(policy), double> memory;
    bool inside = false;
    double since = 1.0e9;
    for (int tick = 0; tick < 8000; ++tick) {
      double const t = tick * dt;
      double const heading = 2.0 * std::sin(phase[2] * t + phase[0]) + 3.0 * std::sin(0.3 * phase[3] * t + phase[1]);
      double const speed = aimed ? top_speed : top_speed * std::abs(std::sin(phase[3] * t));
      wend::Vec2<double> step{std::cos(heading) * speed * dt, std::sin(heading) * speed * dt};
      if (aimed) {  // to and fro through the first disc's centre
        double const swing = std::abs(std::fmod(t * top_speed, 4.0) - 2.0) - 1.0;
        scene.pose.position = scene.discs[0].centre + wend::Vec2<double>{swing, 0.0};
      } else {
        scene.pose.position += step;
        for (int i = 0; i < 2; ++i) {  // a room with walls
          scene.pose.position[i] = std::clamp(scene.pose.position[i], -2.0, 2.0);
        }
      }
      (void)scenes::answer(policy, scene, memory);
      since += dt;
      if (memory.is_inside != inside) {
        if (switches > 0 && since < 1.0e8) {
          least_time = std::min(least_time, since);
        }
        ++switches;
        inside = memory.is_inside;
        since = 0.0;
      }
    }
  }
  MESSAGE("least time between switches ", least_time, " s, bound ", bound, " s, ", switches, " switches");
  CHECK(switches > 100);
  CHECK(least_time > bound - dt);  // the crossings lie anywhere within a tick
  CHECK(least_time < 2.0 * bound);  // and the bound is not an idle one
}

TEST_CASE_TEMPLATE("only_when has the field's opinion inside and none outside", S, WEND_TEST_NUMBERS) {
  constexpr auto only = wend::only_when(field_list::near_a_disc, wend::away_from_discs{});
  wend::memory_t<decltype(only), S> memory;
  S const clearance = numbers::make<S>([](int k) { return k % 2 == 0 ? 0.1F : 0.9F; });
  wend::Course<S> const course = scenes::answer(only, at<S>(clearance), memory);
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    CHECK(numbers::lane(course.confidence, k) == (k % 2 == 0 ? 1 : 0));
    CHECK(numbers::lane(course.direction.x(), k) == (k % 2 == 0 ? -1 : 0));
  }
}
