#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/to_dock.hpp"

namespace {

constexpr double pi = std::numbers::pi;

// The machine at a bearing and a distance from the dock, which is at the origin and faces along x; the bearing is that
// of the line of sight.
template <wend::Number S>
scenes::Scene<S> seen_at(float bearing, float distance) {
  scenes::Scene<S> scene;
  scene.pose.position = {S(-distance * std::cos(bearing)), S(-distance * std::sin(bearing))};
  return scene;
}

}  // namespace

TEST_CASE("to_dock deviates from the line of sight to the other side, by a tangent of bend times that of half") {
  for (float const bend : {1.0F, 2.0F, 3.5F}) {
    for (float bearing = -3.1F; bearing < 3.15F; bearing += 0.1F) {
      wend::Course<double> const course = scenes::answer(wend::to_dock{.bend = bend}, seen_at<double>(bearing, 1.5F));
      // From the line of sight to the dock's heading it is -bearing; the course lies on the other side.
      double const expected = std::atan(static_cast<double>(bend) * std::tan(static_cast<double>(bearing) / 2.0));
      double const angle = std::atan2(course.direction.y(), course.direction.x());
      CHECK(std::abs(wend::turn(static_cast<double>(bearing) + expected, angle)) < 1.0e-6);
      CHECK(course.confidence == 1.0);
    }
  }
}

TEST_CASE_TEMPLATE("to_dock drives straight in along the dock's axis", S, WEND_TEST_NUMBERS) {
  wend::Course<S> const course = scenes::answer(wend::to_dock{}, seen_at<S>(0.0F, 2.0F));
  CHECK(numbers::first(course.direction.x()) == 1);
  CHECK(numbers::first(course.direction.y()) == 0);
}

TEST_CASE_TEMPLATE("to_dock turns aside on the line straight ahead of the dock, leaving it on the left hand", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.pose.position = {S(2.0F), S(0.0F)};
  wend::Course<S> const course = scenes::answer(wend::to_dock{}, scene);
  CHECK(numbers::first(course.direction.x()) == 0);
  CHECK(numbers::first(course.direction.y()) == 1);  // it looks along -x: the right hand is +y
}

TEST_CASE_TEMPLATE("to_dock: the share of the speed falls with the distance, to nothing where it has arrived", S,
                   WEND_TEST_NUMBERS) {
  wend::to_dock const field;
  CHECK(numbers::first(scenes::answer(field, seen_at<S>(1.0F, 3.0F)).speed_share) == 1);
  CHECK(numbers::first(scenes::answer(field, seen_at<S>(1.0F, 0.25F)).speed_share) == doctest::Approx(0.5));
  CHECK(numbers::first(scenes::answer(field, seen_at<S>(1.0F, 0.01F)).speed_share) == 0);
}

TEST_CASE_TEMPLATE("to_dock: arrived, and on the goal itself, the course is the dock's heading", S, WEND_TEST_NUMBERS) {
  for (float const distance : {0.015F, 0.0F}) {
    scenes::Scene<S> scene = seen_at<S>(2.0F, distance);
    scene.dt = S(0.0F);
    wend::Course<S> const course = scenes::answer(wend::to_dock{.heading = {0.0F, -1.0F}}, scene);
    CHECK(numbers::first(course.direction.x()) == 0);
    CHECK(numbers::first(course.direction.y()) == -1);
    CHECK(numbers::first(course.confidence) == 1);
    CHECK(numbers::first(course.speed_share) == 0);
  }
}

TEST_CASE_TEMPLATE("to_dock has no opinion where the goal is none", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(scenes::nan), S(0.0F)};
  CHECK(numbers::first(scenes::answer(wend::to_dock{}, scene).confidence) == 0);
  scene.goal = {S(2.0e6F), S(0.0F)};
  CHECK(numbers::first(scenes::answer(wend::to_dock{}, scene).confidence) == 0);
}

TEST_CASE("to_dock only ever comes nearer, and swings out less with less bend") {
  // The first step from abeam of the dock: it goes ahead of the line of sight by atan(bend).
  for (int i = 0; i < 360; ++i) {
    float const bearing = static_cast<float>(pi * (i - 179.5) / 180.0);
    scenes::Scene<double> const scene = seen_at<double>(bearing, 1.0F);
    wend::Vec2<double> const sight = -scene.pose.position;
    double const less = wend::dot(scenes::answer(wend::to_dock{.bend = 1.5F}, scene).direction, sight);
    double const more = wend::dot(scenes::answer(wend::to_dock{.bend = 3.0F}, scene).direction, sight);
    CHECK(more > 0.0);
    CHECK(less > more);
  }
}

TEST_CASE("to_dock takes no notice of discs") {
  scenes::Scene<double> scene = seen_at<double>(1.0F, 2.0F);
  wend::Course<double> const before = scenes::answer(wend::to_dock{}, scene);
  for (int i = 0; i < scenes::disc_count; ++i) {
    scene.put(scene.pose.position.x(), scene.pose.position.y(), 0.3);
  }
  CHECK(numbers::same(before.direction, scenes::answer(wend::to_dock{}, scene).direction));
}
