// wend/lab/tune_outcome.hpp - what many runs came to as an aim sees it, and two loops on runs that are new to both.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <span>
#include <vector>

#include "wend/lab/run_row.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/statistics.hpp"
#include "wend/lab/tally.hpp"

namespace wend::inline v0::lab {

/// What is wanted: the least mean time of the runs that arrive, as long as these hold. Runs that do not arrive have no
/// time, so a low `arrival_share` makes it look better to give up the long ways.
struct TuneAim {
  double arrival_share = 1.0;     ///< of the runs that arrive, at least
  double contact_share = 0.0;     ///< of the runs that end in a contact, at most
  double clearance = 0.0;  ///< metres: what the least clearances of the runs are over, but for a share of them
  double clearance_share = 0.05;  ///< that share, in [0, 1]
};

/// What many runs came to, as the aim sees it.
struct TuneOutcome {
  std::uint64_t runs = 0;      ///< in all
  std::uint64_t arrived = 0;   ///< runs that reached the goal
  std::uint64_t contacts = 0;  ///< runs that touched a disc
  std::uint64_t too_near = 0;  ///< runs with a least clearance under the aim's
  double mean_time = std::numeric_limits<double>::quiet_NaN();  ///< seconds, of those that arrived
  double clearance = std::numeric_limits<double>::quiet_NaN();  ///< metres: the aim's quantile of the least clearances
};

/// A mean, and the bounds it lies between with 95 % confidence.
struct MeanWithin {
  double mean = std::numeric_limits<double>::quiet_NaN();  ///< not-a-number of nothing
  /// 95 %; the whole line where there is too little to tell.
  Bounds bounds{-std::numeric_limits<double>::infinity(), std::numeric_limits<double>::infinity()};
};

/// Start and best on runs that the search has not seen.
struct TuneCheck {
  TuneOutcome start;  ///< of the loop as given
  TuneOutcome best;  ///< of the best candidate
  Bounds start_arrives;  ///< Clopper and Pearson, 95 %, as all here
  Bounds best_arrives;  ///< share of the runs that arrive
  Bounds best_contacts;  ///< share of the runs that end in a contact
  Bounds best_too_near;  ///< share of the runs that come nearer than the aim's clearance
  bool holds = false;  ///< the best still keeps all that has to hold
  Comparison comparison;  ///< the start first, the best second, run by run
  MeanWithin time_difference;  ///< seconds by which the best takes longer, where both arrive
};

namespace detail {

[[nodiscard]] inline TuneOutcome tune_outcome(std::span<RunRow const> rows, TuneAim const& aim) {
  TuneOutcome result;
  std::vector<double> clearances;
  double time = 0.0;
  for (RunRow const& row : rows) {
    ++result.runs;
    result.contacts += row.ending == Ending::contact ? 1U : 0U;
    result.too_near += row.least_clearance < aim.clearance ? 1U : 0U;
    clearances.push_back(row.least_clearance);
    if (row.ending == Ending::arrived) {
      ++result.arrived;
      time += row.time;
    }
  }
  if (result.arrived > 0) {
    result.mean_time = time / static_cast<double>(result.arrived);
  }
  std::sort(clearances.begin(), clearances.end());
  result.clearance = quantile(clearances, aim.clearance_share);
  return result;
}

// What is missed of arrivals and of contacts, as shares of the runs.
[[nodiscard]] inline double missed_endings(TuneOutcome const& outcome, TuneAim const& aim) {
  double const runs = static_cast<double>(outcome.runs);
  return std::max(0.0, aim.arrival_share - static_cast<double>(outcome.arrived) / runs) +
         std::max(0.0, static_cast<double>(outcome.contacts) / runs - aim.contact_share);
}

// All that is missed; a metre counts as much as all runs.
[[nodiscard]] inline double missed(TuneOutcome const& outcome, TuneAim const& aim) {
  return missed_endings(outcome, aim) + std::max(0.0, aim.clearance - outcome.clearance);
}

}  // namespace detail

/// The t that a variable of Student's distribution (Student 1908) is within, to both sides of 0, with this confidence.
[[nodiscard]] inline double student_t(double confidence, double degrees) {
  double const x = beta_quantile(1.0 - confidence, 0.5 * degrees, 0.5);
  return std::sqrt(degrees * (1.0 - x) / x);
}

/// The mean of a sample, with 95 % confidence by Student's distribution: exact for normal values, and close enough for
/// others from some dozens of them on. No bounds for fewer than two values.
[[nodiscard]] inline MeanWithin mean_within(std::span<double const> values) {
  MeanWithin result;
  if (values.empty()) {
    return result;
  }
  double const n = static_cast<double>(values.size());
  double sum = 0.0;
  for (double const value : values) {
    sum += value;
  }
  result.mean = sum / n;
  if (values.size() > 1) {
    double squares = 0.0;
    for (double const value : values) {
      squares += (value - result.mean) * (value - result.mean);
    }
    double const half = student_t(0.95, n - 1.0) * std::sqrt(squares / (n - 1.0) / n);
    result.bounds = {result.mean - half, result.mean + half};
  }
  return result;
}

/// Two loops on the same runs, as `tune` reports its best one against the start. Throws std::invalid_argument for no
/// run, and where `compare` does.
[[nodiscard]] inline TuneCheck check_of(std::span<RunRow const> start, std::span<RunRow const> best,
                                        TuneAim const& aim) {
  TuneCheck result;
  result.comparison = compare(start, best);
  result.start = detail::tune_outcome(start, aim);
  result.best = detail::tune_outcome(best, aim);
  result.start_arrives = clopper_pearson(result.start.arrived, result.start.runs);
  result.best_arrives = clopper_pearson(result.best.arrived, result.best.runs);
  result.best_contacts = clopper_pearson(result.best.contacts, result.best.runs);
  result.best_too_near = clopper_pearson(result.best.too_near, result.best.runs);
  result.holds = !(detail::missed(result.best, aim) > 0.0);
  std::vector<double> longer;
  for (std::size_t i = 0; i < start.size(); ++i) {
    if (start[i].ending == Ending::arrived && best[i].ending == Ending::arrived) {
      longer.push_back(best[i].time - start[i].time);
    }
  }
  result.time_difference = mean_within(longer);
  return result;
}

}  // namespace wend::inline v0::lab
