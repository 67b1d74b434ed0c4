// Followed: steps after a ranger, in a loop and on their own; the ranger sees a world by ray casting.
#include <array>
#include <cmath>
#include <cstdint>
#include <limits>
#include <numbers>
#include <span>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "wend/fields/toward_goal.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/world.hpp"
#include "wend/loop.hpp"
#include "wend/sensing/calibration.hpp"
#include "wend/sensing/followed.hpp"
#include "wend/sensing/keep_in_mind.hpp"
#include "wend/sensing/ring.hpp"
#include "wend/sensing/tracker.hpp"
#include "wend/watch/log.hpp"

using wend::Loop;
using wend::MovingDiscSet;
using wend::Pose;
using wend::Ring;
using wend::Tracker;
using wend::Vec2;

namespace {

constexpr int beams = 180;
constexpr Ring<beams> ring{wend::even_bearings<beams>(0.0, 2.0 * std::numbers::pi / beams), 0.05F, 5.0F, 0.01F};
constexpr auto tracking = wend::followed_by(ring, Tracker<16>{});
constexpr auto minding = wend::followed_by(tracking, wend::KeepInMind<8>{});
using Tracking = std::remove_const_t<decltype(tracking)>;
using Minding = std::remove_const_t<decltype(minding)>;

constexpr Loop<wend::toward_goal, Ring<beams>> plain{.policy = {}, .sensing = ring};
constexpr Loop<wend::toward_goal, Tracking> tracked{.policy = {}, .sensing = tracking};

template <typename L>
using MemoryOf = wend::memory_t<std::remove_cvref_t<L>, float>;

// Where nothing is remembered, sensing takes no byte of a loop's memory; where something is, all of it is there.
static_assert(sizeof(MemoryOf<decltype(plain)>) == 2 * sizeof(float));
static_assert(sizeof(MemoryOf<decltype(tracked)>) == 2 * sizeof(float) + sizeof(Tracker<16>::Memory<float>));
static_assert(std::is_trivially_destructible_v<MemoryOf<decltype(tracked)>>);
static_assert(sizeof(wend::Track<float>) == 36, "16 tracks are 576 bytes");

std::array<float, beams> readings(wend::lab::World const& world, Pose<double> const& pose, double time,
                                  wend::lab::Draws const& draws, std::uint32_t tick) {
  std::array<float, beams> ranges;
  std::vector<wend::Disc<double>> near;
  world.within(pose.position, 5.0, time, near);
  for (std::uint32_t k = 0; k < beams; ++k) {
    double const angle = 2.0 * std::numbers::pi * k / beams;
    Vec2<double> const beam = wend::turned_out_of(pose.heading, Vec2<double>(std::cos(angle), std::sin(angle)));
    double const range = wend::lab::cast_ray(near, pose.position, beam);
    ranges[k] = range > 5.0 ? std::numeric_limits<float>::infinity()
                            : static_cast<float>(range + 0.01 * draws.normal({tick, k}));
  }
  return ranges;
}

}  // namespace

TEST_CASE("a ranger on a machine that drives and turns finds how fast a crosser moves, and that posts stand still") {
  double worst = 0.0, squares = 0.0;
  int seen = 0, posts_told = 0, posts = 0;
  for (std::uint32_t run = 0; run < 5; ++run) {
    wend::lab::Draws const draws(21, run);
    wend::lab::World world;
    Vec2<double> const velocity{-0.2, 0.7 - 0.3 * run};
    world.add(2.5, -1.0 + 0.5 * run, 0.25, velocity);
    world.add(-1.5, 1.0, 0.2);
    world.add(-2.0, -2.0, 0.2);
    Tracking::Memory<float> memory;
    for (std::uint32_t tick = 0; tick < 60; ++tick) {
      double const time = 0.05 * tick;
      double const theta = 0.6 * time;
      Pose<double> const pose{{0.3 * time, 0.0}, {std::cos(theta), std::sin(theta)}};
      auto const ranges = readings(world, pose, time, draws, tick);
      MovingDiscSet<float, 16> discs;
      auto const count = tracking.discs(std::span<float const, beams>(ranges),
                                        Pose<float>{pose.position.cast<float>(), pose.heading.cast<float>()}, 0.05F,
                                        discs, memory);
      CHECK(count.alive() == beams);
      if (tick < 25) {
        continue;
      }
      Vec2<double> const crosser = wend::into_frame(pose, wend::lab::World::at(world.discs[0], time).centre);
      for (int i = 0; i < discs.size(); ++i) {
        Vec2<double> const told = discs.velocity(i).cast<double>();
        if ((discs[i].centre.cast<double>() - crosser).norm() < 0.3) {
          Vec2<double> const off = told - wend::turned_into(pose.heading, velocity);
          worst = std::max(worst, off.norm());
          squares += off.squaredNorm();
          ++seen;
        } else {
          posts_told += told.norm() > 0.0 ? 1 : 0;
          ++posts;
        }
      }
    }
  }
  MESSAGE("crosser: ", seen, " ticks, velocity off by ", std::sqrt(squares / seen), " m/s rms, ", worst,
          " at worst; posts told to move ", posts_told, " of ", posts);
  CHECK(seen > 150);
  CHECK(std::sqrt(squares / seen) < 0.15);
  CHECK(worst < 0.4);
  CHECK(posts_told < posts / 20);
}

TEST_CASE("a loop that tracks lets its pace know of what comes, and without trust learns nothing") {
  wend::lab::Draws const draws(22, 0);
  wend::lab::World world;
  world.add(2.4, 0.0, 0.25, {-0.8, 0.0});  // straight at the machine
  MemoryOf<decltype(plain)> of_plain;
  MemoryOf<decltype(tracked)> of_tracked;
  wend::Situation<float> now;
  now.goal = {8.0F, 0.0F};
  now.age = 0.02F;
  float plain_speed = 0.0F;
  float tracked_speed = 0.0F;
  for (std::uint32_t tick = 0; tick < 30; ++tick) {  // it stands where it is, to compare
    auto const ranges = readings(world, Pose<double>{}, 0.05 * tick, draws, tick);
    std::span<float const, beams> const given(ranges);
    plain_speed = plain.tick(now, given, of_plain).body.speed;
    tracked_speed = tracked.tick(now, given, of_tracked).body.speed;
  }
  CHECK(plain_speed > 0.5F);
  CHECK(tracked_speed < 0.8F * plain_speed);

  auto const before = of_tracked.sensing.step.tracks[0];
  CHECK(before.hits > 20);
  auto const ranges = readings(world, Pose<double>{}, 1.5, draws, 30);
  std::span<float const, beams> const given(ranges);
  auto const untouched = [&] {
    auto const& after = of_tracked.sensing.step.tracks[0];
    return after.hits == before.hits && after.misses == before.misses && after.disc.centre == before.disc.centre;
  };
  wend::Situation<float> late = now;
  late.age = 3.0F;
  CHECK(status_of(tracked.tick(late, given, of_tracked)) == wend::Status::stale);
  CHECK(untouched());
  wend::Situation<float> lost = now;
  lost.pose.heading = {0.0F, 0.0F};
  CHECK(status_of(tracked.tick(lost, given, of_tracked)) == wend::Status::blind);
  CHECK(untouched());
  CHECK(status_of(tracked.tick(now, given, of_tracked)) == wend::Status::ok);
  CHECK_FALSE(untouched());
}

TEST_CASE("dead beams make a loop that tracks blind too") {
  std::array<float, beams> dead{};
  MemoryOf<decltype(tracked)> memory;
  auto const command = tracked.tick(wend::Situation<float>{}, std::span<float const, beams>(dead), memory);
  CHECK(status_of(command) == wend::Status::blind);
  CHECK(command.wheels.left == 0.0F);
}

TEST_CASE("steps follow each other, in a simulation that drives there, and a log takes all they remember") {
  Loop<wend::toward_goal, Minding> const loop{.policy = {}, .sensing = minding};
  wend::lab::World world;
  world.add(2.0, 1.2, 0.25, {0.0, -0.8});
  world.add(1.0, -0.9, 0.2);
  auto const run = wend::lab::simulate(loop, wend::lab::Vehicle{}, world, {.start = {}, .goal = {4.0, 0.0}}, 5);
  CHECK(run.ending == wend::lab::Ending::arrived);

  using Log = wend::DecisionLog<Loop<wend::toward_goal, Minding>, wend::Readings<float, beams>, 2>;
  Log log;
  wend::memory_t<Loop<wend::toward_goal, Minding>, float> memory;
  wend::Readings<float, beams> seen{};
  seen.ranges.fill(2.0F);
  log.tick(loop, wend::Situation<float>{}, seen, memory);
  CHECK(log.size() == 1);
  // two floats of progress, 16 tracks of 8 floats and 2 counts, 8 discs of 6 floats
  static_assert(wend::packed_size<decltype(memory)> == 8 + 16 * (8 * 4 + 2) + 8 * 6 * 4);
}

TEST_CASE("a calibration goes before the ranger, and steps after it") {
  constexpr auto table = wend::calibration({{0.0F, 0.01F}, {1000.0F, 1.0F}, {5000.0F, 5.0F}});  // millimetres, nearly
  constexpr auto sensing = wend::followed_by(wend::calibrated(table, ring), Tracker<4>{});
  std::array<float, beams> counts;
  counts.fill(9000.0F);
  for (std::size_t k = 88; k < 93; ++k) {
    counts[k] = 2000.0F;
  }
  std::remove_const_t<decltype(sensing)>::Memory<float> memory;
  MovingDiscSet<float, 8> discs;
  auto const count = sensing.discs(std::span<float const, beams>(counts), Pose<float>{}, 0.05F, discs, memory);
  CHECK(count.echoes == 5);
  REQUIRE(discs.size() == 1);
  CHECK(std::abs(wend::gap(discs[0], Vec2<float>(0.0F, 0.0F)) - 2.0F) < 0.15F);
  CHECK(discs.velocity(0) == Vec2<float>(0.0F, 0.0F));
}
