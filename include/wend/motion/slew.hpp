// wend/motion/slew.hpp - how fast velocities may change: limits on acceleration, and on jerk.
#pragma once

#include "wend/disc.hpp"
#include "wend/motion/body_velocity.hpp"
#include "wend/number.hpp"

namespace wend::inline v0 {

/// What a loop tells a slew beside the motion that is wanted.
template <Number S>
struct SlewMoment {
  S dt;               ///< seconds since the last tick
  mask_t<S> hard;     ///< stopped by a finding, or blocked: brake as hard as may be
  mask_t<S> at_once;  ///< there is no time step to brake by: whatever is wanted holds now
};

/// No limits: what is wanted holds at once. Costs nothing and remembers nothing.
struct no_slew {};

namespace detail {

// A change of no more than `most`; of none where that is not a positive number.
template <Number S>
[[nodiscard]] constexpr S towards(S const& now, S const& wanted, S const& most) noexcept {
  S const change = greatest(most, S(0.0F));
  return clamp(wanted, S(now - change), S(now + change));
}

// How much a hard stop may change a velocity: by the greater of two brakings, or, where neither is one, all at once.
template <Number S>
[[nodiscard]] constexpr S hard_change(S const& stop, S const& slower, S const& dt) noexcept {
  S const most = greatest(stop, slower);
  return select(most > S(0.0F), S(most * dt), S(far_away));
}

// What was remembered, unless it is not a number.
template <Number S>
[[nodiscard]] constexpr S remembered(S const& x) noexcept {
  return select(finite(x), x, S(0.0F));
}

// Calls f(whether it turns, wanted, remembered ...) for each component that a body's motion has.
template <typename Body, typename F, typename... Kept>
constexpr void for_each_velocity(F const& f, Body& wanted, Kept&... kept) noexcept {
  f(false, wanted.speed, kept.speed...);
  if constexpr (requires { wanted.lateral; }) {
    f(false, wanted.lateral, kept.lateral...);
  }
  f(true, wanted.turn_rate, kept.turn_rate...);
}

}  // namespace detail

/// Limits on how fast each velocity of the body changes. Going faster is limited by `acceleration`, going slower by
/// `braking`; a loop that must stop, or has no room left, brakes by `stop_braking`, and when the time step is not one
/// it stops at once. Put into a loop as its last member: `Loop<Policy, Sensing, Drive, Steering, Slew>`. A machine
/// keeps the promise of its Pace only if `braking` is no less than the pace's: what the slew holds back the pace must
/// not count on.
struct Slew {
  Parameter acceleration = 1.0F;        ///< metres a second squared, of speed and of lateral speed each
  Parameter braking = 1.2F;             ///< metres a second squared, at least Pace::braking
  Parameter turn_acceleration = 8.0F;   ///< radians a second squared, both ways
  Parameter stop_braking = 2.5F;        ///< metres a second squared
  Parameter stop_turn_braking = 20.0F;  ///< radians a second squared

  /// What a machine was last told to do. Rest at first.
  template <typename Body>
  struct Memory {
    Body body{};  ///< what the wheels were last told to make of the body
  };

  /// The velocities for this tick. The loop puts into the memory what the drive makes of them.
  template <Number S, typename Body>
  [[nodiscard]] constexpr Body operator()(Body wanted, SlewMoment<S> const& now,
                                          Memory<Body> const& memory) const noexcept {
    detail::for_each_velocity(
        [&](bool turns, S& goal, S const& kept) noexcept {
          S const last = detail::remembered(kept);
          S const slower = turns ? S(turn_acceleration) : S(braking);
          S const faster = turns ? S(turn_acceleration) : S(acceleration);
          S const stop = turns ? S(stop_turn_braking) : S(stop_braking);
          S const usual = select((goal - last) * last < S(0.0F), slower, faster);
          S const most = select(now.hard, detail::hard_change(stop, slower, now.dt), S(usual * now.dt));
          S const next = detail::towards(last, goal, most);
          goal = select(now.at_once, goal, next);
        },
        wanted, memory.body);
    return wanted;
  }
};

/// The same with a limit on jerk: accelerations grow and fade at `jerk`, so that a velocity that is wanted steadily is
/// met without overshoot and with no acceleration left. (Of what is left to go, e, a machine that lets its acceleration
/// fade by jerk dt each tick still covers (a + jerk dt / 2)^2 / (2 jerk); solved for a. In continuous time this is the
/// switching curve of the double integrator, a = sqrt(2 jerk e): Bryson and Ho 1975, Applied optimal control, sec. 3.9,
/// from memory.) When the target falls while the machine still speeds up, it goes on rising by a^2 / (2 jerk).
///
/// Hard stops are not smoothed: they brake by `stop_braking` from one tick to the next. All other braking takes time to
/// build up, which the pace has to know: add (acceleration + braking) / jerk to Pace::reaction.
struct SmoothSlew {
  Parameter acceleration = 1.0F;  ///< metres a second squared, of speed and of lateral speed each
  Parameter braking = 1.2F;  ///< metres a second squared, at least Pace::braking
  Parameter jerk = 8.0F;  ///< metres a second cubed
  Parameter turn_acceleration = 8.0F;  ///< radians a second squared
  Parameter turn_jerk = 80.0F;  ///< radians a second cubed
  Parameter stop_braking = 2.5F;  ///< metres a second squared
  Parameter stop_turn_braking = 20.0F;  ///< radians a second squared

  /// What a machine was last told to do, and how that changed. Rest at first.
  template <typename Body>
  struct Memory {
    Body body{};  ///< what the wheels were last told to make of the body
    Body change{};  ///< its rate of change: metres, or radians, a second squared
  };

  /// The velocities for this tick. The loop puts into the memory what the drive makes of them.
  template <Number S, typename Body>
  [[nodiscard]] constexpr Body operator()(Body wanted, SlewMoment<S> const& now, Memory<Body>& memory) const noexcept {
    S const dt = greatest(now.dt, S(1.0e-6F));
    detail::for_each_velocity(
        [&](bool turns, S& goal, S const& kept, S& change) noexcept {
          S const last = detail::remembered(kept);
          S const before = detail::remembered(change);
          S const slower = turns ? S(turn_acceleration) : S(braking);
          S const faster = turns ? S(turn_acceleration) : S(acceleration);
          S const rate = greatest(turns ? S(turn_jerk) : S(jerk), S(0.0F));
          S const stop = turns ? S(stop_turn_braking) : S(stop_braking);
          S const step = rate * dt;  // by which the acceleration may change in this tick
          S const left = goal - last;
          S const far = magnitude(left);
          mask_t<S> const lands = far <= step * dt;  // can be met in this tick, and left next tick
          S const fading = greatest(S(root(S(S(2.0F) * rate * far)) - S(0.5F) * step), S(0.0F));
          S const limit = select(left * last < S(0.0F), slower, faster);
          S const size = least(select(lands, S(far / dt), fading), limit);
          S const wish = select(left < S(0.0F), S(-size), size);
          S const next = detail::towards(before, wish, step);
          mask_t<S> const meets = lands && next <= wish && next >= wish && far <= limit * dt;
          S const gentle = select(meets, goal, S(last + next * dt));
          S const hard = detail::towards(last, goal, detail::hard_change(stop, slower, dt));
          mask_t<S> const sudden = now.hard || now.at_once;
          change = select(sudden, S(0.0F), next);
          goal = select(now.at_once, goal, select(now.hard, hard, gentle));
        },
        wanted, memory.body, memory.change);
    return wanted;
  }
};

}  // namespace wend::inline v0
