// Arcs against a fine numerical integration (Kutta 1901, the classical fourth-order method), against closed forms, and
// against distances searched for along the path.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <cstddef>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/arc.hpp"

namespace {

using wend::BodyVelocity;
using wend::Pose;
using wend::Vec2;
using wend::lab::along_arc;
using wend::lab::distance_to_arc;

constexpr double pi = std::numbers::pi;

Pose<double> pose(double x, double y, double angle) { return {{x, y}, {std::cos(angle), std::sin(angle)}}; }

// x' = v cos a, y' = v sin a, a' = w.
std::array<double, 3> integrated(double x, double y, double angle, double v, double w, double time, int steps) {
  double const h = time / steps;
  for (int i = 0; i < steps; ++i) {
    // The slopes depend on the angle only, and the angle grows evenly: the two middle slopes are one.
    double const middle = angle + 0.5 * h * w;
    double const end = angle + h * w;
    x += h / 6.0 * v * (std::cos(angle) + 4.0 * std::cos(middle) + std::cos(end));
    y += h / 6.0 * v * (std::sin(angle) + 4.0 * std::sin(middle) + std::sin(end));
    angle = end;
  }
  return {x, y, angle};
}

// The same path in complex numbers: the integral of v exp(i (a + w t)).
std::complex<double> on_path(std::complex<double> start, double angle, double v, double w, double t) {
  std::complex<double> const i(0.0, 1.0);
  std::complex<double> const nose = std::polar(1.0, angle);
  return w == 0.0 ? start + v * t * nose : start + v / (i * w) * (std::polar(1.0, w * t) - 1.0) * nose;
}

// The least distance by looking: even samples, then a search by thirds round each sample that is least near it.
double searched(std::complex<double> start, double angle, double v, double w, double time, std::complex<double> point) {
  constexpr int samples = 40;
  auto const off = [&](double t) { return std::sqrt(std::norm(on_path(start, angle, v, w, t) - point)); };
  std::vector<double> at;
  for (int k = 0; k <= samples; ++k) {
    at.push_back(off(time * k / samples));
  }
  double least = *std::min_element(at.begin(), at.end());
  for (int k = 0; k <= samples; ++k) {
    int const before = std::max(k - 1, 0);
    int const after = std::min(k + 1, samples);
    double const here = at[static_cast<std::size_t>(k)];
    if ((k > 0 && here >= at[static_cast<std::size_t>(before)]) || here > at[static_cast<std::size_t>(after)]) {
      continue;
    }
    double low = time * before / samples;
    double high = time * after / samples;
    for (int i = 0; i < 40; ++i) {
      double const a = low + (high - low) / 3.0;
      double const b = high - (high - low) / 3.0;
      bool const first_half = off(a) < off(b);
      (first_half ? high : low) = first_half ? b : a;
    }
    least = std::min(least, off(0.5 * (low + high)));
  }
  return least;
}

}  // namespace

TEST_CASE("along_arc ends where a fine integration of the motion ends") {
  std::mt19937 random(5);
  std::uniform_real_distribution<double> even(-1.0, 1.0);
  double worst = 0.0;
  for (int i = 0; i < 2000; ++i) {
    double const x = 10.0 * even(random), y = 10.0 * even(random), angle = pi * even(random);
    double const v = 2.0 * even(random), time = 2.0 + 2.0 * even(random);
    double const w = i % 10 == 0 ? 0.0 : i % 10 == 1 ? 1e-9 * even(random) : 4.0 * even(random);  // up to 2.5 turns
    auto const expected = integrated(x, y, angle, v, w, time, 2000);
    Pose<double> const end = along_arc(pose(x, y, angle), {v, w}, time);
    worst = std::max({worst, std::hypot(end.position.x() - expected[0], end.position.y() - expected[1]),
                      std::hypot(end.heading.x() - std::cos(expected[2]), end.heading.y() - std::sin(expected[2]))});
    CHECK(std::abs(end.heading.norm() - 1.0) < 1e-15);
  }
  CAPTURE(worst);
  CHECK(worst < 1e-11);  // the integration's own error: (0.008 rad)^4 / 2880 of 8 m, and rounding
}

// Elementary geometry of the circle.
TEST_CASE("along_arc draws quarter, half and whole circles, lines, and turns in place") {
  auto const near = [](Pose<double> const& a, Pose<double> const& b) {
    return (a.position - b.position).norm() < 1e-14 && (a.heading - b.heading).norm() < 1e-14;
  };
  Pose<double> const start = pose(1.0, 2.0, 0.0);
  CHECK(near(along_arc(start, {pi, pi / 2.0}, 1.0), pose(3.0, 4.0, pi / 2.0)));    // radius 2, to the left
  CHECK(near(along_arc(start, {pi, -pi / 2.0}, 1.0), pose(3.0, 0.0, -pi / 2.0)));  // to the right
  CHECK(near(along_arc(start, {-pi, pi / 2.0}, 1.0), pose(-1.0, 0.0, pi / 2.0)));  // backwards
  CHECK(near(along_arc(start, {pi, pi / 2.0}, 2.0), pose(1.0, 6.0, pi)));
  CHECK(near(along_arc(start, {pi, pi / 2.0}, 4.0), start));
  CHECK(near(along_arc(start, {0.5, 0.0}, 3.0), pose(2.5, 2.0, 0.0)));
  CHECK(near(along_arc(start, {-0.5, 0.0}, 3.0), pose(-0.5, 2.0, 0.0)));
  CHECK(near(along_arc(start, {0.0, 1.0}, 0.7), pose(1.0, 2.0, 0.7)));
  CHECK(near(along_arc(start, {1.0, 1.0}, 0.0), start));
}

TEST_CASE("sinc agrees with its series on both sides of the switch to 1") {
  for (double const x : {0.0, 1e-9, 9.9e-9, 1.01e-8, 1e-6, 1e-4, 0.01}) {
    double const series = 1.0 - x * x / 6.0 + x * x * x * x / 120.0;
    CHECK(std::abs(wend::lab::sinc(x) - series) < 3e-16);
    CHECK(wend::lab::sinc(-x) == wend::lab::sinc(x));
  }
  CHECK(std::abs(wend::lab::sinc(pi)) < 1e-16);
}

TEST_CASE("distance_to_arc is the least distance found by searching along the path") {
  std::mt19937 random(17);
  std::uniform_real_distribution<double> even(-1.0, 1.0);
  double worst = 0.0;
  int inside_out = 0;  // cases in which the nearest point is no end
  constexpr int cases = 100000;
  for (int i = 0; i < cases; ++i) {
    double const x = 3.0 * even(random), y = 3.0 * even(random), angle = pi * even(random);
    double const time = 1.0 + even(random);
    double v = 2.0 * even(random);
    double w = 5.0 * even(random);  // up to 10 rad: more than a whole turn
    switch (i % 8) {
      case 0: w = 0.0; break;                           // straight
      case 1: v = 0.0; break;                           // in place
      case 2: v = 0.0, w = 0.0; break;                  // standing still
      case 3: w = std::pow(10.0, -4.0 + 2.0 * even(random)); break;  // nearly straight
      default: break;
    }
    // One point in four on or near the circle's own size, where near and far side compete.
    double const reach = i % 4 == 3 ? 0.3 : 3.0;
    double const px = x + reach * even(random), py = y + reach * even(random);
    double const found = distance_to_arc(pose(x, y, angle), {v, w}, time, Vec2<double>{px, py});
    double const expected = searched({x, y}, angle, v, w, time, {px, py});
    worst = std::max(worst, std::abs(found - expected));
    Vec2<double> const end = along_arc(pose(x, y, angle), {v, w}, time).position;
    double const ends = std::min(std::hypot(px - x, py - y), std::hypot(px - end.x(), py - end.y()));
    inside_out += found < ends - 1e-3 ? 1 : 0;
  }
  CAPTURE(worst);
  // A search by thirds finds the place of a minimum to the root of the rounding, 1e-8 of the path, and its value to the
  // square of that; where the minimum is 0 it is a corner, and the place's own error shows.
  CHECK(worst < 1e-6);
  CHECK(inside_out > cases / 10);
}

// Elementary geometry of the circle, radius 2 round (0, 2), counter-clockwise from the origin.
TEST_CASE("distance_to_arc knows how far round the circle it gets") {
  Pose<double> const start = pose(0.0, 0.0, 0.0);
  BodyVelocity<double> const left{2.0, 1.0};
  Vec2<double> const opposite{0.0, 5.0};  // 1 m beyond the far side
  CHECK(std::abs(distance_to_arc(start, left, pi / 2.0, opposite) - std::hypot(2.0, 3.0)) < 1e-12);
  CHECK(std::abs(distance_to_arc(start, left, pi + 0.01, opposite) - 1.0) < 1e-12);
  CHECK(std::abs(distance_to_arc(start, left, 7.0, Vec2<double>{-3.0, 2.0}) - 1.0) < 1e-12);
  CHECK(std::abs(distance_to_arc(start, left, 1.0, Vec2<double>{0.0, 2.0}) - 2.0) < 1e-12);  // its centre
  CHECK(std::abs(distance_to_arc(start, {-2.0, -1.0}, pi / 2.0, Vec2<double>{-3.0, 2.0}) - 1.0) < 1e-12);  // reverse
}
