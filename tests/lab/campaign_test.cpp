// Campaigns: the same rows whatever drives them, and the runs that simulation one at a time gives.
#include <algorithm>
#include <array>
#include <atomic>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <set>
#include <stdexcept>
#include <string>
#include <thread>
#include <vector>

#include <doctest/doctest.h>

#include "../../examples/policies.hpp"
#include "../../examples/cellar.hpp"
#include "../checked_build.hpp"
#include "wend/lab/campaign.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/tally.hpp"

namespace {

using namespace wend;
using lab::Ending;

constexpr std::uint64_t fewer = is_slow_build ? 50 : 1;  // that part of the runs

constexpr Loop<decltype(policies::composed)> loop{.policy = policies::composed};

// Everything at once that chance decides.
lab::Vehicle troubled() {
  lab::Vehicle v = cellar::cart();
  v.latency = 0.08;
  v.disc_noise = 0.02;
  v.radius_noise = 0.02;
  v.disc_dropout = 0.05;
  v.slip = 0.05;
  v.wheel_spread = 0.03;
  v.track_spread = 0.03;
  return v;
}

lab::Scenes in(std::vector<lab::World> worlds, lab::TripBounds const& bounds) {
  return {
      std::move(worlds),
      [bounds](lab::Ground const& ground, lab::Draws const& draws) { return lab::drawn_trip(ground, bounds, draws); },
      {}};
}

lab::Scenes in_cellar() { return in({cellar::world()}, {cellar::region, 0.4, 4.0, 60.0}); }

// Three worlds of different sizes, one of them empty.
lab::Scenes in_three() {
  lab::World few;
  few.add(3.0, 3.0, 0.5);
  few.add(7.0, 5.0, 0.8);
  return in({cellar::world(), few, lab::World{}}, {cellar::region, 0.4, 2.0, 40.0});
}

template <int Lanes>
std::vector<lab::RunRow> rows_of(lab::Scenes const& scenes, std::uint64_t runs, int threads = 1,
                                 std::uint64_t first = 0) {
  lab::CampaignOptions options;
  options.threads = threads;
  options.first = first;
  return lab::campaign<Lanes>(loop, troubled(), scenes, runs, 5, options).rows;
}

bool close(double a, double b, double most) { return a == b || std::abs(a - b) <= most; }

}  // namespace

TEST_CASE("one machine, lanes, threads and parts give the same rows, bit for bit") {
  for (lab::Scenes const& scenes : {in_cellar(), in_three()}) {
    std::vector<lab::RunRow> const alone = rows_of<1>(scenes, 150);
    REQUIRE(alone.size() == 150);
    CHECK(rows_of<lab::native_lanes>(scenes, 150) == alone);
    CHECK(rows_of<16>(scenes, 150) == alone);
    CHECK(rows_of<lab::native_lanes>(scenes, 150, 2) == alone);
    CHECK(rows_of<1>(scenes, 150, 3) == alone);
    CHECK(rows_of<16>(scenes, 5) == std::vector<lab::RunRow>(alone.begin(), alone.begin() + 5));
    std::vector<lab::RunRow> parts;
    for (std::uint64_t first = 0; first < 150; first += 30) {
      std::vector<lab::RunRow> const part = rows_of<lab::native_lanes>(scenes, 30, 1, first);
      parts.insert(parts.end(), part.begin(), part.end());
    }
    CHECK(parts == alone);
    std::set<double> times;
    std::set<std::uint64_t> worlds;
    for (lab::RunRow const& row : alone) {
      times.insert(row.time);
      worlds.insert(row.world);
    }
    CHECK(times.size() > 140);  // they are runs of their own
    CHECK(worlds.size() == scenes.worlds.size());
  }
}

TEST_CASE("another seed gives other runs") {
  lab::Scenes const scenes = in_cellar();
  auto const a = lab::campaign(loop, troubled(), scenes, 10, 5).rows;
  auto const b = lab::campaign(loop, troubled(), scenes, 10, 6).rows;
  for (std::size_t i = 0; i < a.size(); ++i) {
    CHECK(a[i].time != b[i].time);
    CHECK(a[i].start.position != b[i].start.position);
  }
}

TEST_CASE("a run driven again alone has the bits of its row, and ticks that fit it") {
  lab::Scenes const scenes = in_three();
  std::vector<lab::RunRow> const rows = rows_of<lab::native_lanes>(scenes, 40);
  for (std::uint64_t const run : {0U, 7U, 39U}) {
    CAPTURE(run);
    lab::Replay const replay = lab::replay_run(loop, troubled(), scenes, run, 5);
    lab::RunRow const& row = rows[run];
    CHECK(replay.row == row);
    REQUIRE_FALSE(replay.run.ticks.empty());
    CHECK(replay.run.ticks.front().pose.position.cast<float>() == row.start.position.cast<float>());
    CHECK(replay.run.ticks.back().status == row.last_status);
    CHECK(replay.run.least_clearance == row.least_clearance);
    int switches = 0;
    for (std::size_t i = 1; i < replay.run.ticks.size(); ++i) {
      lab::Tick const& tick = replay.run.ticks[i];
      switches += tick.modes != replay.run.ticks[i - 1].modes ? 1 : 0;
      CHECK(tick.clearance >= row.least_clearance);
      CHECK(tick.time > replay.run.ticks[i - 1].time);
    }
    CHECK(switches == row.switches);
    if (row.ending == Ending::arrived) {
      double const left = (replay.run.ticks.back().pose.position - row.goal).norm();
      CHECK(left <= static_cast<double>(loop.arrive_within) + 0.06);  // less than it believes, by the noise of its pose
    }
  }
}

// `simulate` has a plant of its own, in double precision with exact arcs, and another way of telling discs. Without
// noise both must give the same run, but for the rounding of a contact or an arrival to a tick.
TEST_CASE("without noise a campaign's runs are those of simulate") {
  lab::Scenes const scenes = in_cellar();
  lab::Vehicle vehicle;
  vehicle.sight = 100.0;  // told all discs
  lab::CampaignOptions options;
  options.finest = 0.005;
  constexpr std::uint64_t runs = 60;
  auto const rows = lab::campaign(loop, vehicle, scenes, runs, 2, options).rows;
  int apart = 0;
  double most_over = 0.0;
  double most_under = 0.0;
  for (lab::RunRow const& row : rows) {
    CAPTURE(row.run);
    lab::Trip const trip{row.start, row.goal, 60.0};
    lab::Run const run = lab::simulate(loop, vehicle, cellar::world(), trip, 2, row.run);
    CHECK(row.ending == run.ending);
    CHECK(row.straight_length == run.straight_length);
    bool const same = close(row.time, run.time, 0.0501) && close(row.path_length, run.path_length, 0.03) &&
                      row.switches == run.switches && close(row.least_clearance, run.least_clearance, 2e-3);
    apart += same ? 0 : 1;
    if (same) {
      most_over = std::max(most_over, row.least_clearance - run.least_clearance);
      most_under = std::max(most_under, run.least_clearance - row.least_clearance);
    }
  }
  MESSAGE("of ", runs, " runs ", apart, " went apart; of the others the clearance is at most ", most_over,
          " m over and ", most_under, " m under");
  CHECK(apart <= 3);  // a guard that switches one tick later for a rounding may lead another way round a disc
  CHECK(most_over < 1e-3);
}

// With all errors the draws are others, but their distributions are the same: so the means agree. The bands are four
// standard errors of the difference of paired runs, which chance leaves once in 16 000 times.
TEST_CASE("with every error a campaign's runs are on average those of simulate") {
  lab::Scenes const scenes = in_cellar();
  constexpr std::uint64_t runs = 400 / fewer;
  auto const rows = rows_of<lab::native_lanes>(scenes, runs, 2);
  struct Sums {
    double sum = 0.0;
    double squares = 0.0;

    void add(double x) {
      sum += x;
      squares += x * x;
    }
    [[nodiscard]] double errors(double n) const {  // that the mean is off 0
      double const mean = sum / n;
      return std::abs(mean) / std::sqrt((squares / n - mean * mean) / (n - 1.0));
    }
  };
  Sums time, way, clear;
  double n = 0.0;
  for (lab::RunRow const& row : rows) {
    lab::Run const run = lab::simulate(loop, troubled(), cellar::world(), {row.start, row.goal, 60.0}, 5, row.run);
    if (run.ending != Ending::arrived || row.ending != Ending::arrived) {
      continue;
    }
    n += 1.0;
    time.add(row.time - run.time);
    way.add(row.path_length - run.path_length);
    clear.add(row.least_clearance - run.least_clearance);
  }
  MESSAGE("of ", n, " runs, lanes less simulate: ", time.sum / n, " s, ", way.sum / n, " m, clearance ", clear.sum / n,
          " m");
  CHECK(n > 0.9 * static_cast<double>(runs));
  if (n > 20.0) {
    CHECK(time.errors(n) < 4.0);
    CHECK(way.errors(n) < 4.0);
    CHECK(clear.errors(n) < 4.0);
  }
}

TEST_CASE("contacts are found between ticks, and the machine need not be told of what it touches") {
  // Nothing is ever told: it drives straight into the disc.
  lab::Vehicle blind;
  blind.disc_dropout = 1.0;
  lab::World world;
  world.add(5.0, 0.0, 0.4);
  lab::Scenes scenes{
      {world},
      [](lab::Ground const&, lab::Draws const&) { return lab::Trip{{{0.0, 0.0}, {1.0, 0.0}}, {10.0, 0.0}, 60.0}; },
      {}};
  lab::RunRow const row = lab::campaign(loop, blind, scenes, 1, 1).rows.at(0);
  CHECK(row.ending == Ending::contact);
  CHECK(row.least_clearance <= 0.0);
  CHECK(row.least_clearance >= -0.6 * 0.05 - 1e-3);  // top speed and one tick
  CHECK(row.path_length == doctest::Approx(5.0 - 0.4 - 0.2).epsilon(0.01));
  // A thin post, thinner than the way of a tick, at the edge of the body's track: grazed between two ticks.
  lab::World post;
  post.add(5.013, 0.1999, 0.001);
  scenes.worlds = {post};
  lab::RunRow const grazed = lab::campaign(loop, blind, scenes, 1, 1).rows.at(0);
  CHECK(grazed.ending == Ending::contact);
  // One that stands where the machine starts is touched at once.
  lab::World on_it;
  on_it.add(0.1, 0.0, 0.2);
  scenes.worlds = {on_it};
  lab::RunRow const at_once = lab::campaign(loop, blind, scenes, 1, 1).rows.at(0);
  CHECK(at_once.ending == Ending::contact);
  CHECK(at_once.time == 0.0);
  CHECK(at_once.least_clearance < 0.0);
}

TEST_CASE("in an empty world every run arrives, at an infinite clearance") {
  for (lab::RunRow const& row :
       lab::campaign(loop, troubled(), in({lab::World{}}, {cellar::region, 0.4, 2.0, 60.0}), 30, 1).rows) {
    CHECK(row.ending == Ending::arrived);
    CHECK(row.least_clearance == std::numeric_limits<double>::infinity());
  }
}

TEST_CASE("a disc that is far out of sight counts for the clearance") {
  lab::World world;
  world.add(0.0, 30.0, 1.0);
  lab::Scenes const scenes{
      {world},
      [](lab::Ground const&, lab::Draws const&) { return lab::Trip{{{0.0, 0.0}, {1.0, 0.0}}, {3.0, 0.0}, 60.0}; },
      {}};
  lab::RunRow const row = lab::campaign(loop, lab::Vehicle{}, scenes, 1, 1).rows.at(0);
  CHECK(row.ending == Ending::arrived);
  CHECK(row.least_clearance == doctest::Approx(30.0 - 1.0 - 0.2).epsilon(1e-5));
}

TEST_CASE("a loop with a ranger, and a world that moves, are driven by simulate") {
  constexpr Loop<decltype(policies::composed), Ring<180>> seeing{.policy = policies::composed, .sensing = cellar::ring};
  lab::Scenes const still = in_cellar();
  lab::CampaignOptions options;
  options.threads = 2;
  std::vector<lab::RunRow> const rows = lab::campaign(seeing, cellar::cart(), still, 6, 4, options).rows;
  CHECK(lab::campaign(seeing, cellar::cart(), still, 6, 4).rows == rows);
  lab::Run const run =
      lab::simulate(seeing, cellar::cart(), cellar::world(), {rows[3].start, rows[3].goal, 60.0}, 4, 3);
  CHECK(rows[3].time == run.time);
  CHECK(rows[3].least_clearance == run.least_clearance);
  CHECK(lab::replay_run(seeing, cellar::cart(), still, 3, 4).row == rows[3]);

  lab::World world = cellar::world();
  world.add(1.0, 1.0, 0.2, {0.1, 0.05});
  lab::Scenes const mixed = in({cellar::world(), world}, {cellar::region, 0.4, 4.0, 60.0});
  std::vector<lab::RunRow> const moved = rows_of<lab::native_lanes>(mixed, 30);
  CHECK(rows_of<1>(mixed, 30, 2) == moved);
  auto const one = std::find_if(moved.begin(), moved.end(), [](auto const& r) { return r.world == 1; });
  REQUIRE(one != moved.end());
  lab::Run const moving = lab::simulate(loop, troubled(), world, {one->start, one->goal, 60.0}, 5, one->run);
  CHECK(one->time == moving.time);
  CHECK(lab::replay_run(loop, troubled(), mixed, one->run, 5).row == *one);
}

TEST_CASE("each run may have a world of its own") {
  lab::Scenes const made{{}, {}, [](lab::Draws const& draws) {
                           lab::Scene scene{{}, {{{0.0, 0.0}, {1.0, 0.0}}, {8.0, 0.0}, 60.0}};
                           auto const count = static_cast<std::uint32_t>(draws.between(0.0, 40.0, {1}));
                           for (std::uint32_t i = 0; i < count; ++i) {
                             scene.world.add(draws.between(1.0, 7.0, {2, i}), draws.between(-6.0, 6.0, {3, i}), 0.15);
                           }
                           return scene;
                         }};
  std::vector<lab::RunRow> const rows = rows_of<lab::native_lanes>(made, 60, 2);
  CHECK(rows == rows_of<1>(made, 60));
  CHECK(rows[11].world == 11);
  CHECK(lab::replay_run(loop, troubled(), made, 11, 5).row == rows[11]);
}

TEST_CASE("who stops a campaign gets the rows so far, the same as ever") {
  lab::Scenes const scenes = in_cellar();
  std::vector<lab::RunRow> const all = rows_of<lab::native_lanes>(scenes, 400);
  std::atomic<bool> stop{false};
  lab::CampaignOptions options;
  options.threads = 2;
  options.stop = &stop;
  std::uint64_t seen = 0;
  options.progress = [&](std::uint64_t done, std::uint64_t of) {
    CHECK(of == 400);
    CHECK(done > seen);
    seen = done;
    stop = stop || done > 30;
  };
  lab::Campaign const part = lab::campaign(loop, troubled(), scenes, 400, 5, options);
  CHECK_FALSE(part.complete);
  CHECK(part.rows.size() > 30);
  CHECK(part.rows.size() < 400);
  for (lab::RunRow const& row : part.rows) {
    CHECK(row == all[row.run]);
  }
  CHECK(std::is_sorted(part.rows.begin(), part.rows.end(), [](auto const& a, auto const& b) { return a.run < b.run; }));
}

TEST_CASE("progress ends with all runs done") {
  std::uint64_t last = 0;
  lab::CampaignOptions options;
  options.threads = 2;
  options.progress = [&last](std::uint64_t done, std::uint64_t) { last = done; };
  CHECK(lab::campaign(loop, troubled(), in_cellar(), 37, 5, options).complete);
  CHECK(last == 37);
}

TEST_CASE("what goes wrong in the scenes comes out of the campaign") {
  auto const throws = [](lab::Scenes const& scenes) {
    try {
      lab::CampaignOptions options;
      options.threads = 2;
      return lab::campaign(loop, lab::Vehicle{}, scenes, 20, 1, options).rows.empty();
    } catch (std::invalid_argument const&) {
      return true;
    }
  };
  CHECK(throws({}));
  CHECK(throws(in({cellar::world()}, {cellar::region, 4.0, 0.0, 60.0})));  // nowhere as clear as that
  CHECK(throws(in({cellar::world()}, {cellar::region, 0.4, 99.0, 60.0})));
  CHECK_FALSE(throws(in_cellar()));
}

TEST_CASE("no run gives no row") { CHECK(lab::campaign(loop, lab::Vehicle{}, in_cellar(), 0, 1).rows.empty()); }

// More discs near than are told: the nearest are, and clearance and contact know all of them.
TEST_CASE("where more discs are near than are told, clearance still is that of all") {
  lab::World dense;
  lab::Draws const draws(31, 0);
  for (std::uint32_t i = 0; i < 400; ++i) {
    dense.add(draws.between(-10.0, 10.0, {1, i}), draws.between(-10.0, 10.0, {2, i}), 0.05);
  }
  lab::Scenes const scenes = in({dense}, {{{-9.0, -9.0}, {9.0, 9.0}}, 0.25, 1.0, 20.0});
  auto const rows = lab::campaign<lab::native_lanes, 3>(loop, troubled(), scenes, 60, 1).rows;
  CHECK(rows == lab::campaign<1, 3>(loop, troubled(), scenes, 60, 1).rows);
  int wrong = 0;
  for (lab::RunRow const& row : rows) {
    lab::Replay const replay = lab::replay_run<3>(loop, troubled(), scenes, row.run, 1);
    double least = std::numeric_limits<double>::infinity();
    for (lab::Tick const& tick : replay.run.ticks) {
      least = std::min(least, dense.gap(tick.pose.position) - troubled().radius);
    }
    // Not over what the ticks saw, and not under it by more than half the way of one.
    wrong += row.least_clearance <= least && row.least_clearance > least - 0.04 ? 0 : 1;
  }
  CHECK(wrong == 0);
}

TEST_CASE("a world of a hundred thousand discs is no slower to drive in than a part of it") {
  lab::World large;
  lab::Draws const draws(8, 0);
  for (std::uint32_t i = 0; i < 100000; ++i) {
    large.add(draws.between(0.0, 1300.0, {1, i}), draws.between(0.0, 1300.0, {2, i}), 0.15);
  }
  lab::TripBounds const bounds{{{600.0, 600.0}, {640.0, 640.0}}, 0.4, 20.0, 120.0};
  lab::World part;
  for (lab::WorldDisc const& d : large.discs) {
    if (std::abs(d.disc.centre.x() - 620.0) < 40.0 && std::abs(d.disc.centre.y() - 620.0) < 40.0) {
      part.discs.push_back(d);
    }
  }
  REQUIRE(part.discs.size() < 500);
  auto const of_large = rows_of<lab::native_lanes>(in({large}, bounds), 20);
  auto const of_part = rows_of<lab::native_lanes>(in({part}, bounds), 20);
  int arrived = 0;
  for (std::size_t i = 0; i < of_large.size(); ++i) {
    // The same surroundings; but for the noise, which is drawn by the number of the disc.
    CHECK(of_large[i].start.position == of_part[i].start.position);
    arrived += of_large[i].ending == Ending::arrived ? 1 : 0;
  }
  CHECK(arrived >= 18);
}

// The aim of it all: a hundred thousand runs of the demo scene.
TEST_CASE("a hundred thousand runs in the cellar end without contact, and 99.5 % arrive") {
  constexpr std::uint64_t runs = 100000 / fewer;
  lab::CampaignOptions options;
  options.threads = static_cast<int>(std::max(1U, std::thread::hardware_concurrency()));
  lab::Scenes const scenes = in({cellar::world()}, {cellar::region, 0.4, 6.0, 180.0});
  std::vector<lab::RunRow> const rows = lab::campaign(loop, cellar::cart(), scenes, runs, 1, options).rows;
  lab::Tally const t = lab::tally(rows);
  std::array<int, 8> why{};
  for (lab::RunRow const& row : rows) {
    why[static_cast<std::size_t>(row.last_status)] += row.ending == Ending::time_out ? 1 : 0;
  }
  MESSAGE("arrived ", t.arrived, " of ", t.runs, ", contacts ", t.contacts, ", least clearance ", t.clearance.least,
          " m, median time ", t.time.median, " s, least dwell ", t.least_dwell, " s; of the others ", why[5],
          " blocked, ", why[6], " stuck");
  CHECK(t.runs == runs);
  CHECK(t.contacts == 0);
  // All but 2 in 1000 did when this was written: between near pillars this policy may go round in circles.
  CHECK(t.arrived >= runs * 995 / 1000);
  CHECK(static_cast<std::uint64_t>(why[0]) <=
        1 + runs / 10000);  // who falls short says why, unless just under way again
}

TEST_CASE("ten thousand crossings of the spruces end without contact, and nearly all arrive") {
  lab::World world;
  lab::Table const table = lab::parse_table("spruces.csv", lab::read_whole(WEND_TEST_DATA "/spruces.csv"),
                                            [](std::string const&) { return false; });
  for (auto const& row : table.rows) {
    world.add(row[table.column("x")], row[table.column("y")], 0.5 * row[table.column("diameter")]);
  }
  REQUIRE(world.discs.size() == 134);
  constexpr std::uint64_t runs = 10000 / fewer;
  // From the west side of the plot, 56 m by 38 m, to the east side.
  lab::Scenes const scenes{{world},
                           [](lab::Ground const& ground, lab::Draws const& draws) {
                             auto const clear = [&](double x, std::uint32_t purpose) -> Vec2<double> {
                               std::uint32_t i = 0;
                               while (true) {
                                 Vec2<double> const point{x, draws.between(1.0, 37.0, {purpose, i++})};
                                 if (ground.gap(point) > 0.8) {
                                   return point;
                                 }
                               }
                             };
                             double const angle = draws.between(-std::numbers::pi, std::numbers::pi, {3});
                             return lab::Trip{
                                 {clear(0.5, 1), {std::cos(angle), std::sin(angle)}}, clear(55.5, 2), 300.0};
                           },
                           {}};
  lab::Vehicle vehicle = cellar::cart();
  vehicle.period = 0.1;
  lab::CampaignOptions options;
  options.threads = static_cast<int>(std::max(1U, std::thread::hardware_concurrency()));
  lab::Tally const t = lab::tally(lab::campaign(loop, vehicle, scenes, runs, 1, options).rows);
  MESSAGE("arrived ", t.arrived, " of ", t.runs, ", contacts ", t.contacts, ", least clearance ", t.clearance.least,
          " m, median time ", t.time.median, " s, switches ", t.switches.median);
  CHECK(t.contacts == 0);
  CHECK(t.arrived >= runs * 999 / 1000);
  CHECK(t.switches.median >= 1.0);  // the stand is dense enough for the test to mean something
}
