// wend/lab/tune.hpp - thresholds and gains by search: the quickest loop that still arrives and keeps clear.
#pragma once

#include <algorithm>
#include <atomic>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <iterator>
#include <optional>
#include <span>
#include <stdexcept>
#include <string>
#include <type_traits>
#include <utility>
#include <vector>

#include "wend/lab/campaign.hpp"
#include "wend/lab/knob.hpp"
#include "wend/lab/pattern_search.hpp"
#include "wend/lab/scenes.hpp"
#include "wend/lab/tune_outcome.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/loop.hpp"

namespace wend::inline v0::lab {

/// A parameter to tune: its name, where it is in the loop object that is tuned, and its range, in its own unit.
struct TuneKnob {
  std::string name;     ///< for reports
  Parameter const* at;  ///< inside of that very loop, not of a copy
  Parameter low;        ///< the least value to try
  Parameter high;       ///< the largest, at least `low`
};

/// Two parameters of the loop that is tuned, knobs or not, of which one has to be at least `gap` under the other.
/// Nothing checks thresholds at run time: what a constant may not be (see promise.hpp) has to be said here. For a gap
/// of 0 they may be equal.
struct TuneOrder {
  Parameter const* less;  ///< inside of that very loop
  Parameter const* more;  ///< likewise
  Parameter gap = 0.0F;   ///< in their unit, 0 or more
};

/// A loop that was driven, by the values of its knobs.
struct TuneCandidate {
  std::vector<Parameter> values;  ///< one a knob, in the knobs' order
  TuneOutcome outcome;            ///< of its runs
  double violation = 0.0;  ///< how far it misses what has to hold; 0 for a feasible one
};

/// How a tuning goes about it. Neither the number of threads nor `progress` changes a result.
struct TuneOptions {
  std::uint64_t runs = 400;  ///< a candidate
  std::uint64_t seed = 1;  ///< of the runs that all candidates drive
  std::uint64_t unseen_runs = 2000;  ///< of start and best, once the search is over
  std::uint64_t unseen_seed = 2;  ///< of those; another one than `seed`
  PatternSearchOptions search{};  ///< budget in candidates; its `stop` is the one below
  double finest = 0.01;  ///< as in CampaignOptions
  int threads = 1;  ///< 1 or more, that drive runs side by side
  std::atomic<bool> const* stop = nullptr;  ///< once true, it ends soon, and gives what was found so far
  /// Called after each run, from one thread at a time: runs done, and runs in all if the budget is used up.
  std::function<void(std::uint64_t, std::uint64_t)> progress{};
};

/// What a tuning gives.
template <typename Loop>
struct Tuned {
  Loop loop;  ///< the best one
  std::vector<TuneCandidate> candidates;  ///< all that were driven, in order; the loop as given is the first
  std::size_t best = 0;  ///< place in `candidates`, if that has any
  bool feasible = false;  ///< the best keeps all that has to hold
  bool settled = false;  ///< the search ended before its budget was spent: it found nothing better any more
  bool complete = false;  ///< false when it was stopped
  std::vector<TuneCandidate> trade_off;  ///< see tune
  std::optional<TuneCheck> unseen;  ///< none when it was stopped
};

namespace detail {

// Whether a copy of a loop keeps an order that is given by places in the loop itself. A gap is not precise to the last
// digits: from 0.30F to 0.35F it is one of 0.05F. Without a gap the order is exact.
template <typename Loop>
[[nodiscard]] bool in_order(Loop const& loop, Loop const& copy, TuneOrder const& order) {
  auto const value = [&](Parameter const* at, char const* which) {
    return static_cast<double>(parameter_at(copy, place_in("tune", loop, at, which)));
  };
  double const less = value(order.less, "the lesser parameter of an order");
  double const more = value(order.more, "the greater parameter of an order");
  auto const gap = static_cast<double>(order.gap);
  double const slack = gap > 0.0 ? 1e-6 * std::max(std::abs(less), std::abs(more)) : 0.0;
  return less + gap <= more + slack;
}

}  // namespace detail

/// The knobs of a tuned loop, for `sensitivity` (see there what it can say about thresholds). `loop` is the one that
/// the knobs point into, `tuned` the one to ask about.
template <typename Loop>
[[nodiscard]] std::vector<Knob> knobs_in(Loop const& tuned, Loop const& loop, std::span<TuneKnob const> knobs) {
  std::vector<Knob> result;
  for (TuneKnob const& knob : knobs) {
    std::size_t const place = detail::place_in("tune", loop, knob.at, "the knob \"" + knob.name + "\"");
    result.push_back(
        {knob.name, reinterpret_cast<Parameter const*>(reinterpret_cast<std::byte const*>(&tuned) + place)});
  }
  return result;
}

/// Looks for values of the knobs with which the loop does best by `aim`: a pattern search (see pattern_search, with
/// the methods and where they end), feasible before infeasible. Each knob and order points into `loop` itself:
///
///   TuneKnob const knobs[] = {{"enter", &guard.enter, 0.2F, 0.6F}, {"leave", &guard.leave, 0.2F, 0.9F}};
///   TuneOrder const orders[] = {{&guard.enter, &guard.leave, 0.05F}};
///   auto const tuned = tune(loop, vehicle, scenes, knobs, orders, {.arrival_share = 0.99, .clearance = 0.05});
///
/// where `guard` is a reference to the guard inside of `loop`. What is out of order, or `allowed` says no to, is not
/// driven. All candidates drive the same runs, on common random numbers: what differs between two of them is the knobs'
/// doing and not chance. The same arguments give the same result, on any number of threads.
///
/// A search believes its runs: of many candidates the best has also been lucky, and fits these runs better than any
/// others. So start and best are driven once more on another seed, and `unseen` has what came of it, with intervals and
/// the paired comparison (McNemar's test for arrivals, Student's interval for the time). Report those figures and not
/// the search's. They do not hold any longer once another tuning was started because of them: take a third seed then.
///
/// `trade_off` has, of all candidates that keep `arrival_share` and `contact_share`, those that no other one beats in
/// both the mean time and the quantile of clearance; by time, which is also by clearance. It is as lucky as the best,
/// and the sparser the fewer candidates there were.
///
/// Throws std::invalid_argument for knobs and orders that are not in the loop, two knobs for one parameter, values of
/// the start out of their range or order, an aim that cannot be, seeds that are the same, no runs, and where
/// pattern_search and campaign do.
template <int Lanes = native_lanes, int Told = discs_told, typename Loop>
[[nodiscard]] Tuned<Loop> tune(Loop const& loop, Vehicle const& vehicle, Scenes const& scenes,
                               std::span<TuneKnob const> knobs, std::span<TuneOrder const> orders, TuneAim const& aim,
                               TuneOptions const& options = {},
                               std::type_identity_t<std::function<bool(Loop const&)>> const& allowed = {}) {
  // Not asked whether it is trivially copyable: clang denies that of a loop with a constant policy.
  if (options.runs == 0 || options.unseen_runs == 0 || options.seed == options.unseen_seed) {
    throw std::invalid_argument("wend: tune: expected runs, unseen runs, and two seeds that differ");
  }
  auto const is_share = [](double x) { return x >= 0.0 && x <= 1.0; };
  if (!is_share(aim.arrival_share) || !is_share(aim.contact_share) || !is_share(aim.clearance_share) ||
      !std::isfinite(aim.clearance)) {
    throw std::invalid_argument("wend: tune: expected an aim with shares from 0 to 1 and a finite clearance");
  }
  std::vector<std::size_t> places;
  std::vector<SearchRange> box;
  std::vector<double> start;
  for (TuneKnob const& knob : knobs) {
    std::size_t const place = detail::place_in("tune", loop, knob.at, "the knob \"" + knob.name + "\"");
    if (std::find(places.begin(), places.end(), place) != places.end()) {
      throw std::invalid_argument("wend: tune: the knob \"" + knob.name + "\" turns what another one turns already");
    }
    places.push_back(place);
    box.push_back({static_cast<double>(knob.low), static_cast<double>(knob.high)});
    start.push_back(static_cast<double>(*knob.at));
    if (!(knob.low <= *knob.at && *knob.at <= knob.high)) {
      throw std::invalid_argument("wend: tune: the knob \"" + knob.name + "\" starts at " + std::to_string(*knob.at) +
                                  ", which is not from " + std::to_string(knob.low) + " to " +
                                  std::to_string(knob.high));
    }
  }
  auto const with = [&](std::vector<double> const& at) {
    std::vector<Parameter> values;
    std::transform(at.begin(), at.end(), std::back_inserter(values),
                   [](double value) { return static_cast<Parameter>(value); });
    return detail::with_values(loop, places, values);
  };
  auto const may_be = [&](std::vector<double> const& at) {
    Loop const other = with(at);
    return std::all_of(orders.begin(), orders.end(),
                       [&](TuneOrder const& order) { return detail::in_order(loop, other, order); }) &&
           (!allowed || allowed(other));
  };
  if (!may_be(start)) {
    throw std::invalid_argument("wend: tune: the loop that is given is itself out of order, or not allowed");
  }

  std::vector<TuneCandidate> candidates;
  std::uint64_t const in_all = static_cast<std::uint64_t>(std::max(0, options.search.budget)) * options.runs +
                               2 * options.unseen_runs;
  std::uint64_t before = 0;
  CampaignOptions drive;
  drive.threads = options.threads;
  drive.finest = options.finest;
  drive.stop = options.stop;
  if (options.progress) {
    drive.progress = [&](std::uint64_t done, std::uint64_t) { options.progress(before + done, in_all); };
  }
  auto const rows_of = [&](Loop const& driven, std::uint64_t runs, std::uint64_t seed) {
    Campaign campaign = lab::campaign<Lanes, Told>(driven, vehicle, scenes, runs, seed, drive);
    before += runs;
    return campaign;
  };
  auto const judge = [&](std::vector<double> const& at) -> std::optional<Judgement> {
    Campaign const campaign = rows_of(with(at), options.runs, options.seed);
    if (!campaign.complete) {
      return std::nullopt;
    }
    TuneCandidate candidate{{}, detail::tune_outcome(campaign.rows, aim), 0.0};
    for (double const value : at) {
      candidate.values.push_back(static_cast<Parameter>(value));
    }
    candidate.violation = detail::missed(candidate.outcome, aim);
    candidates.push_back(candidate);
    return Judgement{candidate.violation, candidate.outcome.mean_time};
  };
  PatternSearchOptions search = options.search;
  search.stop = options.stop;
  PatternSearch const found = pattern_search(box, start, may_be, judge, search);
  bool const some = !candidates.empty();
  Tuned<Loop> result{some ? with(found.tried[found.best].at) : loop,
                     std::move(candidates),
                     found.best,
                     false,
                     found.settled,
                     false,
                     {},
                     std::nullopt};
  if (!some) {
    return result;
  }
  result.feasible = !(result.candidates[found.best].violation > 0.0);

  std::vector<TuneCandidate const*> kept;
  std::vector<TradeOff> points;
  for (TuneCandidate const& candidate : result.candidates) {
    if (!(detail::missed_endings(candidate.outcome, aim) > 0.0)) {
      kept.push_back(&candidate);
      points.push_back({candidate.outcome.mean_time, candidate.outcome.clearance});
    }
  }
  for (std::size_t const i : non_dominated(points)) {
    result.trade_off.push_back(*kept[i]);
  }

  Campaign const of_start = rows_of(loop, options.unseen_runs, options.unseen_seed);
  Campaign const of_best = rows_of(result.loop, options.unseen_runs, options.unseen_seed);
  result.complete = of_start.complete && of_best.complete;
  if (result.complete) {
    result.unseen = check_of(of_start.rows, of_best.rows, aim);
  }
  return result;
}

}  // namespace wend::inline v0::lab
