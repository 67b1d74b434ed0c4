// A run as a table, read back by the table reader and compared with the ticks.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <limits>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/csv.hpp"
#include "wend/lab/trace.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

lab::Run two_ticks() {
  lab::Run run;
  run.ticks.push_back({0.0, {{1.25, -2.5}, {0.0, -1.0}}, 0.75, {3.5, -4.25}, {0.5, -1.5}, 2, Status::ok});
  run.ticks.push_back(
      {0.05, {{-1.0, 0.5}, {-1.0, 0.0}}, std::numeric_limits<double>::infinity(), {}, {}, 0, Status::no_course});
  return run;
}

}  // namespace

TEST_CASE("trace writes one line a tick, under names with units") {
  CHECK(lab::trace(two_ticks()) ==
        "time_s,x_m,y_m,heading_rad,clearance_m,left_rad_s,right_rad_s,speed_m_s,turn_rate_rad_s,modes,status\n"
        "0.0000,1.2500,-2.5000,-1.57080,0.7500,3.5000,-4.2500,0.5000,-1.5000,2,ok\n"
        "0.0500,-1.0000,0.5000,3.14159,,0.0000,0.0000,0.0000,0.0000,0,no course\n");
}

TEST_CASE("trace of a run without ticks is the names alone") {
  std::string const csv = lab::trace(lab::Run{});
  CHECK(csv.find('\n') == csv.size() - 1);
  CHECK(csv.rfind("time_s,", 0) == 0);
}

TEST_CASE("a traced run reads back as the ticks, to the last decimal") {
  Loop<toward_goal, Ring<36>> const loop{.policy = {},
                                         .sensing = {even_bearings<36>(0.0, 0.17453292519943295), 0.05F, 6.0F, 0.01F}};
  lab::World world;
  world.add(1.5, 0.8, 0.2);
  lab::Run const run = lab::simulate(loop, lab::Vehicle{}, world, {{}, {3.0, 0.0}, 30.0}, 1, 0, true);
  std::string csv = lab::trace(run);
  // The status is text, and the reader takes numbers only: it is compared and then cut off.
  std::string numbers;
  std::size_t line = 0;
  for (std::size_t start = 0; start < csv.size(); ++line) {
    std::size_t const end = csv.find('\n', start);
    std::string const whole = csv.substr(start, end - start);
    std::size_t const comma = whole.rfind(',');
    if (line > 0) {
      CHECK(whole.substr(comma + 1) == text(run.ticks[line - 1].status));
    }
    numbers += whole.substr(0, comma) + "\n";
    start = end + 1;
  }
  lab::Table const table = lab::parse_table("trace", numbers, [](std::string const&) { return false; });
  REQUIRE(table.rows.size() == run.ticks.size());
  REQUIRE(run.ticks.size() > 50);
  double worst = 0.0;
  for (std::size_t i = 0; i < run.ticks.size(); ++i) {
    lab::Tick const& t = run.ticks[i];
    std::vector<double> const expected{t.time,
                                       t.pose.position.x(),
                                       t.pose.position.y(),
                                       std::atan2(t.pose.heading.y(), t.pose.heading.x()),
                                       t.clearance,
                                       t.wheels.left,
                                       t.wheels.right,
                                       t.body.speed,
                                       t.body.turn_rate,
                                       static_cast<double>(t.modes)};
    REQUIRE(table.rows[i].size() == expected.size());
    for (std::size_t k = 0; k < expected.size(); ++k) {
      worst = std::max(worst, std::abs(table.rows[i][k] - expected[k]));
    }
  }
  CHECK(worst <= 0.5e-4 + 1e-12);
}
