// Vector fields for paths: Nelson, Barber, McLain and Beard (2007), Vector field path following for miniature air
// vehicles, IEEE Trans. Robotics 23(3):519-529 (from memory). For a straight path with the machine y to its left the
// course is chi = -chi_far (2 / pi) atan(k y), for a counter-clockwise orbit of radius r, at the distance d and the
// angle g as seen from its centre, chi = g + pi / 2 + atan(k (d - r)). Their argument: y^2 / 2, and (d - r)^2 / 2,
// falls as long as the course is kept.
#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/along_path.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Vec = wend::Vec2<double>;

constexpr float unbounded = std::numeric_limits<float>::infinity();
constexpr auto line = wend::path_of(wend::straight({-20.0F, 0.0F}, {20.0F, 0.0F}));
constexpr auto left_orbit = wend::path_of(wend::arc({2.0F, 0.0F}, {-2.0F, 0.0F}, 0.5F));
constexpr auto right_orbit = wend::path_of(wend::arc({-2.0F, 0.0F}, {2.0F, 0.0F}, -0.5F));

template <typename Field>
wend::Course<double> ask(Field const& field, Vec const& position) {
  wend::DiscSet<double, 1> const none;
  wend::memory_t<Field, double> memory;
  return wend::evaluate(field, wend::look({position, {1.0, 0.0}}, Vec(0.0, 0.0), none, 0.2, 0.05), memory);
}

double angle_of(Vec const& v) { return std::atan2(v.y(), v.x()); }

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) {
    return low + (high - low) * (static_cast<double>(random_()) / 4294967296.0);
  }

 private:
  std::mt19937 random_;
};

}  // namespace

TEST_CASE("onto_path without a bound is the source's field for a line, with a right angle far off") {
  Random random(1);
  for (float const k : {0.5F, 3.0F, 10.0F}) {
    wend::onto_path const field{line, k, unbounded};
    for (int i = 0; i < 300; ++i) {
      double const y = random.between(-4.0, 4.0);
      double const chi = -(pi / 2.0) * (2.0 / pi) * std::atan(static_cast<double>(k) * y);
      wend::Course<double> const course = ask(field, {random.between(-9.0, 9.0), y});
      CHECK(std::abs(angle_of(course.direction) - chi) < 1.0e-12);
      CHECK(course.confidence == 1.0);
    }
  }
}

TEST_CASE("onto_path without a bound is the source's field for an orbit, either way round") {
  Random random(2);
  for (float const k : {0.5F, 3.0F}) {
    for (int i = 0; i < 300; ++i) {
      double const d = random.between(0.05, 5.0);
      double const g = random.between(0.05, pi - 0.05);  // beside the half of it that is the path
      double const lean = std::atan(static_cast<double>(k) * (d - 2.0));
      Vec const position{d * std::cos(g), d * std::sin(g)};
      double const left = angle_of(ask(wend::onto_path{left_orbit, k, unbounded}, position).direction);
      double const right = angle_of(ask(wend::onto_path{right_orbit, k, unbounded}, position).direction);
      CHECK(std::abs(wend::turn(left, g + pi / 2.0 + lean)) < 1.0e-6);  // the radius is one of single precision
      CHECK(std::abs(wend::turn(right, g - pi / 2.0 - lean)) < 1.0e-6);
    }
  }
}

TEST_CASE("onto_path with a bound has the slope of the source's field on the line, and its angle far off") {
  // The source's slope on the line is chi_far (2 / pi) k; the one here is `gain`.
  for (double const chi_far : {0.5, 1.0, 1.4}) {
    double const k = 2.0;
    wend::onto_path const field{line, static_cast<float>(chi_far * 2.0 / pi * k),
                                static_cast<float>(std::tan(chi_far))};
    auto const chi = [&field](double y) { return angle_of(ask(field, {0.0, y}).direction); };
    double const by = 1.0e-5;
    CHECK((chi(by) - chi(-by)) / (2.0 * by) == doctest::Approx(-chi_far * 2.0 / pi * k));
    CHECK(chi(1.0e5) == doctest::Approx(-chi_far).epsilon(1.0e-4));
    // In between it is as monotone, and never far from the source's.
    double largest = 0.0;
    for (double y = 0.0; y < 20.0; y += 0.01) {
      CHECK(chi(y + 0.01) < chi(y));
      largest = std::max(largest, std::abs(chi(y) + chi_far * 2.0 / pi * std::atan(k * y)));
    }
    CHECK(largest < 0.2);
  }
}

TEST_CASE("along onto_path the source's Lyapunov functions fall, and the way ends on the path") {
  Random random(3);
  for (float const steepest : {1.0F, 4.0F, unbounded}) {
    for (int i = 0; i < 60; ++i) {
      wend::onto_path const to_line{line, 2.0F, steepest};
      Vec position{-15.0, random.between(-5.0, 5.0)};
      double before = 0.5 * position.y() * position.y();
      for (int tick = 0; tick < 2000; ++tick) {
        position += 0.01 * ask(to_line, position).direction;
        double const now = 0.5 * position.y() * position.y();
        REQUIRE(now < before);
        before = now;
      }
      CHECK(std::abs(position.y()) < 1.0e-3);

      // Its whole circle, not just the half that is the path: the piece is kept by staying with a fresh memory.
      wend::onto_path const to_orbit{left_orbit, 2.0F, steepest};
      double const g = random.between(0.0, 0.3);
      double const d = random.between(0.5, 5.0);
      position = {d * std::cos(g), d * std::sin(g)};
      before = 0.5 * std::pow(d - 2.0, 2.0);
      while (position.y() > 0.0 && std::abs(wend::length(position) - 2.0) > 0.02) {
        position += 0.001 * ask(to_orbit, position).direction;
        double const now = 0.5 * std::pow(wend::length(position) - 2.0, 2.0);
        REQUIRE(now < before);
        before = now;
      }
      CHECK(std::abs(wend::length(position) - 2.0) <= 0.02);
    }
  }
}
