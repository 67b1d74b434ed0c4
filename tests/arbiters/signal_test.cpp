#include <cmath>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/arbiters/signal.hpp"

namespace {

template <wend::Number S, typename Signal>
double value(Signal const& signal, scenes::Scene<S> const& scene) {
  return static_cast<double>(numbers::first(signal(scene.percept())));
}

}  // namespace

TEST_CASE_TEMPLATE("clearance and goal_distance are metres, from edge to edge and from centre to goal", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(-3.0F), S(4.0F)};
  scene.put(S(0.0F), S(2.0F), S(0.5F));
  scene.robot_radius = S(0.25F);
  CHECK(value(wend::clearance, scene) == 1.25);
  CHECK(value(wend::goal_distance, scene) == 5.0);
  scene.put(S(0.0F), S(-0.5F), S(0.5F));
  CHECK(value(wend::clearance, scene) == -0.25);
}

TEST_CASE_TEMPLATE("heading_error is the chord of the angle between nose and goal", S, WEND_TEST_NUMBERS) {
  // 2 sin(|angle| / 2) with std::sin; the length of a chord is common practice, no source.
  for (int i = -31; i <= 31; ++i) {
    float const angle = 0.1F * static_cast<float>(i);
    scenes::Scene<S> scene;
    scene.pose.heading = {S(std::cos(0.7F)), S(std::sin(0.7F))};
    scene.goal = {S(2.0F * std::cos(0.7F + angle)), S(2.0F * std::sin(0.7F + angle))};
    double const expected = 2.0 * std::sin(std::abs(static_cast<double>(angle)) / 2.0);
    CHECK(std::abs(value(wend::heading_error, scene) - expected) < 5.0e-7);
    if (std::abs(angle) <= 0.5F && i != 0) {
      CHECK(std::abs(value(wend::heading_error, scene) / std::abs(static_cast<double>(angle)) - 1.0) < 0.0105);
    }
  }
  scenes::Scene<S> on_goal;
  on_goal.goal = on_goal.pose.position;
  CHECK(value(wend::heading_error, on_goal) == 1.0);
}

TEST_CASE_TEMPLATE("disc_before_goal is the cosine between disc and goal", S, WEND_TEST_NUMBERS) {
  for (int i = 0; i < 63; ++i) {
    float const angle = 0.1F * static_cast<float>(i);
    scenes::Scene<S> scene;
    scene.put(S(std::cos(0.4F)), S(std::sin(0.4F)), S(0.1F));
    scene.goal = {S(3.0F * std::cos(0.4F + angle)), S(3.0F * std::sin(0.4F + angle))};
    CHECK(std::abs(value(wend::disc_before_goal, scene) - std::cos(static_cast<double>(angle))) < 1.0e-6);
  }
}

TEST_CASE_TEMPLATE("disc_before_goal is 0 without a disc, on a disc's centre and on the goal", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(0.0F)};
  CHECK(value(wend::disc_before_goal, scene) == 0.0);
  scene.put(S(0.0F), S(0.0F), S(0.3F));
  CHECK(value(wend::disc_before_goal, scene) == 0.0);
  scenes::Scene<S> on_goal;
  on_goal.goal = on_goal.pose.position;
  on_goal.put(S(1.0F), S(0.0F), S(0.3F));
  CHECK(value(wend::disc_before_goal, on_goal) == 0.0);
}
