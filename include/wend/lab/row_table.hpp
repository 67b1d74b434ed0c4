// wend/lab/row_table.hpp - what became of many runs as a table for spreadsheets and scripts.
#pragma once

#include <array>
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <span>
#include <string>

#include "wend/lab/run_row.hpp"

namespace wend::inline v0::lab {

/// The names of the columns of row_table, with an end of line.
inline constexpr char const* row_table_names =
    "policy,run,world,ending,status,time_s,path_m,straight_m,least_clearance_m,switches,least_dwell_s,start_x_m,"
    "start_y_m,start_heading_rad,goal_x_m,goal_y_m\n";

/// One line for each row, as CSV, without the names. Metres, seconds, radians. Empty: no disc was met, or no two
/// switches. `policy` may be any text: it is quoted (RFC 4180) where it has to be.
[[nodiscard]] inline std::string row_table(std::string const& policy, std::span<RunRow const> rows) {
  std::string name = policy;
  if (name.find_first_of(",\"\r\n") != name.npos) {
    for (std::size_t at = name.find('"'); at != name.npos; at = name.find('"', at + 2)) {
      name.insert(at, 1, '"');
    }
    name = '"' + name + '"';
  }
  std::string csv;
  std::array<char, 160> cells{};
  auto const add = [&](double value, char const* after) {
    if (std::isfinite(value)) {
      std::snprintf(cells.data(), cells.size(), "%.4f", value);
      csv += cells.data();
    }
    csv += after;
  };
  for (RunRow const& row : rows) {
    csv += name + ',' + std::to_string(row.run) + ',' + std::to_string(row.world) + ',' + text(row.ending) + ',' +
           text(row.last_status) + ',';
    add(row.time, ",");
    add(row.path_length, ",");
    add(row.straight_length, ",");
    add(row.least_clearance, ",");
    csv += std::to_string(row.switches) + ',';
    add(row.least_dwell, ",");
    add(row.start.position.x(), ",");
    add(row.start.position.y(), ",");
    add(std::atan2(row.start.heading.y(), row.start.heading.x()), ",");
    add(row.goal.x(), ",");
    add(row.goal.y(), "\n");
  }
  return csv;
}

}  // namespace wend::inline v0::lab
