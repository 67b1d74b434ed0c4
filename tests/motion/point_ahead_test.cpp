// PointAhead: against the velocity of the point it steers, worked out from the pose alone; Yun and Yamamoto (1992), On
// feedback linearization of mobile robots: the look-ahead point is input-output linear (from memory).
#include <algorithm>
#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/point_ahead.hpp"

using wend::BodyVelocity;
using wend::Course;
using wend::PointAhead;
using wend::Vec2;

namespace {

constexpr double pi = std::numbers::pi;

template <typename S>
Vec2<S> at(double angle) {
  return {S(static_cast<float>(std::cos(angle))), S(static_cast<float>(std::sin(angle)))};
}

// Over the ground, the velocity of the point at `distance` on the nose's line.
Vec2<double> of_point(BodyVelocity<double> const& body, double theta, double distance) {
  // by a central difference of where the point is a moment before and after, on the exact arc to second order
  double const h = 1.0e-6;
  auto const place = [&](double t) {
    double const turned = theta + body.turn_rate * t;
    double const mean = theta + 0.5 * body.turn_rate * t;
    return Vec2<double>(body.speed * t * std::cos(mean) + distance * std::cos(turned),
                        body.speed * t * std::sin(mean) + distance * std::sin(turned));
  };
  return (place(h) - place(-h)) / (2.0 * h);
}

}  // namespace

TEST_CASE("the point moves exactly along the course, at the speed allowed until the turn rate is at its limit") {
  double const allowed = 0.3;
  for (PointAhead const& steering : {PointAhead{.max_turn_rate = 100.0F}, PointAhead{.reverses = true},
                                     PointAhead{.distance = 0.05F, .reverses = true}}) {
    double const distance = static_cast<double>(steering.distance);
    for (double course = -3.1; course < 3.2; course += 0.21) {
      for (double const theta : {-2.0, 0.0, 0.9}) {
        double const error = std::remainder(course - theta, 2.0 * pi);
        if (!steering.reverses && std::abs(error) > 0.5 * pi) {
          continue;
        }
        BodyVelocity<double> const body = steering(Course<double>{at<double>(course), 1.0}, at<double>(theta), allowed);
        Vec2<double> const moved = of_point(body, theta, distance);
        Vec2<double> const unit = at<double>(course);
        CAPTURE(course);
        CAPTURE(theta);
        CHECK(std::abs(wend::cross(unit, moved)) < 1e-7);
        double const turn = std::abs(std::sin(error)) * allowed / distance;
        double const limit = static_cast<double>(steering.max_turn_rate);
        CHECK(wend::dot(unit, moved) == doctest::Approx(allowed * std::min(1.0, limit / turn)).epsilon(1e-6));
        CHECK(std::abs(body.turn_rate) <= limit * (1.0 + 1e-9));
      }
    }
  }
}

TEST_CASE_TEMPLATE("without reversing, a course behind is turned to in place, whatever is allowed", S,
                   WEND_TEST_NUMBERS) {
  PointAhead const steering{};
  for (double const angle : {1.7, 3.0, -1.7, -3.0}) {
    for (float const allowed : {0.0F, 0.5F}) {
      auto const body = steering(Course<S>{at<S>(angle), S(1.0F)}, at<S>(0.0), S(allowed));
      CHECK(numbers::all<S>(body.speed <= S(0.0F) && body.speed >= S(0.0F)));
      CHECK(numbers::all<S>(body.turn_rate * S(static_cast<float>(angle)) > S(1.0F)));
    }
  }
}

TEST_CASE("blocked with a course ahead, it still turns towards it") {
  PointAhead const steering{};
  auto const body = steering(Course<double>{at<double>(1.0), 1.0}, at<double>(0.0), 0.0);
  CHECK(body.speed == 0.0);
  CHECK(body.turn_rate == doctest::Approx(0.05 / 0.2 * std::sin(1.0)).epsilon(1e-6));
}

TEST_CASE("the way it moves is the nose's, and the tail's where it backs up") {
  PointAhead const backs{.reverses = true};
  PointAhead const never{};
  Course<double> const behind{at<double>(3.0), 1.0};
  Course<double> const ahead{at<double>(0.5), 1.0};
  CHECK(backs.way(behind, at<double>(0.0)).x() == doctest::Approx(-1.0));
  CHECK(backs.way(ahead, at<double>(0.0)).x() == doctest::Approx(1.0));
  CHECK(never.way(behind, at<double>(0.0)).x() == doctest::Approx(1.0));
  CHECK(backs(behind, at<double>(0.0), 0.5).speed < 0.0);
}

TEST_CASE("driven, the point keeps to a straight line from any heading, and the axle follows it") {
  PointAhead const steering{.distance = 0.2F, .max_turn_rate = 4.0F, .reverses = true};
  for (double start = -3.0; start < 3.1; start += 0.5) {
    double theta = start;
    double y = -0.2 * std::sin(theta);  // so that the point starts on the line, y = 0
    double farthest = 0.0;
    double const dt = 1.0e-3;
    for (int k = 0; k < 8000; ++k) {
      auto const body = steering(Course<double>{{1.0, 0.0}, 1.0}, {std::cos(theta), std::sin(theta)}, 0.3);
      double const mean = theta + 0.5 * dt * body.turn_rate;
      y += dt * body.speed * std::sin(mean);
      theta += dt * body.turn_rate;
      farthest = std::max(farthest, std::abs(y + 0.2 * std::sin(theta)));
    }
    CAPTURE(start);
    CHECK(farthest < 1.0e-3);          // metres off the line, all due to the step
    CHECK(std::abs(y) < 1.0e-3);       // the axle has come onto it
    CHECK(std::cos(theta) > 0.99999);  // nose first
  }
}
