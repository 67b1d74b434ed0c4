// wend/lab/review_page.hpp - a review as one page: no network, no other file; for a meeting, a phone and a printer.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numbers>
#include <string>
#include <utility>
#include <vector>

#include "wend/lab/arrival_picture.hpp"
#include "wend/lab/charts.hpp"
#include "wend/lab/json.hpp"
#include "wend/lab/page_script.hpp"
#include "wend/lab/page_style.hpp"
#include "wend/lab/policy_tree.hpp"
#include "wend/lab/review.hpp"
#include "wend/lab/review_tables.hpp"
#include "wend/lab/svg.hpp"
#include "wend/lab/tally.hpp"

namespace wend::inline v0::lab {

namespace detail {

// The runs of a policy that a page shows: first that of the scene's own trip, then the worst of those drawn.
struct ShownRun {
  std::string name;
  Run const* run;
};

inline std::vector<ShownRun> shown_runs(PolicyReview const& policy) {
  std::vector<ShownRun> shown{{"the scene's own trip", &policy.run}};
  for (Replay const& replay : policy.worst) {
    shown.push_back({"drawn run " + std::to_string(replay.row.run), &replay.run});
  }
  return shown;
}

// What the guards behind the bits of Tick::modes are called.
inline std::vector<std::string> switch_names(int count) {
  std::vector<std::string> names;
  for (int i = 0; i < count; ++i) {
    names.push_back(count == 1 ? "switch" : "switch " + std::to_string(i + 1));
  }
  return names;
}

// How the script knows the runs: samples (at most `most` of a run; changes of mode and status with the sample at which
// they begin).
inline void run_data(JsonText& json, Run const& run, std::size_t most = 700) {
  std::vector<std::size_t> places;
  std::size_t const stride = run.ticks.size() / most + 1;
  for (std::size_t k = 0; k < run.ticks.size(); k += stride) {
    places.push_back(k);
  }
  if (!run.ticks.empty() && places.back() + 1 < run.ticks.size()) {
    places.push_back(run.ticks.size() - 1);
  }
  auto const row = [&](char const* name, int decimals, auto const& of) {
    json.key(name).array();
    for (std::size_t const k : places) {
      json.value(of(run.ticks[k]), decimals);
    }
    json.end_array();
  };
  json.object();
  row("t", 2, [](Tick const& t) { return t.time; });
  row("x", 3, [](Tick const& t) { return t.pose.position.x(); });
  row("y", 3, [](Tick const& t) { return t.pose.position.y(); });
  row("heading", 3, [](Tick const& t) { return std::atan2(t.pose.heading.y(), t.pose.heading.x()); });
  row("clearance", 3, [](Tick const& t) { return t.clearance; });
  row("speed", 3, [](Tick const& t) { return t.body.speed; });
  auto const changes = [&](char const* name, auto const& of) {
    json.key(name).array();
    for (std::size_t i = 0; i < places.size(); ++i) {
      if (i == 0 || of(run.ticks[places[i]]) != of(run.ticks[places[i - 1]])) {
        json.array().value(i).value(of(run.ticks[places[i]])).end_array();
      }
    }
    json.end_array();
  };
  changes("modes", [](Tick const& t) { return t.modes; });
  changes("status", [](Tick const& t) { return std::string(text(t.status)); });
  json.end_object();
}

inline std::string page_data(Review const& review) {
  JsonText json;
  json.array();
  for (PolicyReview const& policy : review.policies) {
    json.object().member("name", policy.name).key("switches").array();
    for (std::string const& name : switch_names(policy.switches)) {
      json.value(name);
    }
    json.end_array().key("runs").array();
    for (ShownRun const& shown : shown_runs(policy)) {
      run_data(json, *shown.run);
    }
    json.end_array().end_object();
  }
  json.end_array();
  return json.text();
}

// The page's own map: cells, discs, one group of marks a run, the machine.
inline std::string map_svg(Review const& review, PolicyReview const& policy, std::size_t number, double radius) {
  Vec2<double> low = review.region.low;
  Vec2<double> high = review.region.high;
  auto const include = [&](Vec2<double> const& p, double r) {
    low = low.cwiseMin(Vec2<double>(p.array() - r));
    high = high.cwiseMax(Vec2<double>(p.array() + r));
  };
  for (WorldDisc const& d : review.world.discs) {
    include(d.disc.centre, d.disc.radius);
  }
  std::vector<ShownRun> const shown = shown_runs(policy);
  for (ShownRun const& one : shown) {
    for (Tick const& t : one.run->ticks) {
      include(t.pose.position, radius);
    }
  }
  Sheet const sheet{low.x(), high.x(), low.y(), high.y(), 640.0};
  double const bottom = sheet.height() + 2.0 * Sheet::margin - 16.0;
  std::string svg =
      "<svg class=\"map\" viewBox=\"0 0 640 " + fixed(bottom, 0) + "\" role=\"img\" aria-label=\"" +
      escaped("Map of " + std::to_string(review.world.discs.size()) + " discs with " + std::to_string(shown.size()) +
              " runs of " + policy.name + "; the scene's own trip " + outcome(policy.run)) +
      "\" data-x=\"" + fixed(sheet.x(0.0), 3) + "\" data-y=\"" + fixed(sheet.y(0.0), 3) + "\" data-scale=\"" +
      fixed(sheet.scale(), 5) + "\">\n<rect class=\"sheet\" width=\"640\" height=\"" + fixed(bottom, 0) + "\"/>\n";
  if (policy.arrivals) {
    svg += svg_cells(sheet, *policy.arrivals, std::to_string(number)).svg;
  }
  svg += svg_axes(sheet);
  World still;
  for (WorldDisc const& d : review.world.discs) {
    if (d.velocity.squaredNorm() > 0.0) {
      World one;
      one.discs.push_back(d);
      svg += "<g class=\"mover\" data-vx=\"" + fixed(d.velocity.x(), 4) + "\" data-vy=\"" + fixed(d.velocity.y(), 4) +
             "\">" + svg_discs(sheet, one) + "</g>\n";
    } else {
      still.discs.push_back(d);
    }
  }
  svg += svg_discs(sheet, still);
  for (std::size_t k = 0; k < shown.size(); ++k) {
    Run const& run = *shown[k].run;
    svg += "<g class=\"run\" data-run=\"" + std::to_string(k) + "\">" + svg_run(sheet, run, strokes[3]);
    if (!run.ticks.empty()) {
      Vec2<double> const& goal = k == 0 ? review.trip.goal : policy.worst[k - 1].row.goal;
      svg += "<g class=\"ends\">" + svg_ring(sheet, run.ticks.front().pose.position) + svg_goal(sheet, goal) + "</g>";
    }
    svg += "</g>\n";
  }
  Pose<double> const& start = review.trip.start;
  double const pixels = std::max(radius * sheet.scale(), 4.0);
  double const turn = -std::atan2(start.heading.y(), start.heading.x()) * 180.0 / std::numbers::pi;
  return svg + "<g class=\"robot\" transform=\"translate(" + fixed(sheet.x(start.position.x())) + " " +
         fixed(sheet.y(start.position.y())) + ") rotate(" + fixed(turn) + ")\"><circle r=\"" + fixed(pixels) +
         "\"/><line x2=\"" + fixed(pixels) + "\"/></g>\n</svg>\n";
}

inline std::string map_key(bool with_cells) {
  auto const swatch = [](std::string const& inside, char const* what) {
    return "<li><svg viewBox=\"0 0 48 16\" aria-hidden=\"true\">" + inside + "</svg>" + what + "</li>";
  };
  std::string html = "<ul class=\"key\">";
  if (with_cells) {
    html += swatch("<rect class=\"proved\" width=\"48\" height=\"16\"/>", "arrival proved") +
            swatch(
                "<rect class=\"between\" width=\"48\" height=\"16\"/><path class=\"hatch\" d=\"M4 16L20 0M16 16L32 "
                "0M28 16L44 0\"/>",
                "undecided") +
            swatch("<rect class=\"blocked\" width=\"48\" height=\"16\"/>", "touches a disc");
  }
  return html + "<li>open ring: start</li><li>crossed ring: goal</li><li>dot: a guard changed its mind</li>" +
         "<li>X: ended short of the goal</li></ul>\n";
}

inline std::string policy_section(Review const& review, std::size_t number, double radius) {
  PolicyReview const& policy = review.policies[number];
  std::string const n = std::to_string(number);
  std::vector<ShownRun> const shown = shown_runs(policy);
  std::string html = "<section class=\"policy\" data-policy=\"" + n + "\" aria-labelledby=\"policy-" + n +
                     "\">\n<h3 id=\"policy-" + n + "\">" + escaped(policy.name) + "</h3>\n<div class=\"policy-body\">" +
                     "<div>\n<div class=\"controls\"><label>Run <select>";
  for (std::size_t k = 0; k < shown.size(); ++k) {
    html += std::string("<option") + (k == 0 ? " selected" : "") + ">" + escaped(shown[k].name) + "</option>";
  }
  html +=
      "</select></label><label class=\"along\">Along it <input type=\"range\" min=\"0\" max=\"1\" value=\"0\" "
      "step=\"1\"></label><button type=\"button\" class=\"play\">Play</button><output></output></div>\n<figure>" +
      map_svg(review, policy, number, radius) + map_key(policy.arrivals.has_value()) + "</figure></div>\n<div>";
  for (std::size_t k = 0; k < shown.size(); ++k) {
    html += "<figure class=\"chart-of\" data-run=\"" + std::to_string(k) + "\"><figcaption>" + escaped(shown[k].name) +
            ": " + escaped(outcome(*shown[k].run)) + "</figcaption>" +
            time_chart(*shown[k].run, switch_names(policy.switches),
                       "Clearance over time of " + shown[k].name + ": " + outcome(*shown[k].run)) +
            "</figure>\n";
  }
  return html + "<h3>How it decides</h3>\n" + tree_html(policy.tree) + "</div></div></section>\n";
}

inline std::string distributions(Review const& review) {
  std::string html = "<ul class=\"key\">";
  for (std::size_t i = 0; i < review.policies.size(); ++i) {
    html += "<li><svg viewBox=\"0 0 48 16\" aria-hidden=\"true\"><line class=\"shares p" + std::to_string(i) +
            "\" x1=\"0\" y1=\"8\" x2=\"48\" y2=\"8\"/></svg>" + escaped(review.policies[i].name) + "</li>";
  }
  html += "</ul>\n<div class=\"charts\">\n";
  auto const chart = [&](char const* quantity, auto const& value, auto const& counts) {
    std::vector<SharesOf> all;
    std::string label = std::string("Shares of runs by ") + quantity + ". Medians:";
    for (PolicyReview const& p : review.policies) {
      SharesOf one{p.name, {}};
      for (RunRow const& row : p.rows) {
        if (counts(row)) {
          one.values.push_back(value(row));
        }
      }
      double const median = spread_of(one.values).median;
      label += " " + p.name + " " + (std::isfinite(median) ? fixed(median, 2) : "-") + ";";
      all.push_back(std::move(one));
    }
    html += "<figure>" + share_chart(all, quantity, label) + "</figure>\n";
  };
  auto const all_runs = [](RunRow const&) { return true; };
  chart("least clearance, m", [](RunRow const& r) { return r.least_clearance; }, all_runs);
  chart(
      "time of arrivals, s", [](RunRow const& r) { return r.time; },
      [](RunRow const& r) { return r.ending == Ending::arrived; });
  chart(
      "path over straight line", [](RunRow const& r) { return r.path_length / std::max(r.straight_length, 1e-9); },
      [](RunRow const& r) { return r.ending == Ending::arrived; });
  chart("switches a run", [](RunRow const& r) { return static_cast<double>(r.switches); }, all_runs);
  return html + "</div>\n";
}

}  // namespace detail

/// The review as one HTML file that needs nothing else. `again` are lines to be typed to make it again and to drive one
/// of its runs alone; `radius` is the machine's, metres. Whatever text comes from files is escaped.
///
/// Without scripts the page shows all policies and runs at once; with them one at a time, with the machine moved along
/// it. It can be used by keyboard alone, has a text for every picture, and tells nothing by colour alone.
[[nodiscard]] inline std::string review_page(Review const& review, std::vector<std::string> const& again,
                                             double radius) {
  std::string html =
      "<!doctype html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<meta name=\"viewport\" "
      "content=\"width=device-width, initial-scale=1\">\n<title>" +
      escaped(review.title) + "</title>\n<style>" + detail::page_style + tree_css +
      "</style>\n</head>\n<body>\n<header>\n<h1>" + escaped(review.title) + "</h1>\n<p>" +
      std::to_string(review.world.discs.size()) + " discs, " +
      detail::fixed((review.trip.goal - review.trip.start.position).norm()) +
      " m from start to goal as the crow flies; " + std::to_string(review.policies.size()) +
      (review.policies.size() == 1 ? " policy" : " policies") + ", " + std::to_string(review.runs) +
      " drawn runs of each, seed " + std::to_string(review.seed) + ".</p>\n";
  if (!review.complete) {
    html +=
        "<p class=\"caution\"><strong>Interrupted.</strong> Fewer runs were driven than asked for; all counts are "
        "of those that were.</p>\n";
  }
  html +=
      "<p class=\"caution\" role=\"note\"><strong>Evidence, and no safety function.</strong> Runs are simulations of a "
      "machine in a world of discs. Proofs hold for what they assume and nothing else. A machine that can hurt someone "
      "needs protective devices, a risk assessment and people who are qualified for them; local codes come "
      "first.</p>\n<nav aria-label=\"Parts of this page\"><ul><li><a href=\"#glance\">At a glance</a></li><li><a "
      "href=\"#statements\">What holds</a></li><li><a href=\"#policies\">Runs and maps</a></li><li><a "
      "href=\"#shares\">Distributions</a></li><li><a href=\"#pairs\">Pairs</a></li><li><a href=\"#worst\">Worst "
      "runs</a></li><li><a href=\"#again\">Make it again</a></li></ul></nav>\n</header>\n<main>\n"
      "<h2 id=\"glance\">At a glance</h2>\n" +
      detail::glance(review) + "<h2 id=\"statements\">What holds, and what it rests on</h2>\n" +
      detail::statements(review) + "<h2 id=\"policies\">Runs and maps</h2>\n<fieldset class=\"choice\"><legend>Policy" +
      "</legend>";
  for (std::size_t i = 0; i < review.policies.size(); ++i) {
    html += std::string("<label><input type=\"radio\" name=\"policy\"") +
            (i + 1 == review.policies.size() ? " checked" : "") + "> " + escaped(review.policies[i].name) + "</label>";
  }
  html += "</fieldset>\n";
  for (std::size_t i = 0; i < review.policies.size(); ++i) {
    html += detail::policy_section(review, i, radius);
  }
  html +=
      "<h2 id=\"shares\">Distributions over the drawn runs</h2>\n" + detail::distributions(review) +
      "<h2 id=\"pairs\">Policy against policy</h2>\n" + detail::comparisons(review) +
      "<h2 id=\"worst\">Runs to look at first</h2>\n" + detail::worst_table(review) +
      "<h2 id=\"again\">Make it again</h2>\n<p>Every draw is counted from the seed and the number of the run, so the "
      "same command gives the same page on any number of threads.</p>\n<pre>";
  for (std::string const& line : again) {
    html += escaped(line) + "\n";
  }
  return html + "</pre>\n</main>\n<script type=\"application/json\" id=\"runs\">" + detail::page_data(review) +
         "</script>\n<script>" + detail::page_script + "</script>\n</body>\n</html>\n";
}

}  // namespace wend::inline v0::lab
