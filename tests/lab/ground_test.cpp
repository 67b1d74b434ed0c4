// The index of a world against looking at every disc.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/ground.hpp"
#include "wend/lab/random.hpp"

namespace {

using namespace wend;

lab::World scattered(std::uint32_t count, double width, double height) {
  lab::Draws const draws(4, count);
  lab::World world;
  for (std::uint32_t i = 0; i < count; ++i) {
    world.add(draws.between(-0.5 * width, 0.5 * width, {1, i}), draws.between(0.0, height, {2, i}),
              draws.between(0.05, i % 50 == 0 ? 3.0 : 0.4, {3, i}));
  }
  return world;
}

// Every disc within reach, the slow way.
std::vector<lab::NearDisc> all_within(lab::World const& world, Vec2<double> const& point, double reach) {
  std::vector<lab::NearDisc> found;
  for (std::uint32_t i = 0; i < world.discs.size(); ++i) {
    double const gap = wend::gap(world.discs[i].disc, point);
    if (gap <= reach) {
      found.push_back({gap, i});
    }
  }
  std::sort(found.begin(), found.end());
  return found;
}

bool same(std::vector<lab::NearDisc> const& a, std::vector<lab::NearDisc> const& b) {
  return std::equal(a.begin(), a.end(), b.begin(), b.end(),
                    [](auto const& x, auto const& y) { return x.number == y.number && x.gap == y.gap; });
}

}  // namespace

TEST_CASE("the index finds what looking at every disc finds") {
  lab::Draws const draws(5, 0);
  std::uint32_t address = 0;
  for (auto const& world : {scattered(1, 1.0, 1.0), scattered(7, 20.0, 20.0), scattered(500, 60.0, 40.0),
                            scattered(300, 500.0, 0.0), scattered(200, 0.0, 0.0)}) {
    lab::Ground const ground(world);
    int wrong = 0;
    for (int i = 0; i < 300; ++i) {
      Vec2<double> const point{draws.between(-60.0, 60.0, {1, address}), draws.between(-40.0, 80.0, {2, address})};
      double const reach = draws.between(0.0, 9.0, {3, address});
      ++address;
      std::vector<lab::NearDisc> found;
      double const beyond = ground.nearest(point, reach, found);
      bool const far_one = found.size() >= 1 && found.front().gap > reach;
      // What it did not find is farther than it says; what it found is all there is up to there.
      wrong += same(found, all_within(world, point, std::min(beyond, 1e9))) ? 0 : 1;
      wrong += far_one || beyond >= reach ? 0 : 1;
      wrong += found.empty() ? 1 : 0;
      wrong += ground.gap(point) == world.gap(point) ? 0 : 1;
    }
    CHECK(wrong == 0);
  }
}

TEST_CASE("an empty world has nothing near") {
  lab::Ground const ground(lab::World{});
  std::vector<lab::NearDisc> found;
  CHECK(ground.nearest({1.0, 2.0}, 5.0, found) == std::numeric_limits<double>::infinity());
  CHECK(found.empty());
  CHECK(ground.gap({0.0, 0.0}) == std::numeric_limits<double>::infinity());
  CHECK_FALSE(ground.moving());
}

TEST_CASE("a disc that moves is noticed") {
  lab::World world = scattered(5, 10.0, 10.0);
  world.add(1.0, 1.0, 0.1, {0.0, 0.2});
  CHECK(lab::Ground(world).moving());
}
