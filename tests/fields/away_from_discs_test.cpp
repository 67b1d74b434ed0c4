#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/angle.hpp"
#include "wend/fields/away_from_discs.hpp"

TEST_CASE_TEMPLATE("away_from_discs is the direction to the nearest disc plus pi", S, WEND_TEST_NUMBERS) {
  // By angles: atan2 of the vector to the disc, plus pi, wrapped (common practice, no source).
  for (int i = 0; i < 128; ++i) {
    double const bearing = -3.1 + 0.05 * i;
    float const x = static_cast<float>(1.3 * std::cos(bearing));
    float const y = static_cast<float>(1.3 * std::sin(bearing));
    scenes::Scene<S> scene;
    scene.pose.position = {S(0.5F), S(2.0F)};
    scene.put(S(-9.0F), S(-9.0F), S(1.0F));
    scene.put(S(0.5F + x), S(2.0F + y), S(0.25F));
    scene.put(S(4.0F), S(4.0F), S(0.5F));
    wend::Course<S> const course = scenes::answer(wend::away_from_discs{}, scene);
    double const got = std::atan2(static_cast<double>(numbers::first(course.direction.y())),
                                  static_cast<double>(numbers::first(course.direction.x())));
    double const expected = wend::wrap(std::atan2(static_cast<double>(y), static_cast<double>(x)) + std::numbers::pi);
    CHECK(std::abs(wend::turn(expected, got)) < 5.0e-7);
    CHECK(numbers::first(course.confidence) == 1);
  }
}

TEST_CASE_TEMPLATE("away_from_discs minds the nearest edge, not the nearest centre", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.put(S(2.0F), S(0.0F), S(0.1F));
  scene.put(S(0.0F), S(3.0F), S(2.0F));
  wend::Course<S> const course = scenes::answer(wend::away_from_discs{}, scene);
  CHECK(numbers::first(course.direction.x()) == 0);
  CHECK(numbers::first(course.direction.y()) == -1);
}

TEST_CASE_TEMPLATE("away_from_discs has no opinion without a disc, and at the centre of one", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  CHECK(numbers::first(scenes::answer(wend::away_from_discs{}, scene).confidence) == 0);
  scene.put(S(0.0F), S(0.0F), S(0.3F));
  wend::Course<S> const course = scenes::answer(wend::away_from_discs{}, scene);
  CHECK(numbers::first(course.confidence) == 0);
  CHECK(numbers::first(course.direction.x()) == 0);
  CHECK(numbers::first(course.direction.y()) == 0);
}

TEST_CASE("away_from_discs inside a disc leads out by the shortest way") {
  scenes::Scene<double> scene;
  scene.put(0.3, -0.4, 2.0);
  wend::Course<double> const course = scenes::answer(wend::away_from_discs{}, scene);
  CHECK(course.direction.x() == doctest::Approx(-0.6).epsilon(1.0e-15));
  CHECK(course.direction.y() == doctest::Approx(0.8).epsilon(1.0e-15));
}
