// What potential fields cannot do: Koren and Borenstein (1991), Potential field methods and their inherent limitations
// for mobile robot navigation, IEEE Int. Conf. Robotics and Automation, list traps, no passage between closely spaced
// obstacles, and oscillations in narrow passages (from memory). The figures are worked out here from Khatib's formula,
// along the line on which the scene is symmetric. None of the options cures them.
#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/fields/potential_field.hpp"

namespace {

using V = wend::Vec2<double>;

constexpr double attraction = 1.0;
constexpr double repulsion = 0.0625;
constexpr double influence = 0.75;
constexpr double robot_radius = 0.25;
constexpr double disc_radius = 0.5;

constexpr wend::potential_field plain{1.0F, 0.0625F, 0.75F, 0.01F};
constexpr wend::potential_field conic{1.0F, 0.0625F, 0.75F, 0.01F, 0, 1.0F};
constexpr wend::potential_field weighted{1.0F, 0.0625F, 0.75F, 0.01F, 2};

double push(double rho) { return rho < influence ? repulsion * (1.0 / rho - 1.0 / influence) / (rho * rho) : 0.0; }

// Two posts on either side of the x axis, so far apart that a machine between them has `clearance` on each side.
template <int N = 2>
scenes::Scene<double, N> passage(double clearance, V const& goal) {
  scenes::Scene<double, N> scene;
  scene.robot_radius = robot_radius;
  scene.goal = goal;
  scene.put(0.0, disc_radius + robot_radius + clearance, disc_radius);
  scene.put(0.0, -(disc_radius + robot_radius + clearance), disc_radius);
  return scene;
}

// The force along the axis at x, by hand: the pull to the goal at g, and both posts' pushes, of which across the axis
// nothing is left.
double along_axis(double x, double clearance, double g, double conic_beyond) {
  double const apart = disc_radius + robot_radius + clearance;
  double const from = std::hypot(x, apart);
  return attraction * std::min(g - x, conic_beyond) + 2.0 * push(from - disc_radius - robot_radius) * x / from;
}

// The least force along the axis on the way in: below 0, the machine is stopped.
double least_on_the_way(double clearance, double g, double conic_beyond) {
  double least = attraction * g;
  for (int i = 0; i <= 20'000; ++i) {
    least = std::min(least, along_axis(-2.0 + 1.0e-4 * i, clearance, g, conic_beyond));
  }
  return least;
}

// The clearance from which on a passage is one: by bisection.
double least_passable(double g, double conic_beyond) {
  double closed = 0.02, open = 0.75;
  for (int i = 0; i < 40; ++i) {
    double const middle = (closed + open) / 2.0;
    (least_on_the_way(middle, g, conic_beyond) < 0.0 ? closed : open) = middle;
  }
  return open;
}

template <int N>
V follow(wend::potential_field const& field, scenes::Scene<double, N> scene, V place, double step, int steps) {
  for (int i = 0; i < steps; ++i) {
    scene.pose.position = place;
    place += step * scenes::answer(field, scene).direction;
  }
  return place;
}

}  // namespace

TEST_CASE("a potential field does not pass between closely spaced discs though there is room") {
  for (bool const cone : {false, true}) {
    wend::potential_field const& field = cone ? conic : plain;
    double const narrow = least_passable(2.0, cone ? 1.0 : 1.0e6);
    CAPTURE(cone);
    MESSAGE("passes from a clearance of ", narrow, " m on either side");
    REQUIRE(narrow > 0.03);
    // A little narrower than that, it comes to rest before the posts; a little wider, it arrives.
    V const stopped = follow(field, passage(narrow - 0.005, {2.0, 0.0}), {-1.5, 0.0}, 0.002, 3'000);
    CHECK(stopped.x() < -0.05);
    CHECK(stopped.y() == 0.0);
    V const arrived = follow(field, passage(narrow + 0.005, {2.0, 0.0}), {-1.5, 0.0}, 0.002, 3'000);
    CHECK((arrived - V{2.0, 0.0}).norm() < 0.003);
  }
  // The pull that grows no further passes through less.
  CHECK(least_passable(2.0, 1.0) > least_passable(2.0, 1.0e6));
}

TEST_CASE("the place where it rests before a passage is where pull and pushes cancel, and is no saddle") {
  double const clearance = least_passable(2.0, 1.0e6) - 0.02;
  auto scene = passage(clearance, {2.0, 0.0});
  // The first change of sign along the way in.
  double low = -1.5;
  while (along_axis(low + 1.0e-3, clearance, 2.0, 1.0e6) > 0.0) {
    low += 1.0e-3;
    REQUIRE(low < 0.0);
  }
  double high = low + 1.0e-3;
  for (int i = 0; i < 60; ++i) {
    double const middle = (low + high) / 2.0;
    (along_axis(middle, clearance, 2.0, 1.0e6) > 0.0 ? low : high) = middle;
  }
  scene.pose.position = {low, 0.0};
  CHECK(plain.force(scene.percept()).sum.norm() < 1e-12);
  // From 5 cm off it in every direction downhill ends there again.
  for (int i = 0; i < 16; ++i) {
    double const angle = 0.39269908169872414 * i;
    V const start{low + 0.05 * std::cos(angle), 0.05 * std::sin(angle)};
    CHECK((follow(plain, scene, start, 5.0e-4, 2'000) - V{low, 0.0}).norm() < 1e-3);
  }
}

TEST_CASE("the weight that frees a goal beside a disc does not open a trap far from the goal") {
  // The weight d^n is over 1 from a metre on: there it pushes harder than Khatib's, not less. By the formula; no
  // source.
  double const clearance = 0.1;
  V const end = follow(weighted, passage(clearance, {2.0, 0.0}), {-1.5, 0.0}, 0.002, 3'000);
  CHECK(end.x() < -0.05);
}

TEST_CASE("in a narrow passage the course swings from side to side when a tick covers too much ground") {
  // In a corridor walled by discs, an offset y from the middle comes back with the force -c y, while the pull along it
  // is p: a machine that goes `step` a tick has y' = y (1 - step c / p). Beyond step c / p = 2 that grows.
  constexpr int posts = 12;
  scenes::Scene<double, 2 * posts> scene;
  scene.robot_radius = robot_radius;
  scene.goal = {50.0, 0.0};
  double const half_width = disc_radius + robot_radius + 0.3;
  for (int i = 0; i < posts; ++i) {
    scene.put(0.1 * (i - 5.5), half_width, disc_radius);
    scene.put(0.1 * (i - 5.5), -half_width, disc_radius);
  }
  // c of the formula, by differences of it and not of the field: every post's push across the corridor, in its midst.
  auto const across = [&](double y) {
    double sum = 0.0;
    for (auto const& disc : scene.discs) {
      double const from = std::hypot(disc.centre.x(), y - disc.centre.y());
      sum += push(from - disc_radius - robot_radius) * (y - disc.centre.y()) / from;
    }
    return sum;
  };
  double const c = -(across(1.0e-5) - across(-1.0e-5)) / 2.0e-5 + attraction;
  REQUIRE(c > 0.0);
  constexpr double pull = 1.0;
  // The conic attraction keeps p the same all along; and the pushes of posts before and behind cancel at x = 0.
  for (double const ratio : {0.5, 1.5, 1.9, 2.1, 3.0}) {
    double const y = 1.0e-5;
    scene.pose.position = {0.0, y};
    // The cone's pull is turned towards the goal by y / 50 only, instead of attraction * y.
    double const stiffness = c - attraction + pull / 50.0;
    double const step = ratio * pull / stiffness;
    double const next = y + step * scenes::answer(conic, scene).direction.y();
    CAPTURE(ratio);
    CHECK(next / y == doctest::Approx(1.0 - ratio).epsilon(1e-5));
    CHECK((std::abs(next) > y) == (ratio > 2.0));
  }
}
