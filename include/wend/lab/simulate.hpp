// wend/lab/simulate.hpp - drives a loop through a world: the loop that ships, on the number that ships.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <deque>
#include <limits>
#include <numbers>
#include <span>
#include <type_traits>
#include <vector>

#include "wend/lab/arc.hpp"
#include "wend/lab/mishap.hpp"
#include "wend/lab/modes.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/lab/world.hpp"
#include "wend/loop.hpp"
#include "wend/moving_discs.hpp"
#include "wend/sensing/ring.hpp"

namespace wend::inline v0::lab {

/// From where to where, and for how long at most.
struct Trip {
  Pose<double> start;  ///< in the world's frame
  Vec2<double> goal{0.0, 0.0};  ///< metres, in the world's frame
  double time_limit = 120.0;  ///< seconds
};

/// One tick as it was: the truth of the world beside the decision.
struct Tick {
  double time = 0.0;  ///< seconds
  Pose<double> pose;  ///< where the machine really is, in the world's frame
  double clearance = 0.0;  ///< metres, from the body's edge to the nearest disc's; infinite in an empty world
  WheelRates<double> wheels;  ///< radians a second that the loop asks for
  BodyVelocity<double> body;  ///< what it makes of the body: metres a second, radians a second
  std::uint32_t modes = 0;  ///< a bit for each `guarded` and each mode but the first: see modes_of
  Status status = Status::ok;  ///< what the loop says
};

/// How a run ended.
enum class Ending : std::uint8_t {
  arrived,   ///< the loop said so, within its radius of the goal
  contact,   ///< the body touched a disc
  time_out,  ///< neither, in the time allowed: the last status says why
};

/// One simulated run, and what to know about it.
struct Run {
  Ending ending = Ending::time_out;  ///< how it ended
  Status last_status = Status::ok;  ///< what the loop said on the last tick
  double time = 0.0;             ///< seconds
  double path_length = 0.0;      ///< metres
  double straight_length = 0.0;  ///< metres, from start to goal
  double least_clearance = std::numeric_limits<double>::infinity();  ///< metres over the whole path, not only at ticks
  double contact_speed = 0.0;  ///< metres a second that the body drove at when it touched a disc; 0 where it stood
  int switches = 0;  ///< ticks on which a guard changed its mind
  double least_dwell = std::numeric_limits<double>::infinity();  ///< seconds between two switches, at the least
  std::vector<Tick> ticks;  ///< empty unless asked for
};

/// What a run's ending is called.
[[nodiscard]] constexpr char const* text(Ending ending) noexcept {
  switch (ending) {
    case Ending::arrived: return "arrived";
    case Ending::contact: return "contact";
    case Ending::time_out: return "time out";
  }
  return "unknown";
}

namespace detail {

enum Purpose : std::uint32_t { of_dropout, of_range, of_period, of_position, of_heading, of_told, of_slip, of_spread };

// The ranger in a loop's sensing: that itself, or what its steps follow.
template <typename Sensing>
auto const& ranger_of(Sensing const& sensing) {
  if constexpr (requires { sensing.step; }) {
    return ranger_of(sensing.sensing);
  } else {
    return sensing;
  }
}

// A loop's ranger in a world: one row of readings.
template <PlainNumber S, int Beams>
std::array<S, static_cast<std::size_t>(Beams)> read_ring(Ring<Beams> const& ring, Vehicle const& vehicle,
                                                         World const& world, Pose<double> const& pose, double time,
                                                         Draws const& draws, std::uint32_t tick,
                                                         std::vector<Disc<double>>& near) {
  std::array<S, static_cast<std::size_t>(Beams)> ranges;
  Bearing const turn = ring.mounting.turn;
  Pose<double> const sensor{out_of_frame(pose, Vec2<double>{ring.mounting.x, ring.mounting.y}),
                            turned_out_of(pose.heading, Vec2<double>{turn.x, turn.y})};
  double const reach = static_cast<double>(ring.max_range);
  world.within(sensor.position, reach, time, near);
  for (std::uint32_t k = 0; k < static_cast<std::uint32_t>(Beams); ++k) {
    Bearing const b = ring.directions[k];
    Vec2<double> const beam = turned_out_of(sensor.heading, Vec2<double>{b.x, b.y});
    double const range = cast_ray(near, sensor.position, polar(beam).direction);
    if (draws.uniform({of_dropout, tick, k}) < vehicle.dropout) {
      ranges[k] = S{0};
    } else if (range > reach) {
      ranges[k] = static_cast<S>(ring.no_echo);
    } else {
      ranges[k] = static_cast<S>(std::max(0.0, range + vehicle.range_noise * draws.normal({of_range, tick, k})));
    }
  }
  return ranges;
}

// What a loop without a ranger is told: the nearest discs within the vehicle's sight, in the world's frame, with the
// vehicle's errors.
template <PlainNumber S, int Capacity>
MovingDiscSet<S, Capacity> nearest_discs(World const& world, Vehicle const& vehicle, Pose<double> const& pose,
                                         double time, Draws const& draws, std::uint32_t tick) {
  MovingDiscSet<S, Capacity> discs;
  bool const errs = vehicle.disc_noise > 0.0 || vehicle.radius_noise > 0.0 || vehicle.disc_dropout > 0.0;
  for (std::uint32_t i = 0; i < world.discs.size(); ++i) {
    WorldDisc const& d = world.discs[i];
    Disc<double> now = World::at(d, time);
    if (!(v0::gap(now, pose.position) <= vehicle.sight)) {
      continue;
    }
    if (errs) {
      // A disc has four addresses of its own: dropout, two coordinates, radius.
      if (draws.uniform({of_told, tick, 4 * i}) < vehicle.disc_dropout) {
        continue;
      }
      now.centre += vehicle.disc_noise *
                    Vec2<double>{draws.normal({of_told, tick, 4 * i + 1}), draws.normal({of_told, tick, 4 * i + 2})};
      double const off = draws.between(-1.0, 1.0, {of_told, tick, 4 * i + 3});
      now.radius = std::max(0.0, now.radius + vehicle.radius_noise * off);
    }
    discs.add({now.centre.cast<S>(), static_cast<S>(now.radius)}, d.velocity.cast<S>(), pose.position.cast<S>());
  }
  return discs;
}

// By what share of its nominal radius each wheel rolls, and the body turns, in one run.
struct Built {
  WheelRates<double> wheels{1.0, 1.0};
  double turning = 1.0;

  Built(Vehicle const& vehicle, Draws const& draws)
      : wheels{1.0 + vehicle.wheel_spread * draws.between(-1.0, 1.0, {of_spread, 0, 0}),
               1.0 + vehicle.wheel_spread * draws.between(-1.0, 1.0, {of_spread, 0, 1})},
        turning(1.0 / (1.0 + vehicle.track_spread * draws.between(-1.0, 1.0, {of_spread, 0, 2}))) {}

  // What is left of that in a tick: each wheel loses up to the vehicle's slip.
  [[nodiscard]] WheelRates<double> grip(Vehicle const& vehicle, Draws const& draws, std::uint32_t tick) const {
    return {wheels.left * (1.0 - vehicle.slip * draws.uniform({of_slip, tick, 0})),
            wheels.right * (1.0 - vehicle.slip * draws.uniform({of_slip, tick, 1}))};
  }
};

// The wheels: they answer late, and speed up only so fast.
class Wheels {
 public:
  explicit Wheels(Vehicle const& vehicle) : vehicle_(vehicle) {}

  // Whatever the loop believes of its drive, no wheel does more than it can.
  void ask(double time, WheelRates<double> rates) {
    double const limit = static_cast<double>(vehicle_.drive.max_rate);
    queue_.push_back(
        {time + vehicle_.latency, {std::clamp(rates.left, -limit, limit), std::clamp(rates.right, -limit, limit)}});
  }

  // Rates that hold from `time` for a short `step`.
  [[nodiscard]] WheelRates<double> turn(double time, double step) {
    while (!queue_.empty() && queue_.front().from <= time + 1e-9) {
      wanted_ = queue_.front().rates;
      since_ = queue_.front().from;
      queue_.pop_front();
    }
    if (time - since_ > vehicle_.watchdog) {
      wanted_ = {};
    }
    double const change = vehicle_.acceleration / static_cast<double>(vehicle_.drive.wheel_radius) * step;
    WheelRates<double> const before = now_;
    now_.left += std::clamp(wanted_.left - now_.left, -change, change);
    now_.right += std::clamp(wanted_.right - now_.right, -change, change);
    return {0.5 * (before.left + now_.left), 0.5 * (before.right + now_.right)};
  }

 private:
  struct Order {
    double from;
    WheelRates<double> rates;
  };
  Vehicle const& vehicle_;
  std::deque<Order> queue_;
  WheelRates<double> wanted_;
  double since_ = 0.0;  // when these were asked for
  WheelRates<double> now_;
};

}  // namespace detail

inline constexpr int discs_told = 24;  ///< that a loop without a ranger is told at most

/// Drives from start to goal. The world is in double precision; the loop runs on S, float as on the machine. Each tick
/// the ranger is read (noise, dropouts), the loop decides, and the wheels follow after the vehicle's latency with its
/// acceleration; the body moves along exact arcs of at most 5 ms, over each of which the wheel rates are held at their
/// mean. Contact and clearance are taken over whole arcs. A moving disc is held still, where it is in the middle of the
/// arc. A loop without a ranger is told the nearest `discs_told` discs within the vehicle's sight, as they move, and as
/// they are but for the vehicle's errors. A mishap, if there is one, meddles with what the loop is told and with its
/// wheels. The same arguments give the same run: `seed` and `run_number` choose the noise. The vehicle's period must be
/// over 0 and its jitter under 1.
template <PlainNumber S = float, typename Loop>
[[nodiscard]] Run simulate(Loop const& loop, Vehicle const& vehicle, World const& world, Trip const& trip,
                           std::uint64_t seed, std::uint64_t run_number = 0, bool keep_ticks = false,
                           Mishap<S>* mishap = nullptr) {
  constexpr double finest = 0.005;
  Run run;
  run.straight_length = (trip.goal - trip.start.position).norm();
  Draws const draws(seed, run_number);
  memory_t<Loop, S> memory;
  detail::Wheels wheels(vehicle);
  detail::Built const built(vehicle, draws);
  Pose<double> pose = trip.start;
  std::vector<Disc<double>> near;
  double last_switch = -std::numeric_limits<double>::infinity();
  std::uint32_t modes = 0;
  double dt = vehicle.period;
  double const fastest = static_cast<double>(vehicle.drive.wheel_radius) * static_cast<double>(vehicle.drive.max_rate) *
                         (1.0 + vehicle.wheel_spread);
  bool const moving = std::any_of(world.discs.begin(), world.discs.end(),
                                  [](WorldDisc const& d) { return d.velocity.squaredNorm() > 0.0; });
  // Into `near`, the discs that can be the nearest one on the next `way` metres from here: another one stays farther.
  auto const look_near = [&](double time, double way) {
    world.within(pose.position, std::max(world.gap(pose.position, time), 0.0) + 2.0 * way, time, near);
  };

  for (std::uint32_t tick = 0; run.time < trip.time_limit; ++tick) {
    double const turned = vehicle.heading_noise * draws.normal({detail::of_heading, tick});
    Pose<double> believed;
    Vec2<double> const off{draws.normal({detail::of_position, tick, 0}), draws.normal({detail::of_position, tick, 1})};
    believed.position = pose.position + vehicle.position_noise * off;
    believed.heading = turned_out_of(pose.heading, Vec2<double>{std::cos(turned), std::sin(turned)});
    Situation<S> now;
    now.pose = {believed.position.cast<S>(), believed.heading.cast<S>()};
    now.goal = trip.goal.cast<S>();
    now.dt = static_cast<S>(dt);
    Moment const moment{tick, run.time, draws};
    if (mishap != nullptr) {
      mishap->situation(moment, now);
    }
    Command<S> const command = [&] {
      if constexpr (std::is_same_v<decltype(loop.sensing), no_sensing>) {
        return loop.tick(now, detail::nearest_discs<S, discs_told>(world, vehicle, pose, run.time, draws, tick),
                         memory);
      } else {
        auto ranges =
            detail::read_ring<S>(detail::ranger_of(loop.sensing), vehicle, world, pose, run.time, draws, tick, near);
        if (mishap != nullptr) {
          mishap->readings(moment, ranges);
        }
        return loop.tick(now, std::span<S const, ranges.size()>(ranges), memory);
      }
    }();
    run.last_status = status_of(command);

    std::uint32_t const modes_now = modes_of(memory);
    if (tick > 0 && modes_now != modes) {
      ++run.switches;
      run.least_dwell = std::min(run.least_dwell, run.time - last_switch);
      last_switch = run.time;
    }
    modes = modes_now;
    double const clearance = world.gap(pose.position, run.time) - vehicle.radius;
    run.least_clearance = std::min(run.least_clearance, clearance);
    if (keep_ticks) {
      run.ticks.push_back({run.time,
                           pose,
                           clearance,
                           {static_cast<double>(command.wheels.left), static_cast<double>(command.wheels.right)},
                           {static_cast<double>(command.body.speed), static_cast<double>(command.body.turn_rate)},
                           modes,
                           run.last_status});
    }
    if (run.least_clearance <= 0.0) {
      run.ending = Ending::contact;
      return run;
    }
    if (run.last_status == Status::arrived) {
      run.ending = Ending::arrived;
      return run;
    }

    wheels.ask(run.time, {static_cast<double>(command.wheels.left), static_cast<double>(command.wheels.right)});
    dt = vehicle.period * (1.0 + vehicle.jitter * draws.between(-1.0, 1.0, {detail::of_period, tick}));
    dt += mishap == nullptr ? 0.0 : mishap->delay(moment);
    int const steps = static_cast<int>(std::ceil(dt / finest));
    double const step = dt / steps;
    look_near(run.time, fastest * dt);
    WheelRates<double> const grip = built.grip(vehicle, draws, tick);
    for (int i = 0; i < steps; ++i) {
      double const time = run.time + i * step;
      WheelRates<double> rates = wheels.turn(time, step);
      if (mishap != nullptr) {
        mishap->wheels(time, rates);
      }
      BodyVelocity<double> body =
          vehicle.drive.body(WheelRates<double>{rates.left * grip.left, rates.right * grip.right});
      body.turn_rate *= built.turning;
      if (moving) {
        look_near(time + 0.5 * step, fastest * step);
      }
      for (Disc<double> const& disc : near) {
        double const clear = distance_to_arc(pose, body, step, disc.centre) - disc.radius - vehicle.radius;
        run.least_clearance = std::min(run.least_clearance, clear);
      }
      pose = along_arc(pose, body, step);
      run.path_length += std::abs(body.speed) * step;
      if (run.least_clearance <= 0.0) {
        run.time = time + step;
        run.contact_speed = std::abs(body.speed);
        run.ending = Ending::contact;
        return run;
      }
    }
    run.time += dt;
  }
  return run;
}

}  // namespace wend::inline v0::lab
