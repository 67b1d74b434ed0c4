// Half-planes of velocities for machines that give way to each other: van den Berg, Guy, Lin and Manocha (2011),
// Reciprocal n-body collision avoidance, Robotics Research, Springer Tracts in Advanced Robotics 70:3-19 (from memory).
// Checked: the change asked for is the least that leaves the truncated cone, each machine is given half of it, and the
// guarantee that follows: whichever velocities two machines pick from their half-planes, they do not touch within the
// horizon.
#include <algorithm>
#include <cmath>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/fields/shared_avoidance.hpp"

namespace {

using Vec = wend::Vec2<double>;

constexpr double speed = 0.5;
constexpr double horizon = 4.0;
constexpr wend::shared_avoidance field{.speed = 0.5F, .horizon = 4.0F, .margin = 0.0F};

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) {
    return low + (high - low) * (static_cast<double>(random_()) / 4294967296.0);
  }
  Vec in_disc(double radius) {
    for (;;) {
      Vec const v{between(-radius, radius), between(-radius, radius)};
      if (wend::length(v) <= radius) {
        return v;
      }
    }
  }

 private:
  std::mt19937 random_;
};

// Two machines: where the second is seen from the first, their radii, what they do now.
struct Pair {
  Vec offset;
  double radius_a;
  double radius_b;
  Vec a;
  Vec b;
};

Pair random_pair(Random& random) {
  Pair pair{random.in_disc(2.0), random.between(0.1, 0.3), random.between(0.1, 0.3), random.in_disc(speed),
            random.in_disc(speed)};
  while (wend::length(pair.offset) < pair.radius_a + pair.radius_b + 0.01 || wend::length(pair.b) < 0.03 ||
         wend::length(pair.a) < 0.03) {
    pair.offset = random.in_disc(2.0);
    pair.a = random.in_disc(speed);
    pair.b = random.in_disc(speed);
  }
  return pair;
}

wend::HalfPlane<double> half_plane(Vec const& offset, double own_radius, double other_radius, Vec const& own,
                                   Vec const& other) {
  scenes::Scene<double, 1> scene;
  scene.robot_radius = own_radius;
  scene.put(offset.x(), offset.y(), other_radius, other.x(), other.y());
  return field.half_planes(scene.percept(), own)[0];
}
wend::HalfPlane<double> of_a(Pair const& p) { return half_plane(p.offset, p.radius_a, p.radius_b, p.a, p.b); }
wend::HalfPlane<double> of_b(Pair const& p) { return half_plane(-p.offset, p.radius_b, p.radius_a, p.b, p.a); }

// The least distance of two machines that keep a relative velocity for the horizon, less their radii: where the
// derivative of the square vanishes, or at an end.
double least_gap(Pair const& p, Vec const& relative) {
  double const square = wend::dot(relative, relative);
  double const at = square > 0.0 ? std::clamp(wend::dot(p.offset, relative) / square, 0.0, horizon) : 0.0;
  return wend::length(Vec(p.offset - at * relative)) - p.radius_a - p.radius_b;
}

}  // namespace

TEST_CASE("whichever velocities two machines pick from their half-planes, they do not touch within the horizon") {
  Random random(2011);
  int pairs = 0, touched = 0, would_have = 0;
  double least = 1.0e9;
  for (int k = 0; k < 5000; ++k) {
    Pair const pair = random_pair(random);
    would_have += least_gap(pair, pair.a - pair.b) < 0.0 ? 1 : 0;
    auto const plane_a = of_a(pair);
    auto const plane_b = of_b(pair);
    for (int draw = 0; draw < 40; ++draw) {
      Vec a = random.in_disc(speed);
      Vec b = random.in_disc(speed);
      // Half of the draws right on the edges: the worst that is allowed.
      if (draw % 2 == 0) {
        a += (plane_a.offset - wend::dot(plane_a.normal, a)) * plane_a.normal;
        b += (plane_b.offset - wend::dot(plane_b.normal, b)) * plane_b.normal;
      } else if (wend::dot(plane_a.normal, a) < plane_a.offset || wend::dot(plane_b.normal, b) < plane_b.offset) {
        continue;
      }
      ++pairs;
      double const gap = least_gap(pair, a - b);
      least = std::min(least, gap);
      touched += gap < -1.0e-6 ? 1 : 0;  // radii that come from single precision, nothing else
    }
  }
  CAPTURE(least);
  CHECK(would_have > 400);
  CHECK(pairs > 100'000);
  CHECK(touched == 0);
  CHECK(least < 1.0e-6);  // the half-planes are no smaller than they have to be
}

TEST_CASE("the change is the least that leaves the truncated cone, and each is asked for half of it") {
  Random random(4);
  int inside = 0, wrong = 0, uneven = 0;
  for (int k = 0; k < 2000; ++k) {
    Pair const pair = random_pair(random);
    Vec const relative = pair.a - pair.b;
    auto const plane_a = of_a(pair);
    auto const plane_b = of_b(pair);
    double const half = plane_a.offset - wend::dot(plane_a.normal, pair.a);
    double const half_b = plane_b.offset - wend::dot(plane_b.normal, pair.b);
    uneven += std::abs(half - half_b) > 1.0e-9 ? 1 : 0;
    uneven += wend::length(Vec(plane_a.normal + plane_b.normal)) > 1.0e-9 ? 1 : 0;
    bool const leads_to_contact = least_gap(pair, relative) < 0.0;
    inside += leads_to_contact ? 1 : 0;
    // A change a bit longer flips what happens, none shorter does, whichever way it points.
    double const change = 2.0 * half;
    wrong += leads_to_contact == (change > 0.0) ? 0 : 1;
    double const beyond = change + (change > 0.0 ? 1.0e-6 : -1.0e-6);
    wrong += (least_gap(pair, relative + beyond * plane_a.normal) < 0.0) == leads_to_contact ? 1 : 0;
    for (int direction = 0; direction < 360; ++direction) {
      double const angle = direction * std::numbers::pi / 180.0;
      for (double const part : {0.5, 0.9999}) {
        Vec const other = relative +
                          std::max(part * std::abs(change) - 1.0e-7, 0.0) * Vec{std::cos(angle), std::sin(angle)};
        wrong += (least_gap(pair, other) < 0.0) == leads_to_contact ? 0 : 1;
      }
    }
  }
  CHECK(inside > 150);
  CHECK(uneven == 0);
  CHECK(wrong == 0);
}

TEST_CASE("a disc that stands still leaves the whole change to the machine") {
  Random random(5);
  int touched = 0, would_have = 0;
  for (int k = 0; k < 5000; ++k) {
    Pair pair = random_pair(random);
    pair.b = {0.0, 0.0};
    would_have += least_gap(pair, pair.a) < 0.0 ? 1 : 0;
    auto const plane = of_a(pair);
    Vec a = random.in_disc(speed);
    a += (plane.offset - wend::dot(plane.normal, a)) * plane.normal;
    touched += least_gap(pair, a) < -1.0e-6 ? 1 : 0;
  }
  CHECK(would_have > 300);
  CHECK(touched == 0);
}

TEST_CASE("machines that overlap are asked for the speed that parts them in the time to recover") {
  Pair const pair{{0.3, 0.0}, 0.2, 0.2, {0.1, 0.0}, {-0.1, 0.0}};
  auto const plane = of_a(pair);
  // The overlap of 0.1 m has to go in 0.5 s: a relative velocity of -0.2 m/s, from 0.2; half of that change each.
  CHECK(plane.normal.x() == doctest::Approx(-1.0));
  CHECK(plane.offset == doctest::Approx(0.1).epsilon(1e-6));
}
