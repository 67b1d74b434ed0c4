// The heading as a dynamical system: Schoener and Dose (1992), A dynamical systems approach to task-level system
// integration used to plan and control autonomous vehicle motion, Robotics and Autonomous Systems 10:253-267 (from
// memory). Checked: the fixed points and their kinds, the bifurcation between two discs, and how the rational windows
// of the field stand to the exponential ones.
#include <algorithm>
#include <cmath>
#include <numbers>
#include <vector>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/attractor_dynamics.hpp"
#include "wend/lab/dual.hpp"

namespace {

using Dual = wend::lab::Dual<1>;
using Scene = scenes::Scene<double>;
constexpr wend::attractor_dynamics field;
constexpr double robot = 0.25;

// A disc by bearing and clearance, seen from the origin.
struct Seen {
  double bearing;
  double clearance;
  double radius;
};

// d phi / dt at a heading, with its slope by the heading. The goal stands at a bearing, 5 m away, or nowhere.
Dual rate_at(double heading, std::vector<Seen> const& discs, double goal, bool some_goal = true) {
  Dual const phi = Dual::variable(heading, 0);
  scenes::Scene<Dual> scene;
  scene.pose.heading = {cos(phi), sin(phi)};
  scene.robot_radius = Dual(robot);
  scene.goal = some_goal ? wend::Vec2<Dual>{Dual(5.0 * std::cos(goal)), Dual(5.0 * std::sin(goal))}
                         : wend::zero2<Dual>();
  for (Seen const& seen : discs) {
    double const d = seen.clearance + seen.radius + robot;
    scene.put(Dual(d * std::cos(seen.bearing)), Dual(d * std::sin(seen.bearing)), Dual(seen.radius));
  }
  return field.rate(scene.percept());
}

// Where the rate changes sign in (low, high), by bisection.
double root_between(double low, double high, std::vector<Seen> const& discs, double goal, bool some_goal = true) {
  bool const rising = rate_at(low, discs, goal, some_goal).value() < 0.0;
  for (int i = 0; i < 100; ++i) {
    double const middle = 0.5 * (low + high);
    ((rate_at(middle, discs, goal, some_goal).value() < 0.0) == rising ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

double width_of(Seen const& seen) {
  double const contact = seen.radius + robot;
  return std::min((contact + static_cast<double>(field.margin)) / (seen.clearance + contact), 1.0);
}
constexpr double attraction = static_cast<double>(field.attraction);
constexpr double repulsion = static_cast<double>(field.repulsion);
constexpr double fade = static_cast<double>(field.fade);

}  // namespace

TEST_CASE("the goal's bearing is an attractor, its opposite a repellor, with the strength of the attraction") {
  for (double const goal : {0.0, 1.0, -2.5}) {
    Dual const at_goal = rate_at(goal, {}, goal);
    CHECK(std::abs(at_goal.value()) < 1.0e-15);
    CHECK(at_goal.slope(0) == doctest::Approx(-attraction));
    Dual const opposite = rate_at(goal + std::numbers::pi, {}, goal);
    CHECK(std::abs(opposite.value()) < 1.0e-14);
    CHECK(opposite.slope(0) == doctest::Approx(attraction));
    for (double off = -3.0; off < 3.1; off += 0.37) {
      CHECK(rate_at(goal + off, {}, goal).value() == doctest::Approx(-attraction * std::sin(off)));
    }
  }
}

TEST_CASE("a disc's bearing is a repellor whose strength falls with the clearance as the source's does at contact") {
  for (double const bearing : {0.0, 0.8, -2.0}) {
    for (double const clearance : {0.0, 0.1, 0.5, 1.5}) {
      Dual const at = rate_at(bearing, {{bearing, clearance, 0.3}}, 0.0, false);
      CHECK(std::abs(at.value()) < 1.0e-13);
      double const x = clearance / fade;
      CHECK(at.slope(0) == doctest::Approx(repulsion * std::pow(1.0 + x / 4.0, -4.0)));
      CHECK(at.slope(0) >= repulsion * std::exp(-x) * (1.0 - 1.0e-12));  // the source's
    }
  }
  // The value and the slope of exp(-x) at 0.
  double const step = 1.0e-6;
  double const near = rate_at(0.0, {{0.0, step * fade, 0.3}}, 0.0, false).slope(0);
  CHECK((near - repulsion) / (step * repulsion) == doctest::Approx(-1.0).epsilon(1e-5));
}

TEST_CASE("nothing repels less than with the source's exponentials, at any clearance and any bearing") {
  double most = 0.0;
  for (double clearance = 0.0; clearance < 3.0; clearance += 0.05) {
    for (double off = 0.02; off < 3.1; off += 0.05) {
      Seen const seen{0.0, clearance, 0.3};
      double const width = width_of(seen);
      double const got = rate_at(off, {seen}, 0.0, false).value() / std::sin(off);
      // exp(-(1 - cos) / width^2), which is the source's exp(-(phi - psi)^2 / (2 width^2)) for small angles.
      double const source = repulsion * std::exp(-clearance / fade) *
                            std::exp(-(1.0 - std::cos(off)) / (width * width));
      CHECK(got >= source * (1.0 - 1.0e-12));
      double const near = off < width && clearance < fade ? got / source : 1.0;
      most = std::max(most, near);
    }
  }
  CHECK(most < 1.2);  // and little more within one width and one fade
}

TEST_CASE("between two discs there is an attractor when they are far apart, and a repellor when they are near") {
  // Without a goal. By hand: at the middle the slope is 2 push d/dD [sin D (1 + (1 - cos D) / (4 w^2))^-4], which is 0
  // where c = cos D solves 3 c^2 + (1 + 4 w^2) c - 4 = 0. With the source's Gaussian window it is 0 at D = w.
  for (double const clearance : {0.3, 0.6, 1.2}) {
    for (double const radius : {0.05, 0.15}) {
      double const w = width_of({0.0, clearance, radius});
      double const b = 1.0 + 4.0 * w * w;
      double const c = (-b + std::sqrt(b * b + 48.0)) / 6.0;
      double const critical = std::acos(c);
      auto const slope_with = [&](double half) {
        return rate_at(0.4, {{0.4 + half, clearance, radius}, {0.4 - half, clearance, radius}}, 0.0, false);
      };
      for (double const factor : {0.3, 0.8, 0.98, 0.999, 1.001, 1.02, 1.3}) {
        CHECK(std::abs(slope_with(factor * critical).value()) < 1.0e-13);
        CHECK((slope_with(factor * critical).slope(0) > 0.0) == (factor < 1.0));
      }
      CHECK(critical > w);  // a little later than in the source; sqrt(8/7) w for narrow ones
      CHECK(critical < 1.25 * w);
    }
  }
  double const narrow = std::acos((-1.0004 + std::sqrt(1.0004 * 1.0004 + 48.0)) / 6.0);  // w = 0.01
  CHECK(narrow / 0.01 == doctest::Approx(std::sqrt(8.0 / 7.0)).epsilon(1e-3));
}

TEST_CASE("two fixed points come together and vanish as two discs near each other, with the goal between them") {
  // Far apart: the goal's bearing attracts. Near: it repels, and there is an attractor on either side of the pair.
  auto const pair = [](double half) { return std::vector<Seen>{{half, 0.25, 0.15}, {-half, 0.25, 0.15}}; };
  CHECK(rate_at(0.0, pair(1.2), 0.0).slope(0) < 0.0);
  CHECK(rate_at(0.0, pair(0.3), 0.0).slope(0) > 0.0);
  double const left = root_between(0.4, 3.0, pair(0.3), 0.0);
  double const right = root_between(-3.0, -0.4, pair(0.3), 0.0);
  CHECK(rate_at(left, pair(0.3), 0.0).slope(0) < 0.0);
  CHECK(left > 0.5);
  CHECK(right == doctest::Approx(-left));
}

TEST_CASE("a heading left to itself ends at an attractor and never at a disc's bearing") {
  std::vector<Seen> const discs{{0.1, 0.4, 0.2}, {-1.5, 0.6, 0.3}};
  int ends = 0;
  for (double phi = -3.1; phi < 3.1; phi += 0.2) {
    double now = phi;
    for (int i = 0; i < 20'000; ++i) {  // the ordinary differential equation by Euler's method, 200 s
      now += 0.01 * rate_at(now, discs, 0.0).value();
    }
    Dual const end = rate_at(now, discs, 0.0);
    CHECK(std::abs(end.value()) < 1.0e-6);
    CHECK(end.slope(0) < 0.0);
    CHECK(std::abs(wend::turn(0.1, std::remainder(now, 2.0 * std::numbers::pi))) > 0.3);
    ++ends;
  }
  CHECK(ends == 31);
}
