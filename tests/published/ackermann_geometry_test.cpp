// Ackermann's condition (R. Ackermann's patent of 1818; in every textbook of vehicle dynamics, for example Gillespie
// 1992, Fundamentals of vehicle dynamics, chapter 8; from memory): without slip the lines of all axles meet in one
// point, so
//   cot(outer) - cot(inner) = track / wheelbase,
// and, of the wheel that stands in for both, tan(angle) = wheelbase / radius. Checked as geometry too: the normals of
// the wheels are intersected here.
#include <cmath>

#include <doctest/doctest.h>

#include "wend/motion/ackermann.hpp"

using wend::Ackermann;
using wend::BodyVelocity;

namespace {

// Where the axle line of a front wheel at (wheelbase, y) with this steering angle meets the line of the rear axle, x =
// 0.
double meets_rear_axle(double wheelbase, double y, double angle) {
  // along the wheel's axle, (-sin, cos): x = wheelbase - s sin(angle), y + s cos(angle)
  double const s = wheelbase / std::sin(angle);
  return y + s * std::cos(angle);
}

}  // namespace

TEST_CASE("both front wheels and the rear axle turn about one point, at the radius that was asked for") {
  Ackermann const car{.wheelbase = 0.33F, .track = 0.24F, .max_tangent = wend::tangent(0.6)};
  double const wheelbase = static_cast<double>(car.wheelbase);
  double const track = static_cast<double>(car.track);
  for (double const radius : {-5.0, -1.3, -0.6, 0.55, 0.8, 2.0, 40.0}) {
    double const speed = 0.7;
    auto const wheels = car.wheels(BodyVelocity<double>{speed, speed / radius});
    CAPTURE(radius);
    CHECK(std::tan(wend::steering_angle(wheels)) == doctest::Approx(wheelbase / radius).epsilon(1e-6));
    auto const front = car.front(wheels);
    double const left = std::atan(front.left);
    double const right = std::atan(front.right);
    CHECK(meets_rear_axle(wheelbase, 0.5 * track, left) == doctest::Approx(radius).epsilon(1e-6));
    CHECK(meets_rear_axle(wheelbase, -0.5 * track, right) == doctest::Approx(radius).epsilon(1e-6));
    double const outer = radius > 0.0 ? right : left;
    double const inner = radius > 0.0 ? left : right;
    CHECK(std::abs(inner) > std::abs(outer));
    CHECK(std::abs(1.0 / std::tan(outer)) - std::abs(1.0 / std::tan(inner)) ==
          doctest::Approx(track / wheelbase).epsilon(1e-6));
  }
}

TEST_CASE("a car at the greatest steering angle drives the circle of its least radius and closes it") {
  Ackermann const car{};
  double const radius = static_cast<double>(car.wheelbase) / static_cast<double>(car.max_tangent);
  auto const body = car.body(car.wheels(BodyVelocity<double>{0.5, 99.0}));
  double x = 0.0, y = 0.0, theta = 0.0;
  double const pi = 3.14159265358979323846;
  int const steps = 20000;
  double const dt = 2.0 * pi * radius / 0.5 / steps;
  double widest = 0.0;
  for (int k = 0; k < steps; ++k) {
    x += dt * body.speed * std::cos(theta + 0.5 * dt * body.turn_rate);
    y += dt * body.speed * std::sin(theta + 0.5 * dt * body.turn_rate);
    theta += dt * body.turn_rate;
    widest = std::fmax(widest, y);
  }
  CHECK(std::hypot(x, y) < 1e-6);
  CHECK(widest == doctest::Approx(2.0 * radius).epsilon(1e-6));
}
