// The formula itself is checked in tests/published/khatib_test.cpp and ge_cui_test.cpp.
#include <cmath>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/fields/potential_field.hpp"

TEST_CASE_TEMPLATE("potential_field without discs is toward_goal", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S, 1> scene;
  scene.goal = {S(-0.7F), S(1.9F)};
  wend::Course<S> const course = scenes::answer(wend::potential_field{}, scene);
  wend::Course<S> const goal = scenes::answer(wend::toward_goal{}, scene);
  auto const off = wend::length(wend::Vec2<S>(course.direction - goal.direction));
  CHECK(numbers::all<S>(off < S(1.5e-7F)));
  CHECK(numbers::all<S>(course.confidence > S(1.0F - 2.0e-7F)));
}

TEST_CASE_TEMPLATE("potential_field has no opinion on a goal that no disc is near", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = scene.pose.position;
  scene.put(S(2.0F), S(0.0F), S(0.3F));  // clearance 1.5 m, influence 1 m
  wend::Course<S> const course = scenes::answer(wend::potential_field{}, scene);
  CHECK(numbers::first(course.confidence) == 0);
  CHECK(numbers::first(course.direction.x()) == 0);
  CHECK(numbers::first(course.direction.y()) == 0);
}

TEST_CASE_TEMPLATE("potential_field grows no further below its closest clearance", S, WEND_TEST_NUMBERS) {
  wend::potential_field const field{0.0F, 0.05F, 1.0F, 0.1F};
  auto const push = [&field](float clearance) {
    scenes::Scene<S> scene;
    scene.put(S(0.5F + clearance), S(0.0F), S(0.3F));  // radii 0.3 and 0.2
    return static_cast<double>(numbers::first(field.force(scene.percept()).sum.x()));
  };
  double const most = 0.05 * (1.0 / 0.1 - 1.0) / (0.1 * 0.1);
  CHECK(std::abs(push(0.05F) + most) < 1.0e-5 * most);
  CHECK(std::abs(push(-0.3F) + most) < 1.0e-5 * most);
  CHECK(push(0.2F) > -most);
  CHECK(push(0.2F) < 0.0);
}

TEST_CASE_TEMPLATE("potential_field sums over all discs, not only the nearest", S, WEND_TEST_NUMBERS) {
  wend::potential_field const field;
  scenes::Scene<S> scene;
  scene.goal = scene.pose.position;
  scene.put(S(1.0F), S(0.0F), S(0.3F));
  scene.put(S(-1.0F), S(0.0F), S(0.3F));
  // Two equal discs on either side: the pushes cancel, and nobody knows where to go.
  CHECK(numbers::first(field.force(scene.percept()).sum.x()) == 0);
  CHECK(numbers::first(field.force(scene.percept()).sum_of_sizes) > 0);
  CHECK(numbers::first(scenes::answer(field, scene).confidence) == 0);
  scene.put(S(0.0F), S(1.0F), S(0.3F));
  wend::Course<S> const course = scenes::answer(field, scene);
  CHECK(numbers::first(course.direction.y()) == -1);
  // One push of three equal ones is left.
  CHECK(std::abs(static_cast<double>(numbers::first(course.confidence)) - 1.0 / 3.0) < 1.0e-7);
}
