// Steering: which way it turns, how hard, and that it gets there.
#include <cmath>
#include <limits>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/steering.hpp"

using wend::BodyVelocity;
using wend::Course;
using wend::Steering;
using wend::Vec2;

namespace {

constexpr Steering steering{};

template <typename S>
Vec2<S> unit(double angle) {
  return {S(static_cast<float>(std::cos(angle))), S(static_cast<float>(std::sin(angle)))};
}

template <typename S>
Course<S> course_at(double angle) {
  return {unit<S>(angle), S(1.0F)};
}

double degrees(double d) { return d * std::numbers::pi / 180.0; }

}  // namespace

TEST_CASE_TEMPLATE("steering turns the short way and its sign is counter-clockwise", S, WEND_TEST_NUMBERS) {
  for (int heading = -180; heading < 180; heading += 15) {
    for (int error = -179; error < 180; ++error) {
      BodyVelocity<S> const body = steering(course_at<S>(degrees(heading + error)), unit<S>(degrees(heading)), S(1.0F));
      double const rate = static_cast<double>(numbers::first(body.turn_rate));
      CAPTURE(heading);
      CAPTURE(error);
      if (error == 0) {
        CHECK(std::abs(rate) < 1.0e-6);
      } else {
        CHECK((rate > 0.0) == (error > 0));
      }
    }
  }
}

TEST_CASE_TEMPLATE("steering keeps its limits and drives with the cosine of the error", S, WEND_TEST_NUMBERS) {
  float const allowed = 0.4F;
  for (int error = -180; error <= 180; ++error) {
    BodyVelocity<S> const body = steering(course_at<S>(degrees(error)), unit<S>(0.0), S(allowed));
    double const rate = static_cast<double>(numbers::first(body.turn_rate));
    double const speed = static_cast<double>(numbers::first(body.speed));
    double const sine = std::sin(degrees(error));
    double const cosine = std::cos(degrees(error));
    CAPTURE(error);
    CHECK(std::abs(rate) <= static_cast<double>(steering.max_turn_rate));
    CHECK(speed == doctest::Approx(static_cast<double>(allowed) * std::fmax(cosine, 0.0)).epsilon(1.0e-6).scale(1.0));
    if (cosine > 1.0e-6 && std::abs(static_cast<double>(steering.gain) * sine) < 1.5) {
      CHECK(rate == doctest::Approx(static_cast<double>(steering.gain) * sine).epsilon(1.0e-6).scale(1.0));
    }
  }
}

TEST_CASE_TEMPLATE("steering turns in place at the full rate when the course is behind", S, WEND_TEST_NUMBERS) {
  for (int error = 91; error <= 269; ++error) {
    BodyVelocity<S> const body = steering(course_at<S>(degrees(error)), unit<S>(0.0), S(1.0F));
    CAPTURE(error);
    CHECK(numbers::all<S>(body.speed >= S(0.0F) && body.speed <= S(0.0F)));
    CHECK(numbers::all<S>(wend::magnitude(body.turn_rate) >= S(steering.max_turn_rate)));
  }
}

TEST_CASE_TEMPLATE("a course exactly astern is turned to leftwards", S, WEND_TEST_NUMBERS) {
  for (int k = 0; k < 4; ++k) {  // the four headings whose cross product with their opposite is an exact zero
    Vec2<S> const heading{S(k == 0 ? 1.0F : k == 2 ? -1.0F : 0.0F), S(k == 1 ? 1.0F : k == 3 ? -1.0F : 0.0F)};
    BodyVelocity<S> const body = steering(Course<S>{Vec2<S>(-heading), S(1.0F)}, heading, S(1.0F));
    CHECK(numbers::all<S>(body.turn_rate >= S(steering.max_turn_rate)));
    CHECK(numbers::all<S>(body.speed <= S(0.0F)));
  }
}

TEST_CASE_TEMPLATE("a course without direction, or with one that is not a number, gives no motion", S,
                   WEND_TEST_NUMBERS) {
  float const nan = std::numeric_limits<float>::quiet_NaN();
  float const infinity = std::numeric_limits<float>::infinity();
  for (Vec2<S> const& direction : {Vec2<S>(S(0.0F), S(0.0F)), Vec2<S>(S(nan), S(nan)), Vec2<S>(S(nan), S(0.0F)),
                                   Vec2<S>(S(infinity), S(-infinity))}) {
    BodyVelocity<S> const body = steering(Course<S>{direction, S(0.0F)}, unit<S>(0.3), S(1.0F));
    CHECK(numbers::all<S>(body.turn_rate >= S(0.0F) && body.turn_rate <= S(0.0F)));
    CHECK(numbers::all<S>(body.speed >= S(0.0F) && body.speed <= S(0.0F)));
  }
  BodyVelocity<S> const body = steering(course_at<S>(0.0), unit<S>(0.0), S(nan));
  CHECK(numbers::all<S>(body.speed >= S(0.0F) && body.speed <= S(0.0F)));
}

TEST_CASE_TEMPLATE("a course that wants a share of the speed gets it, and never more than all", S, WEND_TEST_NUMBERS) {
  float const nan = std::numeric_limits<float>::quiet_NaN();
  auto const speed = [](float share) {
    Course<S> course{unit<S>(0.0), S(1.0F), S(share)};
    return static_cast<double>(numbers::first(steering(course, unit<S>(0.0), S(0.5F)).speed));
  };
  CHECK(speed(1.0F) == 0.5);
  CHECK(speed(0.25F) == 0.125);
  CHECK(speed(0.0F) == 0.0);
  CHECK(speed(3.0F) == 0.5);
  CHECK(speed(-1.0F) == 0.0);
  CHECK(speed(nan) == 0.0);
}

// The model outside the library is the kinematics of a unicycle, d(theta)/dt = omega (common practice, no source),
// here in double and with the C library's sine and cosine.
TEST_CASE_TEMPLATE("a unicycle comes to any course from any heading, never turning away", S, float, double) {
  double const step = 0.05;
  for (int start = -180; start < 180; start += 9) {
    for (int goal = -180; goal < 180; goal += 12) {
      double theta = degrees(start);
      auto const error = [&] { return std::abs(std::remainder(degrees(goal) - theta, 2.0 * std::numbers::pi)); };
      double largest = error();
      CAPTURE(start);
      CAPTURE(goal);
      for (int tick = 0; tick < 120; ++tick) {
        BodyVelocity<S> const body = steering(
            Course<S>{{static_cast<S>(std::cos(degrees(goal))), static_cast<S>(std::sin(degrees(goal)))}, S(1.0F)},
            Vec2<S>(static_cast<S>(std::cos(theta)), static_cast<S>(std::sin(theta))), S(0.5F));
        theta += step * static_cast<double>(body.turn_rate);
        if (std::abs(error() - std::numbers::pi) > step * 1.5) {  // astern either way round is the short way
          REQUIRE(error() <= largest + 1.0e-6);
        }
        largest = error();
      }
      REQUIRE(error() < 1.0e-3);  // 120 ticks: pi at 1.5 rad/s takes 42, and then 0.85 of the error is left each tick
    }
  }
}
