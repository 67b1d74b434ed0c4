// The circle theorem (Milne-Thomson 1940, Hydrodynamical images, Proc. Camb. Phil. Soc. 36:246-247; from memory): with
// the complex potential f(z) of a flow whose singularities lie outside |z| = a, that of the flow past the circle is
// w(z) = f(z) + conj(f(a^2 / conj(z))), and u - i v = dw/dz.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <initializer_list>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/fields/harmonic_flow.hpp"

namespace {

using Complex = std::complex<double>;
using V = wend::Vec2<double>;

constexpr double grown_by = 0.25 + 0.125;  // robot and margin, exact in binary
constexpr wend::harmonic_flow field{.margin = 0.125F};

template <int N>
scenes::Scene<double, N> world(std::initializer_list<wend::Disc<double>> discs, V const& goal) {
  scenes::Scene<double, N> scene;
  scene.robot_radius = 0.25;
  scene.goal = goal;
  for (auto const& disc : discs) {
    scene.put(disc.centre.x(), disc.centre.y(), disc.radius);
  }
  return scene;
}

template <int N>
V flow_at(scenes::Scene<double, N>& scene, V const& place) {
  scene.pose.position = place;
  return field.flow(scene.percept());
}

// u + i v of a unit sink at `goal` past a circle of radius a around 0: conj(dw/dz), f(z) = -log(z - goal).
Complex sink_past_circle(Complex z, Complex goal, double a) {
  Complex const mirrored = a * a / std::conj(z);
  Complex const image = std::conj(-1.0 / (mirrored - goal)) * (-a * a / (z * z));
  return std::conj(-1.0 / (z - goal) + image);
}

}  // namespace

TEST_CASE("a stream runs round a cylinder at 2 U sin(theta), and not into it") {
  // Milne-Thomson, Theoretical Hydrodynamics, chapter 6: the speed on the surface; from memory.
  wend::Disc<double> const disc{{0.5, -1.25}, 0.75};
  double const speed = 1.5, heading = 0.7;
  V const stream{speed * std::cos(heading), speed * std::sin(heading)};
  double worst_speed = 0.0, worst_normal = 0.0;
  for (int i = 0; i < 10'000; ++i) {
    double const theta = 2.0 * std::numbers::pi * i / 10'000.0;
    V const out{std::cos(heading + theta), std::sin(heading + theta)};
    V const u = wend::stream_past(disc, stream, V(disc.centre + disc.radius * out));
    worst_speed = std::max(worst_speed, std::abs(u.norm() - 2.0 * speed * std::abs(std::sin(theta))));
    worst_normal = std::max(worst_normal, std::abs(u.dot(out)));
  }
  CHECK(worst_speed < 1e-14);
  CHECK(worst_normal < 1e-14);
}

TEST_CASE("a stream past a cylinder is U (1 - a^2/z^2) off its surface") {
  wend::Disc<double> const disc{{0.0, 0.0}, 0.75};
  std::mt19937_64 random(3);
  std::uniform_real_distribution<double> draw(-4.0, 4.0);
  double worst = 0.0;
  int compared = 0;
  for (int i = 0; i < 10'000; ++i) {
    Complex const z(draw(random), draw(random));
    if (std::abs(z) < disc.radius) {
      continue;
    }
    ++compared;
    Complex const expected = std::conj(1.0 - disc.radius * disc.radius / (z * z));
    V const u = wend::stream_past(disc, V{1.0, 0.0}, V{z.real(), z.imag()});
    worst = std::max(worst, std::abs(Complex(u.x(), u.y()) - expected));
  }
  CHECK(compared > 9'000);
  CHECK(worst < 1e-14);
}

TEST_CASE("the flow past one disc is that of the circle theorem") {
  V const centre{0.5, -0.25}, goal{3.0, 1.5};
  auto scene = world<1>({{centre, 0.5}}, goal);
  double const a = 0.5 + grown_by;
  std::mt19937_64 random(5);
  std::uniform_real_distribution<double> draw(-5.0, 5.0);
  double worst = 0.0;
  int compared = 0;
  for (int i = 0; i < 10'000; ++i) {
    V const place{draw(random), draw(random)};
    V const here = place - centre, there = goal - centre;
    if (here.norm() < a) {
      continue;
    }
    ++compared;
    Complex const expected = sink_past_circle({here.x(), here.y()}, {there.x(), there.y()}, a) * (goal - place).norm();
    V const found = flow_at(scene, place);
    worst = std::max(worst, std::abs(Complex(found.x(), found.y()) - expected));
  }
  CHECK(compared > 9'000);
  CHECK(worst < 1e-13);
}

TEST_CASE("past one disc the velocity has its mean value on circles, so no place draws it in") {
  // The mean value property of harmonic functions (Axler, Bourdon, Ramey 2001, Harmonic Function Theory, 1.4). The mean
  // of 64 places is exact but for terms of the order (radius / distance to the nearest singularity)^64 = 2^-64.
  V const centre{0.5, -0.25}, goal{3.0, 1.5};
  auto scene = world<1>({{centre, 0.5}}, goal);
  auto const velocity = [&](V const& place) { return V(flow_at(scene, place) / (goal - place).norm()); };
  std::mt19937_64 random(7);
  std::uniform_real_distribution<double> draw(-4.0, 4.0), share(0.05, 0.5);
  double worst = 0.0;
  int circles = 0;
  while (circles < 10'000) {
    V const middle{draw(random), draw(random)};
    double const room = std::min((middle - centre).norm() - 0.5 - grown_by, (middle - goal).norm());
    if (room < 0.05) {
      continue;
    }
    ++circles;
    double const radius = share(random) * room;
    V sum{0.0, 0.0};
    for (int k = 0; k < 64; ++k) {
      double const angle = 2.0 * std::numbers::pi * k / 64.0;
      sum += velocity(middle + radius * V{std::cos(angle), std::sin(angle)});
    }
    V const there = velocity(middle);
    worst = std::max(worst, (sum / 64.0 - there).norm() / std::max(1.0, there.norm()));
  }
  CHECK(worst < 1e-13);
}

TEST_CASE("past one disc the flow stands still on the line through the goal and the centre, and nowhere else") {
  // dw/dz = -1/(z - g) - 1/(z - a^2/g) + 1/z for a real g is 0 where z^2 = a^2.
  V const centre{0.5, -0.25}, goal{2.0, 1.75};
  auto scene = world<1>({{centre, 0.5}}, goal);
  double const a = 0.5 + grown_by;
  V const axis = (goal - centre).normalized();
  CHECK(flow_at(scene, centre + a * axis).norm() < 1e-14);
  CHECK(flow_at(scene, centre - a * axis).norm() < 1e-14);
  // |z^2 - a^2| / (|z| |z - g| |z - a^2/g|) is its speed elsewhere.
  double const g = (goal - centre).norm();
  double worst = 0.0;
  int compared = 0;
  for (int i = 0; i < 100; ++i) {
    for (int j = 0; j < 100; ++j) {
      Complex const z = std::polar(a * (1.0 + 0.05 * i), 2.0 * std::numbers::pi * j / 100.0);
      if (std::abs(z - g) < 1e-3) {
        continue;
      }
      ++compared;
      V const place = centre + z.real() * axis + z.imag() * wend::left_of(axis);
      double const speed = flow_at(scene, place).norm() / (goal - place).norm();
      double const expected = std::abs(z * z - a * a) / std::abs(z * (z - g) * (z - a * a / g));
      worst = std::max(worst, std::abs(speed - expected) / std::max(1.0, expected));
    }
  }
  CHECK(compared > 9'990);
  CHECK(worst < 1e-12);
}

TEST_CASE("past several discs the flow runs along each edge") {
  // The boundary condition of Waydo and Murray (2003), Vehicle motion planning using stream functions, ICRA; from memory.
  V const goal{3.0, 1.5};
  auto scene = world<5>(
      {{{0.5, -0.25}, 0.5}, {{-1.5, 0.5}, 0.25}, {{0.5, 2.0}, 0.75}, {{-1.0, -2.0}, 0.625}, {{2.5, -1.0}, 0.125}},
      goal);
  for (int i = 0; i < scene.discs.size(); ++i) {
    wend::Disc<double> const disc = scene.discs[i];
    double const a = disc.radius + grown_by;
    double worst = 0.0, worst_course = 0.0, fastest = 0.0;
    for (int k = 0; k < 10'000; ++k) {
      double const angle = 2.0 * std::numbers::pi * k / 10'000.0;
      V const out{std::cos(angle), std::sin(angle)};
      V const u = flow_at(scene, disc.centre + a * out);
      worst = std::max(worst, std::abs(u.dot(out)));
      fastest = std::max(fastest, u.norm());
      // And so does the course, a hair off the edge; weighed by its speed, since it stands still at two places.
      scene.pose.position = disc.centre + (a + 1e-9) * out;
      wend::Course<double> const course = scenes::answer(field, scene);
      worst_course = std::max(worst_course, std::abs(course.direction.dot(out)) * course.confidence);
    }
    CAPTURE(i);
    CHECK(worst < 1e-13);
    CHECK(worst_course < 1e-7);
    CHECK(fastest > 1.0);
  }
}

TEST_CASE("of two discs each flow counts by the other's gap over the sum of both") {
  // Waydo and Murray's weights d_j / (d_i + d_j); from memory.
  V const goal{3.0, 1.5};
  wend::Disc<double> const left{{0.5, 1.0}, 0.5}, right{{-0.25, -1.5}, 0.75};
  auto both = world<2>({left, right}, goal);
  auto only_left = world<1>({left}, goal);
  auto only_right = world<1>({right}, goal);
  std::mt19937_64 random(9);
  std::uniform_real_distribution<double> draw(-4.0, 4.0);
  double worst = 0.0;
  int compared = 0;
  for (int i = 0; i < 1'000; ++i) {
    V const place{draw(random), draw(random)};
    double const d_left = (place - left.centre).norm() - left.radius - grown_by;
    double const d_right = (place - right.centre).norm() - right.radius - grown_by;
    if (d_left <= 0.0 || d_right <= 0.0) {
      continue;
    }
    ++compared;
    V const expected = (d_right * flow_at(only_left, place) + d_left * flow_at(only_right, place)) / (d_left + d_right);
    worst = std::max(worst, (flow_at(both, place) - expected).norm());
  }
  CHECK(compared > 800);
  CHECK(worst < 1e-13);
}

TEST_CASE("of three discs each flow counts by the inverse of its gap, in whatever order they come") {
  // Shepard (1968), A two-dimensional interpolation function for irregularly-spaced data, with power 1; from memory.
  V const goal{3.0, 1.5};
  std::array<wend::Disc<double>, 3> const discs{{{{0.5, 1.0}, 0.5}, {{-0.25, -1.5}, 0.75}, {{-2.0, 0.75}, 0.25}}};
  auto all = world<3>({discs[0], discs[1], discs[2]}, goal);
  auto turned = world<3>({discs[2], discs[0], discs[1]}, goal);
  std::mt19937_64 random(15);
  std::uniform_real_distribution<double> draw(-4.0, 4.0);
  double worst = 0.0;
  int compared = 0;
  for (int i = 0; i < 1'000; ++i) {
    V const place{draw(random), draw(random)};
    V sum{0.0, 0.0};
    double weights = 0.0, least_gap = 1.0;
    for (auto const& disc : discs) {
      auto alone = world<1>({disc}, goal);
      double const gap = (place - disc.centre).norm() - disc.radius - grown_by;
      sum += flow_at(alone, place) / gap;
      weights += 1.0 / gap;
      least_gap = std::min(least_gap, gap);
    }
    if (least_gap > 0.0) {
      ++compared;
      worst = std::max(
          {worst, (flow_at(all, place) - sum / weights).norm(), (flow_at(turned, place) - sum / weights).norm()});
    }
  }
  CHECK(compared > 700);
  CHECK(worst < 1e-13);
}
