// wend/lab/arrival_picture.hpp - an arrival map drawn on its world, as one SVG file.
#pragma once

#include <cmath>
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "wend/lab/arrival_map.hpp"
#include "wend/lab/svg.hpp"
#include "wend/lab/world.hpp"

namespace wend::inline v0::lab {

namespace detail {

// All cells of a kind, as one SVG path over a grid whose unit is a cell, y down. Runs of cells in a row are drawn as
// one rectangle, and together with the rows below as long as these have the same run.
inline std::string outline(ArrivalMap const& map, Arrival kind) {
  struct Run {
    int first, end, since;
  };
  CellIndex const& count = map.grid.count();
  std::vector<Run> open;
  std::string path;
  auto const close = [&](Run const& run, int row) {
    path += "M" + std::to_string(run.first) + " " + std::to_string(run.since) + "H" + std::to_string(run.end) + "V" +
            std::to_string(row) + "H" + std::to_string(run.first) + "z";
  };
  for (int row = 0; row <= count.y; ++row) {
    std::vector<Run> now;
    for (int x = 0; row < count.y && x < count.x; ++x) {
      if (map.over_headings(x, count.y - 1 - row) != kind) {
        continue;
      }
      int const first = x;
      while (x < count.x && map.over_headings(x, count.y - 1 - row) == kind) {
        ++x;
      }
      now.push_back({first, x, row});
    }
    std::size_t next = 0;
    for (Run const& run : open) {
      while (next < now.size() && now[next].first < run.first) {
        ++next;
      }
      if (next < now.size() && now[next].first == run.first && now[next].end == run.end) {
        now[next].since = run.since;
      } else {
        close(run, row);
      }
    }
    open = std::move(now);
  }
  return path;
}

// A name that two different drawings do not share: a page may hold several, and names are the page's (FNV-1a).
inline std::string name_of(std::string_view drawing) {
  std::uint32_t hash = 2166136261U;
  for (char const c : drawing) {
    hash = (hash ^ static_cast<unsigned char>(c)) * 16777619U;
  }
  return "map-" + std::to_string(hash);
}

// On a map the solid, dark stroke comes first: the others drown in the hatching.
inline Stroke const& stroke_on_map(std::size_t i) { return strokes[(i + 3) % strokes.size()]; }

// The cells of a map on a sheet, which may show more than the map does. Colours may be overruled by the page, by class.
struct SvgCells {
  std::string svg;
  std::string hatched;  // fill of the undecided ones
  std::string clip;  // attribute that keeps what has it within the map
};

// `also` tells two drawings of one page apart that may have the same cells: one that is not shown lends no pattern.
inline SvgCells svg_cells(Sheet const& sheet, ArrivalMap const& map, std::string const& also = {}) {
  CellGrid const& grid = map.grid;
  double const x = sheet.x(grid.low().x());
  double const y = sheet.y(grid.high().y());
  double const across = (grid.high().x() - grid.low().x()) * sheet.scale();
  double const down = (grid.high().y() - grid.low().y()) * sheet.scale();
  std::string const area = " x=\"" + fixed(x, 2) + "\" y=\"" + fixed(y, 2) + "\" width=\"" + fixed(across, 2) +
                           "\" height=\"" + fixed(down, 2) + "\"";
  std::string const undecided = outline(map, Arrival::undecided);
  std::string const name = name_of(area + undecided + also);
  SvgCells cells{{}, "url(#" + name + "-hatched)", "clip-path=\"url(#" + name + "-area)\""};
  // The pattern keeps to pixels, so it does not fill the cells, which are scaled: they cut it out.
  std::string const place = "transform=\"translate(" + fixed(x, 2) + " " + fixed(y, 2) + ") scale(" +
                            fixed(across / grid.count().x, 6) + " " + fixed(down / grid.count().y, 6) +
                            ")\" shape-rendering=\"crispEdges\"";
  cells.svg = "<defs><pattern id=\"" + name + "-hatched\" width=\"8\" height=\"8\" " +
              "patternUnits=\"userSpaceOnUse\" patternTransform=\"rotate(45)\"><rect class=\"between\" width=\"8\" " +
              "height=\"8\" fill=\"#f8efdc\"/><rect class=\"hatch\" width=\"2\" height=\"8\" " +
              "fill=\"#d8b483\"/></pattern><clipPath id=\"" + name + "-area\"><rect" + area +
              "/></clipPath><clipPath id=\"" + name + "-undecided\"><path " + place + " d=\"" + undecided +
              "\"/></clipPath></defs>\n<rect class=\"proved\"" + area + " fill=\"#d3e6e0\"/>\n<rect" + area +
              " fill=\"" + cells.hatched + "\" clip-path=\"url(#" + name + "-undecided)\"/>\n" +
              "<path class=\"blocked\" fill=\"#5b5a57\" " + place + " d=\"" + outline(map, Arrival::blocked) + "\"/>\n";
  return cells;
}

}  // namespace detail

/// The map with the discs and the goal on it, runs if any, and a legend with the shares. Proved cells are plain,
/// undecided ones hatched, blocked ones dark: told apart without colours too. Where a map has headings, a position
/// counts as proved when it is for all of them. `title` may be any text. Runs need not start or end at one place.
[[nodiscard]] inline std::string arrival_picture(std::string_view title, ArrivalMap const& map, World const& world,
                                                 Vec2<double> const& goal, std::vector<DrawnRun> const& runs = {},
                                                 double width = 960.0) {
  using detail::fixed;
  CellGrid const& grid = map.grid;
  detail::Sheet const sheet{grid.low().x(), grid.high().x(), grid.low().y(), grid.high().y(), width};
  detail::SvgCells const cells = detail::svg_cells(sheet, map);
  std::string svg = detail::svg_head(sheet, title, runs.size() + 4) + cells.svg;
  svg += detail::svg_axes(sheet) + "<g " + cells.clip + ">\n" + detail::svg_discs(sheet, world);
  for (std::size_t i = 0; i < runs.size(); ++i) {
    svg += detail::svg_run(sheet, runs[i].run, detail::stroke_on_map(i));
    if (!runs[i].run.ticks.empty()) {
      svg += detail::svg_ring(sheet, runs[i].run.ticks.front().pose.position);
    }
  }
  svg += detail::svg_goal(sheet, goal) + "</g>\n";

  bool const turns = grid.count().heading > 1;
  auto const swatch = [&](std::size_t line, std::string const& fill, std::string const& what) {
    double const row = sheet.row(line);
    svg += "<rect x=\"" + fixed(detail::Sheet::margin) + "\" y=\"" + fixed(row - 8.0) +
           "\" width=\"48\" height=\"16\" stroke=\"#7d7766\" fill=\"" + fill + "\"/><text x=\"" +
           fixed(detail::Sheet::margin + 58.0) + "\" y=\"" + fixed(row + 5.0) + "\" fill=\"#222222\">" + what +
           "</text>\n";
  };
  std::string const of = turns ? " of the free states; drawn where for every heading" : " of the free area";
  double const proved = std::floor(1000.0 * map.share(Arrival::proved)) / 10.0;  // rounded down: no more than is proved
  double const rest = map.share(Arrival::proved) + map.share(Arrival::undecided) > 0.0 ? 100.0 - proved : 0.0;
  swatch(0, "#d3e6e0", "proved: every path from here ends at the goal, " + fixed(proved) + " %" + of);
  swatch(1, cells.hatched, "undecided, " + fixed(rest) + " %" + (turns ? "; drawn where for some heading" : ""));
  swatch(2, "#5b5a57", "blocked: the machine would touch a disc");
  for (std::size_t i = 0; i < runs.size(); ++i) {
    svg += detail::svg_run_legend(sheet, 3 + i, runs[i], detail::stroke_on_map(i), !world.discs.empty());
  }
  double const metres = (grid.high().x() - grid.low().x()) / grid.count().x;
  svg += detail::svg_note(sheet, 3 + runs.size(),
                          "Cells of " + fixed(1000.0 * metres, 0) + " mm" +
                              (turns ? " and " + fixed(360.0 / grid.count().heading) + " degrees" : std::string()) +
                              ". Crossed ring: goal." + (runs.empty() ? "" : " Open ring: start of a simulated run."));
  return svg + "</svg>\n";
}

}  // namespace wend::inline v0::lab
