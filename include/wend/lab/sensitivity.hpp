// wend/lab/sensitivity.hpp - by how much the outcome of a run changes with a parameter of the loop.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <iterator>
#include <limits>
#include <span>
#include <stdexcept>
#include <string>
#include <type_traits>
#include <vector>

#include "wend/lab/dual.hpp"
#include "wend/lab/knob.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/world.hpp"
#include "wend/loop.hpp"

namespace wend::inline v0::lab {

/// Makes up to N parameters the independent variables of `Dual<N>` for this thread, as long as it lives: parameter k
/// then has slope 1 in place k wherever a policy converts it to a number. What was turned before comes back afterwards.
template <int N>
class TurnedKnobs {
 public:
  /// Throws std::invalid_argument for more than N knobs.
  explicit TurnedKnobs(std::span<Knob const> knobs) : before_(Dual<N>::knobs) {
    if (knobs.size() > before_.size()) {
      throw std::invalid_argument("wend: TurnedKnobs: " + std::to_string(knobs.size()) + " knobs do not fit a Dual<" +
                                  std::to_string(N) + ">");
    }
    Dual<N>::knobs.fill(nullptr);
    std::transform(knobs.begin(), knobs.end(), Dual<N>::knobs.begin(), [](Knob const& knob) { return knob.at; });
  }
  /// What was turned before must come back once.
  TurnedKnobs(TurnedKnobs const&) = delete;
  /// Neither is it assigned.
  TurnedKnobs& operator=(TurnedKnobs const&) = delete;
  /// Brings back what was turned before, for the thread that it runs in.
  ~TurnedKnobs() { Dual<N>::knobs = before_; }

 private:
  decltype(Dual<N>::knobs) before_;
};

/// What one knob does, per unit of the knob. Each slope is the exact derivative for the very sequence of switches that
/// the run takes; each difference is (after - before) / (2 steps) between two runs with the knob turned up and down by
/// `step`, and so sees also what moves a switch to another tick. Where the two disagree by much, believe neither
/// blindly.
///
/// The thresholds of a guard act through the tick on which they switch and through nothing else. So their slopes are
/// exactly 0 (almost everywhere), and the differences are all there is to go by.
struct KnobEffect {
  std::string name;  ///< of the knob
  double value = 0.0;  ///< in the knob's unit, as it stands
  double step = 0.0;  ///< in the knob's unit, over 0
  double clearance_slope = 0.0;  ///< metres a unit
  double clearance_difference = 0.0;  ///< metres a unit
  double time_slope = 0.0;  ///< seconds a unit; not-a-number when the run does not arrive
  double time_difference = 0.0;  ///< seconds a unit; not-a-number when one of the two runs does not arrive
};

/// A run, and how it depends on the knobs.
struct Sensitivity {
  bool arrived = false;  ///< whether it did, in the loop's own radius
  double least_clearance = 0.0;  ///< metres, from the machine's edge to a disc's, over all ticks; negative in contact
  double time = 0.0;  ///< seconds to the loop's arrival radius; not-a-number when it does not arrive
  std::vector<KnobEffect> knobs;  ///< one a knob, in the order given
};

/// How a run is driven, and how far knobs are turned.
struct SensitivityOptions {
  double period = 0.05;  ///< seconds between ticks
  double step_share = 0.01;  ///< of a knob's value, for the differences
  double least_step = 1e-3;  ///< in the knob's unit: what a knob near 0 is turned by
};

/// What one run comes to, on a number that may carry derivatives.
template <typename S>
struct ExactRun {
  bool arrived = false;  ///< whether the loop said so
  S least_clearance{static_cast<double>(far_away)};  ///< metres, over all ticks
  S time{0.0};  ///< seconds; where the run stopped when it did not arrive
};

namespace detail {

// sin(x) / x with its derivatives, by its series near 0. Up to 0.1 the first term left out is 3e-18.
template <typename S>
[[nodiscard]] S smooth_sinc(S const& x) {
  using std::sin;
  if (x < S(0.1) && x > S(-0.1)) {
    S const xx = x * x;
    return S(1.0) - xx * (S(1.0 / 6.0) - xx * (S(1.0 / 120.0) - xx * (S(1.0 / 5040.0) - xx * S(1.0 / 362880.0))));
  }
  return sin(x) / x;
}

// along_arc (lab/arc.hpp) on any number with a sine and a cosine, in the same chord form.
template <typename S>
[[nodiscard]] Pose<S> exact_arc(Pose<S> const& from, BodyVelocity<S> const& velocity, double time) {
  using std::cos;
  using std::sin;
  S const half = S(0.5 * time) * velocity.turn_rate;
  S const chord = velocity.speed * S(time) * smooth_sinc(half);
  Vec2<S> const half_turned{cos(half), sin(half)};
  Vec2<S> const chord_direction = turned_out_of(from.heading, half_turned);
  return {from.position + scaled(chord_direction, chord), polar(turned_out_of(chord_direction, half_turned)).direction};
}

template <typename S>
[[nodiscard]] Vec2<S> constant2(Vec2<double> const& v) {
  return {S(v.x()), S(v.y())};
}

}  // namespace detail

/// Drives a loop on the number S, double or a Dual, in a world of exact discs: no ranger, no noise, no delay, wheels
/// that follow at once, exact arcs. Ends at the goal or at the trip's time limit, not at a contact. The time of arrival
/// is interpolated in the last period, by the distance to the goal, so that it has a derivative. The world may have up
/// to Capacity discs: throws std::invalid_argument otherwise, and for a period not over 0.
template <typename S, int Capacity = 32, typename Loop>
[[nodiscard]] ExactRun<S> exact_run(Loop const& loop, World const& world, Trip const& trip, double period = 0.05) {
  if (world.discs.size() > static_cast<std::size_t>(Capacity)) {
    throw std::invalid_argument("wend: exact_run: the world has more discs than Capacity; write exact_run<S, " +
                                std::to_string(world.discs.size()) + ">(...)");
  }
  if (!(period > 0.0)) {
    throw std::invalid_argument("wend: exact_run: expected a period over 0 s, found " + std::to_string(period));
  }
  ExactRun<S> run;
  memory_t<Loop, S> memory;
  Situation<S> now;
  now.pose = {detail::constant2<S>(trip.start.position), detail::constant2<S>(trip.start.heading)};
  now.goal = detail::constant2<S>(trip.goal);
  now.dt = S(period);
  S distance_before(0.0);
  for (int tick = 0; tick * period < trip.time_limit; ++tick) {
    double const time = tick * period;
    DiscSet<S, Capacity> discs;
    for (WorldDisc const& d : world.discs) {
      Disc<double> const here = World::at(d, time);
      Disc<S> const disc{detail::constant2<S>(here.centre), S(here.radius)};
      discs.add(disc);
      run.least_clearance = least(S(gap(disc, now.pose.position) - S(loop.robot_radius)), run.least_clearance);
    }
    Command<S> const command = loop.tick(now, discs, memory);
    S const distance = length(Vec2<S>(now.goal - now.pose.position));
    if (command.findings.arrived) {
      S const left = distance_before - S(loop.arrive_within);  // metres still to go, one period ago
      run.time = tick == 0 ? S(0.0) : S(S(time - period) + S(period) * left / (distance_before - distance));
      run.arrived = true;
      return run;
    }
    distance_before = distance;
    now.pose = detail::exact_arc(now.pose, command.body, period);
    run.time = S(time + period);
  }
  return run;
}

/// How the least clearance and the time to the goal of one exact run (see exact_run, and its exceptions) depend on
/// parameters of the loop. Each knob points into `loop` itself:
///
///     Knob const knobs[] = {{"top speed", &loop.pace.top_speed}, {"ramp high", &loop.policy.weight.high}};
///
/// throws std::invalid_argument for one that does not. Any number of knobs, taken N at a time.
template <int N = 8, int Capacity = 32, typename Loop>
[[nodiscard]] Sensitivity sensitivity(Loop const& loop, World const& world, Trip const& trip,
                                      std::span<Knob const> knobs, SensitivityOptions const& options = {}) {
  constexpr double none = std::numeric_limits<double>::quiet_NaN();
  ExactRun<double> const plain = exact_run<double, Capacity>(loop, world, trip, options.period);
  Sensitivity result{plain.arrived, plain.least_clearance, plain.arrived ? plain.time : none, {}};
  for (std::size_t first = 0; first < knobs.size(); first += static_cast<std::size_t>(N)) {
    auto const some = knobs.subspan(first, std::min(knobs.size() - first, static_cast<std::size_t>(N)));
    std::vector<std::size_t> places;
    std::transform(some.begin(), some.end(), std::back_inserter(places), [&loop](Knob const& knob) {
      return detail::place_in("sensitivity", loop, knob.at, "the knob \"" + knob.name + "\"");
    });
    TurnedKnobs<N> const turned(some);
    auto const run = exact_run<Dual<N>, Capacity>(loop, world, trip, options.period);
    for (std::size_t k = 0; k < some.size(); ++k) {
      Parameter const value = *some[k].at;
      double const step = std::max(options.step_share * std::abs(static_cast<double>(value)), options.least_step);
      auto const up = static_cast<Parameter>(static_cast<double>(value) + step);
      auto const down = static_cast<Parameter>(static_cast<double>(value) - step);
      auto const with = [&](Parameter turned_to) {
        return exact_run<double, Capacity>(detail::with_values(loop, {places[k]}, {turned_to}), world, trip,
                                           options.period);
      };
      auto const after = with(up);
      auto const before = with(down);
      double const apart = static_cast<double>(up) - static_cast<double>(down);
      int const place = static_cast<int>(k);
      result.knobs.push_back({some[k].name, static_cast<double>(value), 0.5 * apart, run.least_clearance.slope(place),
                              (after.least_clearance - before.least_clearance) / apart,
                              run.arrived ? run.time.slope(place) : none,
                              after.arrived && before.arrived ? (after.time - before.time) / apart : none});
    }
  }
  return result;
}

}  // namespace wend::inline v0::lab
