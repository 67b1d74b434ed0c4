// A table of recorded ranges, one decision a row.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <memory>
#include <numbers>
#include <span>
#include <string>
#include <vector>

#include <wend/lab/csv.hpp>
#include <wend/lab/explain_tick.hpp>
#include <wend/lab/modes.hpp>
#include <wend/watch/log.hpp>

#include "replay.hpp"

namespace replay {

namespace {

using namespace wend;

constexpr int most_dumped = 1024;  // decisions: the last ones of a longer table

// A clearance in metres, or that nothing is seen.
std::string metres(float clearance) {
  std::array<char, 32> text{};
  std::snprintf(text.data(), text.size(), "%.3f", static_cast<double>(clearance));
  return clearance < 0.5F * far_away ? text.data() : "-";
}

// Why the course is what it is: the fields that were heard.
std::string reason(Course<float> const& course, std::vector<std::string> const& voices) {
  if (!(course.confidence > 0.0F)) {
    return "-";  // there is none: the status says why
  }
  std::string text;
  for (std::string const& voice : voices) {
    text += text.empty() ? "" : " and ";
    text += voice == "away_from_discs" ? "away" : voice == "past_disc" ? "past" : "to the goal";
  }
  return text;
}

// One row: when, what the loop is told, and what the ring makes of it.
struct Row {
  double time = 0.0;
  Situation<float> now;
  std::vector<float> ranges;
  DiscSet<float, discs_kept> discs;
  int echoes = 0;
};

template <int Beams>
std::vector<Row> rows_of(lab::Table const& table, Options const& options) {
  Ring<Beams> const ring = ring_of<Beams>(options);
  std::size_t const time = table.column("time_s");
  std::size_t const x = table.column("x_m");
  std::size_t const y = table.column("y_m");
  std::size_t const heading = table.column("heading_rad");
  std::size_t const first_range = table.column("range_0_m");
  std::vector<double> const& last = table.rows.back();
  double const goal_x = options.goal.empty() ? last[x] : options.goal[0];
  double const goal_y = options.goal.empty() ? last[y] : options.goal[1];
  std::vector<Row> rows(table.rows.size());
  for (std::size_t i = 0; i < rows.size(); ++i) {
    std::vector<double> const& record = table.rows[i];
    Row& row = rows[i];
    row.time = record[time];
    for (std::size_t k = 0; k < static_cast<std::size_t>(Beams); ++k) {
      double const range = record[first_range + k];
      row.ranges.push_back(std::isnan(range) ? ring.no_echo : static_cast<float>(range));
    }
    row.echoes = ring.discs(std::span<float const, static_cast<std::size_t>(Beams)>(row.ranges), row.discs).echoes;
    row.now.pose.position = {static_cast<float>(record[x]), static_cast<float>(record[y])};
    row.now.pose.heading = {static_cast<float>(std::cos(record[heading])),
                            static_cast<float>(std::sin(record[heading]))};
    row.now.goal = {static_cast<float>(goal_x), static_cast<float>(goal_y)};
    row.now.dt = i == 0 ? 0.1F : static_cast<float>(record[time] - table.rows[i - 1][time]);
  }
  return rows;
}

// What a loop is given of a row: the readings, or the discs, which are in the robot's own frame.
template <typename Loop, int Beams>
void give(Row const& row, lab::Decision<Loop, Readings<float, Beams, discs_kept>>& decision) {
  decision.now = row.now;
  std::copy(row.ranges.begin(), row.ranges.end(), decision.seen.ranges.begin());
}
template <typename Loop>
void give(Row const& row, lab::Decision<Loop, DiscSet<float, discs_kept>>& decision) {
  decision.now = row.now;
  decision.now.pose = {};
  decision.now.goal = into_frame(row.now.pose, row.now.goal);
  decision.seen = row.discs;
}

// Decides on every row, prints some, and dumps the last ones when asked to.
template <typename Seen, typename Loop>
void decide_all(Loop const& loop, std::vector<Row> const& rows, Options const& options) {
  using Log = DecisionLog<Loop, Seen, most_dumped>;
  auto const log = std::make_unique<Log>();
  memory_t<Loop, float> memory;
  std::printf("%8s %6s %6s %10s %8s %11s %7s %9s  %-14s %s\n", "time", "echoes", "discs", "clearance", "course",
              "confidence", "speed", "turn", "status", "because");
  std::printf("%8s %6s %6s %10s %8s %11s %7s %9s\n", "s", "", "", "m", "deg", "", "m/s", "rad/s");
  int switches = 0;
  std::uint32_t modes = 0;
  float least = far_away;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    Row const& row = rows[i];
    float const nearest =
        look(Pose<float>{}, Vec2<float>(1.0F, 0.0F), row.discs, loop.robot_radius, row.now.dt).clearance;
    lab::Decision<Loop, Seen> decision;
    decision.before = memory;
    give(row, decision);
    decision.command = log->tick(loop, decision.now, decision.seen, memory);
    std::uint32_t const modes_now = lab::modes_of(memory.policy);
    switches += i > 0 && modes_now != modes ? 1 : 0;
    modes = modes_now;
    least = std::min(least, nearest);
    if (i % static_cast<std::size_t>(options.every) != 0) {
      continue;
    }
    // The course is in the robot's own frame: 0 degrees is straight on, to the left is positive.
    Course<float> const& course = decision.command.course;
    double const angle =
        std::atan2(static_cast<double>(course.direction.y()), static_cast<double>(course.direction.x()));
    std::printf("%8.3f %6d %6d %10s %8.1f %11.3f %7.3f %9.3f  %-14s %s\n", row.time, row.echoes, row.discs.size(),
                metres(nearest).c_str(), angle * 180.0 / std::numbers::pi, static_cast<double>(course.confidence),
                static_cast<double>(decision.command.body.speed), static_cast<double>(decision.command.body.turn_rate),
                text(status_of(decision.command)), reason(course, lab::explain_tick(loop, decision).voices).c_str());
  }
  std::printf("\n%zu rows, %d switches, least clearance seen %s m\n", rows.size(), switches, metres(least).c_str());
  if (!options.dump_to.empty()) {
    std::string bytes;
    log->dump(loop, [&bytes](std::byte byte) { bytes += static_cast<char>(byte); });
    lab::write_whole(options.dump_to, bytes);
    std::printf("The last %d decisions are in %s, %zu bytes each\n", log->size(), options.dump_to.c_str(),
                Log::dumped_bytes);
  }
  std::printf(
      "What a recording would have led to is no proof of what a machine will do, and wend is no safety function.\n");
}

template <int Beams>
void over_table(lab::Table const& table, Options const& options) {
  std::vector<Row> const rows = rows_of<Beams>(table, options);
  for_each_policy([&](std::string const& name, auto const& policy) {
    if (name != (options.policy.empty() ? "composed" : options.policy)) {
      return;
    }
    if (options.as_discs) {
      decide_all<DiscSet<float, discs_kept>>(loop_on_discs(policy), rows, options);
    } else {
      decide_all<Readings<float, Beams, discs_kept>>(loop_on_readings<Beams>(policy, options), rows, options);
    }
  });
}

}  // namespace

void over_record(Options const& options) {
  lab::Table const table = lab::parse_table(options.record, lab::read_whole(options.record),
                                            [](std::string const& name) { return name.rfind("range_", 0) == 0; });
  std::size_t const first_range = table.column("range_0_m");
  std::size_t const beams = table.names.size() - first_range;
  for (std::size_t k = 0; k < beams; ++k) {
    std::string const name = "range_" + std::to_string(k) + "_m";
    if (table.names[first_range + k] != name) {
      throw lab::FileError(options.record, table.names_line, 1,
                           "expected the column '" + name + "' after '" + table.names[first_range + k - 1] +
                               "', found '" + table.names[first_range + k] + "'");
    }
  }
  if (table.rows.empty()) {
    throw lab::FileError(options.record, table.names_line + 1, 1, "expected at least one row of readings, found none");
  }
  switch (beams) {
    case 8: return over_table<8>(table, options);
    case 16: return over_table<16>(table, options);
    case 36: return over_table<36>(table, options);
    case 90: return over_table<90>(table, options);
    case 180: return over_table<180>(table, options);
    case 360: return over_table<360>(table, options);
    default:
      throw lab::FileError(options.record, table.names_line, 1,
                           "expected 8, 16, 36, 90, 180 or 360 range columns, found " + std::to_string(beams));
  }
}

}  // namespace replay
