// Tuning: a loop with bad thresholds that gets better ones, and the figures that say so.
#include <algorithm>
#include <atomic>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <stdexcept>
#include <vector>

#include <doctest/doctest.h>

#include "../../examples/cellar.hpp"
#include "../../examples/policies.hpp"
#include "../checked_build.hpp"
#include "../rows.hpp"
#include "wend/lab/campaign.hpp"
#include "wend/lab/pattern_search.hpp"
#include "wend/lab/run_row.hpp"
#include "wend/lab/sensitivity.hpp"
#include "wend/lab/tally.hpp"
#include "wend/lab/tune.hpp"
#include "wend/lab/tune_outcome.hpp"

namespace {

using namespace wend;

constexpr std::uint64_t runs_a_candidate = is_slow_build ? 6 : 64;

constexpr double infinite = std::numeric_limits<double>::infinity();

// A cart's policy with a guard that hardly sees what is near, and a ramp that shies from afar.
constexpr auto poor_policy =
    blend(ramp(clearance, 0.10F, 0.75F), away_from_discs{},
          guarded(held(both(below(clearance, 0.15F, 0.25F), above(disc_before_goal, 0.1F, -0.1F)), 0.9F), past_disc{},
                  toward_goal{}));
using CartLoop = Loop<decltype(poor_policy)>;
constexpr CartLoop poor{.policy = poor_policy};

lab::Scenes in_cellar() {
  lab::TripBounds const bounds{cellar::region, 0.4, 6.0, 60.0};
  return {
      {cellar::world()},
      [bounds](lab::Ground const& ground, lab::Draws const& draws) { return lab::drawn_trip(ground, bounds, draws); },
      {}};
}

std::vector<lab::TuneKnob> knobs() {
  auto const& ramp = poor.policy.weight;
  auto const& held = poor.policy.high.guard;
  return {{"ramp low", &ramp.low, 0.0F, 0.3F},
          {"ramp high", &ramp.high, 0.1F, 0.8F},
          {"enter", &held.guard.a.enter, 0.1F, 0.7F},
          {"leave", &held.guard.a.leave, 0.1F, 0.9F},
          {"dwell", &held.dwell, 0.0F, 1.0F}};
}

std::vector<lab::TuneOrder> orders() {
  auto const& ramp = poor.policy.weight;
  auto const& near = poor.policy.high.guard.guard.a;
  return {{&ramp.low, &ramp.high, 0.05F}, {&near.enter, &near.leave, 0.10F}};
}

lab::TuneOptions small_tuning() {
  lab::TuneOptions options;
  options.runs = runs_a_candidate;
  options.unseen_runs = 3 * runs_a_candidate;
  options.search.budget = 40;
  options.search.spread = 16;
  return options;
}

constexpr lab::TuneAim aim{.arrival_share = 0.95, .contact_share = 0.0, .clearance = 0.05, .clearance_share = 0.05};

bool same_values(std::vector<lab::TuneCandidate> const& a, std::vector<lab::TuneCandidate> const& b) {
  return std::equal(a.begin(), a.end(), b.begin(), b.end(),
                    [](lab::TuneCandidate const& x, lab::TuneCandidate const& y) {
                      return x.values == y.values && x.outcome.arrived == y.outcome.arrived &&
                             x.outcome.mean_time == y.outcome.mean_time && x.violation == y.violation &&
                             x.outcome.clearance == y.outcome.clearance;
                    });
}

}  // namespace

TEST_CASE("a mean's bounds are Student's") {
  // Two-sided 95 % points of Student's t, as printed in Fisher and Yates 1938, table III; from memory.
  CHECK(lab::student_t(0.95, 1.0) == doctest::Approx(12.706).epsilon(1e-4));
  CHECK(lab::student_t(0.95, 10.0) == doctest::Approx(2.228).epsilon(2e-4));
  CHECK(lab::student_t(0.95, 120.0) == doctest::Approx(1.980).epsilon(3e-4));
  CHECK(lab::student_t(0.99, 10.0) == doctest::Approx(3.169).epsilon(2e-4));
  // Student 1908, hours of sleep gained with one drug over another, ten patients: mean 1.58. The interval is R's, as
  // its documentation of t.test on the data set `sleep` prints it; from memory.
  std::vector<double> const gained{1.2, 2.4, 1.3, 1.3, 0.0, 1.0, 1.8, 0.8, 4.6, 1.4};
  lab::MeanWithin const mean = lab::mean_within(gained);
  CHECK(mean.mean == doctest::Approx(1.58).epsilon(1e-12));
  CHECK(mean.bounds.low == doctest::Approx(0.7001142).epsilon(1e-7));
  CHECK(mean.bounds.high == doctest::Approx(2.4598858).epsilon(1e-7));
  CHECK(std::isnan(lab::mean_within({}).mean));
  CHECK(std::isinf(lab::mean_within(std::vector<double>{1.0}).bounds.high));
}

TEST_CASE("a check counts what became of the same runs") {
  using lab::Ending;
  std::vector<lab::RunRow> const start{row(0, Ending::arrived, 10.0, 0.30), row(1, Ending::arrived, 12.0, 0.04),
                                       row(2, Ending::time_out, 60.0, 0.20), row(3, Ending::arrived, 20.0, infinite)};
  std::vector<lab::RunRow> const best{row(0, Ending::arrived, 9.0, 0.10), row(1, Ending::contact, 3.0, -0.01),
                                      row(2, Ending::arrived, 30.0, 0.20), row(3, Ending::arrived, 17.0, infinite)};
  lab::TuneCheck const check = lab::check_of(start, best, {0.7, 0.3, 0.05, 0.0});
  CHECK(check.start.mean_time == doctest::Approx(14.0));
  CHECK(check.best.mean_time == doctest::Approx(56.0 / 3.0));
  CHECK(check.start.arrived == 3);
  CHECK(check.best.contacts == 1);
  CHECK(check.start.too_near == 1);
  CHECK(check.best.clearance == -0.01);
  CHECK_FALSE(check.holds);  // by 0.06 m
  CHECK(lab::check_of(start, best, {0.75, 0.25, -0.01, 0.0}).holds);
  CHECK_FALSE(lab::check_of(start, best, {0.76, 0.25, -0.01, 0.0}).holds);
  CHECK_FALSE(lab::check_of(start, best, {0.75, 0.24, -0.01, 0.0}).holds);
  CHECK(check.time_difference.mean == doctest::Approx(-2.0));  // of -1 and -3
  CHECK(check.comparison.only_first == 1);
  CHECK(check.comparison.only_second == 1);
  // Clopper and Pearson for 3 of 4 and 1 of 4, as R's binom.test gives them; from memory.
  CHECK(check.best_arrives.low == doctest::Approx(0.1941204).epsilon(1e-6));
  CHECK(check.best_contacts.high == doctest::Approx(0.8058796).epsilon(1e-6));
}

TEST_CASE("a poor loop is tuned, within ranges and order, and alike on one thread and two") {
  std::vector<lab::TuneKnob> const turned = knobs();
  lab::TuneOptions options = small_tuning();
  lab::Tuned<CartLoop> const tuned = lab::tune(poor, cellar::cart(), in_cellar(), turned, orders(), aim, options);
  REQUIRE(tuned.complete);
  REQUIRE(tuned.unseen.has_value());
  CHECK(tuned.candidates.size() == 40);
  bool some_miss = false;
  for (lab::TuneCandidate const& candidate : tuned.candidates) {
    REQUIRE(candidate.values.size() == turned.size());
    for (std::size_t k = 0; k < turned.size(); ++k) {
      CHECK(candidate.values[k] >= turned[k].low);
      CHECK(candidate.values[k] <= turned[k].high);
    }
    CHECK(candidate.values[0] + 0.05F <= candidate.values[1] + 1e-6F);
    CHECK(candidate.values[2] + 0.10F <= candidate.values[3] + 1e-6F);
    lab::TuneOutcome const& outcome = candidate.outcome;
    double const share = 1.0 / static_cast<double>(outcome.runs);
    double const missed = std::max(0.0, aim.arrival_share - share * static_cast<double>(outcome.arrived)) +
                          share * static_cast<double>(outcome.contacts) +
                          std::max(0.0, aim.clearance - outcome.clearance);
    CHECK(candidate.violation == doctest::Approx(missed).epsilon(1e-12));
    some_miss = some_miss || missed > 0.0;
    CHECK_FALSE(lab::better({candidate.violation, candidate.outcome.mean_time},
                            {tuned.candidates[tuned.best].violation, tuned.candidates[tuned.best].outcome.mean_time}));
  }

  CHECK(some_miss);
  lab::TuneCandidate const& first = tuned.candidates.front();
  lab::TuneCandidate const& best = tuned.candidates[tuned.best];
  CHECK(first.values[4] == poor.policy.high.guard.dwell);
  CHECK(tuned.feasible);
  CHECK(best.outcome.mean_time < first.outcome.mean_time - 3.0);
  // On runs that the search has not seen it is quicker too, and surely so.
  CHECK(tuned.unseen->start.runs == options.unseen_runs);
  CHECK(tuned.unseen->time_difference.bounds.high < -1.0);

  // The figures are those of a campaign of its own, counted elsewhere.
  auto const rows = lab::campaign(tuned.loop, cellar::cart(), in_cellar(), options.runs, options.seed).rows;
  lab::Tally const tally = lab::tally(rows);
  CHECK(best.outcome.arrived == tally.arrived);
  CHECK(best.outcome.contacts == tally.contacts);
  CHECK(best.outcome.clearance == tally.clearance.low);
  auto const unseen =
      lab::campaign(tuned.loop, cellar::cart(), in_cellar(), options.unseen_runs, options.unseen_seed).rows;
  CHECK(tuned.unseen->best.arrived == lab::tally(unseen).arrived);
  CHECK(tuned.unseen->best.clearance == lab::tally(unseen).clearance.low);

  // The best loop has the best's values, where the knobs are.
  std::vector<lab::Knob> const there = lab::knobs_in(tuned.loop, poor, turned);
  CHECK(there[1].at == &tuned.loop.policy.weight.high);
  CHECK(there[4].at == &tuned.loop.policy.high.guard.dwell);
  for (std::size_t k = 0; k < there.size(); ++k) {
    CHECK(*there[k].at == best.values[k]);
  }

  // A smaller budget ends the same search earlier.
  options.threads = 2;
  options.search.budget = 12;
  options.unseen_runs = 1;
  auto const again = lab::tune(poor, cellar::cart(), in_cellar(), turned, orders(), aim, options);
  CHECK(same_values(again.candidates, {tuned.candidates.begin(), tuned.candidates.begin() + 12}));
}

TEST_CASE("the trade-off has, of what arrives, all that nothing beats in time and clearance, by time") {
  lab::TuneOptions options = small_tuning();
  options.search.budget = 24;
  options.search.spread = 20;
  options.search.seed = 3;
  lab::TuneAim strict = aim;
  strict.arrival_share = 1.0;
  auto const tuned = lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), strict, options);
  for (lab::TuneCandidate const& a : tuned.candidates) {
    auto const arrives = [&](lab::TuneCandidate const& c) {
      return c.outcome.arrived == c.outcome.runs && c.outcome.contacts == 0;
    };
    bool const beaten = std::any_of(tuned.candidates.begin(), tuned.candidates.end(), [&](lab::TuneCandidate const& b) {
      bool const no_worse = b.outcome.mean_time <= a.outcome.mean_time && b.outcome.clearance >= a.outcome.clearance;
      bool const equal = b.outcome.mean_time == a.outcome.mean_time && b.outcome.clearance == a.outcome.clearance;
      return arrives(b) && no_worse && !equal;
    });
    // Of two that are as good only one is kept.
    bool const is_there = std::any_of(tuned.trade_off.begin(), tuned.trade_off.end(), [&](lab::TuneCandidate const& c) {
      return c.outcome.mean_time == a.outcome.mean_time && c.outcome.clearance == a.outcome.clearance;
    });
    CHECK((is_there || beaten || !arrives(a)));
    CHECK_FALSE((is_there && (beaten || !arrives(a))));
  }
  REQUIRE_FALSE(tuned.trade_off.empty());
  if (options.runs > 60) {  // some that do not all arrive would be on it; of few runs all may arrive
    CHECK(std::any_of(tuned.candidates.begin(), tuned.candidates.end(), [&](lab::TuneCandidate const& c) {
      return c.outcome.mean_time < tuned.trade_off.front().outcome.mean_time;
    }));
  }
  for (std::size_t i = 1; i < tuned.trade_off.size(); ++i) {
    CHECK(tuned.trade_off[i].outcome.mean_time > tuned.trade_off[i - 1].outcome.mean_time);
    CHECK(tuned.trade_off[i].outcome.clearance > tuned.trade_off[i - 1].outcome.clearance);
  }
}

TEST_CASE("another seed of the search drives other candidates, on the same runs") {
  lab::TuneOptions options = small_tuning();
  options.search.budget = 3;
  options.unseen_runs = 1;
  auto const one = lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), aim, options);
  options.search.seed = 2;
  auto const other = lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), aim, options);
  CHECK(one.candidates[0].outcome.mean_time == other.candidates[0].outcome.mean_time);
  CHECK(one.candidates[1].values != other.candidates[1].values);
}

TEST_CASE("what the caller does not allow is not driven") {
  lab::TuneOptions options = small_tuning();
  options.runs = 1;
  options.unseen_runs = 1;
  auto const not_both_large = [](CartLoop const& l) { return l.policy.high.guard.dwell + l.policy.weight.high < 1.7F; };
  auto const tuned = lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), aim, options, not_both_large);
  CHECK(tuned.candidates.size() == 40);
  for (lab::TuneCandidate const& candidate : tuned.candidates) {
    CHECK(candidate.values[4] + candidate.values[1] < 1.7F);
  }
  CHECK_THROWS_AS((void)lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), aim, options,
                                  [](CartLoop const&) { return false; }),
                  std::invalid_argument);
}

TEST_CASE("a tuning that is stopped gives what it has found so far") {
  lab::TuneOptions options = small_tuning();
  std::atomic<bool> stop{false};
  options.stop = &stop;
  std::uint64_t const enough = 5 * options.runs + options.runs / 2;
  std::uint64_t last = 0;
  std::uint64_t in_all = 0;
  options.progress = [&](std::uint64_t done, std::uint64_t of) {
    CHECK(done > last);
    last = done;
    in_all = of;
    stop = stop || done >= enough;
  };
  auto const tuned = lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), aim, options);
  CHECK_FALSE(tuned.complete);
  CHECK_FALSE(tuned.unseen.has_value());
  CHECK(tuned.candidates.size() == 5);
  CHECK(in_all == 40 * options.runs + 2 * options.unseen_runs);
  std::vector<lab::Knob> const there = lab::knobs_in(tuned.loop, poor, knobs());
  CHECK(*there[2].at == tuned.candidates[tuned.best].values[2]);

  auto const at_once = lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), aim, options);
  CHECK(at_once.candidates.empty());
  CHECK_FALSE(at_once.feasible);
  CHECK(at_once.loop.policy.high.guard.dwell == poor.policy.high.guard.dwell);
}

TEST_CASE("knobs and orders that cannot be are refused") {
  lab::TuneOptions const options = small_tuning();
  auto const tuned = [&](std::vector<lab::TuneKnob> const& turned, std::vector<lab::TuneOrder> const& ordered,
                         lab::TuneOptions const& how) {
    (void)lab::tune(poor, cellar::cart(), in_cellar(), turned, ordered, aim, how);
  };
  CartLoop const copy = poor;
  auto const& ramp = poor.policy.weight;
  Parameter const* const elsewhere = &copy.policy.weight.low;
  CHECK_THROWS_AS(tuned({{"ramp low", elsewhere, 0.0F, 0.3F}}, {}, options), std::invalid_argument);
  CHECK_THROWS_AS(tuned({{"ramp low", nullptr, 0.0F, 0.3F}}, {}, options), std::invalid_argument);
  CHECK_THROWS_AS(tuned({{"ramp low", &ramp.low, 0.2F, 0.3F}}, {}, options), std::invalid_argument);
  CHECK_THROWS_AS(tuned({}, {}, options), std::invalid_argument);
  CHECK_THROWS_AS(tuned(knobs(), {{&ramp.low, elsewhere}}, options), std::invalid_argument);
  CHECK_THROWS_AS(tuned(knobs(), {{&ramp.high, &ramp.low}}, options), std::invalid_argument);
  lab::TuneOptions same = options;
  same.unseen_seed = same.seed;
  CHECK_THROWS_AS(tuned(knobs(), orders(), same), std::invalid_argument);
  CHECK_THROWS_AS(tuned({{"a", &ramp.low, 0.0F, 0.3F}, {"b", &ramp.low, 0.0F, 0.2F}}, {}, options),
                  std::invalid_argument);
  lab::TuneAim percent = aim;
  percent.arrival_share = 95.0;
  CHECK_THROWS_AS((void)lab::tune(poor, cellar::cart(), in_cellar(), knobs(), orders(), percent, options),
                  std::invalid_argument);
  // A gap that the start has to the digit, as far as single precision goes; and one that is a little more.
  CHECK(lab::detail::in_order(poor, poor, {&ramp.low, &ramp.high, 0.65F}));
  CHECK_FALSE(lab::detail::in_order(poor, poor, {&ramp.low, &ramp.high, 0.651F}));
  CHECK(lab::detail::in_order(poor, poor, {&ramp.low, &ramp.low}));
}
