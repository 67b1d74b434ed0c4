// wend/lab/review_tables.hpp - the tables of the review page: counts, statements with verdicts, pairs, the worst runs.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <string>
#include <utility>
#include <vector>

#include "wend/lab/review.hpp"
#include "wend/lab/statistics.hpp"
#include "wend/lab/svg.hpp"
#include "wend/lab/tally.hpp"

namespace wend::inline v0::lab::detail {

inline std::string outcome(Run const& run) {
  std::string said = text(run.ending);
  if (run.ending == Ending::time_out) {
    said += std::string(", ") + text(run.last_status);
  }
  return said + " after " + fixed(run.time) + " s, least clearance " +
         (std::isfinite(run.least_clearance) ? fixed(100.0 * run.least_clearance, 0) + " cm" : "unlimited");
}

// Shapes for verdicts: a full square, a cross, an open ring.
inline std::string verdict_html(Holds holds) {
  char const* const shape = holds == Holds::yes  ? "<rect x=\"1\" y=\"1\" width=\"10\" height=\"10\" stroke=\"none\"/>"
                            : holds == Holds::no ? "<path d=\"M1 1L11 11M11 1L1 11\" stroke-width=\"3\" fill=\"none\"/>"
                                                 : "<circle cx=\"6\" cy=\"6\" r=\"4.5\" stroke-width=\"2\" "
                                                   "fill=\"none\"/>";
  char const* const kind = holds == Holds::yes ? "yes" : holds == Holds::no ? "no" : "open";
  return std::string("<span class=\"verdict holds-") + kind + "\"><svg viewBox=\"0 0 12 12\" aria-hidden=\"true\">" +
         shape + "</svg>" + text(holds) + "</span>";
}

// A table whose rows become cards where the page is narrow.
class HtmlTable {
 public:
  // Names of the columns; those with '#' in front hold numbers.
  HtmlTable(std::string const& caption, std::vector<std::string> columns)
      : columns_(std::move(columns)), html_("<table><caption>" + escaped(caption) + "</caption><thead><tr>") {
    for (std::string& name : columns_) {
      bool const number = !name.empty() && name.front() == '#';
      if (number) {
        name.erase(0, 1);
      }
      numbers_.push_back(number);
      html_ += std::string("<th scope=\"col\"") + (number ? " class=\"number\"" : "") + ">" + escaped(name) + "</th>";
    }
    html_ += "</tr></thead><tbody>\n";
  }
  // Cells as markup; the first is the row's name.
  void row(std::vector<std::string> const& cells) {
    html_ += "<tr><th scope=\"row\">" + cells.front() + "</th>";
    for (std::size_t i = 1; i < cells.size(); ++i) {
      html_ += std::string("<td") + (numbers_[i] ? " class=\"number\"" : "") + " data-label=\"" + escaped(columns_[i]) +
               "\"><span>" + cells[i] + "</span></td>";
    }
    html_ += "</tr>\n";
  }
  [[nodiscard]] std::string html() const { return html_ + "</tbody></table>\n"; }

 private:
  std::vector<std::string> columns_;
  std::vector<bool> numbers_;
  std::string html_;
};

inline std::string centimetres(double metres) {
  return std::isfinite(metres) ? fixed(100.0 * metres, 1) : std::string(std::isnan(metres) ? "-" : "unlimited");
}

inline std::string seconds(double value) { return std::isfinite(value) ? fixed(value, 1) : std::string("-"); }

inline std::string glance(Review const& review) {
  HtmlTable table("The scene's own trip, and " + std::to_string(review.runs) +
                      " runs with start, goal and errors drawn by chance, the same for each policy. Intervals: "
                      "Clopper and Pearson, 95 %.",
                  {"policy", "own trip", "#arrived", "95 % interval", "#contacts", "#time, median s",
                   "#clearance, 5 % of runs under, cm", "#switches a run, median"});
  for (PolicyReview const& p : review.policies) {
    Tally const& t = p.tally;
    std::string interval = "-";
    if (t.runs > 0) {
      Bounds const b = clopper_pearson(t.arrived, t.runs);
      interval = percent(b.low) + " to " + percent(b.high);
    }
    table.row({escaped(p.name), escaped(outcome(p.run)), of_runs(t.arrived, t.runs), interval,
               std::to_string(t.contacts), seconds(t.time.median), centimetres(t.clearance.low),
               t.runs > 0 ? fixed(t.switches.median, 0) : std::string("-")});
  }
  return table.html();
}

// One row a statement, one column a policy: what a meeting compares.
inline std::string statements(Review const& review) {
  std::vector<std::string> columns{"statement"};
  std::vector<std::string> claims;
  for (PolicyReview const& p : review.policies) {
    columns.push_back(p.name);
    for (Statement const& s : p.statements) {
      if (std::find(claims.begin(), claims.end(), s.claim) == claims.end()) {
        claims.push_back(s.claim);
      }
    }
  }
  HtmlTable table(
      "Proved: for all states of the region, by intervals, under the assumptions named. Counted: over drawn "
      "runs. Measured: on one run.",
      columns);
  for (std::string const& claim : claims) {
    std::vector<std::string> cells{escaped(claim)};
    for (PolicyReview const& p : review.policies) {
      auto const s = std::find_if(p.statements.begin(), p.statements.end(),
                                  [&](Statement const& one) { return one.claim == claim; });
      cells.push_back(s == p.statements.end() ? std::string("-")
                                              : verdict_html(s->holds) + " <span class=\"small\">" + text(s->basis) +
                                                    ": " + escaped(s->evidence) + "</span>");
    }
    table.row(cells);
  }
  return table.html();
}

inline std::string comparisons(Review const& review) {
  HtmlTable table(
      "Run by run on the same starts, goals and errors. p: McNemar's exact test that both arrive equally "
      "often.",
      {"pair", "#only the first arrived", "#only the second", "#p", "#time, second minus first, median s",
       "#clearance, second minus first, median cm"});
  for (std::size_t i = 0; i < review.policies.size(); ++i) {
    for (std::size_t j = i + 1; j < review.policies.size(); ++j) {
      PolicyReview const& a = review.policies[i];
      PolicyReview const& b = review.policies[j];
      std::string const pair = escaped(a.name) + " / " + escaped(b.name);
      if (a.rows.size() != b.rows.size() || a.rows.empty()) {
        table.row({pair, "-", "-", "-", "-", "-"});
        continue;
      }
      Comparison const c = compare(a.rows, b.rows);
      std::array<char, 40> p{};
      std::snprintf(p.data(), p.size(), c.p_value < 0.001 ? "%.1e" : "%.3f", c.p_value);
      table.row({pair, std::to_string(c.only_first), std::to_string(c.only_second), p.data(),
                 seconds(c.time_difference.median), centimetres(c.clearance_difference.median)});
    }
  }
  return table.html();
}

inline std::string worst_table(Review const& review) {
  HtmlTable table(
      "Of each policy's drawn runs: contacts first, then those that ran out of time, then the nearest to a "
      "disc.",
      {"policy", "#run", "ending", "#least clearance, cm", "#time, s", "look"});
  for (std::size_t i = 0; i < review.policies.size(); ++i) {
    PolicyReview const& p = review.policies[i];
    for (std::size_t k = 0; k < p.worst.size(); ++k) {
      RunRow const& row = p.worst[k].row;
      std::string ending = text(row.ending);
      if (row.ending == Ending::time_out) {
        ending += std::string(": ") + text(row.last_status);
      }
      std::string const run = std::to_string(row.run);
      table.row({escaped(p.name), run, ending, centimetres(row.least_clearance), seconds(row.time),
                 "<button type=\"button\" class=\"show\" data-policy=\"" + std::to_string(i) + "\" data-shows=\"" +
                     std::to_string(k + 1) + "\" aria-label=\"" + escaped("show run " + run + " of " + p.name) +
                     "\">show</button>"});
    }
  }
  return table.html();
}

}  // namespace wend::inline v0::lab::detail
