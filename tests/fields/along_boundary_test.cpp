#include <algorithm>
#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/along_boundary.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Scene = scenes::Scene<double>;
using Vec = wend::Vec2<double>;
using Memory = wend::memory_t<wend::along_boundary, double>;

constexpr double set = static_cast<double>(wend::along_boundary{}.distance);

wend::Course<double> ask(wend::along_boundary const& field, Scene const& scene, Memory& memory) {
  return scenes::answer(field, scene, memory);
}

// The machine takes one step along its course; false when it has none.
bool step(wend::along_boundary const& field, Scene& scene, Memory& memory, double way = 0.01) {
  wend::Course<double> const course = ask(field, scene, memory);
  scene.pose = {scene.pose.position + way * course.direction, course.direction};
  return course.confidence > 0.0;
}

double distance_to_goal(Scene const& scene) { return wend::length(Vec(scene.goal - scene.pose.position)); }

// Four discs round a place, with gaps too narrow to pass.
void shut_in(Scene& scene, Vec const& middle, double size) {
  for (int i = 0; i < scenes::disc_count; ++i) {
    double const angle = 2.0 * pi * (i + 0.5) / scenes::disc_count;
    scene.put(middle.x() + size * std::cos(angle), middle.y() + size * std::sin(angle), 0.35 * size);
  }
}

}  // namespace

TEST_CASE("along_boundary goes straight to the goal until a disc in the way is as near as the set distance") {
  wend::along_boundary const field;
  Scene scene;
  scene.put(2.0, 0.05, 0.4);
  scene.goal = {5.0, 0.0};
  Memory memory;
  while (!memory.following && scene.pose.position.x() < 2.0) {
    CHECK(scene.percept().clearance >= set - 0.011);
    REQUIRE(step(field, scene, memory));
  }
  CHECK(memory.following);
  // Head-on: by the Pythagorean theorem, 2 - root((0.4 + 0.2 + 0.3)^2 - 0.05^2), and one step of 0.01.
  CHECK(std::abs(scene.pose.position.x() - (2.0 - std::sqrt(0.81 - 0.0025))) < 0.02);
  CHECK(std::abs(memory.hit_distance - (5.0 - scene.pose.position.x())) < 0.02);
}

TEST_CASE("along_boundary keeps the set distance, with the disc on the hand that was asked for") {
  for (bool const on_right : {true, false}) {
    for (double const start : {0.35, 0.25, 0.15, 0.02}) {  // clearance at first
      wend::along_boundary const field{.on_right = on_right};
      Scene scene;
      scene.put(1.0, 0.0, 0.5);
      scene.goal = {9.0, 0.0};
      scene.pose.position = {0.3 - set, 0.0};
      Memory memory;
      // Struck at the set distance; then set down at another, and the goal taken round with it, so that it goes on.
      step(field, scene, memory, 0.002);
      scene.pose.position = {0.3 - start, 0.0};
      double worst = 0.0;
      for (int i = 0; i < 600; ++i) {
        auto const percept = scene.percept();
        wend::Course<double> const course = wend::evaluate(field, percept, memory);
        double const side = wend::cross(course.direction, Vec(-percept.away));
        REQUIRE(memory.following);
        CHECK((side < 0.0) == on_right);
        // 45 degrees at half the distance off, in proportion below: tan is the share of half the distance.
        double const lean = std::clamp((percept.clearance - set) / (0.5 * set), -1.0, 1.0);
        CHECK(wend::dot(course.direction, percept.away) == doctest::Approx(-lean / std::hypot(1.0, lean)));
        scene.pose = {scene.pose.position + 0.002 * course.direction, course.direction};
        if (i > 450) {
          worst = std::max(worst, std::abs(percept.clearance - set));
        }
        if (percept.away.x() > -0.2) {
          break;
        }
      }
      CHECK(worst < 0.01);
    }
  }
}

TEST_CASE("along_boundary leaves a disc where the straight way to the goal is a tangent to the grown disc") {
  wend::along_boundary const field;
  Scene scene;
  scene.put(2.0, 0.0, 0.4);
  scene.goal = {6.0, 0.0};
  Memory memory;
  bool followed = false;
  while (distance_to_goal(scene) > 0.02) {
    REQUIRE(step(field, scene, memory, 0.005));
    if (followed && !memory.following) {
      break;
    }
    followed = followed || memory.following;
  }
  // Grown to 0.9; the goal 4 beyond its centre: the tangent touches it at the angle acos(0.9 / 4) off the axis.
  double const angle = std::acos(0.9 / 4.0);
  Vec const touch = Vec(2.0 + 0.9 * std::cos(angle), 0.9 * std::sin(angle));
  CHECK(wend::length(Vec(scene.pose.position - touch)) < 0.02);
}

TEST_CASE("along_boundary takes discs with too narrow a gap for one, and passes a gap that is wide enough") {
  // Two discs abreast, the goal beyond the one. The gap that just lets the machine through at the set distance on both
  // sides is 2 (0.2 + 0.3) = 1 metre wide.
  for (double const gap : {0.96, 1.04}) {
    wend::along_boundary const field{.on_right = true};  // the lower disc on the right: up, into the gap
    Scene scene;
    scene.put(2.0, -0.3, 0.3);
    scene.put(2.0, 0.3 + gap, 0.3);
    scene.goal = {6.0, -0.35};
    scene.pose.position = {0.0, -0.35};
    Memory memory;
    double highest = 0.0;
    double at_gap = 9.0;
    while (distance_to_goal(scene) > 0.02) {
      REQUIRE(step(field, scene, memory, 0.005));
      highest = std::max(highest, scene.pose.position.y());
      at_gap = std::abs(scene.pose.position.x() - 2.0) < 0.01 ? scene.pose.position.y() : at_gap;
      CHECK(scene.percept().clearance > 0.8 * set);
    }
    bool const between = at_gap > 0.0 && at_gap < 0.3 + gap;
    CHECK(between == (gap > 1.0));
    CHECK((highest > 0.3 + gap) == (gap < 1.0));
  }
}

TEST_CASE("along_boundary tells a gap that is passable from one that is not by the discs, not by its own tracking") {
  // What can be passed is 1 m wide; steps of 0.02 m.
  for (double const gap : {0.99, 1.002}) {
    for (double const start : {-0.35, -0.31, -0.27}) {
      wend::along_boundary const field{.on_right = true};
      Scene scene;
      scene.put(2.0, -0.3, 0.3);
      scene.put(2.0, 0.3 + gap, 0.3);
      scene.goal = {6.0, -0.35};
      scene.pose.position = {0.0, start};
      Memory memory;
      double highest = 0.0;
      while (distance_to_goal(scene) > 0.03) {
        REQUIRE(step(field, scene, memory, 0.02));
        highest = std::max(highest, scene.pose.position.y());
      }
      CHECK((highest > 0.3 + gap) == (gap < 1.0));
    }
  }
}

TEST_CASE("along_boundary pushed aside in a gap that is wide enough keeps to the disc that it follows") {
  wend::along_boundary const field{.on_right = true};
  Scene scene;
  scene.put(2.0, -0.3, 0.3);
  scene.put(2.0, 1.32, 0.3);  // the gap is 1.02 m wide
  scene.goal = {6.0, -0.35};
  scene.pose.position = {0.0, -0.35};
  Memory memory;
  while (scene.pose.position.x() < 1.9) {
    REQUIRE(step(field, scene, memory));
  }
  scene.pose.position.y() += 0.04;
  CHECK(scene.percept().nearest.centre.y() > 1.0);
  CHECK(scene.percept().clearance < set);
  wend::Course<double> const course = ask(field, scene, memory);
  CHECK(memory.following);
  CHECK(memory.disc.y() == -0.3);
  CHECK(course.direction.x() > 0.9);
  CHECK(course.direction.y() < 0.0);  // back to the set distance
}

TEST_CASE("along_boundary does not leave in a corner for the other disc of the same boundary") {
  wend::along_boundary const field{.distance = 0.15F, .on_right = false};
  Scene scene;
  scene.robot_radius = 0.1;
  scene.put(0.21, -1.23, 0.45);
  scene.put(-1.22, -1.34, 0.49);
  scene.put(-0.99, -2.45, 0.49);
  scene.pose.position = {0.61711, -2.41085};
  scene.goal = {-2.95634, -1.82189};
  Memory memory;
  double way = 0.0;
  while (distance_to_goal(scene) > 0.02 && way < 30.0) {
    Vec const before = scene.pose.position;
    REQUIRE(step(field, scene, memory));
    Vec const& now = scene.pose.position;
    // Through the gap between the first two, which is 6 mm too narrow.
    bool const between = now.x() > -0.73 && now.x() < -0.24 && before.y() < -1.28 && now.y() >= -1.28;
    CHECK(!between);
    way += 0.01;
  }
  CHECK(way < 30.0);
}

TEST_CASE(
    "along_boundary in a blind alley passes the place where it hit the wall on its way out, and does not give up") {
  wend::along_boundary const field{.on_right = false};
  scenes::Scene<double, 16> scene;
  double const half = scene.robot_radius + set + 0.03;  // there and back it passes the same place, 0.06 m apart
  for (int i = 0; i < 5; ++i) {
    scene.put(0.5 * i, half + 0.3, 0.3);
    scene.put(0.5 * i, -half - 0.3, 0.3);
  }
  scene.put(2.6, 0.0, 0.5);
  scene.pose.position = {1.0, 0.0};
  scene.goal = {1.1, 3.0};
  Memory memory;
  int ticks = 0;
  double deepest = 0.0;
  double back = 9.0;
  while (wend::length(Vec(scene.goal - scene.pose.position)) > 0.02 && ticks < 5000) {
    wend::Course<double> const course = scenes::answer(field, scene, memory);
    REQUIRE(course.confidence == 1.0);
    scene.pose = {scene.pose.position + 0.01 * course.direction, course.direction};
    deepest = std::max(deepest, scene.pose.position.x());
    if (deepest > 1.4) {
      back = std::min(back, wend::length(Vec(scene.pose.position - memory.round.place)));
    }
    ++ticks;
  }
  CHECK(deepest > 1.4);
  CHECK(back < 0.5 * set);
  CHECK(ticks < 5000);
}

TEST_CASE("along_boundary gives up in a hole that is narrower than the set distance") {
  wend::along_boundary const field;
  Scene scene;
  scene.goal = {4.0, 1.0};
  for (int i = 0; i < 3; ++i) {
    double const angle = 2.0 * pi * i / 3.0;
    double const away = 0.4 + scene.robot_radius + set + 0.02;
    scene.put(away * std::cos(angle), away * std::sin(angle), 0.4);
  }
  Memory memory;
  int ticks = 0;
  while (step(field, scene, memory, 0.005) && ticks < 2000) {
    ++ticks;
  }
  CHECK(memory.given_up);
  CHECK(wend::length(scene.pose.position) < 0.1);
}

TEST_CASE("along_boundary gives up where it has been carried to, though it never comes back to where it hit") {
  // One ring of discs is taken away and another put round the machine: as good as a leap of the odometry.
  wend::along_boundary const field{.longest = 2.0F};
  Scene scene;
  scene.goal = {-30.0, 1.0};
  shut_in(scene, {0.0, 0.0}, 1.2);
  Memory memory;
  while (!memory.following) {
    REQUIRE(step(field, scene, memory));
  }
  scene.discs = {};
  shut_in(scene, {8.0, 0.0}, 1.2);
  scene.pose.position = {8.0, 0.2};
  int ticks = 0;
  while (step(field, scene, memory) && ticks < 5000) {
    CHECK(memory.following);
    ++ticks;
  }
  CHECK(memory.given_up);
  CHECK(wend::length(Vec(scene.pose.position - Vec(8.0, 0.0))) < 1.2);
}

TEST_CASE("along_boundary gives up when the goal is shut in, and tries again when the goal moves") {
  wend::along_boundary const field;
  Scene scene;
  scene.pose.position = {-3.0, 0.1};
  scene.goal = {0.0, 0.0};
  shut_in(scene, scene.goal, 0.9);
  Memory memory;
  int ticks = 0;
  while (step(field, scene, memory) && ticks < 20000) {
    ++ticks;
  }
  CHECK(memory.given_up);
  CHECK(distance_to_goal(scene) > 1.0);
  CHECK(ask(field, scene, memory).confidence == 0.0);
  CHECK(ask(field, scene, memory).direction.x() == 0.0);
  scene.goal = {-3.0, 2.0};
  CHECK(ask(field, scene, memory).confidence == 1.0);
  CHECK(!memory.given_up);
}

TEST_CASE("along_boundary finds out that it is shut in itself, also when its first round is too short by far") {
  for (float const longest : {50.0F, 0.3F}) {
    wend::along_boundary const field{.longest = longest};
    Scene scene;
    scene.goal = {8.0, 0.0};
    shut_in(scene, {0.0, 0.0}, 1.2);
    Memory memory;
    double way = 0.0;
    while (step(field, scene, memory) && way < 200.0) {
      way += 0.01;
    }
    CHECK(memory.given_up);
    CHECK(wend::length(scene.pose.position) < 1.2);
    // With the place to come back to set anew at 0.3, 0.6, 1.2 ... metres the round is found within a few more.
    CHECK(way < 20.0);
  }
}

TEST_CASE("along_boundary drives straight to a goal in sight that lies nearer to a disc than the set distance") {
  for (double const beside : {0.2, 0.1}) {  // clearance on the goal; half the set distance is 0.15
    wend::along_boundary const field;
    Scene scene;
    scene.put(2.0, 0.0, 0.5);
    scene.goal = {2.0, 0.7 + beside};
    scene.pose.position = {-1.0, 0.0};
    Memory memory;
    int ticks = 0;
    while (distance_to_goal(scene) > 0.01 && step(field, scene, memory) && ticks < 20000) {
      ++ticks;
    }
    CHECK((distance_to_goal(scene) <= 0.01) == (beside > 0.5 * set));
    CHECK(memory.given_up == (beside < 0.5 * set));
  }
}

TEST_CASE("along_boundary goes on to the goal when the disc that it follows is gone") {
  wend::along_boundary const field;
  Scene scene;
  scene.put(1.0, 0.0, 0.3);
  scene.pose.position = {0.25, 0.0};
  scene.goal = {5.0, 0.0};
  Memory memory;
  CHECK(step(field, scene, memory));
  CHECK(memory.following);
  scene.discs = {};
  wend::Course<double> const course = ask(field, scene, memory);
  CHECK(!memory.following);
  CHECK(course.confidence == 1.0);
  CHECK(wend::dot(course.direction, Vec(scene.goal - scene.pose.position)) == doctest::Approx(distance_to_goal(scene)));
}

TEST_CASE("along_boundary has no opinion on the goal, and goes straight where there is no disc") {
  wend::along_boundary const field;
  Scene scene;
  Memory memory;
  scene.goal = scene.pose.position;
  CHECK(ask(field, scene, memory).confidence == 0.0);
  scene.goal = {0.0, -2.0};
  CHECK(ask(field, scene, memory).confidence == 1.0);
  CHECK(ask(field, scene, memory).direction.y() == -1.0);
}

TEST_CASE("along_boundary: at a disc's centre no opinion; discs that are all at one place are one") {
  wend::along_boundary const field;
  Scene scene;
  scene.put(0.0, 0.0, 0.3);
  scene.put(0.4, 0.0, 0.3);
  scene.goal = {3.0, 0.0};
  Memory memory;
  scene.dt = 0.0;
  wend::Course<double> const course = ask(field, scene, memory);
  CHECK(std::abs(wend::length(course.direction) - course.confidence) < 1.0e-12);

  Scene alone;
  alone.goal = {3.0, 0.0};
  alone.put(0.5, 0.0, 0.1);
  Scene many = alone;
  for (int i = 1; i < scenes::disc_count; ++i) {
    many.put(0.5, 0.0, 0.1);
  }
  Memory of_alone;
  Memory of_many;
  for (int i = 0; i < 300; ++i) {
    step(field, alone, of_alone);
    step(field, many, of_many);
  }
  CHECK(of_alone.following == of_many.following);
  CHECK(alone.pose.position.x() == many.pose.position.x());
  CHECK(alone.pose.position.y() == many.pose.position.y());
}
