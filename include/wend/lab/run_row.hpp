// wend/lab/run_row.hpp - what is kept of one run out of many.
#pragma once

#include <bit>
#include <cstdint>
#include <limits>

#include "wend/lab/simulate.hpp"

namespace wend::inline v0::lab {

/// One run of a campaign. Metres, seconds; headings are unit vectors.
struct RunRow {
  std::uint64_t run = 0;    ///< its number: with the campaign's seed, all there is to know to drive it again
  std::uint64_t world = 0;  ///< which of the worlds; the run's own number where each run has a world of its own
  Ending ending = Ending::time_out;  ///< how it ended
  Status last_status = Status::ok;  ///< what the loop said on the last tick
  int switches = 0;  ///< ticks on which a guard changed its mind
  double time = 0.0;  ///< seconds from start to end
  double path_length = 0.0;  ///< metres driven
  double straight_length = 0.0;  ///< metres, from start to goal
  /// Metres over the whole path; infinite in an empty world.
  double least_clearance = std::numeric_limits<double>::infinity();
  /// Seconds between two switches; infinite with fewer than two.
  double least_dwell = std::numeric_limits<double>::infinity();
  Pose<double> start;  ///< in the world's frame
  Vec2<double> goal{0.0, 0.0};  ///< metres, in the world's frame

  /// Same bits in every number.
  friend bool operator==(RunRow const& a, RunRow const& b) noexcept {
    auto const same = [](double x, double y) noexcept {
      return std::bit_cast<std::uint64_t>(x) == std::bit_cast<std::uint64_t>(y);
    };
    auto const same2 = [&same](Vec2<double> const& x, Vec2<double> const& y) noexcept {
      return same(x.x(), y.x()) && same(x.y(), y.y());
    };
    return a.run == b.run && a.world == b.world && a.ending == b.ending && a.last_status == b.last_status &&
           a.switches == b.switches && same(a.time, b.time) && same(a.path_length, b.path_length) &&
           same(a.straight_length, b.straight_length) && same(a.least_clearance, b.least_clearance) &&
           same(a.least_dwell, b.least_dwell) && same2(a.start.position, b.start.position) &&
           same2(a.start.heading, b.start.heading) && same2(a.goal, b.goal);
  }
};

/// The row of a simulated run.
[[nodiscard]] inline RunRow row_of(Run const& run, Trip const& trip, std::uint64_t number, std::uint64_t world) {
  return {number,     world,           run.ending,          run.last_status,     run.switches,
          run.time,   run.path_length, run.straight_length, run.least_clearance, run.least_dwell,
          trip.start, trip.goal};
}

}  // namespace wend::inline v0::lab
