// A cart crosses a map of real tree stems, a thousand times: Stoyan, Kendall and Mecke (1987), Stochastic Geometry and
// its Applications, the spruces data (tests/data/SOURCES.md). The map is the outside check: nobody arranged these trees
// so that a policy gets through.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <string>

#include <doctest/doctest.h>

#include "../checked_build.hpp"
#include "../../examples/policies.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/simulate.hpp"

namespace {

using namespace wend;

constexpr double width = 56.0;  // metres, of the mapped plot
constexpr double depth = 38.0;
constexpr int runs = is_slow_build ? 100 : 1000;

constexpr double clear = 0.8;  // metres from the body's edge, at start and goal

lab::World stand() {
  lab::World world;
  lab::Table const table = lab::parse_table("spruces.csv", lab::read_whole(WEND_TEST_DATA "/spruces.csv"),
                                            [](std::string const&) { return false; });
  for (auto const& row : table.rows) {
    world.add(row[table.column("x")], row[table.column("y")], 0.5 * row[table.column("diameter")]);
  }
  return world;
}

// A point on one side of the plot, half a metre inside its edge; side 0 to 3 counter-clockwise from the west.
Vec2<double> on_side(std::uint32_t side, double share) {
  constexpr double inset = 0.5;
  switch (side) {
    case 0: return {inset, share * depth};
    case 1: return {share * width, inset};
    case 2: return {width - inset, share * depth};
    default: return {share * width, depth - inset};
  }
}

lab::Trip crossing(lab::World const& world, double body, std::uint64_t run) {
  lab::Draws const draws(20, run);
  auto const side = static_cast<std::uint32_t>(4.0 * draws.uniform({1}));
  auto const clear_point = [&](std::uint32_t where, std::uint32_t purpose) {
    for (std::uint32_t i = 0; i < 1000; ++i) {
      Vec2<double> const point = on_side(where, draws.between(0.03, 0.97, {purpose, i}));
      if (world.gap(point) - body >= clear) {
        return point;
      }
    }
    FAIL("no clear point on this side");
    return Vec2<double>{0.0, 0.0};
  };
  double const angle = draws.between(-std::numbers::pi, std::numbers::pi, {2});
  return {{clear_point(side, 3), {std::cos(angle), std::sin(angle)}}, clear_point((side + 2U) % 4U, 4), 300.0};
}

}  // namespace

TEST_CASE("crossings of the spruces end without contact, and every one that falls short says why") {
  lab::World const world = stand();
  REQUIRE(world.discs.size() == 134);
  // As the recording over the same map was made: 180 beams, 6 m, 15 mm, 1 % dropouts, 0.1 s +- 10 %.
  constexpr Ring<180> ring{.directions = even_bearings<180>(0.0, std::numbers::pi / 90.0),
                           .min_range = 0.05F,
                           .max_range = 6.0F,
                           .noise = 0.015F};
  Loop<decltype(policies::composed), Ring<180>> const loop{.policy = policies::composed, .sensing = ring};
  lab::Vehicle vehicle;
  vehicle.range_noise = 0.015;
  vehicle.dropout = 0.01;
  vehicle.period = 0.1;
  vehicle.jitter = 0.1;

  int arrived = 0, contacts = 0, unexplained = 0, switches = 0, switching = 0, too_short = 0;
  std::array<int, 8> why{};
  double least = std::numeric_limits<double>::infinity();
  double ratio = 0.0, longest = 0.0, metres = 0.0;
  for (int k = 0; k < runs; ++k) {
    auto const number = static_cast<std::uint64_t>(k);
    lab::Trip const trip = crossing(world, vehicle.radius, number);
    lab::Run const run = lab::simulate(loop, vehicle, world, trip, 1, number);
    metres += run.path_length;
    least = std::min(least, run.least_clearance);
    switches += run.switches;
    switching += run.switches > 0 ? 1 : 0;
    contacts += run.ending == lab::Ending::contact ? 1 : 0;
    if (run.ending == lab::Ending::arrived) {
      ++arrived;
      ratio += run.path_length / run.straight_length;
      longest = std::max(longest, run.path_length / run.straight_length);
      too_short += run.path_length >= run.straight_length - 0.15 - 1e-5 ? 0 : 1;
    } else {
      unexplained += run.last_status == Status::ok ? 1 : 0;
      ++why[static_cast<std::size_t>(run.last_status)];
    }
  }
  MESSAGE("arrived ", arrived, " of ", runs, ", contacts ", contacts, ", least clearance ", least, " m, switches ",
          switches, " in ", switching, " runs, path ratio mean ", ratio / arrived, " worst ", longest, ", ", metres,
          " m driven");
  for (std::size_t i = 0; i < why.size(); ++i) {
    if (why[i] > 0) {
      MESSAGE("fell short, ", std::string(text(static_cast<Status>(i))), ": ", why[i]);
    }
  }
  CHECK(contacts == 0);
  CHECK(least > 0.0);
  CHECK(unexplained == 0);
  CHECK(too_short == 0);
  CHECK(arrived >= runs * 99 / 100);  // all did when this was written; a regression that strands one in a hundred shows
  CHECK(switching > runs / 2);  // the stand is dense enough for the test to mean something
}
