// The artificial potential field against Khatib (1986), Real-time obstacle avoidance for manipulators and mobile
// robots, Int. J. Robotics Research 5(1):90-98. The formulas (from memory) are written out here once more, in long
// double:
//   goal:  U = k/2 |x - g|^2
//   FIRAS: U = eta/2 (1/rho - 1/rho0)^2 for rho <= rho0, else 0
//          F = eta (1/rho - 1/rho0) 1/rho^2 drho/dx
#include <array>
#include <cmath>
#include <cstddef>
#include <limits>
#include <random>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "wend/fields/potential_field.hpp"

namespace {

using Real = long double;
using Point = std::array<Real, 2>;

// Gains of which 1/influence is not a binary fraction.
constexpr wend::potential_field field{1.5F, 0.0625F, 0.7F, 0.01F};
constexpr Real k = 1.5L;
constexpr Real eta = 0.0625L;
constexpr Real rho0 = static_cast<Real>(0.7F);
constexpr Real robot_radius = 0.25L;

struct Obstacle {
  Point centre;
  Real radius;
};

struct Setting {
  Point goal;
  std::array<Obstacle, 3> discs;
};

constexpr Setting setting{{2.0L, 0.5L}, {{{{0.0L, 0.0L}, 0.5L}, {{1.25L, -0.75L}, 0.25L}, {{-0.5L, 1.5L}, 0.375L}}}};

Real clearance(Point const& x, Obstacle const& disc) {
  return std::hypot(x[0] - disc.centre[0], x[1] - disc.centre[1]) - disc.radius - robot_radius;
}

Real potential(Point const& x, Setting const& s) {
  Real const dx = x[0] - s.goal[0];
  Real const dy = x[1] - s.goal[1];
  Real u = k / 2.0L * (dx * dx + dy * dy);
  for (Obstacle const& disc : s.discs) {
    Real const rho = clearance(x, disc);
    Real const excess = rho <= rho0 ? 1.0L / rho - 1.0L / rho0 : 0.0L;
    u += eta / 2.0L * excess * excess;
  }
  return u;
}

Point force(Point const& x, Setting const& s) {
  Point f{-k * (x[0] - s.goal[0]), -k * (x[1] - s.goal[1])};
  for (Obstacle const& disc : s.discs) {
    Real const rho = clearance(x, disc);
    if (rho <= rho0) {
      Real const size = eta * (1.0L / rho - 1.0L / rho0) / (rho * rho);
      Real const from = std::hypot(x[0] - disc.centre[0], x[1] - disc.centre[1]);
      f[0] += size * (x[0] - disc.centre[0]) / from;
      f[1] += size * (x[1] - disc.centre[1]) / from;
    }
  }
  return f;
}

template <wend::PlainNumber S>
scenes::Scene<S> scene_at(Point const& x, Setting const& s) {
  scenes::Scene<S> scene;
  scene.pose.position = {static_cast<S>(x[0]), static_cast<S>(x[1])};
  scene.goal = {static_cast<S>(s.goal[0]), static_cast<S>(s.goal[1])};
  for (Obstacle const& disc : s.discs) {
    scene.put(static_cast<S>(disc.centre[0]), static_cast<S>(disc.centre[1]), static_cast<S>(disc.radius));
  }
  scene.robot_radius = static_cast<S>(robot_radius);
  return scene;
}

template <wend::PlainNumber S>
Point wend_force(Point const& x, Setting const& s) {
  scenes::Scene<S> const scene = scene_at<S>(x, s);
  auto const f = field.force(scene.percept());
  return {static_cast<Real>(f.sum.x()), static_cast<Real>(f.sum.y())};
}

Real length(Point const& p) { return std::hypot(p[0], p[1]); }
Real distance(Point const& a, Point const& b) { return std::hypot(a[0] - b[0], a[1] - b[1]); }

// Random places with a little room to every disc, as float can hold them.
class Places {
 public:
  Point next() {
    for (;;) {
      Point const x{coordinate(), coordinate()};
      bool free = true;
      for (Obstacle const& disc : setting.discs) {
        free = free && clearance(x, disc) > 0.05L;
      }
      if (free) {
        return x;
      }
    }
  }

 private:
  Real coordinate() { return -2.0L + static_cast<Real>(random_() >> 12U) / 262144.0L; }
  std::mt19937 random_{86};
};

// A goal, a disc and the machine in line: the disc between.
constexpr Setting in_line{{0.0L, 0.0L}, {{{{2.0L, 0.0L}, 0.5L}, {{1.0e6L, 0.0L}, 0.0L}, {{1.0e6L, 0.0L}, 0.0L}}}};

// Where, on the far side of the disc, pull and push are equal: bisection on k x = eta (1/rho - 1/rho0) / rho^2.
Real balance() {
  Real low = 2.76L;  // clearance 0.01
  Real high = 2.75L + rho0;
  auto const excess = [](Real x) {
    Real const rho = x - 2.75L;
    return eta * (1.0L / rho - 1.0L / rho0) / (rho * rho) - k * x;
  };
  REQUIRE(excess(low) > 0.0L);
  REQUIRE(excess(high) < 0.0L);
  while (high - low > 1.0e-15L) {
    Real const middle = (low + high) / 2.0L;
    (excess(middle) > 0.0L ? low : high) = middle;
  }
  return (low + high) / 2.0L;
}

}  // namespace

TEST_CASE("the force is the one of Khatib's formula") {
  Places places;
  for (int i = 0; i < 2000; ++i) {
    Point const x = places.next();
    Point const expected = force(x, setting);
    // Near a disc the push grows with 1/rho^3, and so does what rounding the clearance does to it: down to 0.05 m.
    CHECK(static_cast<double>(distance(wend_force<double>(x, setting), expected)) <
          2.0e-14 * static_cast<double>(1.0L + length(expected)));
    CHECK(static_cast<double>(distance(wend_force<float>(x, setting), expected)) <
          1.0e-5 * static_cast<double>(1.0L + length(expected)));
  }
}

TEST_CASE("the force is minus the gradient of Khatib's potential") {
  Places places;
  Real const h = 1.0e-6L;
  for (int i = 0; i < 2000; ++i) {
    Point const x = places.next();
    Point const downhill{-(potential({x[0] + h, x[1]}, setting) - potential({x[0] - h, x[1]}, setting)) / (2.0L * h),
                         -(potential({x[0], x[1] + h}, setting) - potential({x[0], x[1] - h}, setting)) / (2.0L * h)};
    CHECK(static_cast<double>(distance(wend_force<double>(x, setting), downhill)) <
          1.0e-8 * static_cast<double>(1.0L + length(downhill)));
  }
}

TEST_CASE("a disc is not felt from the distance of influence on, and weakly just within it") {
  Setting s = in_line;
  for (Real const beyond : {0.0L, 1.0e-12L, 0.1L, 2.0L}) {
    Point const x{2.0L, 0.5L + robot_radius + rho0 + beyond};
    s.goal = x;  // no pull
    CHECK(static_cast<double>(length(wend_force<double>(x, s))) < 1.0e-14);
  }
  Point const within{2.0L, 0.5L + robot_radius + rho0 - 1.0e-3L};
  s.goal = within;
  CHECK(static_cast<double>(length(wend_force<double>(within, s))) > 1.0e-5);
}

TEST_CASE("behind a disc in line with the goal the field stands still where the formula says") {
  Real const x = balance();
  MESSAGE("balance at ", static_cast<double>(x), " m, clearance ", static_cast<double>(x - 2.75L), " m");
  CHECK(static_cast<double>(length(wend_force<double>({x, 0.0L}, in_line))) < 1.0e-13);
  CHECK(static_cast<double>(length(force({x, 0.0L}, in_line))) < 1.0e-12);
  scenes::Scene<double> const scene = scene_at<double>({x, 0.0L}, in_line);
  CHECK(scenes::answer(field, scene).confidence < 1.0e-14);
  // A centimetre to either side the field is sure again, and points back.
  CHECK(scenes::answer(field, scene_at<double>({x + 0.01L, 0.0L}, in_line)).direction.x() < -0.999);
  CHECK(scenes::answer(field, scene_at<double>({x - 0.01L, 0.0L}, in_line)).direction.x() > 0.999);
  CHECK(scenes::answer(field, scene_at<double>({x + 0.01L, 0.0L}, in_line)).confidence > 0.01);
}

TEST_CASE("that standstill is a saddle: stable along the line, unstable across it") {
  Real const x = balance();
  Real const h = 1.0e-5L;
  Point const right = wend_force<double>({x + h, 0.0L}, in_line);
  Point const left = wend_force<double>({x - h, 0.0L}, in_line);
  Point const above = wend_force<double>({x, h}, in_line);
  Point const below = wend_force<double>({x, -h}, in_line);
  Real const xx = (right[0] - left[0]) / (2.0L * h);
  Real const yx = (right[1] - left[1]) / (2.0L * h);
  Real const xy = (above[0] - below[0]) / (2.0L * h);
  Real const yy = (above[1] - below[1]) / (2.0L * h);
  Real const determinant = xx * yy - xy * yx;
  CHECK(determinant < 0.0L);
  CHECK(std::abs(static_cast<double>(xy - yx)) < 1.0e-6);  // a gradient has a symmetric Jacobian
  Real const half_trace = (xx + yy) / 2.0L;
  Real const root = std::sqrt(half_trace * half_trace - determinant);
  CHECK(half_trace - root < 0.0L);
  CHECK(half_trace + root > 0.0L);
  // By hand, from the formula: across the line the push k x at distance x - 2 from the disc turns with the machine.
  CHECK(static_cast<double>(yy) == doctest::Approx(static_cast<double>(-k + k * x / (x - 2.0L))).epsilon(1.0e-6));
  Real const rho = x - 2.75L;
  Real const slope = -k + eta * (-3.0L / (rho * rho * rho * rho) + 2.0L / (rho0 * rho * rho * rho));
  CHECK(static_cast<double>(xx) == doctest::Approx(static_cast<double>(slope)).epsilon(1.0e-6));
}
