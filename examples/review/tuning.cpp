// review --tune: which thresholds make the composed policy quickest, as long as it arrives and keeps clear; what that
// costs; and whether it still holds on runs that the search has not seen.
#include "tuning.hpp"

#include <array>
#include <cstddef>
#include <cstdio>
#include <functional>
#include <span>
#include <string>
#include <vector>

#include <wend/lab/progress_bar.hpp>
#include <wend/lab/sensitivity.hpp>
#include <wend/lab/tune.hpp>

#include "../policies.hpp"
#include "print.hpp"

namespace review {

namespace {

using namespace wend;

using ComposedLoop = Loop<decltype(policies::composed)>;

void print_outcome(char const* name, lab::TuneOutcome const& o) {
  std::printf("%-24s %12s %9llu %12.2f %16.1f\n", name, lab::detail::of_runs(o.arrived, o.runs).c_str(),
              static_cast<unsigned long long>(o.contacts), o.mean_time, 100.0 * o.clearance);
}

void print_outcome_names() {
  std::printf("%-24s %12s %9s %12s %16s\n%-24s %12s %9s %12s %16s\n", "", "arrived", "contacts", "mean time",
              "clearance", "", "", "", "s", "5 % under, cm");
}

void print_unseen(lab::TuneCheck const& check, std::uint64_t seed) {
  std::printf("\nOn runs that the search has not seen, seed %llu:\n\n", static_cast<unsigned long long>(seed));
  print_outcome_names();
  print_outcome("as it was", check.start);
  print_outcome("tuned", check.best);
  std::printf(
      "\nThe tuned one %s what is asked for. Time: %+.2f s a run (95 %%: %+.2f to %+.2f). Arrivals: only as it was "
      "%llu, "
      "only\ntuned %llu, McNemar's exact p = %.3g. Contacts of the tuned one: 95 %% sure of %s or less.\n",
      check.holds ? "keeps" : "DOES NOT KEEP", check.time_difference.mean, check.time_difference.bounds.low,
      check.time_difference.bounds.high, static_cast<unsigned long long>(check.comparison.only_first),
      static_cast<unsigned long long>(check.comparison.only_second), check.comparison.p_value,
      lab::detail::percent(check.best_contacts.high).c_str());
}

void print_sensitivity(ComposedLoop const& tuned, ComposedLoop const& loop, std::span<lab::TuneKnob const> knobs,
                       wend::lab::SceneFile const& scene) {
  if (scene.world.discs.size() > 32) {
    return;
  }
  std::vector<lab::Knob> const turned = lab::knobs_in(tuned, loop, knobs);
  auto const effect = lab::sensitivity(tuned, scene.world, scene.trip, turned);
  std::printf(
      "\nWhat a change of 1 cm (or 0.01) does to the scene's own trip, seen exactly: as far as it is smooth, by\n"
      "derivative, and by driving it again with the knob turned both ways.\n\n%-16s %22s %22s\n%-16s %11s %10s "
      "%11s %10s\n",
      "", "time, s", "least clearance, cm", "", "derivative", "driven", "derivative", "driven");
  for (lab::KnobEffect const& knob : effect.knobs) {
    std::printf("%-16s %11.3f %10.3f %11.2f %10.2f\n", knob.name.c_str(), 0.01 * knob.time_slope,
                0.01 * knob.time_difference, knob.clearance_slope, knob.clearance_difference);
  }
}

}  // namespace

int tune(wend::lab::SceneFile const& scene, TuningWanted const& wanted) {
  ComposedLoop const loop = lab::fitted(ComposedLoop{.policy = policies::composed}, scene.vehicle);
  auto const& ramp = loop.policy.weight;
  auto const& held = loop.policy.high.guard;
  auto const& below_guard = held.guard.a;
  auto const& above_guard = held.guard.b;
  std::vector<lab::TuneKnob> const knobs{{"ramp from", &ramp.low, 0.02F, 0.30F},
                                         {"ramp to", &ramp.high, 0.10F, 0.80F},
                                         {"past, enter", &below_guard.enter, 0.15F, 0.90F},
                                         {"past, leave", &below_guard.leave, 0.20F, 1.20F},
                                         {"before, enter", &above_guard.enter, -0.20F, 0.60F},
                                         {"held, s", &held.dwell, 0.10F, 1.00F}};
  std::vector<lab::TuneOrder> const orders{{&ramp.low, &ramp.high, 0.05F},
                                           {&below_guard.enter, &below_guard.leave, 0.05F},
                                           {&above_guard.leave, &above_guard.enter, 0.05F}};
  lab::TuneAim aim;
  aim.arrival_share = scene.claims.arrives.value_or(1.0);
  aim.contact_share = 0.0;
  aim.clearance = 0.10;

  lab::ProgressBar bar("tuning");
  lab::TuneOptions options;
  options.runs = wanted.runs;
  options.seed = wanted.seed;
  options.unseen_seed = wanted.seed + 1;
  options.threads = wanted.threads;
  options.stop = &lab::stop_on_interrupt();
  options.progress = std::ref(bar);
  auto const tuned = lab::tune(loop, scene.vehicle, scene.scenes(), knobs, orders, aim, options);
  bar.clear();
  if (tuned.candidates.empty()) {
    std::fprintf(stderr, "review: interrupted before anything was driven\n");
    return 130;
  }

  std::printf(
      "%s: %zu discs\nLeast mean time of arrivals, with at least %s arrived, no contact, and 95 %% of runs "
      "%.0f cm clear or more.\n%zu candidates, %llu runs each, seed %llu; %s.\n\n",
      scene.title.c_str(), scene.world.discs.size(), lab::detail::percent(aim.arrival_share).c_str(),
      100.0 * aim.clearance, tuned.candidates.size(), static_cast<unsigned long long>(wanted.runs),
      static_cast<unsigned long long>(wanted.seed),
      tuned.feasible ? "what follows keeps all that" : "NO CANDIDATE KEEPS ALL THAT; the nearest follows");
  std::printf("%-16s %10s %10s %10s to %s\n", "knob", "as it was", "tuned", "range", "");
  lab::TuneCandidate const& best = tuned.candidates[tuned.best];
  for (std::size_t k = 0; k < knobs.size(); ++k) {
    std::printf("%-16s %10.3f %10.3f %10.2f to %.2f\n", knobs[k].name.c_str(), static_cast<double>(*knobs[k].at),
                static_cast<double>(best.values[k]), static_cast<double>(knobs[k].low),
                static_cast<double>(knobs[k].high));
  }
  std::printf("\nOn the runs of the search, which flatter what it found:\n\n");
  print_outcome_names();
  print_outcome("as it was", tuned.candidates.front().outcome);
  print_outcome("tuned", best.outcome);
  if (tuned.unseen) {
    print_unseen(*tuned.unseen, options.unseen_seed);
  }

  std::printf("\nThe trade-off: candidates that arrive, and that none beats in both time and clearance.\n\n%10s %12s",
              "mean time", "clearance");
  for (lab::TuneKnob const& knob : knobs) {
    std::printf(" %14s", knob.name.c_str());
  }
  std::printf("\n%10s %12s\n", "s", "5 % under, cm");
  for (lab::TuneCandidate const& c : tuned.trade_off) {
    std::printf("%10.2f %12.1f ", c.outcome.mean_time, 100.0 * c.outcome.clearance);
    for (Parameter const value : c.values) {
      std::printf(" %14.3f", static_cast<double>(value));
    }
    std::printf("\n");
  }
  print_sensitivity(tuned.loop, loop, knobs, scene);
  std::printf("\nTuned on simulated runs: drive it slowly first, with somebody at the stop.\n%s", cautions);
  if (!tuned.complete) {
    std::fprintf(stderr, "review: interrupted: what was found so far is above\n");
    return 130;
  }
  return 0;
}

}  // namespace review
