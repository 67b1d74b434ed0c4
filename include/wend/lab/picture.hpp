// wend/lab/picture.hpp - runs drawn on their world, as one SVG file.
#pragma once

#include <algorithm>
#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "wend/lab/simulate.hpp"
#include "wend/lab/svg.hpp"
#include "wend/lab/world.hpp"

namespace wend::inline v0::lab {

/// The world at time 0 with runs on it: discs, paths with a dot wherever a guard changed its mind, start, goal, and a
/// legend. All runs must share start and goal. `title` may be any text. Moving discs get a line as long as 5 s of
/// travel.
[[nodiscard]] inline std::string picture(std::string_view title, World const& world, Trip const& trip,
                                         std::vector<DrawnRun> const& runs, double width = 960.0) {
  Vec2<double> const& start = trip.start.position;
  detail::Sheet sheet{std::min(start.x(), trip.goal.x()), std::max(start.x(), trip.goal.x()),
                      std::min(start.y(), trip.goal.y()), std::max(start.y(), trip.goal.y()), width};
  auto const include = [&sheet](Vec2<double> const& p, double r) {
    sheet.left = std::min(sheet.left, p.x() - r), sheet.right = std::max(sheet.right, p.x() + r);
    sheet.bottom = std::min(sheet.bottom, p.y() - r), sheet.top = std::max(sheet.top, p.y() + r);
  };
  for (WorldDisc const& d : world.discs) {
    include(d.disc.centre, d.disc.radius);
    include(World::at(d, 5.0).centre, 0.0);
  }
  for (DrawnRun const& drawn : runs) {
    for (Tick const& t : drawn.run.ticks) {
      include(t.pose.position, 0.2);
    }
  }
  double const rim = 0.03 * (sheet.right - sheet.left) + 0.1;
  sheet.left -= rim, sheet.right += rim, sheet.bottom -= rim, sheet.top += rim;

  std::string svg = detail::svg_head(sheet, title, runs.size() + 1) + detail::svg_axes(sheet) +
                    detail::svg_discs(sheet, world);
  for (std::size_t i = 0; i < runs.size(); ++i) {
    detail::Stroke const& stroke = detail::strokes[i % detail::strokes.size()];
    svg += detail::svg_run(sheet, runs[i].run, stroke) +
           detail::svg_run_legend(sheet, i, runs[i], stroke, !world.discs.empty());
  }
  svg += detail::svg_note(sheet, runs.size(),
                          "Simulated. Open ring: start. Crossed ring: goal. Dot: a guard changed its mind. X: ended "
                          "short of the goal.");
  return svg + "<g>" + detail::svg_ring(sheet, start) + detail::svg_goal(sheet, trip.goal) + "</g>\n</svg>\n";
}

}  // namespace wend::inline v0::lab
