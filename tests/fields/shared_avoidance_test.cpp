#include <algorithm>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <vector>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/shared_avoidance.hpp"

namespace {

using Vec = wend::Vec2<double>;

// Machines that run the same field and see each other; they drive any way at once, as the method assumes.
struct Crowd {
  static constexpr int most = 8;
  static constexpr double radius = 0.2;
  static constexpr double tick = 0.05;

  struct Machine {
    Vec position;
    Vec goal;
    Vec velocity{0.0, 0.0};
    wend::shared_avoidance::Memory<double> memory{};
  };
  std::vector<Machine> machines;
  wend::shared_avoidance field{.speed = 0.5F, .margin = 0.05F};
  double least_gap = 1.0e9;

  void step() {
    std::vector<Vec> next;
    for (Machine& own : machines) {
      scenes::Scene<double, most> scene;
      scene.pose.position = own.position;
      scene.goal = own.goal;
      scene.robot_radius = radius;
      scene.dt = tick;
      for (Machine const& other : machines) {
        if (&other != &own) {
          scene.put(other.position.x(), other.position.y(), radius, other.velocity.x(), other.velocity.y());
        }
      }
      auto const course = scenes::answer(field, scene, own.memory);
      // Arrived, it stands, unless it has to give way.
      bool const there = wend::length(Vec(own.goal - own.position)) < 0.04;
      double const v = there ? 0.0 : static_cast<double>(field.speed) * course.speed_share;
      next.push_back(v * course.direction);
    }
    for (std::size_t i = 0; i < machines.size(); ++i) {
      machines[i].velocity = next[i];
      machines[i].position += tick * next[i];
    }
    for (std::size_t i = 0; i < machines.size(); ++i) {
      for (std::size_t j = 0; j < i; ++j) {
        Vec const apart = machines[i].position - machines[j].position;
        least_gap = std::min(least_gap, wend::length(apart) - 2.0 * radius);
      }
    }
  }
  // Seconds until all are at their goals; `limit` if they are not by then.
  double run(double limit) {
    for (double t = 0.0; t < limit; t += tick) {
      bool const all = std::all_of(machines.begin(), machines.end(),
                                   [](Machine const& m) { return wend::length(Vec(m.goal - m.position)) < 0.05; });
      if (all) {
        return t;
      }
      step();
    }
    return limit;
  }
};

template <wend::Number S>
double share(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.speed_share));
}
template <wend::Number S>
double confidence(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.confidence));
}

constexpr wend::shared_avoidance field{.speed = 0.5F, .margin = 0.05F};

}  // namespace

TEST_CASE("two machines that meet head on swap places without a contact") {
  for (double const beside : {0.0, 0.05, -0.05, 0.3}) {
    Crowd crowd;
    crowd.machines = {{{-2.0, 0.0}, {2.0, 0.0}}, {{2.0, beside}, {-2.0, beside}}};
    double const time = crowd.run(60.0);
    CAPTURE(beside);
    MESSAGE("head on, ", beside, " m aside: ", time, " s, least gap ", crowd.least_gap, " m");
    CHECK(time < 12.0);  // 8 s straight
    CHECK(crowd.least_gap > 0.0);
  }
}

TEST_CASE("exactly head on and without lean, two machines stop face to face: the published form's deadlock") {
  Crowd crowd;
  crowd.field.lean = 0.0F;
  crowd.machines = {{{-3.0, 0.0}, {3.0, 0.0}}, {{3.0, 0.0}, {-3.0, 0.0}}};
  CHECK(crowd.run(60.0) == 60.0);
  CHECK(crowd.least_gap > 0.0);
  CHECK(crowd.least_gap < 0.2);
  CHECK(wend::length(crowd.machines[0].velocity) < 1.0e-2);
}

TEST_CASE("up to nine machines on a circle swap places through its middle without a contact") {
  for (int const count : {3, 4, 5, 8, 9}) {
    Crowd crowd;
    for (int i = 0; i < count; ++i) {
      double const angle = 2.0 * std::numbers::pi * i / count;
      Vec const at = 2.5 * Vec{std::cos(angle), std::sin(angle)};
      crowd.machines.push_back({at, -at});
    }
    double const time = crowd.run(120.0);
    MESSAGE(count, " on a circle: ", time, " s, least gap ", crowd.least_gap, " m");
    CHECK(time < 40.0);  // 10 s straight
    CHECK(crowd.least_gap > 0.0);
  }
}

TEST_CASE("with a lean of 0.1 eight machines on a circle jam in its middle, still without a contact") {
  Crowd crowd;
  crowd.field.lean = 0.1F;
  for (int i = 0; i < 8; ++i) {
    double const angle = 2.0 * std::numbers::pi * i / 8;
    Vec const at = 2.5 * Vec{std::cos(angle), std::sin(angle)};
    crowd.machines.push_back({at, -at});
  }
  CHECK(crowd.run(60.0) == 60.0);
  CHECK(crowd.least_gap > 0.0);
}

TEST_CASE("a machine that crosses is given way to without a contact, by both") {
  Crowd crowd;
  crowd.machines = {{{-2.0, 0.0}, {2.0, 0.0}}, {{0.0, -2.0}, {0.0, 2.0}}};
  CHECK(crowd.run(60.0) < 12.0);
  CHECK(crowd.least_gap > 0.0);
}

TEST_CASE_TEMPLATE("shared_avoidance goes straight to the goal at full speed when nothing is in the way", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(4.0F)};
  scene.put(S(-2.0F), S(-2.0F), S(0.2F));
  auto const course = scenes::answer(field, scene);
  CHECK(numbers::first(course.direction.x()) == doctest::Approx(0.6).epsilon(1e-6));
  CHECK(share(course) == doctest::Approx(1.0).epsilon(1e-6));
  CHECK(confidence(course) == 1.0);
}

TEST_CASE_TEMPLATE("shared_avoidance remembers the velocity that it gave", S, WEND_TEST_NUMBERS) {
  wend::memory_t<wend::shared_avoidance, S> memory;
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(0.5F)};
  scene.put(S(1.5F), S(0.0F), S(0.3F));
  for (int tick = 0; tick < 5; ++tick) {
    auto const course = scenes::answer(field, scene, memory);
    CHECK(
        numbers::first(memory.velocity.x()) ==
        doctest::Approx(0.5 * share(course) * static_cast<double>(numbers::first(course.direction.x()))).epsilon(1e-5));
    CHECK(numbers::all<S>(memory.velocity.x() > S(0.1F)));
  }
}

TEST_CASE_TEMPLATE("shared_avoidance without a goal stands, and gives way", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = scene.pose.position;
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);
  scene.put(S(2.0F), S(0.0F), S(0.3F));
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);  // it stands as well
  scene.put(S(0.0F), S(1.0F), S(0.3F), S(0.0F), S(-0.4F));
  auto const course = scenes::answer(field, scene);
  CHECK(confidence(course) > 0.0);
  CHECK(share(course) > 0.0);
  CHECK(numbers::first(course.direction.y()) < 0);
}

TEST_CASE_TEMPLATE("shared_avoidance stands where it is best to stand, with the goal's direction", S,
                   WEND_TEST_NUMBERS) {
  constexpr wend::shared_avoidance slow{.speed = 0.0F, .margin = 0.05F};
  scenes::Scene<S> scene;
  scene.goal = {S(0.0F), S(2.0F)};
  scene.put(S(1.0F), S(0.0F), S(0.3F));
  auto const course = scenes::answer(slow, scene);
  CHECK(share(course) == 0.0);
  CHECK(confidence(course) > 0.0);
  CHECK(numbers::first(course.direction.y()) == 1);
}

TEST_CASE_TEMPLATE("shared_avoidance gets out of overlaps, less sure of itself the deeper", S, WEND_TEST_NUMBERS) {
  auto const inside = [](float x) {
    scenes::Scene<S> scene;
    scene.goal = {S(2.0F), S(0.0F)};
    scene.put(S(x), S(0.0F), S(0.3F));
    return scenes::answer(field, scene);
  };
  CHECK(numbers::first(inside(0.5F).direction.x()) < 0);
  CHECK(confidence(inside(0.5F)) == 1.0);  // 0.05 m in 0.5 s
  CHECK(numbers::first(inside(0.1F).direction.x()) < 0);
  CHECK(confidence(inside(0.1F)) < 1.0);  // 0.45 m in 0.5 s: faster than it can
  CHECK(confidence(inside(0.02F)) < confidence(inside(0.1F)));
  CHECK(share(inside(0.1F)) == doctest::Approx(1.0).epsilon(1e-5));
  // At the very centre no way is the way out, and none is asked for.
  CHECK(numbers::first(inside(0.0F).direction.x()) == doctest::Approx(1.0).epsilon(1e-6));
}

TEST_CASE_TEMPLATE("shared_avoidance is not shaken by many discs at one place", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(2.0F), S(0.0F)};
  scene.put(S(1.0F), S(0.1F), S(0.3F));
  auto const one = scenes::answer(field, scene);
  for (int i = 1; i < scenes::disc_count; ++i) {
    scene.put(S(1.0F), S(0.1F), S(0.3F));
  }
  auto const four = scenes::answer(field, scene);
  CHECK(numbers::all<S>(wend::length(wend::Vec2<S>(one.direction - four.direction)) < S(1.0e-6F)));
  CHECK(share(one) == doctest::Approx(share(four)).epsilon(1e-6));
}
