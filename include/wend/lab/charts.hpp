// wend/lab/charts.hpp - small charts for a page: a run over time, and shares of runs. Colours are the page's, by class.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <iterator>
#include <limits>
#include <string>
#include <utility>
#include <vector>

#include "wend/lab/simulate.hpp"
#include "wend/lab/svg.hpp"

namespace wend::inline v0::lab {

namespace detail {

// A rectangle of two quantities on a drawing of 640 units by `height`, y up, with room for numbers at the left and
// below.
struct Frame {
  static constexpr double width = 640.0;
  static constexpr double left = 62.0;
  static constexpr double right = 12.0;
  static constexpr double above = 30.0;
  static constexpr double below = 56.0;

  double x_end, y_end, height;  // both quantities start at 0

  [[nodiscard]] double x(double v) const { return left + (width - left - right) * v / x_end; }
  [[nodiscard]] double y(double v) const { return above + plot() * (1.0 - v / y_end); }
  [[nodiscard]] double plot() const { return height - above - below; }
};

inline std::string text_at(double x, double y, char const* anchor, std::string const& text) {
  return "<text x=\"" + fixed(x) + "\" y=\"" + fixed(y) + "\" text-anchor=\"" + anchor + "\">" + escaped(text) +
         "</text>";
}

inline std::string line(char const* kind, double x1, double y1, double x2, double y2) {
  return std::string("<line class=\"") + kind + "\" x1=\"" + fixed(x1) + "\" y1=\"" + fixed(y1) + "\" x2=\"" +
         fixed(x2) + "\" y2=\"" + fixed(y2) + "\"/>";
}

// Lines at round values with their numbers, and what the quantities are.
inline std::string chart_grid(Frame const& f, std::string const& x_name, std::string const& y_name) {
  std::string svg;
  auto const steps = [](double end, double most) {
    double step = round_step(end);
    while (end / step > most) {
      step *= 2.0;
    }
    return std::pair{step, step < 0.1 ? 2 : step < 1.0 ? 1 : 0};
  };
  auto const [dx, x_decimals] = steps(f.x_end, 6.0);
  for (int k = 0; k * dx <= f.x_end * 1.0001; ++k) {
    svg += line("grid", f.x(k * dx), f.above, f.x(k * dx), f.above + f.plot()) +
           text_at(f.x(k * dx), f.above + f.plot() + 22.0, "middle", fixed(k * dx, x_decimals));
  }
  auto const [dy, y_decimals] = steps(f.y_end, 5.0);
  for (int k = 0; k * dy <= f.y_end * 1.0001; ++k) {
    svg += line("grid", f.left, f.y(k * dy), f.width - f.right, f.y(k * dy)) +
           text_at(f.left - 6.0, f.y(k * dy) + 6.0, "end", fixed(k * dy, y_decimals));
  }
  return svg + text_at(f.width - f.right, f.height - 8.0, "end", x_name) + text_at(4.0, 20.0, "start", y_name) + "\n";
}

inline std::string chart_head(double height, std::string const& label, std::string const& more = {}) {
  return "<svg class=\"chart\" viewBox=\"0 0 640 " + fixed(height, 0) + "\" role=\"img\" aria-label=\"" +
         escaped(label) + "\"" + more + ">\n";
}

}  // namespace detail

/// Clearance over the time of a run, and below it a strip for each switch of the policy (dark: inside) and one for the
/// status (light: ok; dark: any other), with a cursor line that a script may move. For a page that has classes for it.
/// `switches` are the names of the bits of Tick::modes, outermost first. Clearance over 2 m is drawn at 2 m.
[[nodiscard]] inline std::string time_chart(Run const& run, std::vector<std::string> const& switches,
                                            std::string const& label) {
  constexpr double most_clear = 2.0;
  double const end = std::max(run.time, 0.1);
  double highest = 0.1;
  for (Tick const& t : run.ticks) {
    highest = std::max(highest, std::min(t.clearance, most_clear));
  }
  constexpr double strip = 42.0;
  double const strips = strip * static_cast<double>(switches.size() + 1);
  detail::Frame const f{end, 1.05 * highest, 230.0};
  std::string svg = detail::chart_head(f.height + strips, label,
                                       " data-x0=\"" + detail::fixed(f.x(0.0)) + "\" data-x1=\"" +
                                           detail::fixed(f.x(end)) + "\" data-end=\"" + detail::fixed(end, 4) + "\"") +
                    detail::chart_grid(f, "time, s", "clearance, m");
  svg += "<polyline class=\"trace\" points=\"";
  double drawn = -1.0;
  for (std::size_t k = 0; k < run.ticks.size(); ++k) {
    Tick const& t = run.ticks[k];
    double const x = f.x(std::min(t.time, end));
    if (x - drawn >= 1.0 || k + 1 == run.ticks.size()) {
      svg += detail::fixed(x) + "," + detail::fixed(f.y(std::clamp(t.clearance, 0.0, most_clear))) + " ";
      drawn = x;
    }
  }
  svg += "\"/>\n";

  // One strip: where `on` says so, a dark bar.
  auto const add_strip = [&](std::size_t row, std::string const& name, auto const& on) {
    double const top = f.height + strip * static_cast<double>(row);
    svg += "<rect class=\"off\" x=\"" + detail::fixed(f.left) + "\" y=\"" + detail::fixed(top) + "\" width=\"" +
           detail::fixed(f.width - f.left - f.right) + "\" height=\"12\"/><path class=\"on\" d=\"";
    for (std::size_t k = 0; k < run.ticks.size(); ++k) {
      std::size_t const first = k;
      while (k < run.ticks.size() && on(run.ticks[k])) {
        ++k;
      }
      if (k > first) {
        double const until = k < run.ticks.size() ? run.ticks[k].time : end;
        svg += "M" + detail::fixed(f.x(run.ticks[first].time)) + " " + detail::fixed(top) + "H" +
               detail::fixed(f.x(std::min(until, end))) + "v12H" + detail::fixed(f.x(run.ticks[first].time)) + "z";
      }
    }
    svg += "\"/>" + detail::text_at(f.left, top + 31.0, "start", name) + "\n";
  };
  for (std::size_t i = 0; i < switches.size(); ++i) {
    std::uint32_t const bit = std::uint32_t{1} << (switches.size() - 1 - i);
    add_strip(i, switches[i], [bit](Tick const& t) { return (t.modes & bit) != 0; });
  }
  add_strip(switches.size(), "status other than ok", [](Tick const& t) { return t.status != Status::ok; });
  svg += detail::line("cursor", f.x(0.0), f.above, f.x(0.0), f.height + strips - 6.0);
  return svg + "</svg>\n";
}

/// A quantity over many runs of several policies.
struct SharesOf {
  std::string name;  ///< of the policy, for the legend
  std::vector<double> values;  ///< in any order; infinite ones count, and are beyond the chart
};

/// For each policy, which share of its runs has a value up to what: lines from 0 to 100 %, told apart by dashes (class
/// "p0", "p1", ...). The chart ends where 99 % of all runs do, or at `end`.
[[nodiscard]] inline std::string share_chart(std::vector<SharesOf> const& all, std::string const& quantity,
                                             std::string const& label,
                                             double end = std::numeric_limits<double>::quiet_NaN()) {
  std::vector<double> finite_values;
  for (SharesOf const& one : all) {
    std::copy_if(one.values.begin(), one.values.end(), std::back_inserter(finite_values),
                 [](double v) { return std::isfinite(v); });
  }
  std::sort(finite_values.begin(), finite_values.end());
  if (std::isnan(end)) {
    end = finite_values.empty() ? 1.0 : finite_values[(finite_values.size() - 1) * 99 / 100] * 1.02;
  }
  detail::Frame const f{std::max(end, 1e-6), 100.0, 270.0};
  std::string svg = detail::chart_head(f.height, label) + detail::chart_grid(f, quantity, "% of runs, up to");
  for (std::size_t i = 0; i < all.size(); ++i) {
    std::vector<double> values = all[i].values;
    std::sort(values.begin(), values.end());
    // A point wherever the line has climbed or gone on by a unit of the drawing.
    svg += "<polyline class=\"shares p" + std::to_string(i) + "\" points=\"" + detail::fixed(f.x(0.0)) + "," +
           detail::fixed(f.y(0.0));
    double last_x = f.x(0.0);
    double last_y = f.y(0.0);
    double reached = 0.0;
    for (std::size_t k = 0; k < values.size() && values[k] <= f.x_end; ++k) {
      double const x = f.x(std::max(values[k], 0.0));
      reached = 100.0 * static_cast<double>(k + 1) / static_cast<double>(values.size());
      double const y = f.y(reached);
      if (x - last_x >= 1.0 || last_y - y >= 1.0 || k + 1 == values.size()) {
        svg += " " + detail::fixed(x) + "," + detail::fixed(last_y) + " " + detail::fixed(x) + "," + detail::fixed(y);
        last_x = x;
        last_y = y;
      }
    }
    svg += " " + detail::fixed(f.x(f.x_end)) + "," + detail::fixed(f.y(reached)) + "\"/>\n";
  }
  return svg + "</svg>\n";
}

}  // namespace wend::inline v0::lab
