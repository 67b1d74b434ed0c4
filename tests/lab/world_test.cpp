// The world against brute force: rays walked in steps of a millimetre, gaps measured to points on the edges.
#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/world.hpp"

namespace {

using wend::Disc;
using wend::Vec2;
using wend::lab::cast_ray;
using wend::lab::World;

constexpr double infinity = std::numeric_limits<double>::infinity();

bool is_in(std::vector<Disc<double>> const& discs, double x, double y) {
  return std::any_of(discs.begin(), discs.end(), [x, y](Disc<double> const& d) {
    return std::hypot(x - d.centre.x(), y - d.centre.y()) <= d.radius;
  });
}

// Steps along a ray until it is in a disc, then halves the last step until it has the edge.
double walked(std::vector<Disc<double>> const& discs, double x, double y, double angle, double reach) {
  double const c = std::cos(angle);
  double const s = std::sin(angle);
  if (is_in(discs, x, y)) {
    return 0.0;
  }
  for (double t = 0.001; t < reach; t += 0.001) {
    if (is_in(discs, x + t * c, y + t * s)) {
      double low = t - 0.001;
      double high = t;
      for (int i = 0; i < 40; ++i) {
        double const middle = 0.5 * (low + high);
        (is_in(discs, x + middle * c, y + middle * s) ? high : low) = middle;
      }
      return high;
    }
  }
  return infinity;
}

}  // namespace

TEST_CASE("cast_ray finds the edge that a walk along the ray finds") {
  std::mt19937 random(23);
  std::uniform_real_distribution<double> even(0.0, 1.0);
  int hits = 0, misses = 0, from_inside = 0, grazes = 0, wrong = 0;
  for (int i = 0; i < 600; ++i) {
    std::vector<Disc<double>> discs;
    for (int k = 0; k < 6; ++k) {
      discs.push_back({{8.0 * even(random) - 4.0, 8.0 * even(random) - 4.0}, 0.02 + 0.8 * even(random)});
    }
    double const x = 4.0 * even(random) - 2.0, y = 4.0 * even(random) - 2.0;
    double const angle = 2.0 * std::numbers::pi * even(random);
    double const expected = walked(discs, x, y, angle, 12.0);
    double const found = cast_ray(discs, {x, y}, {std::cos(angle), std::sin(angle)});
    if (found < expected - 1e-9 && std::isfinite(found)) {
      // The walk may step over a chord shorter than its step: the middle of it must lie in a disc all the same.
      ++grazes;
      wrong += is_in(discs, x + (found + 1e-9) * std::cos(angle), y + (found + 1e-9) * std::sin(angle)) ? 0 : 1;
      wrong += is_in(discs, x + (found + 1e-3) * std::cos(angle), y + (found + 1e-3) * std::sin(angle)) ? 1 : 0;
    } else if (std::isfinite(expected)) {
      wrong += std::abs(found - expected) < 1e-9 ? 0 : 1;
      ++(expected == 0.0 ? from_inside : hits);
    } else {
      wrong += found == infinity ? 0 : 1;
      ++misses;
    }
  }
  CHECK(wrong == 0);
  CHECK(hits > 100);
  CHECK(misses > 100);
  CHECK(from_inside > 20);
  CHECK(grazes < 10);
}

// Elementary geometry.
TEST_CASE("cast_ray sees what is ahead and not what is behind or beside") {
  std::vector<Disc<double>> const discs{{{3.0, 0.0}, 0.5}, {{5.0, 0.0}, 0.5}, {{-2.0, 0.0}, 0.5}};
  CHECK(cast_ray(discs, {0.0, 0.0}, {1.0, 0.0}) == doctest::Approx(2.5));
  CHECK(cast_ray(discs, {0.0, 0.0}, {-1.0, 0.0}) == doctest::Approx(1.5));
  CHECK(cast_ray(discs, {0.0, 0.0}, {0.0, 1.0}) == infinity);
  CHECK(cast_ray(discs, {4.0, 0.0}, {1.0, 0.0}) == doctest::Approx(0.5));  // the first one lies behind
  CHECK(cast_ray(discs, {3.1, 0.0}, {1.0, 0.0}) == 0.0);                  // from inside
  CHECK(cast_ray({}, {0.0, 0.0}, {1.0, 0.0}) == infinity);
}

TEST_CASE("gap is the distance to the nearest of many points on the edges") {
  std::mt19937 random(29);
  std::uniform_real_distribution<double> even(0.0, 1.0);
  int wrong = 0;
  int inside = 0;
  constexpr int points = 3600;
  for (int i = 0; i < 200; ++i) {
    World world;
    for (int k = 0; k < 5; ++k) {
      world.add(10.0 * even(random), 10.0 * even(random), 0.1 + even(random));
    }
    double const x = 10.0 * even(random), y = 10.0 * even(random);
    double least = infinity;  // to the edges, from outside; the deepest from inside
    for (auto const& d : world.discs) {
      bool const in = std::hypot(x - d.disc.centre.x(), y - d.disc.centre.y()) < d.disc.radius;
      double to_edge = infinity;
      for (int k = 0; k < points; ++k) {
        double const angle = 2.0 * std::numbers::pi * k / points;
        to_edge = std::min(to_edge, std::hypot(d.disc.centre.x() + d.disc.radius * std::cos(angle) - x,
                                               d.disc.centre.y() + d.disc.radius * std::sin(angle) - y));
      }
      least = std::min(least, in ? -to_edge : to_edge);
    }
    // The nearest of the points is off the edge's own nearest by up to half their spacing, 0.001 m.
    wrong += std::abs(world.gap({x, y}) - least) < 0.001 ? 0 : 1;
    inside += least < 0.0 ? 1 : 0;
  }
  CHECK(wrong == 0);
  CHECK(inside > 5);
}

TEST_CASE("an empty world has no gap and shows nothing") {
  World const world;
  std::vector<Disc<double>> near(3);
  CHECK(world.gap({0.0, 0.0}) == infinity);
  world.within({0.0, 0.0}, 100.0, 0.0, near);
  CHECK(near.empty());
}

// Uniform motion: position = start + velocity * time.
TEST_CASE("a moving disc is where its velocity took it, for gaps, looks and rays") {
  World world;
  world.add(10.0, 0.0, 0.5, {-1.0, 0.5});
  CHECK(world.gap({0.0, 0.0}) == doctest::Approx(9.5));
  CHECK(world.gap({0.0, 0.0}, 4.0) == doctest::Approx(std::hypot(6.0, 2.0) - 0.5));
  CHECK(world.gap({4.0, 3.0}, 6.0) == doctest::Approx(-0.5));
  std::vector<Disc<double>> near;
  world.within({0.0, 0.0}, 6.0, 0.0, near);
  CHECK(near.empty());
  world.within({0.0, 0.0}, 6.0, 4.0, near);
  REQUIRE(near.size() == 1);
  CHECK(near[0].centre.x() == doctest::Approx(6.0));
  CHECK(near[0].centre.y() == doctest::Approx(2.0));
  CHECK(near[0].radius == 0.5);
  CHECK(cast_ray(near, {0.0, 2.0}, {1.0, 0.0}) == doctest::Approx(5.5));
}

TEST_CASE("within gives the discs that some point of lies within reach, and no others") {
  std::mt19937 random(31);
  std::uniform_real_distribution<double> even(-5.0, 5.0);
  World world;
  for (int k = 0; k < 300; ++k) {
    world.add(even(random), even(random), 0.1 + 0.05 * std::abs(even(random)));
  }
  std::vector<Disc<double>> near;
  for (double const reach : {0.0, 0.5, 2.0, 20.0}) {
    world.within({1.0, -1.0}, reach, 0.0, near);
    auto const expected = std::count_if(world.discs.begin(), world.discs.end(), [reach](auto const& d) {
      return std::hypot(d.disc.centre.x() - 1.0, d.disc.centre.y() + 1.0) - d.disc.radius <= reach;
    });
    CHECK(static_cast<long>(near.size()) == static_cast<long>(expected));
  }
}
