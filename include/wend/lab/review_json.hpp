// wend/lab/review_json.hpp - a review for other programs.
#pragma once

#include <cstddef>
#include <cstdint>
#include <limits>
#include <string>

#include "wend/lab/json.hpp"
#include "wend/lab/review.hpp"
#include "wend/lab/statistics.hpp"
#include "wend/lab/tally.hpp"

namespace wend::inline v0::lab {

namespace detail {

inline void add_spread(JsonText& json, char const* name, Spread const& s) {
  json.key(name).object().member("least", s.least).member("low", s.low).member("median", s.median);
  json.member("high", s.high).member("most", s.most).end_object();
}

inline void add_share(JsonText& json, char const* name, std::uint64_t count, std::uint64_t runs) {
  json.key(name).object().member("count", count);
  if (runs > 0) {
    Bounds const exact = clopper_pearson(count, runs);
    Bounds const near = wilson(count, runs);
    json.key("clopper_pearson").array().value(exact.low).value(exact.high).end_array();
    json.key("wilson").array().value(near.low).value(near.high).end_array();
  }
  json.end_object();
}

inline void add_row(JsonText& json, RunRow const& row) {
  json.object().member("run", row.run).member("ending", text(row.ending)).member("status", text(row.last_status));
  json.member("time_s", row.time).member("path_m", row.path_length).member("straight_m", row.straight_length);
  json.member("least_clearance_m", row.least_clearance).member("switches", row.switches);
  json.member("least_dwell_s", row.least_dwell).end_object();
}

inline void add_tree(JsonText& json, PolicyNode const& node) {
  json.object().member("part", node.part).member("name", node.name).member("kind", node.kind).key("values").object();
  for (auto const& [name, value] : node.values) {
    json.member(name, value);
  }
  json.end_object().key("parts").array();
  for (PolicyNode const& part : node.children) {
    add_tree(json, part);
  }
  json.end_array().end_object();
}

}  // namespace detail

/// The review as one JSON object (RFC 8259). Metres, seconds; shares in [0, 1]; null for what is infinite or was not
/// had.
///
///   title, seed, runs (asked for, of each policy), complete (false when interrupted),
///   discs (count), straight_m (start to goal), policies: [
///     name, policy: {part, name, kind, values: {threshold: text}, parts: [...]},
///     trip: a row (below, run 0) of the scene's own trip with a ranger,
///     drawn: {runs, arrived, contacts, time_outs: {count, clopper_pearson: [low, high], wilson: [low, high]} at 95 %,
///             least_clearance_m, time_s (of arrivals), switches: {least, low (5 %), median, high (95 %), most},
///             least_dwell_s},
///     worst: [rows {run, ending, status, time_s, path_m, straight_m, least_clearance_m, switches, least_dwell_s}],
///     arrival_proved (share of the free area; null where no map was made),
///     statements: [{claim, holds ("holds", "does not hold", "open"), basis ("proved", "counted", "measured"),
///                   evidence}]],
///   pairs: [{first, second, both, only_first, only_second, neither (arrived), mcnemar_p, time_difference_s,
///            clearance_difference_m (second minus first)}]
[[nodiscard]] inline std::string review_json(Review const& review) {
  JsonText json;
  json.object().member("title", review.title).member("seed", review.seed).member("runs", review.runs);
  json.member("complete", review.complete).member("discs", review.world.discs.size());
  json.member("straight_m", (review.trip.goal - review.trip.start.position).norm()).key("policies").array();
  for (PolicyReview const& p : review.policies) {
    json.object().member("name", p.name).key("policy");
    detail::add_tree(json, p.tree);
    json.key("trip");
    detail::add_row(json, row_of(p.run, review.trip, 0, 0));
    Tally const& t = p.tally;
    json.key("drawn").object().member("runs", t.runs);
    detail::add_share(json, "arrived", t.arrived, t.runs);
    detail::add_share(json, "contacts", t.contacts, t.runs);
    detail::add_share(json, "time_outs", t.time_outs, t.runs);
    detail::add_spread(json, "least_clearance_m", t.clearance);
    detail::add_spread(json, "time_s", t.time);
    detail::add_spread(json, "switches", t.switches);
    json.member("least_dwell_s", t.least_dwell).end_object().key("worst").array();
    for (Replay const& replay : p.worst) {
      detail::add_row(json, replay.row);
    }
    json.end_array().key("arrival_proved");
    json.value(p.arrivals ? p.arrivals->share(Arrival::proved) : std::numeric_limits<double>::quiet_NaN());
    json.key("statements").array();
    for (Statement const& s : p.statements) {
      json.object().member("claim", s.claim).member("holds", text(s.holds)).member("basis", text(s.basis));
      json.member("evidence", s.evidence).end_object();
    }
    json.end_array().end_object();
  }
  json.end_array().key("pairs").array();
  for (std::size_t i = 0; i < review.policies.size(); ++i) {
    for (std::size_t j = i + 1; j < review.policies.size(); ++j) {
      PolicyReview const& a = review.policies[i];
      PolicyReview const& b = review.policies[j];
      if (a.rows.empty() || a.rows.size() != b.rows.size()) {
        continue;  // interrupted
      }
      Comparison const c = compare(a.rows, b.rows);
      json.object().member("first", a.name).member("second", b.name).member("both", c.both);
      json.member("only_first", c.only_first).member("only_second", c.only_second).member("neither", c.neither);
      json.member("mcnemar_p", c.p_value);
      detail::add_spread(json, "time_difference_s", c.time_difference);
      detail::add_spread(json, "clearance_difference_m", c.clearance_difference);
      json.end_object();
    }
  }
  json.end_array().end_object();
  return json.text();
}

}  // namespace wend::inline v0::lab
