// wend/lab/trace.hpp - a run as a table, one row a tick.
#pragma once

#include <array>
#include <cmath>
#include <cstdio>
#include <string>

#include "wend/lab/simulate.hpp"

namespace wend::inline v0::lab {

/// The ticks of a run as comma-separated values: seconds, metres, radians; `modes` has one bit for each `guarded` of
/// the policy, outermost first, 1 inside. Empty clearance: nothing in the world.
[[nodiscard]] inline std::string trace(Run const& run) {
  std::string csv =
      "time_s,x_m,y_m,heading_rad,clearance_m,left_rad_s,right_rad_s,speed_m_s,turn_rate_rad_s,modes,status\n";
  std::array<char, 256> line{};
  for (Tick const& t : run.ticks) {
    std::snprintf(line.data(), line.size(), "%.4f,%.4f,%.4f,%.5f,", t.time, t.pose.position.x(), t.pose.position.y(),
                  std::atan2(t.pose.heading.y(), t.pose.heading.x()));
    csv += line.data();
    if (std::isfinite(t.clearance)) {
      std::snprintf(line.data(), line.size(), "%.4f", t.clearance);
      csv += line.data();
    }
    std::snprintf(line.data(), line.size(), ",%.4f,%.4f,%.4f,%.4f,%u,%s\n", t.wheels.left, t.wheels.right, t.body.speed,
                  t.body.turn_rate, t.modes, text(t.status));
    csv += line.data();
  }
  return csv;
}

}  // namespace wend::inline v0::lab
