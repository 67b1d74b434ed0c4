#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/attractor_dynamics.hpp"
#include "wend/motion/steering.hpp"

namespace {

constexpr wend::attractor_dynamics field;

template <wend::Number S>
double confidence(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.confidence));
}

}  // namespace

TEST_CASE("steered with a gain of 1 / lead the machine turns at the rate of the dynamics") {
  wend::Steering const steering{.gain = 3.0F, .max_turn_rate = 10.0F};
  int compared = 0;
  for (double angle = -3.1; angle < 3.1; angle += 0.1) {
    scenes::Scene<double> scene;
    scene.pose.heading = {std::cos(angle), std::sin(angle)};
    scene.goal = {3.0, 1.0};
    scene.put(1.0, 0.6, 0.2);
    double const rate = field.rate(scene.percept());
    auto const body = steering(scenes::answer(field, scene), scene.pose.heading, 0.5);
    if (std::abs(rate) < 2.88) {  // 0.96 / lead
      ++compared;
      CHECK(body.turn_rate == doctest::Approx(rate).epsilon(1e-6));  // lead is a third in single precision
    } else {
      CHECK(body.turn_rate == doctest::Approx(std::copysign(2.88, rate)).epsilon(1e-6));
    }
  }
  CHECK(compared > 30);
}

TEST_CASE("a machine that runs the dynamics goes round discs to the goal without a contact") {
  wend::Steering const steering;
  for (double const start : {-0.6, -0.2, 0.001, 0.05, 0.3, 0.8}) {
    scenes::Scene<double> scene;
    scene.pose.position = {-3.0, start};
    scene.goal = {3.0, 0.0};
    scene.put(0.0, 0.0, 0.4);
    scene.put(1.0, 1.4, 0.3);
    double least = 1.0e9;
    int tick = 0;
    for (; tick < 1000 && wend::length(wend::Vec2<double>(scene.goal - scene.pose.position)) > 0.1; ++tick) {
      auto const percept = scene.percept();
      least = std::min(least, percept.clearance);
      auto const body = steering(scenes::answer(field, scene), scene.pose.heading, 0.4);
      double const turn = body.turn_rate * scene.dt;
      scene.pose.heading = wend::turned_out_of(scene.pose.heading, wend::Vec2<double>{std::cos(turn), std::sin(turn)});
      scene.pose.position += body.speed * scene.dt * scene.pose.heading;
    }
    CAPTURE(start);
    MESSAGE("from y = ", start, ": ", tick * scene.dt, " s, least clearance ", least, " m");
    CHECK(tick < 1000);
    CHECK(least > 0.0);
  }
}

TEST_CASE_TEMPLATE("attractor_dynamics keeps a heading that points to the goal, and one exactly away from it", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(2.0F), S(0.0F)};
  CHECK(numbers::first(scenes::answer(field, scene).direction.x()) == 1);
  scene.goal = {S(-2.0F), S(0.0F)};
  CHECK(numbers::first(scenes::answer(field, scene).direction.x()) == 1);  // an equilibrium, though not a stable one
  scene.goal = {S(-2.0F), S(0.01F)};
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) > 0);
  CHECK(confidence(scenes::answer(field, scene)) == 1.0);
}

TEST_CASE_TEMPLATE("attractor_dynamics turns away from a disc beside the nose, and more for four at its place", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(0.0F)};
  scene.put(S(1.0F), S(0.1F), S(0.2F));
  auto const one = scenes::answer(field, scene);
  CHECK(numbers::first(one.direction.y()) < 0);
  for (int i = 1; i < scenes::disc_count; ++i) {
    scene.put(S(1.0F), S(0.1F), S(0.2F));
  }
  auto const four = scenes::answer(field, scene);
  CHECK(numbers::all<S>(four.direction.y() < one.direction.y()));
  CHECK(numbers::all<S>(four.direction.x() > S(0.27F)));  // never more than 74 degrees
}

TEST_CASE_TEMPLATE("attractor_dynamics at its degenerate points", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.put(S(1.0F), S(0.1F), S(0.2F));
  scene.goal = scene.pose.position;
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);  // on the goal
  scene.goal = {S(1.0F), S(1.0F)};
  scene.pose.position = {S(1.0F), S(0.1F)};  // at the disc's centre: it has no bearing, and only the goal counts
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) > 0);
  CHECK(confidence(scenes::answer(field, scene)) == 1.0);
  scene.pose.heading = {S(0.0F), S(0.0F)};
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);  // no heading, no turn
  scene.pose.heading = {S(scenes::nan), S(0.0F)};
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);
}
