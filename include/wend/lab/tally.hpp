// wend/lab/tally.hpp - what the rows of a campaign say: how many arrived, how near they came, and which policy did
// better.
#pragma once

#include <algorithm>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <span>
#include <stdexcept>
#include <utility>
#include <vector>

#include "wend/lab/run_row.hpp"
#include "wend/lab/statistics.hpp"

namespace wend::inline v0::lab {

/// A number's quantiles over many runs: all not-a-number where there was none.
struct Spread {
  double least = std::numeric_limits<double>::quiet_NaN();  ///< the smallest of all
  double low = std::numeric_limits<double>::quiet_NaN();     ///< a twentieth of the runs is below
  double median = std::numeric_limits<double>::quiet_NaN();  ///< half of them
  double high = std::numeric_limits<double>::quiet_NaN();    ///< a twentieth is above
  double most = std::numeric_limits<double>::quiet_NaN();  ///< the largest of all
};

/// The quantiles of numbers in any order.
[[nodiscard]] inline Spread spread_of(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  return {quantile(values, 0.0), quantile(values, 0.05), quantile(values, 0.5), quantile(values, 0.95),
          quantile(values, 1.0)};
}

/// What became of many runs.
struct Tally {
  std::uint64_t runs = 0;  ///< in all: the three below add up to it
  std::uint64_t arrived = 0;  ///< that reached the goal
  std::uint64_t contacts = 0;  ///< that touched a disc
  std::uint64_t time_outs = 0;  ///< that did neither in the time allowed
  Spread clearance;  ///< metres: the least of each run
  Spread time;       ///< seconds, of those that arrived
  Spread switches;   ///< a run
  double least_dwell = std::numeric_limits<double>::infinity();  ///< seconds, of all runs
};

/// Counts and quantiles of rows in any order.
[[nodiscard]] inline Tally tally(std::span<RunRow const> rows) {
  Tally result;
  std::vector<double> clearances, times, switches;
  for (RunRow const& row : rows) {
    ++result.runs;
    result.arrived += row.ending == Ending::arrived ? 1U : 0U;
    result.contacts += row.ending == Ending::contact ? 1U : 0U;
    result.time_outs += row.ending == Ending::time_out ? 1U : 0U;
    clearances.push_back(row.least_clearance);
    switches.push_back(row.switches);
    if (row.ending == Ending::arrived) {
      times.push_back(row.time);
    }
    result.least_dwell = std::min(result.least_dwell, row.least_dwell);
  }
  result.clearance = spread_of(std::move(clearances));
  result.time = spread_of(std::move(times));
  result.switches = spread_of(std::move(switches));
  return result;
}

/// The numbers of the runs to look at first: contacts, then time-outs, then arrivals, in each the least clearance
/// first; `most` of them. By their place in `rows`.
[[nodiscard]] inline std::vector<std::size_t> worst_runs(std::span<RunRow const> rows, std::size_t most) {
  std::vector<std::size_t> places(rows.size());
  for (std::size_t i = 0; i < places.size(); ++i) {
    places[i] = i;
  }
  auto const rank = [](Ending ending) { return ending == Ending::contact ? 0 : ending == Ending::time_out ? 1 : 2; };
  auto const worse = [&](std::size_t a, std::size_t b) {
    if (rank(rows[a].ending) != rank(rows[b].ending)) {
      return rank(rows[a].ending) < rank(rows[b].ending);
    }
    return rows[a].least_clearance < rows[b].least_clearance ||
           (!(rows[b].least_clearance < rows[a].least_clearance) && a < b);
  };
  most = std::min(most, places.size());
  std::partial_sort(places.begin(), places.begin() + static_cast<std::ptrdiff_t>(most), places.end(), worse);
  places.resize(most);
  return places;
}

/// Two policies on the same runs.
struct Comparison {
  std::uint64_t both = 0;         ///< arrived
  std::uint64_t only_first = 0;   ///< only the first one arrived
  std::uint64_t only_second = 0;  ///< only the second one
  std::uint64_t neither = 0;  ///< neither arrived
  double p_value = 1.0;  ///< of McNemar's exact test, that they arrive equally often
  Spread time_difference;  ///< seconds by which the second took longer, where both arrived
  Spread
      clearance_difference;  ///< metres by which the second kept more clear, over all runs; 0 where neither met a disc
};

/// Compares two campaigns run by run. Throws std::invalid_argument unless both drove the same runs, from the same
/// starts to the same goals.
[[nodiscard]] inline Comparison compare(std::span<RunRow const> first, std::span<RunRow const> second) {
  Comparison result;
  std::vector<double> times, clearances;
  if (first.size() != second.size()) {
    throw std::invalid_argument("wend: compare: expected as many runs of both");
  }
  for (std::size_t i = 0; i < first.size(); ++i) {
    RunRow const& a = first[i];
    RunRow const& b = second[i];
    if (a.run != b.run || a.world != b.world || a.start.position != b.start.position || a.goal != b.goal) {
      throw std::invalid_argument("wend: compare: expected the same runs of both, in the same scenes");
    }
    bool const a_arrived = a.ending == Ending::arrived;
    bool const b_arrived = b.ending == Ending::arrived;
    result.both += a_arrived && b_arrived ? 1U : 0U;
    result.only_first += a_arrived && !b_arrived ? 1U : 0U;
    result.only_second += !a_arrived && b_arrived ? 1U : 0U;
    result.neither += !a_arrived && !b_arrived ? 1U : 0U;
    if (a_arrived && b_arrived) {
      times.push_back(b.time - a.time);
    }
    bool const same = a.least_clearance == b.least_clearance;  // both infinite, for example
    clearances.push_back(same ? 0.0 : b.least_clearance - a.least_clearance);
  }
  result.p_value = mcnemar(result.only_first, result.only_second);
  result.time_difference = spread_of(std::move(times));
  result.clearance_difference = spread_of(std::move(clearances));
  return result;
}

}  // namespace wend::inline v0::lab
