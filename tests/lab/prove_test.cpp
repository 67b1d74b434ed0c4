// Tests of include/wend/lab/prove.hpp: what is proved holds in a million random ticks, and what does not hold is not.
#include "wend/lab/prove.hpp"

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <numbers>
#include <stdexcept>

#include <doctest/doctest.h>

#include "../../examples/policies.hpp"
#include "wend/lab/arc.hpp"
#include "wend/lab/random.hpp"
#include "wend/wend.hpp"

namespace {

namespace lab = wend::lab;

lab::World three_discs() {
  lab::World world;
  world.add(1.6, 1.2, 0.3);
  world.add(2.6, 2.6, 0.4);
  world.add(3.6, 1.4, 0.35);
  return world;
}

wend::Vec2<double> const goal{4.7, 2.0};
lab::Region const region{{0.0, 0.0}, {5.0, 4.0}};

// Straight at the nearest disc: away_from_discs with its sign flipped.
struct into_discs {
  template <wend::Number S, int N>
  constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return {-percept.away, percept.away_confidence};
  }
};

lab::ProofOptions with_error(double radius) {
  lab::ProofOptions options;
  options.error.radius = radius;
  return options;
}

// A drive with readings that are off by anything within the error, anew on each tick, and the latency of the plant:
// each command is taken up late and held for a period. Counts the ticks that began clear and did not stay clear.
template <typename Loop>
int broken_ticks(Loop const& loop, lab::Sampling const& sampling, lab::World const& world, double error,
                 double distance, int drives, int ticks) {
  int broken = 0;
  auto const radius = static_cast<double>(loop.robot_radius);
  for (std::uint32_t drive = 0; drive < static_cast<std::uint32_t>(drives); ++drive) {
    lab::Draws const draws(17, drive);
    wend::Disc<double> const& disc = world.discs[drive % world.discs.size()].disc;
    double const bearing = draws.between(-std::numbers::pi, std::numbers::pi, {0});
    double const heading = draws.between(-std::numbers::pi, std::numbers::pi, {1});
    double const away = disc.radius + radius + distance + 0.3 * draws.uniform({2}) * draws.uniform({3});
    wend::Pose<double> pose{disc.centre + away * wend::Vec2<double>{std::cos(bearing), std::sin(bearing)},
                            {std::cos(heading), std::sin(heading)}};
    wend::memory_t<Loop, float> memory;
    wend::BodyVelocity<double> before{};  // what the wheels still do
    for (std::uint32_t tick = 0; tick < static_cast<std::uint32_t>(ticks); ++tick) {
      wend::DiscSet<float, 8> seen;
      for (std::uint32_t i = 0; i < world.discs.size(); ++i) {
        wend::Disc<double> const& d = world.discs[i].disc;
        double const off = draws.between(-error, error, {4, tick, i});
        seen.add({d.centre.cast<float>(), static_cast<float>(std::max(0.0, d.radius + off))},
                 pose.position.cast<float>());
      }
      wend::Situation<float> const now{{pose.position.cast<float>(), pose.heading.cast<float>()},
                                       goal.cast<float>(),
                                       static_cast<float>(sampling.period)};
      wend::BodyVelocity<float> const body = loop.tick(now, seen, memory).body;
      wend::BodyVelocity<double> const next{static_cast<double>(body.speed), static_cast<double>(body.turn_rate)};
      wend::Pose<double> const bites = lab::along_arc(pose, before, sampling.latency);
      double least = 1e9;
      for (lab::WorldDisc const& d : world.discs) {
        least = std::min({least, lab::distance_to_arc(pose, before, sampling.latency, d.disc.centre) - d.disc.radius,
                          lab::distance_to_arc(bites, next, sampling.period, d.disc.centre) - d.disc.radius});
      }
      broken += world.gap(pose.position) - radius >= distance && least - radius < distance - 1e-9 ? 1 : 0;
      // To the next sample: the old command until the new one bites.
      pose = lab::along_arc(bites, next, sampling.period - sampling.latency);
      before = next;
    }
  }
  return broken;
}

template <typename Policy>
wend::Loop<Policy> loop_of(Policy const& policy) {
  return {.policy = policy};
}

}  // namespace

TEST_CASE("a loop whose margin is larger than the reading error is proved to keep clear, whatever its policy") {
  auto const check = [](auto const& policy) {
    auto const loop = loop_of(policy);
    auto const proof =
        lab::prove<8>(loop, lab::Sampling{}, three_discs(), goal, region, lab::KeepsClear{0.01}, with_error(0.02));
    CHECK(proof.verdict == lab::Verdict::proved);
    CHECK(proof.left.empty());
    CHECK(proof.left_share == 0.0);
    CHECK_FALSE(proof.counterexample.has_value());
    CHECK(proof.boxes > 1000);
  };
  check(policies::hard_switch);
  check(policies::two_thresholds);
  check(policies::blended);
  check(policies::composed);
  check(into_discs{});  // Pace alone keeps this one clear
}

TEST_CASE("a loop whose margin is smaller than the reading error is refuted by a tick that really comes too near") {
  auto const check = [](auto const& policy) {
    auto const loop = loop_of(policy);
    lab::World const world = three_discs();
    auto const proof =
        lab::prove<8>(loop, lab::Sampling{}, world, goal, region, lab::KeepsClear{0.01}, with_error(0.10));
    REQUIRE(proof.verdict == lab::Verdict::refuted);
    REQUIRE(proof.counterexample.has_value());
    auto const& example = *proof.counterexample;
    CHECK(world.gap(example.pose.position) - 0.2 >= 0.01 - 1e-7);  // 0.2F is not quite 0.2
    double const again = lab::replay_tick<8>(loop, lab::Sampling{}, world, goal, example);
    CHECK(again < 0.01);
    CHECK(again == example.distance);
    for (std::size_t i = 0; i < example.seen.size(); ++i) {  // the readings are ones that the error allows
      CHECK(std::abs(example.seen[i].radius - world.discs[i].disc.radius) <= 0.10 + 1e-12);
    }
  };
  check(wend::toward_goal{});
  check(policies::two_thresholds);
  check(into_discs{});
}

TEST_CASE("a brake that does not hold what Pace was told is refuted") {
  auto loop = loop_of(policies::two_thresholds);
  loop.pace.margin = -0.20F;
  auto const proof =
      lab::prove<8>(loop, lab::Sampling{}, three_discs(), goal, region, lab::KeepsClear{0.01}, with_error(0.0));
  CHECK(proof.verdict == lab::Verdict::refuted);
}

TEST_CASE("what is proved holds in a million random ticks with latency, and what is refuted breaks in some") {
  lab::World const world = three_discs();
  lab::Sampling const sampling{};
  auto const composed = loop_of(policies::composed);
  auto const flipped = loop_of(into_discs{});
  REQUIRE(lab::prove<8>(flipped, sampling, world, goal, region, lab::KeepsClear{0.01}, with_error(0.02)).verdict ==
          lab::Verdict::proved);
  CHECK(broken_ticks(composed, sampling, world, 0.02, 0.01, 2500, 200) == 0);
  CHECK(broken_ticks(flipped, sampling, world, 0.02, 0.01, 2500, 200) == 0);
  CHECK(broken_ticks(flipped, sampling, world, 0.10, 0.01, 300, 200) > 0);  // so the count can be other than 0
}

TEST_CASE("a policy by itself: a blend keeps a striding point clear, the same with its sign flipped does not") {
  lab::World const world = three_discs();
  lab::Stride const stride{0.03, 0.05};
  auto const away_when_near =
      wend::blend(wend::ramp(wend::clearance, 0.10F, 0.60F), wend::away_from_discs{}, wend::toward_goal{});
  auto const into_when_near = wend::blend(wend::ramp(wend::clearance, 0.10F, 0.60F), into_discs{}, wend::toward_goal{});
  auto const prove = [&](auto const& policy) {
    return lab::prove<8>(policy, stride, 0.2F, world, goal, region, lab::KeepsClear{0.02}, with_error(0.02));
  };
  CHECK(prove(away_when_near).verdict == lab::Verdict::proved);
  auto const flipped = prove(into_when_near);
  CHECK(flipped.verdict == lab::Verdict::refuted);
  REQUIRE(flipped.counterexample.has_value());
  CHECK(flipped.counterexample->distance < 0.02);
  CHECK(prove(wend::toward_goal{}).verdict == lab::Verdict::refuted);
  // At right angles the distance neither grows nor shrinks at first: true, but not to be had from boxes.
  CHECK(prove(wend::past_disc{}).verdict != lab::Verdict::refuted);
}

TEST_CASE("a user's own field, a lambda over any number, is proved like the library's") {
  constexpr auto leftwards = []<wend::Number S, int N>(wend::Percept<S, N> const& percept) noexcept {
    return wend::Course<S>{wend::left_of(percept.goal_direction), percept.goal_confidence};
  };
  auto const proof = lab::prove<8>(loop_of(leftwards), lab::Sampling{}, three_discs(), goal, region,
                                   lab::KeepsClear{0.01}, with_error(0.02));
  CHECK(proof.verdict == lab::Verdict::proved);
}

TEST_CASE("a spent budget leaves the rest undecided, and says how much that is") {
  lab::ProofOptions options = with_error(0.02);
  options.box_budget = 500;
  std::int64_t last = 0;
  options.progress = [&last](lab::SearchProgress progress) { last = progress.decided; };
  auto const proof = lab::prove<8>(loop_of(policies::composed), lab::Sampling{}, three_discs(), goal, region,
                                   lab::KeepsClear{0.01}, options);
  CHECK(proof.verdict == lab::Verdict::undecided);
  CHECK_FALSE(proof.left.empty());
  CHECK(proof.left_share > 0.0);
  CHECK(proof.left_share <= 1.0 + 1e-9);
  CHECK(proof.boxes >= 500);
  CHECK(proof.boxes < 700);
  CHECK(last > 0);
}

TEST_CASE("two threads come to the same verdict after the same boxes") {
  lab::ProofOptions options = with_error(0.02);
  auto const loop = loop_of(policies::composed);
  auto const alone = lab::prove<8>(loop, lab::Sampling{}, three_discs(), goal, region, lab::KeepsClear{0.01}, options);
  options.threads = 2;
  auto const together =
      lab::prove<8>(loop, lab::Sampling{}, three_discs(), goal, region, lab::KeepsClear{0.01}, options);
  CHECK(alone.verdict == lab::Verdict::proved);
  CHECK(together.verdict == lab::Verdict::proved);
  CHECK(together.boxes == alone.boxes);
}

TEST_CASE("an empty world is proved at once; one that moves, or is too full, is refused") {
  auto const loop = loop_of(policies::composed);
  CHECK(lab::prove<8>(loop, lab::Sampling{}, lab::World{}, goal, region, lab::KeepsClear{0.01}).verdict ==
        lab::Verdict::proved);
  lab::World moving;
  moving.add(1.0, 1.0, 0.2, {0.1, 0.0});
  CHECK_THROWS_AS(static_cast<void>(lab::prove<8>(loop, lab::Sampling{}, moving, goal, region, lab::KeepsClear{0.01})),
                  std::invalid_argument);
  CHECK_THROWS_AS(
      static_cast<void>(lab::prove<2>(loop, lab::Sampling{}, three_discs(), goal, region, lab::KeepsClear{0.01})),
      std::invalid_argument);
}
