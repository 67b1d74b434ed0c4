#include <algorithm>
#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/between_walls.hpp"
#include "wend/motion/steering.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Vec = wend::Vec2<double>;
constexpr double robot_radius = 0.2;

// Two straight walls along x as chains of 24 discs each, with inner faces at y = left and y = -right.
using Corridor = scenes::Scene<double, 48>;
Corridor corridor(double left, double right) {
  Corridor scene;
  scene.robot_radius = robot_radius;
  for (int i = 0; i < 24; ++i) {
    double const x = -2.0 + 0.4 * i;
    if (left < 5.0) {
      scene.put(x, left + 0.25, 0.25);
    }
    if (right < 5.0) {
      scene.put(x, -right - 0.25, 0.25);
    }
  }
  return scene;
}

double lean_of(wend::Course<double> const& course) { return std::atan2(course.direction.y(), course.direction.x()); }

// Follows the field with a unicycle and the library's Steering; where it ends, and how far it strayed in the last part.
struct Run {
  double y = 0.0, heading = 0.0, strayed = 0.0, clearance = 9.0;
};
template <typename Field>
Run drive(Field const& field, Corridor& scene, double y, double heading, double toward) {
  wend::Steering const steering;
  Run run{y, heading};
  double x = 0.0;
  while (x < 5.0) {
    scene.pose = {{x, run.y}, {std::cos(run.heading), std::sin(run.heading)}};
    auto const percept = scene.percept();
    wend::Course<double> const course = wend::evaluate(field, percept);
    REQUIRE(course.confidence == 1.0);
    auto const velocity = steering(course, scene.pose.heading, 0.4);
    run.heading += 0.01 * velocity.turn_rate;
    x += 0.01 * velocity.speed * std::cos(run.heading);
    run.y += 0.01 * velocity.speed * std::sin(run.heading);
    run.clearance = std::min(run.clearance, percept.clearance);
    if (x > 4.0) {
      run.strayed = std::max(run.strayed, std::abs(run.y - toward));
    }
  }
  return run;
}

}  // namespace

TEST_CASE("between_walls leans to the side that is farther off, in proportion, and by 45 degrees at most") {
  wend::between_walls<> const field{.lean = 2.0F};
  for (double const angle : {0.0, 1.0, -2.5}) {
    Vec const nose{std::cos(angle), std::sin(angle)};
    auto const leaned = [&](double left, double right) {
      Vec const way = field.between(nose, left, right).direction;
      return wend::turn(angle, std::atan2(way.y(), way.x()));
    };
    CHECK(leaned(0.5, 0.5) == doctest::Approx(0.0));
    CHECK(leaned(0.7, 0.5) == doctest::Approx(std::atan(0.2)));
    CHECK(leaned(0.5, 0.9) == doctest::Approx(-std::atan(0.4)));
    CHECK(leaned(1.9, 0.1) == doctest::Approx(pi / 4.0));
    // One side open: the set distance, 0.4 m, to the other.
    CHECK(leaned(0.6, 3.0) == doctest::Approx(std::atan(0.4)));
    CHECK(leaned(0.3, 3.0) == doctest::Approx(-std::atan(0.2)));
    CHECK(leaned(3.0, 0.6) == doctest::Approx(-std::atan(0.4)));
    CHECK(leaned(3.0, 0.4) == doctest::Approx(0.0).epsilon(1.0e-6));
    CHECK(field.between(nose, 3.0, 2.5).confidence == 0.0);
    CHECK(field.between(nose, 3.0, 2.5).direction.x() == 0.0);
  }
}

TEST_CASE("between_walls measures sideways what its beams meet: a wall askew by its distance where they meet it") {
  // A wall is met, `b` off a nose that points `a` toward it, at the range d / sin(a + b): d sin(b) / sin(a + b) to the
  // side. One large disc on either side stands for a wall that is straight.
  double const huge = 4000.0;
  wend::between_walls<1> const field{.reach = 9.0F, .lean = 0.3F, .beams = {wend::bearing(1.0)}};
  for (double const a : {-0.3, 0.0, 0.2}) {
    for (double const y : {-0.2, 0.0, 0.3}) {
      scenes::Scene<double> scene;
      scene.put(0.0, 1.0 + huge, huge);
      scene.put(0.0, -1.0 - huge, huge);
      scene.pose = {{0.0, y}, {std::cos(a), std::sin(a)}};
      double const left = (1.0 - y) * std::sin(1.0) / std::sin(1.0 + a);
      double const right = (1.0 + y) * std::sin(1.0) / std::sin(1.0 - a);
      double const expected = std::atan(static_cast<double>(0.3F) * 0.5 * (left - right));
      CHECK(std::abs(wend::turn(a, lean_of(scenes::answer(field, scene))) - expected) < 1.0e-3);
    }
  }
}

TEST_CASE("between_walls settles in the middle of a corridor, from wherever it can turn in") {
  for (double const half : {0.5, 0.8}) {
    for (double const offset : {-0.5, 0.0, 0.5}) {
      for (double const heading : {-0.6, 0.0, 0.6}) {
        Corridor scene = corridor(half + 0.1, half - 0.1);  // the middle is at y = 0.1
        Run const run = drive(wend::between_walls{}, scene, 0.1 + offset * (half - 0.3), heading, 0.1);
        CAPTURE(half);
        CAPTURE(offset);
        CAPTURE(heading);
        CHECK(run.strayed < 0.02);
        CHECK(std::abs(run.heading) < 0.1);
        CHECK(run.clearance > 0.0);
      }
    }
  }
}

TEST_CASE("between_walls settles at the set distance from a wall that stands alone") {
  for (double const start : {-0.3, 0.2}) {
    Corridor scene = corridor(1.0, 9.0);
    // 0.4 m and its own radius off y = 1.
    Run const left = drive(wend::between_walls{}, scene, 0.4 + start, 0.1, 0.4);
    CHECK(left.strayed < 0.03);
    Corridor other = corridor(9.0, 1.0);
    Run const right = drive(wend::between_walls{}, other, -0.4 - start, -0.1, -0.4);
    CHECK(right.strayed == doctest::Approx(left.strayed));
  }
}

TEST_CASE("steering by beams straight to the side swings on; by those that look ahead it does not") {
  // What the docstring warns of. In a narrow corridor, started aslant.
  wend::between_walls<1> const abeam{.lean = 4.0F, .beams = {wend::bearing(pi / 2.0)}};
  wend::between_walls<1> const ahead{.lean = 4.0F, .beams = {wend::bearing(0.7)}};
  Corridor scene = corridor(0.8, 0.8);
  double const settled = drive(ahead, scene, 0.2, 0.0, 0.0).strayed;
  double const swings = drive(abeam, scene, 0.2, 0.0, 0.0).strayed;
  CHECK(settled < 0.02);
  CHECK(swings > 2.0 * settled);
}

TEST_CASE_TEMPLATE("between_walls has no opinion without walls, without a heading, or with a range that is none", S,
                   WEND_TEST_NUMBERS) {
  wend::between_walls<> const field;
  scenes::Scene<S> scene;
  CHECK(numbers::first(scenes::answer(field, scene).confidence) == 0);
  scene.put(S(0.0F), S(3.0F), S(0.5F));  // 2.3 m from the machine's edge
  CHECK(numbers::first(scenes::answer(field, scene).confidence) == 0);
  wend::Vec2<S> const nose{S(1.0F), S(0.0F)};
  CHECK(numbers::first(field.between(wend::zero2<S>(), S(0.5F), S(0.5F)).confidence) == 0);
  CHECK(numbers::first(field.between(nose, S(0.5F), S(0.5F)).confidence) == 1);
  CHECK(numbers::first(field.between(nose, S(scenes::nan), S(scenes::nan)).confidence) == 0);
}

TEST_CASE_TEMPLATE("between_walls: at a disc's centre, and with all discs at one place, it goes on as it faces", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.pose.heading = {S(0.0F), S(1.0F)};
  scene.dt = S(0.0F);
  scene.goal = scene.pose.position;
  for (int i = 0; i < scenes::disc_count; ++i) {
    scene.put(S(0.0F), S(0.0F), S(0.4F));
  }
  wend::Course<S> const course = scenes::answer(wend::between_walls{}, scene);
  CHECK(numbers::first(course.confidence) == 1);
  CHECK(numbers::first(course.direction.y()) == 1);
}
