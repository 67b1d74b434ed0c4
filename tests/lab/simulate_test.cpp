// The simulation against what must hold of any drive: kinematics, speed bounds, geometry, and its own ticks.
#include <algorithm>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/csv.hpp"
#include "wend/lab/simulate.hpp"

#include "../../examples/policies.hpp"
#include "../../examples/cellar.hpp"

namespace {

using namespace wend;
using lab::Ending;
using lab::Run;
using lab::simulate;
using lab::Trip;
using lab::Vehicle;
using lab::World;

constexpr Ring<90> ring{.directions = even_bearings<90>(0.0, std::numbers::pi / 45.0),
                        .min_range = 0.05F,
                        .max_range = 6.0F,
                        .noise = 0.01F};

constexpr Loop<toward_goal, Ring<90>> to_goal{.policy = {}, .sensing = ring};

// One that never brakes for a disc.
constexpr Loop<toward_goal, Ring<90>> heedless{
    .policy = {}, .sensing = ring, .pace = {.top_speed = 0.6F, .reaction = 1e-3F, .braking = 1e6F, .margin = -100.0F}};

Vehicle exact() {
  Vehicle v;
  v.range_noise = 0.0;
  v.dropout = 0.0;
  return v;
}

Vehicle noisy() {
  Vehicle v;
  v.jitter = 0.2;
  v.range_noise = 0.02;
  v.dropout = 0.02;
  v.position_noise = 0.01;
  v.heading_noise = 0.01;
  return v;
}

Trip ahead(double metres, double limit = 60.0) { return {{{0.0, 0.0}, {1.0, 0.0}}, {metres, 0.0}, limit}; }

bool same(double a, double b) { return std::bit_cast<std::uint64_t>(a) == std::bit_cast<std::uint64_t>(b); }

bool same(Run const& a, Run const& b) {
  return a.ending == b.ending && a.last_status == b.last_status && same(a.time, b.time) &&
         same(a.path_length, b.path_length) && same(a.straight_length, b.straight_length) &&
         same(a.least_clearance, b.least_clearance) && a.switches == b.switches && same(a.least_dwell, b.least_dwell) &&
         a.ticks.size() == b.ticks.size() &&
         std::equal(a.ticks.begin(), a.ticks.end(), b.ticks.begin(), [](lab::Tick const& s, lab::Tick const& t) {
           return same(s.time, t.time) && same(s.pose.position.x(), t.pose.position.x()) &&
                  same(s.pose.position.y(), t.pose.position.y()) && same(s.pose.heading.x(), t.pose.heading.x()) &&
                  same(s.pose.heading.y(), t.pose.heading.y()) && same(s.clearance, t.clearance) &&
                  same(s.wheels.left, t.wheels.left) && same(s.wheels.right, t.wheels.right) &&
                  same(s.body.speed, t.body.speed) && same(s.body.turn_rate, t.body.turn_rate) && s.modes == t.modes &&
                  s.status == t.status;
         });
}

// The time of the first tick by which the body has moved.
double first_moved(Run const& run) {
  for (lab::Tick const& t : run.ticks) {
    if (t.pose.position.norm() > 0.0 || std::abs(t.pose.heading.y()) > 0.0) {
      return t.time;
    }
  }
  return std::numeric_limits<double>::infinity();
}

}  // namespace

TEST_CASE_TEMPLATE("the same arguments give the same run, tick for tick, and another seed or run another one", S, float,
                   double) {
  Loop<decltype(policies::composed), Ring<180>> const loop{.policy = policies::composed, .sensing = cellar::ring};
  World const world = cellar::world();
  Run const run = simulate<S>(loop, noisy(), world, cellar::trip(), 7, 3, true);
  REQUIRE(run.ticks.size() > 100);
  CHECK(same(run, simulate<S>(loop, noisy(), world, cellar::trip(), 7, 3, true)));
  Run const other_seed = simulate<S>(loop, noisy(), world, cellar::trip(), 8, 3, true);
  Run const other_run = simulate<S>(loop, noisy(), world, cellar::trip(), 7, 4, true);
  CHECK_FALSE(same(run, other_seed));
  CHECK_FALSE(same(run, other_run));
  CHECK_FALSE(same(other_seed, other_run));
  // Without keeping the ticks the run is the same, less the ticks.
  Run bare = simulate<S>(loop, noisy(), world, cellar::trip(), 7, 3);
  CHECK(bare.ticks.empty());
  bare.ticks = run.ticks;
  CHECK(same(bare, run));
}

// Kinematics: no faster than the top speed over the whole way; no slower than start-up, cruise, and slowing down allow.
TEST_CASE("a straight trip takes the time that top speed, acceleration and arrival radius leave it") {
  for (double const metres : {2.0, 6.0, 20.0}) {
    CAPTURE(metres);
    Vehicle const vehicle = exact();
    Run const run = simulate(to_goal, vehicle, World{}, ahead(metres), 1);
    REQUIRE(run.ending == Ending::arrived);
    CHECK(run.last_status == Status::arrived);
    Pace const pace{};
    double const top = static_cast<double>(pace.top_speed);
    double const radius = static_cast<double>(to_goal.arrive_within);
    double const cruise = (metres - radius) / top;
    CHECK(run.time >= cruise + 0.5 * top / vehicle.acceleration);  // less than half the start-up is lost for nothing
    // From where the pace falls below top speed, at worst the slowest of it: that at the arrival radius.
    double const braking = static_cast<double>(pace.braking);
    double const slowing = static_cast<double>(pace.reaction) * top + 0.5 * top * top / braking;
    double const slowest = static_cast<double>(pace.stoppable(to_goal.arrive_within));
    double const late = (slowing - radius) * (1.0 / slowest - 1.0 / top);
    CHECK(run.time <= cruise + top / vehicle.acceleration + late + vehicle.latency + 2.0 * vehicle.period);
    CHECK(run.straight_length == metres);
    CHECK(run.path_length >= metres - radius - 1e-6);
    CHECK(run.path_length <= metres);
    CHECK(run.least_clearance == std::numeric_limits<double>::infinity());
    CHECK(run.switches == 0);
  }
}

TEST_CASE("a policy that does not look where it goes touches the disc, and by no more than one step") {
  World world;
  world.add(2.0, 0.05, 0.3);
  Run const run = simulate(heedless, exact(), world, ahead(4.0), 1, 0, true);
  CHECK(run.ending == Ending::contact);
  CHECK(run.least_clearance <= 0.0);
  CHECK(run.least_clearance >= -0.6 * 0.005);  // top speed times the finest arc
  // When and where: radii 0.3 m and 0.2 m, 0.05 m abreast.
  double const way = 2.0 - std::sqrt(0.5 * 0.5 - 0.05 * 0.05);
  CHECK(run.path_length == doctest::Approx(way).epsilon(0.003));
  CHECK(run.time >= way / 0.6);
  CHECK(run.time <= way / 0.6 + 0.6 / 2.0 + 0.05 + 0.05);
  // The same world with the pace that brakes: no contact.
  Run const heedful = simulate(to_goal, exact(), world, ahead(4.0, 40.0), 1);
  CHECK(heedful.ending == Ending::time_out);
  CHECK(heedful.least_clearance > 0.0);
  CHECK(heedful.last_status == Status::blocked);
}

TEST_CASE("a machine that starts in a disc has touched it, even on the goal") {
  World world;
  world.add(0.0, 0.3, 0.2);
  CHECK(simulate(to_goal, exact(), world, ahead(4.0), 1).ending == Ending::contact);
  Run const on_goal = simulate(to_goal, exact(), world, ahead(0.0), 1);
  CHECK(on_goal.ending == Ending::contact);
  CHECK(on_goal.least_clearance == doctest::Approx(-0.1));
}

// Uniform motion: 2.5 m between the edges, closed at 1 m/s less what the machine itself does, 0.2 m/s at most.
TEST_CASE("a disc that comes from behind is noticed when it touches") {
  Loop<toward_goal, Ring<90>> slow = to_goal;
  slow.pace.top_speed = 0.2F;
  World world;
  world.add(-3.0, 0.0, 0.3, {1.0, 0.0});
  Run const run = simulate(slow, exact(), world, ahead(20.0), 1);
  CHECK(run.ending == Ending::contact);
  CHECK(run.time >= 2.5);
  CHECK(run.time <= 2.5 / 0.8 + 0.005);
  CHECK(run.least_clearance <= 0.0);
  CHECK(run.least_clearance >= -1.2 * 0.005);
  // The same disc, leaving: never nearer than at the start.
  World leaving;
  leaving.add(-3.0, 0.0, 0.3, {-1.0, 0.0});
  Run const free = simulate(slow, exact(), leaving, ahead(1.0), 1);
  CHECK(free.ending == Ending::arrived);
  CHECK(free.least_clearance == doctest::Approx(2.5));
}

TEST_CASE("a fast machine with long ticks does not get through a disc unnoticed") {
  Loop<toward_goal, Ring<90>> fast = heedless;
  fast.pace.top_speed = 10.0F;
  fast.drive.max_rate = 200.0F;
  fast.freshness.max_dt = 2.0F;
  Vehicle vehicle = exact();
  vehicle.drive.max_rate = 200.0F;
  vehicle.acceleration = 1000.0;
  vehicle.period = 0.5;
  World world;
  world.add(4.0, 0.0, 0.3);  // nearly 5 m are driven in the first tick
  Run const run = simulate(fast, vehicle, world, ahead(20.0), 1);
  CHECK(run.ending == Ending::contact);
  CHECK(run.path_length == doctest::Approx(3.5).epsilon(0.02));
}

TEST_CASE("a machine whose every beam drops out is blind and never moves") {
  Vehicle vehicle = exact();
  vehicle.dropout = 1.0;
  World world;
  world.add(2.0, 0.0, 0.3);
  Run const run = simulate(to_goal, vehicle, world, ahead(4.0, 5.0), 1, 0, true);
  CHECK(run.ending == Ending::time_out);
  CHECK(run.last_status == Status::blind);
  CHECK(run.path_length == 0.0);
  CHECK(first_moved(run) == std::numeric_limits<double>::infinity());
  CHECK(run.ticks.size() == doctest::Approx(100).epsilon(0.011));
  CHECK(std::all_of(run.ticks.begin(), run.ticks.end(),
                    [](lab::Tick const& t) { return t.status == Status::blind && t.wheels.left == 0.0; }));
}

TEST_CASE("a run that ends for want of time says why, and takes the time it was allowed") {
  World world;
  world.add(4.0, 0.0, 0.5);
  Run const blocked = simulate(to_goal, exact(), world, ahead(4.0, 12.0), 1);  // the goal lies in the disc
  CHECK(blocked.ending == Ending::time_out);
  CHECK(blocked.last_status == Status::blocked);
  CHECK(blocked.time >= 12.0);
  CHECK(blocked.time <= 12.0 + 0.05 + 1e-9);
  Run const on_its_way = simulate(to_goal, exact(), World{}, ahead(40.0, 10.0), 1);
  CHECK(on_its_way.ending == Ending::time_out);
  CHECK(on_its_way.last_status == Status::ok);
  Vehicle late = exact();
  late.period = 0.6;  // longer than the loop takes for fresh
  CHECK(simulate(to_goal, late, World{}, ahead(4.0, 5.0), 1).last_status == Status::stale);
  CHECK(std::string(lab::text(blocked.ending)) == "time out");
}

TEST_CASE("latency moves the first response later by as much") {
  Vehicle vehicle = exact();
  vehicle.period = 0.01;
  vehicle.latency = 0.0;
  double const at_once = first_moved(simulate(to_goal, vehicle, World{}, ahead(4.0), 1, 0, true));
  CHECK(at_once <= 0.01 + 1e-9);
  for (double const latency : {0.05, 0.20, 0.43}) {
    CAPTURE(latency);
    vehicle.latency = latency;
    double const late = first_moved(simulate(to_goal, vehicle, World{}, ahead(4.0), 1, 0, true));
    CHECK(late - at_once >= latency - 1e-9);
    CHECK(late - at_once <= latency + 0.01 + 1e-9);  // one period: moves show at ticks
  }
}

TEST_CASE("wheels do not speed up faster than they can, nor turn faster, whatever the loop believes") {
  Vehicle vehicle = exact();
  vehicle.acceleration = 0.5;
  vehicle.drive.max_rate = 6.0F;  // 0.3 m/s; the loop believes in 1 m/s and wants 0.6
  Run const run = simulate(to_goal, vehicle, World{}, ahead(5.0), 1, 0, true);
  CHECK(run.ending == Ending::arrived);
  double fastest = 0.0;
  double hardest = 0.0;
  double before = 0.0;
  for (std::size_t i = 1; i < run.ticks.size(); ++i) {
    double const dt = run.ticks[i].time - run.ticks[i - 1].time;
    double const speed = (run.ticks[i].pose.position - run.ticks[i - 1].pose.position).norm() / dt;
    fastest = std::max(fastest, speed);
    hardest = std::max(hardest, std::abs(speed - before) / dt);
    before = speed;
  }
  CHECK(fastest == doctest::Approx(0.3).epsilon(1e-6));
  CHECK(hardest <= 0.5 + 1e-6);
  CHECK(hardest >= 0.4);
}

// A clearance cannot change faster than the body moves: it is 1-Lipschitz in the position.
TEST_CASE("least_clearance is no more than at any tick, and less by no more than the way between ticks") {
  Loop<decltype(policies::two_thresholds), Ring<180>> const loop{.policy = policies::two_thresholds,
                                                                 .sensing = cellar::ring};
  World far;
  far.add(3.0, 30.0, 0.5);  // farther than the ranger or a tick reaches
  World crossing = cellar::world();
  crossing.add(6.0, 9.0, 0.3, {0.0, -0.3});
  auto const holds = [](Run const& run, double speed) {
    double least = std::numeric_limits<double>::infinity();
    for (lab::Tick const& t : run.ticks) {
      least = std::min(least, t.clearance);
    }
    CAPTURE(least);
    CAPTURE(run.least_clearance);
    CHECK(run.least_clearance <= least);
    CHECK(run.least_clearance >= least - speed * 0.06);
  };
  for (std::uint64_t k = 0; k < 20; ++k) {
    holds(simulate(loop, noisy(), cellar::world(), cellar::trip(), 5, k, true), 0.6);
    holds(simulate(loop, noisy(), crossing, cellar::trip(), 5, k, true), 0.9);
  }
  holds(simulate(to_goal, exact(), far, ahead(6.0), 1, 0, true), 0.6);
  holds(simulate(to_goal, exact(), far, ahead(0.1), 1, 0, true), 0.6);  // on the goal from the start
  CHECK(std::isfinite(simulate(to_goal, exact(), far, ahead(6.0), 1).least_clearance));
}

TEST_CASE("switches and dwell are those of the ticks, and a path is no shorter than the straight way") {
  Loop<decltype(policies::hard_switch), Ring<180>> const loop{.policy = policies::hard_switch, .sensing = cellar::ring};
  Loop<decltype(policies::composed), Ring<180>> const arriving{.policy = policies::composed, .sensing = cellar::ring};
  Trip trip = cellar::trip();
  trip.time_limit = 60.0;
  for (std::uint64_t k = 0; k < 10; ++k) {
    Run const run = simulate(loop, noisy(), cellar::world(), trip, 9, k, true);
    int switches = 0;
    double least = std::numeric_limits<double>::infinity();
    double last = -std::numeric_limits<double>::infinity();
    for (std::size_t i = 1; i < run.ticks.size(); ++i) {
      if (run.ticks[i].modes != run.ticks[i - 1].modes) {
        ++switches;
        least = std::min(least, run.ticks[i].time - last);
        last = run.ticks[i].time;
      }
    }
    CHECK(switches >= 2);
    CHECK(run.switches == switches);
    CHECK(same(run.least_dwell, least));
    Run const there = simulate(arriving, noisy(), cellar::world(), cellar::trip(), 9, k);
    REQUIRE(there.ending == Ending::arrived);
    // The arrival is told from an estimate that is off by 10 mm a coordinate: six deviations.
    CHECK(there.path_length >= there.straight_length - 0.15 - 0.06);
  }
}

namespace {

struct Dwells {
  int switches = 0;
  double least = std::numeric_limits<double>::infinity();
};

// Drives a loop that is told the discs as they are, so that only thresholds and speed are left to bound its switching.
template <typename Policy>
void drive_exactly(Loop<Policy> const& loop, World const& world, Pose<double> pose, Vec2<double> const& goal,
                   double limit, Dwells& dwells) {
  constexpr double period = 0.05;
  memory_t<Loop<Policy>, double> memory;
  double last = -std::numeric_limits<double>::infinity();
  std::uint32_t modes = 0;
  for (int tick = 0; tick * period < limit; ++tick) {
    DiscSet<double, 16> discs;  // when it is full the nearest stay
    for (lab::WorldDisc const& d : world.discs) {
      discs.add(d.disc, pose.position);
    }
    Situation<double> now{pose, goal, period};
    Command<double> const command = loop.tick(now, discs, memory);
    std::uint32_t const modes_now = lab::modes_of(memory);
    if (tick > 0 && modes_now != modes) {
      ++dwells.switches;
      dwells.least = std::min(dwells.least, tick * period - last);
      last = tick * period;
    }
    modes = modes_now;
    if (command.findings.arrived) {
      return;
    }
    pose = lab::along_arc(pose, command.body, period);
  }
}

template <typename Policy>
Dwells drive_often(Policy const& policy, World const& world, Vec2<double> const& low, Vec2<double> const& high) {
  Loop<Policy> const loop{.policy = policy};
  Dwells dwells;
  for (std::uint64_t k = 0; k < 60; ++k) {
    lab::Draws const draws(77, k);
    auto const clear_point = [&](std::uint32_t purpose) {
      Vec2<double> point = low;
      for (std::uint32_t i = 0; i < 1000 && (i == 0 || world.gap(point) < 0.4); ++i) {
        point = {draws.between(low.x(), high.x(), {purpose, i, 0}), draws.between(low.y(), high.y(), {purpose, i, 1})};
      }
      return point;
    };
    double const angle = draws.between(-std::numbers::pi, std::numbers::pi, {3});
    drive_exactly(loop, world, {clear_point(1), {std::cos(angle), std::sin(angle)}}, clear_point(2), 60.0, dwells);
  }
  return dwells;
}

}  // namespace

// From the speed bound itself. A clearance is 1-Lipschitz in the position, so between a tick under `enter` and a tick
// over `leave` the machine has driven leave - enter metres at least, and that takes it (leave - enter) / top speed.
// Told for discs that stand still and are known exactly: discs fitted to readings may jump, and then it does not hold.
TEST_CASE("a policy with two thresholds never switches sooner than its speed lets it cross from one to the other") {
  World const cellar = cellar::world();
  World stand;
  lab::Table const stems = lab::parse_table("spruces.csv", lab::read_whole(WEND_TEST_DATA "/spruces.csv"),
                                            [](std::string const&) { return false; });
  for (auto const& row : stems.rows) {
    stand.add(row[0], row[1], 0.5 * row[2]);
  }
  REQUIRE(stand.discs.size() == 134);
  double const top = static_cast<double>(Pace{}.top_speed);
  auto const holds = [&](float enter, float leave) {
    auto const policy = guarded(below(clearance, enter, leave), past_disc{}, toward_goal{});
    double const bound = (static_cast<double>(leave) - static_cast<double>(enter)) / top;
    Dwells const in_cellar = drive_often(policy, cellar, {0.0, 0.0}, {12.0, 8.0});
    Dwells const in_stand = drive_often(policy, stand, {0.0, 0.0}, {56.0, 38.0});
    CAPTURE(enter);
    CAPTURE(leave);
    CAPTURE(in_cellar.switches);
    CAPTURE(in_stand.switches);
    CHECK(in_cellar.switches > 50);
    CHECK(in_stand.switches > 20);
    CHECK(in_cellar.least >= bound - 1e-9);
    CHECK(in_stand.least >= bound - 1e-9);
  };
  holds(0.20F, 0.30F);
  holds(0.30F, 0.50F);
  holds(0.35F, 0.85F);
  holds(0.40F, 1.30F);
  // The check can tell: one threshold alone switches sooner than any of the pairs above may.
  auto const hard = guarded(below(clearance, 0.30F, 0.30F), past_disc{}, toward_goal{});
  CHECK(drive_often(hard, cellar, {0.0, 0.0}, {12.0, 8.0}).least < 0.1 / top);
}
