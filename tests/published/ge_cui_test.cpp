// Goals not reachable with obstacle nearby: Ge and Cui (2000), New potential functions for mobile robot path planning,
// IEEE Trans. Robotics and Automation 16(5):615-620, show that with Khatib's functions a goal within the influence of
// an obstacle is no minimum of the potential. The figures are worked out here from those functions (from memory).
#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "wend/fields/potential_field.hpp"

namespace {

constexpr wend::potential_field field{1.0F, 0.0625F, 0.75F, 0.01F};
constexpr double disc_radius = 0.5;
constexpr double robot_radius = 0.25;

// The goal at the origin, and a disc on the x axis behind it, with so much clearance for a machine on the goal.
scenes::Scene<double> goal_before_a_disc(double clearance_on_goal) {
  scenes::Scene<double> scene;
  scene.robot_radius = robot_radius;
  scene.put(disc_radius + robot_radius + clearance_on_goal, 0.0, disc_radius);
  return scene;
}

double potential(scenes::Scene<double> const& scene) {
  wend::Vec2<double> const x = scene.pose.position;
  double const rho = std::hypot(x.x() - scene.discs[0].centre.x(), x.y() - scene.discs[0].centre.y()) - disc_radius -
                     robot_radius;
  double const excess = rho <= 0.75 ? 1.0 / rho - 1.0 / 0.75 : 0.0;
  return 0.5 * (x.x() * x.x() + x.y() * x.y()) + 0.0625 / 2.0 * excess * excess;
}

// Follows the force downhill in small steps until it has died away; the position reached.
wend::Vec2<double> descend(scenes::Scene<double> scene, wend::Vec2<double> const& from) {
  scene.pose.position = from;
  for (int i = 0; i < 20000; ++i) {
    wend::Vec2<double> const force = field.force(scene.percept()).sum;
    double const size = wend::length(force);
    scene.pose.position += force * std::min(0.01, 0.01 / (size + 1.0e-300));
    if (size < 1.0e-13) {
      break;
    }
  }
  return scene.pose.position;
}

// Where, on the goal's far side from the disc, pull and push are equal: bisection on -x = eta (1/rho - 1/rho0) / rho^2.
double balance(double clearance_on_goal) {
  double low = clearance_on_goal - 0.75;  // here nothing pushes
  double high = 0.0;
  for (int i = 0; i < 60; ++i) {
    double const x = (low + high) / 2.0;
    double const rho = clearance_on_goal - x;
    (-x > 0.0625 * (1.0 / rho - 1.0 / 0.75) / (rho * rho) ? low : high) = x;
  }
  return (low + high) / 2.0;
}

}  // namespace

TEST_CASE("a goal within the influence of a disc is no standstill of the potential field") {
  for (double const clearance : {0.1, 0.3, 0.5, 0.7}) {
    scenes::Scene<double> const on_goal = goal_before_a_disc(clearance);
    auto const force = field.force(on_goal.percept());
    double const push = 0.0625 * (1.0 / clearance - 1.0 / 0.75) / (clearance * clearance);
    CHECK(force.sum.x() == doctest::Approx(-push).epsilon(1.0e-12));
    CHECK(force.sum.y() == 0.0);
    wend::Course<double> const course = scenes::answer(field, on_goal);
    CHECK(course.direction.x() == -1.0);  // it drives off the goal, and is sure of it
    CHECK(course.confidence == doctest::Approx(1.0));
  }
}

TEST_CASE("downhill ends beside a goal that is too near a disc, at a place of lower potential") {
  for (double const clearance : {0.1, 0.3, 0.5}) {
    scenes::Scene<double> scene = goal_before_a_disc(clearance);
    double const expected = balance(clearance);
    for (wend::Vec2<double> const& from : {wend::Vec2<double>{-2.0, 0.3}, wend::Vec2<double>{-0.5, -1.5}}) {
      wend::Vec2<double> const end = descend(scene, from);
      CHECK(std::abs(end.x() - expected) < 1.0e-9);
      CHECK(std::abs(end.y()) < 1.0e-9);
      CHECK(wend::length(end) > 0.05);
      double const on_goal = potential(scene);
      scenes::Scene<double> there = scene;
      there.pose.position = end;
      CHECK(potential(there) < on_goal);
    }
    MESSAGE("clearance on the goal ", clearance, " m: ends ", -expected, " m before it");
  }
}

TEST_CASE("downhill ends on a goal that is out of the influence of every disc") {
  for (double const clearance : {0.75, 0.8, 2.0}) {
    scenes::Scene<double> const scene = goal_before_a_disc(clearance);
    for (wend::Vec2<double> const& from : {wend::Vec2<double>{-2.0, 0.3}, wend::Vec2<double>{0.2, 1.5}}) {
      CHECK(wend::length(descend(scene, from)) < 1.0e-9);
    }
    CHECK(scenes::answer(field, scene).confidence == 0.0);
  }
}

// --- Their cure: repulsion weighted with d^n ------------------------------------------------------------------------

namespace {

constexpr wend::potential_field weighted(int power) {
  wend::potential_field cured = field;
  cured.goal_power = power;
  return cured;
}

// Their eq. 7 with the quadratic attraction, written out by itself.
double weighted_potential(wend::Vec2<double> const& x, double disc_x, int power) {
  double const rho = std::hypot(x.x() - disc_x, x.y()) - disc_radius - robot_radius;
  double const excess = rho <= 0.75 ? 1.0 / rho - 1.0 / 0.75 : 0.0;
  double const d = std::hypot(x.x(), x.y());
  return 0.5 * d * d + 0.0625 / 2.0 * excess * excess * std::pow(d, power);
}

}  // namespace

TEST_CASE("the weighted force is the slope of Ge and Cui's potential") {
  for (int const power : {1, 2, 3, 4}) {
    for (int k = 0; k < 200; ++k) {
      scenes::Scene<double> scene = goal_before_a_disc(0.3);
      double const angle = 0.31 * k;
      double const r = 0.1 + 0.004 * k;
      scene.pose.position = {r * std::cos(angle), r * std::sin(angle)};
      double const disc_x = scene.discs[0].centre.x();
      if (std::hypot(scene.pose.position.x() - disc_x, scene.pose.position.y()) - 0.75 < 0.02) {
        continue;
      }
      wend::Vec2<double> const force = weighted(power).force(scene.percept()).sum;
      double const h = 1e-6;
      auto const at = [&](double dx, double dy) {
        return weighted_potential({scene.pose.position.x() + dx, scene.pose.position.y() + dy}, disc_x, power);
      };
      wend::Vec2<double> const slope{(at(h, 0) - at(-h, 0)) / (2 * h), (at(0, h) - at(0, -h)) / (2 * h)};
      CHECK((force + slope).norm() < 1e-6 * std::max(1.0, slope.norm()));
    }
  }
}

TEST_CASE("with the distance to the goal as a weight, downhill ends on the goal, however near a disc it stands") {
  for (double const clearance : {0.1, 0.3, 0.5}) {
    scenes::Scene<double> scene = goal_before_a_disc(clearance);
    for (wend::Vec2<double> const& from : {wend::Vec2<double>{-2.0, 0.3}, wend::Vec2<double>{-0.5, -1.5}}) {
      scene.pose.position = from;
      for (int i = 0; i < 40000; ++i) {
        wend::Vec2<double> const force = weighted(2).force(scene.percept()).sum;
        scene.pose.position += force * std::min(0.002, 0.002 / (wend::length(force) + 1.0e-300));
      }
      CHECK(wend::length(scene.pose.position) < 1.0e-3);
    }
  }
}

TEST_CASE("around a goal beside a disc the weighted force leads back to it from every side, the plain one does not") {
  // On a circle of radius d the pull is d, and the push d^n eta (1/rho - 1/rho0) / rho^2: for n of 2 or more it is the
  // smaller one near the goal; for n = 0 it is not.
  double const d = 1.0e-3;
  for (double const clearance : {0.1, 0.3, 0.5}) {
    scenes::Scene<double> scene = goal_before_a_disc(clearance);
    for (int const power : {0, 2, 3, 4}) {
      int homeward = 0;
      for (int i = 0; i < 64; ++i) {
        double const angle = 0.09817477042468103 * i;
        scene.pose.position = {d * std::cos(angle), d * std::sin(angle)};
        homeward += wend::dot(weighted(power).force(scene.percept()).sum, scene.pose.position) < 0.0 ? 1 : 0;
      }
      CAPTURE(clearance);
      CAPTURE(power);
      CHECK((homeward == 64) == (power >= 2));
    }
  }
}

TEST_CASE("beyond its distance a conic attraction pulls no harder, and joins the quadratic one without a step") {
  wend::potential_field conic = field;
  conic.conic_beyond = 1.5F;
  auto const pull = [&conic](double distance) {
    scenes::Scene<double> scene;
    scene.goal = {distance, 0.0};
    return conic.force(scene.percept()).sum.x();
  };
  CHECK(pull(0.5) == 0.5);
  CHECK(pull(1.5) == 1.5);
  CHECK(pull(1.5 + 1e-12) == doctest::Approx(1.5).epsilon(1e-11));
  CHECK(pull(20.0) == 1.5);
}
