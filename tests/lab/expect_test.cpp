// The expectations that users' own tests are written with, and the scenes that they make small.
#include <algorithm>
#include <cstddef>
#include <numbers>
#include <string>

#include <doctest/doctest.h>

#include "wend/lab/expect.hpp"
#include "wend/wend.hpp"

namespace {

using wend::lab::Ending;
using wend::lab::Expectation;
using wend::lab::Run;
using wend::lab::Scene;
using wend::lab::simulate;
using wend::lab::Trials;
using wend::lab::Trip;
using wend::lab::Vehicle;
using wend::lab::World;

constexpr auto careful =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{}, wend::toward_goal{});
constexpr wend::Loop<decltype(careful)> passing{.policy = careful};
constexpr wend::Loop<wend::toward_goal> blunt{.policy = {}};
constexpr auto hard =
    wend::guarded(wend::below(wend::clearance, 0.35F, 0.35F), wend::away_from_discs{}, wend::toward_goal{});
constexpr wend::Loop<decltype(hard)> switching{.policy = hard};

// A row of tubs beside the way, and one in it.
World tubs() {
  World world;
  for (int i = 0; i < 6; ++i) {
    world.add(0.8 * i, 2.0, 0.3);
    world.add(0.8 * i, -2.0, 0.3);
  }
  world.add(3.0, 0.02, 0.4);
  return world;
}
Trip const trip{{{0.0, 0.0}, {1.0, 0.0}}, {6.0, 0.0}, 25.0};

bool contains(std::string const& text, std::string const& part) { return text.find(part) != text.npos; }

}  // namespace

TEST_CASE("an expectation that holds says what was seen, and is true") {
  Expectation const arrives = expect_arrives(passing, Vehicle{}, tubs(), trip, {.runs = 5});
  CHECK(arrives);
  CHECK(arrives.why == "arrives, in 5 runs of seed 1");
  CHECK(expect_keeps_clear(passing, Vehicle{}, tubs(), trip, 0.05, {.runs = 5}));
}

TEST_CASE("a machine that does not arrive is shown in the one disc that stops it") {
  Expectation const stuck = expect_arrives(blunt, Vehicle{}, tubs(), trip, {.seed = 4, .runs = 2});
  CHECK_FALSE(stuck);
  CHECK(stuck.seed == 4);
  CHECK(stuck.run_number == 0);
  REQUIRE(stuck.scene.world.discs.size() == 1);
  CHECK(stuck.scene.world.discs[0].disc.centre.x() == 3.0);
  CHECK(stuck.scene.trip.start.position.x() > 1.5);  // nearer than it was
  CHECK(contains(stuck.why, "expected: arrives; run 0 of seed 4: ends by time out"));
  CHECK(contains(stuck.why, "1 of 13 discs"));
  CHECK(contains(stuck.why, "world.add(3.0000, 0.0200, 0.4000);\n"));
  // What is printed fails too, when it is run as printed.
  Run const again = simulate(blunt, Vehicle{}, stuck.scene.world, stuck.scene.trip, 4, 0);
  CHECK(again.ending == Ending::time_out);
}

TEST_CASE("a clearance that is not kept is told in centimetres") {
  Run const run = simulate(passing, Vehicle{}, tubs(), trip, 1, 0);
  double const claim = run.least_clearance + 0.01;
  Expectation const near = expect_keeps_clear(passing, Vehicle{}, tubs(), trip, claim, {.runs = 1});
  CHECK_FALSE(near);
  CHECK(contains(near.why, "comes as near as " + wend::lab::detail::fixed(100.0 * run.least_clearance, 2) + " cm"));
  Run const shrunk = simulate(passing, Vehicle{}, near.scene.world, near.scene.trip, 1, 0);
  CHECK(shrunk.least_clearance <= claim);
  CHECK(near.scene.world.discs.size() == 1);
}

TEST_CASE("chatter of a hard switch is found, and none where thresholds lie apart") {
  Vehicle noisy;
  noisy.position_noise = 0.02;
  CHECK_FALSE(expect_no_chatter(switching, noisy, tubs(), trip, 0.2, {.runs = 2, .shrink = false}));
  CHECK(expect_no_chatter(passing, Vehicle{}, tubs(), trip, 0.2, {.runs = 2}));
}

TEST_CASE("a run is the same as its record, or the first row that is not is shown") {
  std::string const recorded = wend::lab::trace(simulate(passing, Vehicle{}, tubs(), trip, 9, 3, true));
  CHECK(expect_same_as(recorded, passing, Vehicle{}, tubs(), trip, 9, 3));

  std::string changed = recorded;
  std::size_t third = 0;
  for (int i = 0; i < 2; ++i) {
    third = changed.find('\n', third) + 1;
  }
  changed[third + 3] = changed[third + 3] == '9' ? '8' : '9';
  Expectation const other = expect_same_as(changed, passing, Vehicle{}, tubs(), trip, 9, 3);
  CHECK_FALSE(other);
  CHECK(contains(other.why, "line 3: recorded '"));

  std::string const shorter = recorded.substr(0, recorded.rfind('\n', recorded.size() - 2) + 1);
  CHECK_FALSE(expect_same_as(shorter, passing, Vehicle{}, tubs(), trip, 9, 3));
  CHECK_FALSE(expect_same_as("time_s\n", passing, Vehicle{}, tubs(), trip, 9, 3));
  CHECK(contains(expect_same_as("", passing, Vehicle{}, tubs(), trip, 9, 3).why, "line 1: expected the names"));
}

TEST_CASE("shrinking needs no more than the runs it is given, and keeps a scene that cannot be smaller") {
  // Fails whenever both marked discs are there.
  World world;
  for (int i = 0; i < 40; ++i) {
    world.add(10.0 + i, 5.0, 0.1);
  }
  auto const run = [](Scene const&) { return Run{}; };
  int judged = 0;
  Scene current{world, trip};
  auto const drive = [&](Scene const& scene) {
    current = scene;
    return run(scene);
  };
  auto const has = [&](double x) {
    return std::any_of(current.world.discs.begin(), current.world.discs.end(),
                       [x](auto const& d) { return d.disc.centre.x() == x; });
  };
  Scene const small = wend::lab::shrunk(Scene{world, trip}, 0.2, drive, [&](Run const&) {
    ++judged;
    return has(17.0) && has(42.0);
  });
  CHECK(small.world.discs.size() == 2);
  CHECK(judged < 120);
  CHECK(wend::lab::shrunk(small, 0.2, drive, [&](Run const&) { return has(17.0) && has(42.0); }).world.discs.size() ==
        2);
}
