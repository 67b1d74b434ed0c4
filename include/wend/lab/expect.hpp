// wend/lab/expect.hpp - what a unit test of a controller expects, for any test framework: each answer is true or false,
// says why in words, and comes with the smallest scene found in which it is so.
#pragma once

#include <algorithm>
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "wend/lab/shrink.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/svg.hpp"
#include "wend/lab/trace.hpp"

namespace wend::inline v0::lab {

/// How often, and on which noise.
struct Trials {
  std::uint64_t seed = 1;  ///< of all noise: the same seed gives the same runs
  int runs = 20;  ///< each with noise of its own
  bool shrink = true;  ///< whether a scene that fails is made smaller, which takes many runs more
};

/// What came of it: `CHECK(expect_arrives(...))` in any framework, `.why` to be printed with it.
struct Expectation {
  bool held = true;  ///< whether every run did what was expected
  std::string why;  ///< one sentence; of one that failed, also the seed and the scene, as code to be pasted
  std::uint64_t seed = 0;  ///< of the trials
  std::uint64_t run_number = 0;  ///< of the run that failed
  Scene scene;  ///< in which it fails, made small; as given where it held

  /// Whether it held.
  explicit operator bool() const noexcept { return held; }
  /// `why`, for a framework that asks for a text.
  friend std::string const& to_string(Expectation const& e) { return e.why; }
};

namespace detail {

// The scene as code. What is told of places is told to 0.1 mm, which is what `shrunk` made of it.
inline std::string as_code(Scene const& scene) {
  auto const place = [](Vec2<double> const& p) { return "{" + fixed(p.x(), 4) + ", " + fixed(p.y(), 4) + "}"; };
  std::string code = "World world;\n";
  for (WorldDisc const& d : scene.world.discs) {
    code += "world.add(" + fixed(d.disc.centre.x(), 4) + ", " + fixed(d.disc.centre.y(), 4) + ", " +
            fixed(d.disc.radius, 4);
    code += d.velocity.squaredNorm() > 0.0 ? ", " + place(d.velocity) + ");\n" : ");\n";
  }
  return code + "Trip trip{{" + place(scene.trip.start.position) + ", " + place(scene.trip.start.heading) + "}, " +
         place(scene.trip.goal) + ", " + fixed(scene.trip.time_limit, 1) + "};\n";
}

// Runs up to the first that fails, and makes its scene small. `verdict` says why a run fails, or nothing.
template <typename Loop, typename Verdict>
Expectation expect(Loop const& loop, Vehicle const& vehicle, World const& world, Trip const& trip, Trials const& trials,
                   std::string const& what, Verdict const& verdict) {
  Expectation result;
  result.seed = trials.seed;
  result.scene = {world, trip};
  auto const run_in = [&](Scene const& scene, std::uint64_t number) {
    return simulate(loop, vehicle, scene.world, scene.trip, trials.seed, number, true);
  };
  for (int k = 0; k < trials.runs; ++k) {
    auto const number = static_cast<std::uint64_t>(k);
    std::string const why = verdict(run_in(result.scene, number));
    if (why.empty()) {
      continue;
    }
    result.held = false;
    result.run_number = number;
    if (trials.shrink) {
      result.scene = shrunk(
          result.scene, vehicle.radius, [&](Scene const& s) { return run_in(s, number); },
          [&](Run const& run) { return !verdict(run).empty(); });
    }
    result.why = "expected: " + what + "; run " + std::to_string(k) + " of seed " + std::to_string(trials.seed) + ": " +
                 why + ".\n";
    if (trials.shrink) {
      result.why += "So it is also in this scene (" + std::to_string(result.scene.world.discs.size()) + " of " +
                    std::to_string(world.discs.size()) +
                    " discs), on the same noise: " + verdict(run_in(result.scene, number)) + ".\n";
    }
    result.why += as_code(result.scene) + "simulate(loop, vehicle, world, trip, " + std::to_string(trials.seed) + ", " +
                  std::to_string(k) + ");\n";
    return result;
  }
  result.why = what + ", in " + std::to_string(trials.runs) + " runs of seed " + std::to_string(trials.seed);
  return result;
}

}  // namespace detail

/// That the machine comes to its goal in the time allowed.
template <typename Loop>
[[nodiscard]] Expectation expect_arrives(Loop const& loop, Vehicle const& vehicle, World const& world, Trip const& trip,
                                         Trials const& trials = {}) {
  return detail::expect(loop, vehicle, world, trip, trials, "arrives", [](Run const& run) -> std::string {
    if (run.ending == Ending::arrived) {
      return {};
    }
    return std::string("ends by ") + text(run.ending) + " after " + detail::fixed(run.time, 1) + " s, " +
           text(run.last_status);
  });
}

/// That the body stays more than `clearance` metres clear of every disc, between ticks too.
template <typename Loop>
[[nodiscard]] Expectation expect_keeps_clear(Loop const& loop, Vehicle const& vehicle, World const& world,
                                             Trip const& trip, double clearance, Trials const& trials = {}) {
  std::string const what = "keeps " + detail::fixed(100.0 * clearance, 1) + " cm clear";
  return detail::expect(loop, vehicle, world, trip, trials, what, [clearance](Run const& run) -> std::string {
    if (run.least_clearance > clearance) {
      return {};
    }
    return "comes as near as " + detail::fixed(100.0 * run.least_clearance, 2) + " cm";
  });
}

/// That guards do not change their minds sooner than `least_dwell` seconds after they did.
template <typename Loop>
[[nodiscard]] Expectation expect_no_chatter(Loop const& loop, Vehicle const& vehicle, World const& world,
                                            Trip const& trip, double least_dwell, Trials const& trials = {}) {
  std::string const what = "no guard switches back within " + detail::fixed(least_dwell, 3) + " s";
  return detail::expect(loop, vehicle, world, trip, trials, what, [least_dwell](Run const& run) -> std::string {
    if (run.least_dwell >= least_dwell) {
      return {};
    }
    return "switches " + std::to_string(run.switches) + " times, once within " + detail::fixed(run.least_dwell, 3) +
           " s";
  });
}

/// That a run is still the one that was recorded, row by row: `recorded` is the text that `trace` made of it.
template <typename Loop>
[[nodiscard]] Expectation expect_same_as(std::string_view recorded, Loop const& loop, Vehicle const& vehicle,
                                         World const& world, Trip const& trip, std::uint64_t seed = 1,
                                         std::uint64_t run_number = 0) {
  Expectation result;
  result.seed = seed;
  result.run_number = run_number;
  result.scene = {world, trip};
  std::string const now = trace(simulate(loop, vehicle, world, trip, seed, run_number, true));
  auto const line_of = [](std::string_view& text) {
    std::size_t const end = std::min(text.find('\n'), text.size());
    std::string_view const line = text.substr(0, end);
    text.remove_prefix(std::min(end + 1, text.size()));
    return line;
  };
  std::string_view then = recorded;
  std::string_view here = now;
  std::string_view const names = line_of(here);
  if (line_of(then) != names) {
    result.held = false;
    result.why = "line 1: expected the names '" + std::string(names) + "'";
    return result;
  }
  for (std::size_t number = 2; !then.empty() || !here.empty(); ++number) {
    std::string const recorded_line(line_of(then));
    std::string const line(line_of(here));
    if (recorded_line != line) {
      result.held = false;
      result.why = "line " + std::to_string(number) + ": recorded '" + recorded_line + "', now '" + line + "'";
      return result;
    }
  }
  result.why = "the same run, row by row";
  return result;
}

}  // namespace wend::inline v0::lab
