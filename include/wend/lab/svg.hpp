// wend/lab/svg.hpp - the pieces that pictures of a world share: text, numbers, axes, discs, paths. Metres in, pixels
// out.
#pragma once

#include <array>
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <string>
#include <string_view>
#include <vector>

#include "wend/lab/simulate.hpp"
#include "wend/lab/world.hpp"

namespace wend::inline v0::lab {

/// Text made safe inside XML and HTML, in content and in quoted attributes.
[[nodiscard]] inline std::string escaped(std::string_view text) {
  std::string out;
  for (char const c : text) {
    switch (c) {
      case '&': out += "&amp;"; break;
      case '<': out += "&lt;"; break;
      case '>': out += "&gt;"; break;
      case '"': out += "&quot;"; break;
      case '\'': out += "&#39;"; break;
      default: out += (static_cast<unsigned char>(c) < 0x20 && c != '\n' && c != '\t') ? ' ' : c;
    }
  }
  return out;
}

/// A run to be drawn, with the name that the legend gives it. The run must have kept its ticks.
struct DrawnRun {
  std::string name;  ///< as it is; it is escaped when drawn
  Run run;  ///< with its ticks
};

namespace detail {

/// A number with as many decimals as a picture needs.
inline std::string fixed(double value, int decimals = 1) {
  std::array<char, 64> text{};
  std::snprintf(text.data(), text.size(), "%.*f", decimals, value);
  return text.data();
}

// Colours that differ in lightness too, and dashes, so that neither colour sight nor a colour printer is needed.
struct Stroke {
  char const* colour;
  char const* dash;

  [[nodiscard]] std::string attributes() const {
    return std::string(" stroke=\"") + colour + "\" stroke-width=\"2.2\" stroke-dasharray=\"" + dash +
           "\" fill=\"none\"";
  }
};
inline constexpr std::array<Stroke, 6> strokes{{{"#8c2d19", "2 4"},
                                                {"#c77b0a", "9 4"},
                                                {"#2b7a78", "12 3 2 3"},
                                                {"#1f3c88", "none"},
                                                {"#6b4c9a", "5 3"},
                                                {"#444444", "1 3"}}};

// A rectangle of the world, metres, on a page of pixels, y up. What is below it on the page is the legend's.
struct Sheet {
  static constexpr double margin = 44.0;
  static constexpr double legend_line = 22.0;

  double left, right, bottom, top, width;

  [[nodiscard]] double scale() const { return (width - 2.0 * margin) / (right - left); }
  [[nodiscard]] double height() const { return (top - bottom) * scale(); }
  [[nodiscard]] double x(double metres) const { return margin + (metres - left) * scale(); }
  [[nodiscard]] double y(double metres) const { return margin + height() - (metres - bottom) * scale(); }
  /// Where a line of the legend stands; the first has number 0.
  [[nodiscard]] double row(std::size_t line) const {
    return height() + 2.0 * margin + legend_line * static_cast<double>(line);
  }
};

inline double round_step(double extent) {
  double const rough = extent / 8.0;
  double const power = std::pow(10.0, std::floor(std::log10(rough)));
  double const lead = rough / power;
  return power * (lead < 1.5 ? 1.0 : lead < 3.5 ? 2.0 : lead < 7.5 ? 5.0 : 10.0);
}

// The document up to its title, with room for so many lines of legend.
inline std::string svg_head(Sheet const& sheet, std::string_view title, std::size_t legend_lines) {
  return "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 " + fixed(sheet.width, 0) + " " +
         fixed(sheet.row(legend_lines) + 12.0, 0) +
         "\" role=\"img\" font-family=\"sans-serif\" font-size=\"14\">\n<title>" + escaped(title) +
         "</title>\n<rect width=\"100%\" height=\"100%\" fill=\"#fdfcf8\"/>\n<text x=\"" + fixed(Sheet::margin) +
         "\" y=\"26\" font-size=\"16\" fill=\"#222222\">" + escaped(title) + "</text>\n";
}

// Lines at round metres, with their numbers.
inline std::string svg_axes(Sheet const& s) {
  double const step = round_step(s.right - s.left);
  int const decimals = step < 0.1 ? 2 : step < 1.0 ? 1 : 0;
  std::string svg = "<g class=\"axes\" stroke=\"#e4e0d6\" stroke-width=\"1\" fill=\"#6a6a6a\" font-size=\"12\">\n";
  // Counted, so that 0 is 0 and not -1e-17. Adding 0 takes the sign off a zero.
  for (double k = std::ceil(s.left / step); k * step <= s.right; k += 1.0) {
    double const x = k * step;
    svg += "<line x1=\"" + fixed(s.x(x)) + "\" y1=\"" + fixed(s.y(s.top)) + "\" x2=\"" + fixed(s.x(x)) + "\" y2=\"" +
           fixed(s.y(s.bottom)) + "\"/><text stroke=\"none\" text-anchor=\"middle\" x=\"" + fixed(s.x(x)) + "\" y=\"" +
           fixed(s.y(s.bottom) + 16.0) + "\">" + fixed(x + 0.0, decimals) + ((k + 1.0) * step > s.right ? " m" : "") +
           "</text>\n";
  }
  for (double k = std::ceil(s.bottom / step); k * step <= s.top; k += 1.0) {
    double const y = k * step;
    svg += "<line x1=\"" + fixed(s.x(s.left)) + "\" y1=\"" + fixed(s.y(y)) + "\" x2=\"" + fixed(s.x(s.right)) +
           "\" y2=\"" + fixed(s.y(y)) + "\"/><text stroke=\"none\" text-anchor=\"end\" x=\"" +
           fixed(s.x(s.left) - 6.0) + "\" y=\"" + fixed(s.y(y) + 4.0) + "\">" + fixed(y + 0.0, decimals) + "</text>\n";
  }
  return svg + "</g>\n";
}

// Discs at time 0; moving ones get a line as long as 5 s of travel.
inline std::string svg_discs(Sheet const& sheet, World const& world) {
  std::string svg = "<g class=\"discs\" fill=\"#cfc9ba\" stroke=\"#7d7766\" stroke-width=\"1\">\n";
  for (WorldDisc const& d : world.discs) {
    double const cx = sheet.x(d.disc.centre.x());
    double const cy = sheet.y(d.disc.centre.y());
    svg += "<circle cx=\"" + fixed(cx) + "\" cy=\"" + fixed(cy) + "\" r=\"" + fixed(d.disc.radius * sheet.scale(), 2) +
           "\"/>";
    if (d.velocity.squaredNorm() > 0.0) {
      Vec2<double> const later = World::at(d, 5.0).centre;
      svg += "<line x1=\"" + fixed(cx) + "\" y1=\"" + fixed(cy) + "\" x2=\"" + fixed(sheet.x(later.x())) + "\" y2=\"" +
             fixed(sheet.y(later.y())) + "\"/>";
    }
    svg += "\n";
  }
  return svg + "</g>\n";
}

// The path of a run, with a dot wherever a guard changed its mind, and a cross where it ended short of the goal.
inline std::string svg_run(Sheet const& sheet, Run const& run, Stroke const& stroke) {
  std::string dots;
  std::string svg = "<polyline" + stroke.attributes() + " points=\"";
  std::vector<Tick> const& ticks = run.ticks;
  Vec2<double> drawn{0.0, 0.0};
  for (std::size_t k = 0; k < ticks.size(); ++k) {
    Vec2<double> const& position = ticks[k].pose.position;
    std::string const x = fixed(sheet.x(position.x()));
    std::string const y = fixed(sheet.y(position.y()));
    if (k == 0 || k + 1 == ticks.size() || sheet.scale() * (position - drawn).norm() >= 2.0) {  // pixels
      svg += x + "," + y + " ";
      drawn = position;
    }
    if (k > 0 && ticks[k].modes != ticks[k - 1].modes) {
      dots += "<circle cx=\"" + x + "\" cy=\"" + y + "\" r=\"2.6\"/>";
    }
  }
  svg += "\"/>\n";
  if (!dots.empty()) {
    svg += std::string("<g fill=\"") + stroke.colour + "\">" + dots + "</g>\n";
  }
  if (run.ending != Ending::arrived && !ticks.empty()) {
    Vec2<double> const& end = ticks.back().pose.position;
    svg += std::string("<path stroke=\"") + stroke.colour + "\" stroke-width=\"3\" d=\"M" +
           fixed(sheet.x(end.x()) - 6.0) + " " + fixed(sheet.y(end.y()) - 6.0) + "l12 12m0 -12l-12 12\"/>\n";
  }
  return svg;
}

// One line of a legend: what a run's stroke looks like, and how it went.
inline std::string svg_run_legend(Sheet const& sheet, std::size_t line, DrawnRun const& drawn, Stroke const& stroke,
                                  bool with_clearance) {
  double const row = sheet.row(line);
  std::string const clearance =
      with_clearance ? "least clearance " + fixed(100.0 * drawn.run.least_clearance, 0) + " cm, " : "";
  return "<line" + stroke.attributes() + " x1=\"" + fixed(Sheet::margin) + "\" y1=\"" + fixed(row) + "\" x2=\"" +
         fixed(Sheet::margin + 48.0) + "\" y2=\"" + fixed(row) + "\"/><text x=\"" + fixed(Sheet::margin + 58.0) +
         "\" y=\"" + fixed(row + 5.0) + "\" fill=\"#222222\">" + escaped(drawn.name) + ": " + text(drawn.run.ending) +
         " after " + fixed(drawn.run.time) + " s, " + clearance + std::to_string(drawn.run.switches) +
         " switches</text>\n";
}

// A line of small print in the legend.
inline std::string svg_note(Sheet const& sheet, std::size_t line, std::string_view note) {
  return "<text x=\"" + fixed(Sheet::margin) + "\" y=\"" + fixed(sheet.row(line) + 5.0) +
         "\" fill=\"#6a6a6a\" font-size=\"12\">" + escaped(note) + "</text>\n";
}

// A ring where a run starts, and one with a cross at the goal.
inline std::string svg_ring(Sheet const& sheet, Vec2<double> const& at) {
  return "<circle cx=\"" + fixed(sheet.x(at.x())) + "\" cy=\"" + fixed(sheet.y(at.y())) +
         "\" r=\"7\" fill=\"none\" stroke=\"#222222\" stroke-width=\"2\"/>";
}
inline std::string svg_goal(Sheet const& sheet, Vec2<double> const& at) {
  return svg_ring(sheet, at) + "<path fill=\"none\" stroke=\"#222222\" stroke-width=\"2\" d=\"M" +
         fixed(sheet.x(at.x()) - 11.0) + " " + fixed(sheet.y(at.y())) + "h22m-11 -11v22\"/>";
}

}  // namespace detail
}  // namespace wend::inline v0::lab
