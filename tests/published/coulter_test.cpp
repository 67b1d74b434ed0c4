// Pure pursuit: Coulter (1992), Implementation of the pure pursuit path tracking algorithm, Carnegie Mellon University,
// CMU-RI-TR-92-01 (from memory): x^2 + y^2 = L^2, x + d = r, d^2 + y^2 = r^2, hence r = L^2 / (2 x) and the curvature
// is 2 x / L^2, x being how far the goal point lies to the side. Checked against the circle itself: through the
// machine, tangent to its heading, and through the goal point.
#include <algorithm>
#include <cmath>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/fields/along_path.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Vec = wend::Vec2<double>;

constexpr float radius = 2.0F;
// A circle, counter-clockwise from (2, 0), three times round.
constexpr wend::PathPiece upper = wend::arc({radius, 0.0F}, {-radius, 0.0F}, 1.0F / radius);
constexpr wend::PathPiece lower = wend::arc({-radius, 0.0F}, {radius, 0.0F}, 1.0F / radius);
constexpr auto circle = wend::path_of(upper, lower, upper, lower, upper, lower);

wend::Percept<double, 1> look(wend::Pose<double> const& pose) {
  static wend::DiscSet<double, 1> const none;
  return wend::look(pose, Vec(0.0, 0.0), none, 0.2, 0.05);
}

}  // namespace

TEST_CASE("the curvature of pursuit is that of the arc through the machine, along its heading, and the point") {
  std::mt19937 random(1);
  auto const uniform = [&random] { return -3.0 + 6.0 * (static_cast<double>(random()) / 4294967296.0); };
  for (int i = 0; i < 1000; ++i) {
    Vec const position{uniform(), uniform()};
    double const angle = uniform();
    wend::Pose<double> const pose{position, {std::cos(angle), std::sin(angle)}};
    Vec const point{uniform(), uniform()};
    double const curvature = wend::pursuit_curvature(pose, point);
    // Coulter's equations, in his frame: y ahead, x to the side.
    Vec const seen = wend::into_frame(pose, point);
    double const l_squared = seen.x() * seen.x() + seen.y() * seen.y();
    CHECK(curvature == doctest::Approx(2.0 * seen.y() / l_squared));
    // And the circle: as far from the point as from the machine.
    Vec const centre = position + wend::left_of(pose.heading) / curvature;
    CHECK(wend::length(Vec(point - centre)) == doctest::Approx(std::abs(1.0 / curvature)));
  }
}

TEST_CASE("the curvature of pursuit is 0 for a point straight ahead, or at the machine's own place") {
  wend::Pose<double> const pose{{1.0, 2.0}, {0.0, 1.0}};
  CHECK(wend::pursuit_curvature(pose, Vec(1.0, 5.0)) == 0.0);
  CHECK(wend::pursuit_curvature(pose, Vec(1.0, 2.0)) == 0.0);
}

TEST_CASE("steered by Coulter's curvature a machine comes onto a circle, and runs on the circle itself") {
  // There the arc to the point is the circle: 2 sin(a) / L with L = 2 R sin(a) is 1 / R.
  for (float const look_ahead : {0.3F, 0.8F, 1.5F}) {
    wend::along_path const field{circle, look_ahead};
    wend::memory_t<decltype(field), double> memory;
    wend::Pose<double> pose{{2.3, -0.2}, {0.0, 1.0}};
    double angle = pi / 2.0;
    double worst = 0.0;
    double steepest = 0.0;
    double const way = 0.002;
    for (int i = 0; i < 14000; ++i) {
      wend::Course<double> const course = wend::evaluate(field, look(pose), memory);
      REQUIRE(course.confidence == 1.0);
      Vec const point = field.target(memory);
      double const curvature = wend::pursuit_curvature(pose, point);
      // The course points at the same point.
      CHECK(std::abs(wend::cross(course.direction, Vec(point - pose.position))) < 1.0e-6);
      angle += 0.5 * way * curvature;
      pose.position += way * Vec(std::cos(angle), std::sin(angle));
      angle += 0.5 * way * curvature;
      pose.heading = {std::cos(angle), std::sin(angle)};
      if (i > 7000) {
        worst = std::max(worst, std::abs(wend::length(pose.position) - 2.0));
        steepest = std::max(steepest, std::abs(curvature - 0.5));
      }
    }
    CHECK(worst < 1.0e-3);
    CHECK(steepest < 2.0e-3);
  }
}

TEST_CASE("a machine whose nose is always on the course runs on a circle of radius root(R^2 - L^2)") {
  // It moves along the line to a point of the circle, L ahead: a tangent to its own circle of length L, so by the
  // Pythagorean theorem R^2 = r^2 + L^2.
  for (float const look_ahead : {0.3F, 0.8F, 1.5F}) {
    wend::along_path const field{circle, look_ahead};
    wend::memory_t<decltype(field), double> memory;
    wend::Pose<double> pose{{2.0, 0.0}, {0.0, 1.0}};
    double const expected = std::sqrt(4.0 - std::pow(static_cast<double>(look_ahead), 2.0));
    double worst = 0.0;
    for (int i = 0; i < 24000; ++i) {
      wend::Course<double> const course = wend::evaluate(field, look(pose), memory);
      REQUIRE(course.confidence == 1.0);
      pose = {pose.position + 0.001 * course.direction, course.direction};
      if (i > 12000) {
        worst = std::max(worst, std::abs(wend::length(pose.position) - expected));
      }
    }
    CHECK(worst < 2.0e-3);
  }
}
