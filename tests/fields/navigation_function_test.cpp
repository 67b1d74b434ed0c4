// What is known of the function is checked in tests/published/koditschek_rimon_test.cpp.
#include <cmath>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/navigation_function.hpp"

namespace {

constexpr wend::navigation_function field{.radius = 5.0F, .k = 4, .margin = 0.125F};

template <wend::Number S>
bool points(wend::Course<S> const& course, float x, float y) {
  auto const off = wend::length(wend::Vec2<S>(course.direction - wend::Vec2<S>{S(x), S(y)}));
  return numbers::all<S>(off < S(3.0e-7F)) && numbers::all<S>(course.confidence > S(0.0F));
}
template <wend::Number S>
bool no_opinion(wend::Course<S> const& course) {
  return numbers::first(course.confidence) == 0 && numbers::first(course.direction.x()) == 0 &&
         numbers::first(course.direction.y()) == 0;
}

}  // namespace

TEST_CASE_TEMPLATE("navigation_function is made of gamma and beta as its formula says", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.robot_radius = S(0.25F);
  scene.pose.position = {S(1.0F), S(2.0F)};
  scene.goal = {S(-2.0F), S(-2.0F)};
  scene.put(S(1.0F), S(0.0F), S(0.625F));  // grown to 1
  scene.put(S(-3.0F), S(2.0F), S(0.625F));
  scene.put(S(50.0F), S(0.0F), S(0.625F));  // outside the outer disc: does not count
  auto const [gamma, beta] = field.parts(scene.percept());
  // By hand: 3^2 + 4^2, and (25 - 5) (4 - 1) (16 - 1).
  CHECK(numbers::first(gamma) == 25);
  CHECK(numbers::first(beta) == 900);
}

TEST_CASE_TEMPLATE("navigation_function without discs, on the line through centre and goal, runs along it", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.pose.position = {S(-0.9F), S(-1.2F)};
  scene.goal = {S(1.2F), S(1.6F)};
  CHECK(points(scenes::answer(field, scene), 0.6F, 0.8F));
}

TEST_CASE_TEMPLATE("navigation_function has no opinion on the goal, with discs or without", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.pose.position = {S(0.5F), S(0.25F)};
  scene.goal = scene.pose.position;
  CHECK(no_opinion(scenes::answer(field, scene)));
  scene.put(S(2.0F), S(0.0F), S(0.25F));
  CHECK(no_opinion(scenes::answer(field, scene)));
}

TEST_CASE_TEMPLATE("navigation_function has no opinion at a disc's centre, and none where all discs are one there", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.put(S(0.0F), S(0.0F), S(0.5F));
  CHECK(no_opinion(scenes::answer(field, scene)));
  scene.put(S(0.0F), S(0.0F), S(0.5F));
  scene.put(S(0.0F), S(0.0F), S(0.5F));
  CHECK(no_opinion(scenes::answer(field, scene)));
}

TEST_CASE_TEMPLATE("navigation_function outside free space leads back to it", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.put(S(0.3F), S(-0.4F), S(0.25F));  // half a metre off; grown it is 0.25 + 0.2 + 0.125
  scene.goal = {S(3.0F), S(-4.0F)};
  CHECK(points(scenes::answer(field, scene), -0.6F, 0.8F));
  scene.put(S(0.5F), S(0.0F), S(0.28F));  // of two, out of the one that it is deeper in
  CHECK(points(scenes::answer(field, scene), -1.0F, 0.0F));
  scene.pose.position = {S(6.0F), S(8.0F)};  // outside the outer disc
  CHECK(points(scenes::answer(field, scene), -0.6F, -0.8F));
  scene.pose.position = scene.goal = {S(3.0F), S(4.0F)};  // on its edge, and on the goal
  CHECK(points(scenes::answer(field, scene), -0.6F, -0.8F));
}

TEST_CASE_TEMPLATE("navigation_function near an edge leads off it, and a disc outside does not count", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.robot_radius = S(0.25F);
  scene.goal = {S(2.0F), S(0.0F)};
  scene.pose.position = {S(-2.0F - 1.0e-4F), S(0.0F)};
  scene.put(S(-1.0F), S(0.0F), S(0.625F));  // grown to 1, between machine and goal
  CHECK(points(scenes::answer(field, scene), -1.0F, 0.0F));
  scenes::Scene<S> other = scene;
  other.put(S(0.0F), S(6.125F), S(0.625F));  // beyond the edge, grown to 1 too
  wend::Course<S> const alone = scenes::answer(field, scene);
  wend::Course<S> const beside = scenes::answer(field, other);
  CHECK(numbers::first(alone.confidence) == numbers::first(beside.confidence));
  scene.pose.position = {S(0.0F), S(5.0F - 1.0e-4F)};
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) < -0.999F);
}

TEST_CASE("navigation_function does not overflow in single precision among many discs and with a large k") {
  // Formed as phi it would: 25^30 is 1e42.
  scenes::Scene<float, 12> in_float;
  scenes::Scene<double, 12> in_double;
  for (int i = 0; i < 12; ++i) {
    double const angle = 0.5236 * i;
    in_double.put(3.0 * std::cos(angle), 3.0 * std::sin(angle), 0.125);
    in_float.put(static_cast<float>(3.0 * std::cos(angle)), static_cast<float>(3.0 * std::sin(angle)), 0.125F);
  }
  in_double.pose.position = {-1.5, 0.25};
  in_float.pose.position = {-1.5F, 0.25F};
  in_double.goal = {1.5, 1.0};
  in_float.goal = {1.5F, 1.0F};
  constexpr wend::navigation_function steep{.radius = 5.0F, .k = 30};
  auto const expected = scenes::answer(steep, in_double);
  auto const found = scenes::answer(steep, in_float);
  CHECK((found.direction.cast<double>() - expected.direction).norm() < 1e-6);
  CHECK(static_cast<double>(found.confidence) == doctest::Approx(expected.confidence).epsilon(1e-6));
}
