// Ackermann: against the geometry of an arc, worked out here by other means, and by driving.
#include <algorithm>
#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/ackermann.hpp"

using wend::Ackermann;
using wend::ArcSteering;
using wend::BodyVelocity;
using wend::Course;
using wend::Vec2;

namespace {

constexpr double pi = std::numbers::pi;

template <typename S>
Course<S> course_at(double angle, float share = 1.0F) {
  return {{S(static_cast<float>(std::cos(angle))), S(static_cast<float>(std::sin(angle)))}, S(1.0F), S(share)};
}

// A car that drives a course of fixed direction from the origin, nose along x: until it is aligned, or 60 s.
struct Turned {
  double time = 0.0;
  double widest = 0.0;       // metres from the start at the most
  double least_speed = 1e9;  // metres a second
  double heading = 0.0;
};
Turned turn_to(double course, Ackermann const& car, ArcSteering const& steering) {
  Turned t;
  double x = 0.0, y = 0.0;
  double const dt = 0.01;
  for (; t.time < 60.0; t.time += dt) {
    double const error = course - t.heading;
    if (std::abs(std::sin(0.5 * error)) < 0.01) {
      break;
    }
    Course<double> const wanted{{std::cos(course), std::sin(course)}, 1.0};
    Vec2<double> const nose{std::cos(t.heading), std::sin(t.heading)};
    BodyVelocity<double> const body = car.body(car.wheels(steering(wanted, nose, 0.5, car)));
    x += dt * body.speed * std::cos(t.heading + 0.5 * dt * body.turn_rate);
    y += dt * body.speed * std::sin(t.heading + 0.5 * dt * body.turn_rate);
    t.heading += dt * body.turn_rate;
    t.widest = std::max(t.widest, std::hypot(x, y));
    t.least_speed = std::min(t.least_speed, body.speed);
  }
  return t;
}

}  // namespace

TEST_CASE_TEMPLATE("wheels and body are each other's inverse within the limits", S, WEND_TEST_NUMBERS) {
  Ackermann const car{};
  for (float const speed : {-1.5F, -0.2F, 0.01F, 0.7F, 2.0F}) {
    for (float const curvature : {-1.8F, -0.3F, 0.0F, 1.1F, 1.8F}) {
      BodyVelocity<S> const body{S(speed), S(speed * curvature)};
      BodyVelocity<S> const back = car.body(car.wheels(body));
      CAPTURE(speed);
      CAPTURE(curvature);
      CHECK(numbers::all<S>(wend::magnitude(S(back.speed - body.speed)) <= S(1.0e-6F)));
      CHECK(numbers::all<S>(wend::magnitude(S(back.turn_rate - body.turn_rate)) <= S(2.0e-6F)));
    }
  }
}

TEST_CASE("a limit keeps the path: the speed by slowing along it, the radius by the tightest arc") {
  Ackermann const car{};
  BodyVelocity<double> const fast = car.within_limits(BodyVelocity<double>{5.0, 5.0 * 0.8});
  CHECK(fast.speed == doctest::Approx(2.0));
  CHECK(fast.turn_rate / fast.speed == doctest::Approx(0.8));
  BodyVelocity<double> const tight = car.within_limits(BodyVelocity<double>{0.5, -9.0});
  CHECK(tight.speed == doctest::Approx(0.5));
  CHECK(tight.turn_rate == doctest::Approx(-0.5 * std::tan(0.5) / 0.3));
  BodyVelocity<double> const in_place = car.within_limits(BodyVelocity<double>{0.0, 1.0});
  CHECK(in_place.turn_rate == 0.0);
  CHECK(car.wheels(BodyVelocity<double>{0.0, 1.0}).tangent == 0.0);
}

TEST_CASE("the angle of a tangent, and the tangent of an angle, are those of the mathematical library") {
  for (double const angle : {-1.2, -0.5, 0.0, 0.3, 1.1}) {
    CHECK(wend::steering_angle(wend::SteeredWheels<double>{1.0, std::tan(angle)}) == doctest::Approx(angle));
  }
  static_assert(wend::tangent(0.0) == 0.0F);
  CHECK(wend::tangent(0.5) == doctest::Approx(std::tan(0.5)).epsilon(1e-7));
  CHECK(wend::tangent(-1.0) == doctest::Approx(std::tan(-1.0)).epsilon(1e-7));
}

// Pure pursuit: an arc that leaves the nose tangentially and meets the point at distance L and angle a off the nose has
// the curvature 2 sin(a) / L. Checked without that formula: the end of the arc driven is that point.
TEST_CASE("an arc that the wheels can do meets the course line at the look-ahead distance") {
  Ackermann const car{};
  ArcSteering const steering{.look_ahead = 1.5F, .max_turn_rate = 100.0F};
  for (double const angle : {-1.2, -0.6, -0.1, 0.2, 0.7, 1.3}) {
    BodyVelocity<double> const body = steering(course_at<double>(angle), {1.0, 0.0}, 0.5, car);
    double const curvature = body.turn_rate / body.speed;
    // where the circle round (0, 1 / curvature) cuts the line at `angle` from the origin, by going along it
    double const turned = 2.0 * angle;  // chord and tangent
    double const x = std::sin(turned) / curvature;
    double const y = (1.0 - std::cos(turned)) / curvature;
    CAPTURE(angle);
    CHECK(std::hypot(x, y) == doctest::Approx(1.5).epsilon(1e-5));
    CHECK(std::atan2(y, x) == doctest::Approx(angle).epsilon(1e-5));
  }
}

TEST_CASE("a course abeam or behind is driven to by the tightest arc, and never in place") {
  Ackermann const car{};
  ArcSteering const steering{};
  double const radius = 0.3 / std::tan(0.5);
  for (double const angle : {pi / 2.0, 2.0, 3.0, -pi / 2.0, -2.5}) {
    BodyVelocity<double> const body = steering(course_at<double>(angle), {1.0, 0.0}, 0.5, car);
    CAPTURE(angle);
    CHECK(body.speed > 0.0);
    CHECK(body.speed / std::abs(body.turn_rate) == doctest::Approx(radius).epsilon(1e-6));
    CHECK(body.turn_rate * angle > 0.0);
  }
  // exactly astern it is the left
  CHECK(steering(Course<double>{{-1.0, 0.0}, 1.0}, {1.0, 0.0}, 0.5, car).turn_rate > 0.0);
}

TEST_CASE("driven, a car comes round to any course within two radii, and at no slower than its share") {
  Ackermann const car{};
  ArcSteering const steering{};
  double const radius = 0.3 / std::tan(0.5);
  for (double course = -3.1; course < 3.2; course += 0.31) {
    Turned const t = turn_to(course, car, steering);
    CAPTURE(course);
    CHECK(t.time < 20.0);
    CHECK(std::abs(std::sin(0.5 * (course - t.heading))) < 0.01);
    CHECK((t.least_speed >= 0.3 * 0.5 - 1e-6 || t.time == 0.0));
    if (std::abs(course) > 2.0) {
      CHECK(t.widest > radius);  // it had to drive to turn
    }
  }
}

TEST_CASE("a tight arc is driven no faster than the turn rate allows, at the same radius") {
  Ackermann const car{};
  ArcSteering const steering{.max_turn_rate = 0.4F};
  BodyVelocity<double> const body = steering(course_at<double>(1.5), {1.0, 0.0}, 3.0, car);
  CHECK(body.turn_rate == doctest::Approx(0.4).epsilon(1e-6));
  CHECK(body.speed / body.turn_rate == doctest::Approx(0.3 / std::tan(0.5)).epsilon(1e-6));
}

TEST_CASE("with a look-ahead of up to twice the least radius nothing jumps as the course goes abeam") {
  Ackermann const car{};
  ArcSteering const steering{};
  double last = 0.0;
  for (double angle = 0.0; angle < 3.0; angle += 0.001) {
    BodyVelocity<double> const body = steering(course_at<double>(angle), {1.0, 0.0}, 0.5, car);
    double const curvature = body.turn_rate / body.speed;
    CHECK(std::abs(curvature - last) < 0.004);
    last = curvature;
  }
}

TEST_CASE("a field that wants a share of the speed gets it, on the same arc") {
  Ackermann const car{};
  ArcSteering const steering{};
  for (double const angle : {0.1, 1.0, 2.5}) {
    BodyVelocity<double> const all = steering(course_at<double>(angle), {1.0, 0.0}, 0.3, car);
    BodyVelocity<double> const half = steering(course_at<double>(angle, 0.5F), {1.0, 0.0}, 0.3, car);
    CHECK(half.speed == doctest::Approx(0.5 * all.speed));
    CHECK(half.turn_rate == doctest::Approx(0.5 * all.turn_rate));
  }
}

TEST_CASE_TEMPLATE("one that reverses drives to a course behind as its mirror image drives to one ahead", S,
                   WEND_TEST_NUMBERS) {
  Ackermann const car{};
  ArcSteering const steering{.reverses = true};
  for (double angle = -1.5; angle < 1.6; angle += 0.3) {
    Vec2<S> const nose{S(0.6F), S(0.8F)};
    auto const at = [&](double off) {  // a course `off` radians from the nose
      return Course<S>{wend::turned_out_of(nose, Vec2<S>(course_at<S>(off).direction)), S(1.0F)};
    };
    BodyVelocity<S> const ahead = steering(at(angle), nose, S(0.5F), car);
    BodyVelocity<S> const behind = steering(at(angle + pi), nose, S(0.5F), car);
    CAPTURE(angle);
    CHECK(numbers::all<S>(ahead.speed > S(0.0F)));
    CHECK(numbers::all<S>(wend::magnitude(S(ahead.speed + behind.speed)) < S(1.0e-5F)));
    CHECK(numbers::all<S>(wend::magnitude(S(ahead.turn_rate - behind.turn_rate)) < S(1.0e-5F)));
    CHECK(numbers::all<S>(wend::dot(steering.way(at(angle + pi), nose), nose) < S(-0.99F)));
    CHECK(numbers::all<S>(wend::dot(steering.way(at(angle), nose), nose) > S(0.99F)));
  }
}

TEST_CASE("abeam, a car that reverses makes up its mind: it never changes direction on a course that stays") {
  Ackermann const car{};
  ArcSteering const steering{.reverses = true};
  for (double const start : {1.5707, 1.5709, -1.5707, -1.5709, 1.6, 1.5}) {
    double theta = 0.0;
    double first = 0.0;
    int changes = 0;
    for (int k = 0; k < 500; ++k) {
      Course<double> const course{{std::cos(start), std::sin(start)}, 1.0};
      auto const body = car.body(car.wheels(steering(course, {std::cos(theta), std::sin(theta)}, 0.4, car)));
      first = k == 0 ? body.speed : first;
      changes += body.speed * first > 0.0 ? 0 : 1;
      theta += 0.05 * body.turn_rate;
    }
    CAPTURE(start);
    CHECK(changes == 0);
    CHECK(std::abs(std::sin(theta - start)) < 0.01);  // nose or tail on the course
  }
}
