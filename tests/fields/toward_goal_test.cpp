#include <cmath>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/fields/toward_goal.hpp"

TEST_CASE_TEMPLATE("toward_goal points along the line from the machine to the goal", S, WEND_TEST_NUMBERS) {
  // The direction by angle, std::atan2 (common practice, no source).
  for (int i = 0; i < 63; ++i) {
    scenes::Scene<S, 1> scene;
    float const angle = -3.1F + 0.1F * static_cast<float>(i);
    scene.pose.position = {S(0.4F), S(-0.7F)};
    scene.goal = {S(0.4F + 2.5F * std::cos(angle)), S(-0.7F + 2.5F * std::sin(angle))};
    wend::Course<S> const course = scenes::answer(wend::toward_goal{}, scene);
    double const x = static_cast<double>(numbers::first(course.direction.x()));
    double const y = static_cast<double>(numbers::first(course.direction.y()));
    CHECK(std::abs(std::atan2(y, x) - static_cast<double>(angle)) < 4.0e-7);
    CHECK(numbers::first(course.confidence) == 1);
  }
}

TEST_CASE_TEMPLATE("toward_goal has no opinion on the goal", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S, 1> scene;
  scene.pose.position = scene.goal = {S(3.25F), S(-1.5F)};
  wend::Course<S> const course = scenes::answer(wend::toward_goal{}, scene);
  CHECK(numbers::first(course.confidence) == 0);
  CHECK(numbers::first(course.direction.x()) == 0);
  CHECK(numbers::first(course.direction.y()) == 0);
}

TEST_CASE_TEMPLATE("toward_goal has no opinion on a goal that is nowhere", S, WEND_TEST_NUMBERS) {
  for (float const x : {scenes::nan, scenes::infinity, -scenes::infinity}) {
    scenes::Scene<S, 1> scene;
    scene.goal = {S(x), S(1.0F)};
    wend::Course<S> const course = scenes::answer(wend::toward_goal{}, scene);
    CHECK(numbers::first(course.confidence) == 0);
    CHECK(numbers::first(course.direction.x()) == 0);
    CHECK(numbers::first(course.direction.y()) == 0);
  }
}

TEST_CASE("toward_goal does not look at discs") {
  scenes::Scene<float> scene;
  scene.goal = {3.0F, 4.0F};
  auto const without = scenes::answer(wend::toward_goal{}, scene);
  scene.put(1.5F, 2.0F, 0.5F);
  CHECK(numbers::same(without.direction, scenes::answer(wend::toward_goal{}, scene).direction));
}
