// What a mishap may do to a run, and that it does nothing else.
#include <algorithm>
#include <cstddef>
#include <numbers>
#include <span>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/mishap.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/wend.hpp"

namespace {

using wend::Situation;
using wend::Status;
using wend::WheelRates;
using wend::lab::Ending;
using wend::lab::Mishap;
using wend::lab::Moment;
using wend::lab::Run;
using wend::lab::simulate;
using wend::lab::Trip;
using wend::lab::Vehicle;
using wend::lab::World;

constexpr wend::Ring<36> ring{.directions = wend::even_bearings<36>(0.0, std::numbers::pi / 18.0),
                              .min_range = 0.05F,
                              .max_range = 6.0F,
                              .noise = 0.01F};
constexpr wend::Loop<wend::toward_goal, wend::Ring<36>> seeing{.policy = {}, .sensing = ring};
constexpr wend::Loop<wend::toward_goal> told{.policy = {}};

World one_tub() {
  World world;
  world.add(6.0, 0.0, 0.5);
  return world;
}
Trip const trip{{{0.0, 0.0}, {1.0, 0.0}}, {4.0, 0.0}, 30.0};

// Runs with a mishap, all ticks kept.
template <typename Loop>
Run run_with(Loop const& loop, Mishap<float>& mishap, Vehicle const& vehicle = {}) {
  return simulate(loop, vehicle, one_tub(), trip, 1, 0, true, &mishap);
}

bool same_ticks(Run const& a, Run const& b) {
  bool same = a.ticks.size() == b.ticks.size() && a.ending == b.ending && a.time == b.time;
  for (std::size_t i = 0; same && i < a.ticks.size(); ++i) {
    same = a.ticks[i].pose.position == b.ticks[i].pose.position && a.ticks[i].wheels.left == b.ticks[i].wheels.left &&
           a.ticks[i].status == b.ticks[i].status;
  }
  return same;
}

}  // namespace

TEST_CASE("a mishap that overrides nothing changes nothing") {
  Mishap<float> none;
  Run const with = run_with(seeing, none);
  Run const without = simulate(seeing, Vehicle{}, one_tub(), trip, 1, 0, true);
  CHECK(with.ending == Ending::arrived);
  CHECK(same_ticks(with, without));
}

TEST_CASE("readings and situation that a mishap changes are what the loop decides on") {
  struct Blinded : Mishap<float> {
    void readings(Moment const& now, std::span<float> ranges) override {
      if (now.time >= 1.0) {
        std::fill(ranges.begin(), ranges.end(), 0.0F);
      }
    }
  } blinded;
  Run run = run_with(seeing, blinded);
  CHECK(run.ending == Ending::time_out);
  for (auto const& tick : run.ticks) {
    CHECK((tick.status == Status::blind) == (tick.time >= 1.0));
  }

  struct NewGoal : Mishap<float> {
    void situation(Moment const&, Situation<float>& now) override { now.goal = {0.0F, 2.0F}; }
  } new_goal;
  run = run_with(told, new_goal);
  CHECK(run.ending == Ending::arrived);
  CHECK((run.ticks.back().pose.position - wend::Vec2<double>(0.0, 2.0)).norm() < 0.2);
}

TEST_CASE("a late tick is told how late it is, and the wheels go on meanwhile") {
  struct Late : Mishap<float> {
    std::vector<float> told;
    double delay(Moment const& now) override { return now.tick == 20 ? 0.3 : 0.0; }
    void situation(Moment const&, Situation<float>& now) override { told.push_back(now.dt); }
  } late;
  Run const run = run_with(told, late);
  REQUIRE(run.ticks.size() > 22);
  CHECK(late.told[20] == doctest::Approx(0.05));
  CHECK(late.told[21] == doctest::Approx(0.35));
  CHECK(run.ticks[21].time - run.ticks[20].time == doctest::Approx(0.35));
  CHECK(run.ticks[21].pose.position.x() - run.ticks[20].pose.position.x() > 0.15);  // at nearly 0.6 m/s
}

TEST_CASE("a drive with a watchdog stops by itself when it is told nothing for too long") {
  struct Late : Mishap<float> {
    double delay(Moment const& now) override { return now.tick == 40 ? 3.0 : 0.0; }
  } late;
  Vehicle guarded;
  guarded.watchdog = 0.2;
  auto const way = [&late](Vehicle const& vehicle) {
    Run const run = run_with(told, late, vehicle);
    return run.ticks.at(41).pose.position.x() - run.ticks.at(40).pose.position.x();
  };
  // 0.6 m/s for the watchdog's time and the latency, and then the brakes: 0.6 * 0.25 + 0.6^2 / (2 * 2).
  CHECK(way(guarded) == doctest::Approx(0.6 * 0.25 + 0.09).epsilon(0.05));
  CHECK(way(Vehicle{}) > 1.0);
}

TEST_CASE("wheels may do something else than they are told") {
  struct Dead : Mishap<float> {
    void wheels(double, WheelRates<double>& rates) override { rates.left = 0.0; }
  } dead;
  Run const run = run_with(told, dead);
  CHECK(run.ending == Ending::time_out);
  // It can only circle round the wheel that stands still, half a track (0.15 m) to its left.
  for (auto const& tick : run.ticks) {
    CHECK((tick.pose.position - wend::Vec2<double>(0.0, 0.15)).norm() == doctest::Approx(0.15).epsilon(1e-6));
  }
}
