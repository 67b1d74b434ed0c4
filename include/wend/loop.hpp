// wend/loop.hpp - one control tick: readings or a percept in, wheel rates and a status out.
#pragma once

#include <cstddef>
#include <span>

#include "wend/disc.hpp"
#include "wend/field.hpp"
#include "wend/members.hpp"
#include "wend/motion/differential_drive.hpp"
#include "wend/motion/pace.hpp"
#include "wend/motion/steering.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/watch/freshness.hpp"
#include "wend/watch/progress.hpp"
#include "wend/watch/status.hpp"

namespace wend::inline v0 {

/// What one tick decides.
template <Number S>
struct Command {
  WheelRates<S> wheels;    ///< radians a second, finite and within the drive's limits whatever came in
  BodyVelocity<S> body;    ///< what those wheel rates make of the body
  Course<S> course;        ///< what the policy wanted, in the percept's frame; none when stale or blind
  Findings<S> findings{};  ///< everything that held
};

/// The finding that matters most.
template <PlainNumber S>
[[nodiscard]] constexpr Status status_of(Command<S> const& command) noexcept {
  return status_of(command.findings);
}

/// What goes into a tick besides readings or discs. Pose and goal in one frame, metres; heading a unit vector.
template <Number S>
struct Situation {
  Pose<S> pose;
  Vec2<S> goal{S(0.0F), S(0.0F)};
  S dt{S(0.05F)};  ///< seconds since the last tick
  S age{S(0.0F)};  ///< seconds since the oldest of readings and pose was measured
};

/// For a loop that is given discs and has no ranger.
struct no_sensing {};

/// A whole control loop: parameters only, so one constant in flash serves every tick. All that changes is in a
/// `memory_t<decltype(loop), S>`; start it fresh for a new goal.
template <typename Policy, typename Sensing = no_sensing, typename Drive = DifferentialDrive>
struct Loop {
  [[no_unique_address]] Policy policy;
  [[no_unique_address]] Sensing sensing{};
  Drive drive{};
  Steering steering{};
  Pace pace{};
  Freshness freshness{};
  Progress progress{};
  Parameter robot_radius = 0.20F;   ///< metres, of the circle round the axle's middle that holds the whole machine
  Parameter arrive_within = 0.15F;  ///< metres, from the robot's centre to the goal
  Parameter min_alive = 0.5F;       ///< share of the beams that must work

  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Policy, S, Loop, 0> policy;
    Progress::Memory<S> progress;
  };

  /// Discs in, command out, everything in the frame of the situation's pose and goal.
  template <Number S, int N>
  [[nodiscard]] constexpr Command<S> tick(Situation<S> const& now, DiscSet<S, N> const& discs,
                                          Memory<S>& memory) const noexcept {
    return tick(now, discs, mask_t<S>{}, memory);
  }
  /// The same with discs that move.
  template <Number S, int N>
  [[nodiscard]] constexpr Command<S> tick(Situation<S> const& now, MovingDiscSet<S, N> const& discs,
                                          Memory<S>& memory) const noexcept {
    return tick(now, discs, mask_t<S>{}, memory);
  }

  /// Readings in, command out. The discs are made in the robot's own frame, and so is the course. Capacity is the
  /// number of discs kept.
  template <int Capacity = 16, PlainNumber S, std::size_t Beams>
  [[nodiscard]] Command<S> tick(Situation<S> const& now, std::span<S const, Beams> ranges,
                                Memory<S>& memory) const noexcept {
    DiscSet<S, Capacity> discs;
    auto const count = sensing.discs(ranges, discs);
    bool const blind = S(count.alive()) < S(min_alive) * S(static_cast<int>(Beams));
    bool const lost = !sound(now.pose);
    Situation<S> own{{}, into_frame(now.pose, now.goal), now.dt, now.age};
    return tick(own, discs, blind || lost, memory);
  }

 private:
  template <Number S, typename Discs>
  [[nodiscard]] constexpr Command<S> tick(Situation<S> const& now, Discs const& discs, mask_t<S> const& blind,
                                          Memory<S>& memory) const noexcept {
    Command<S> command;
    Findings<S>& findings = command.findings;
    auto const percept = look(now.pose, now.goal, discs, S(robot_radius), now.dt);
    findings.stale = freshness.stale(now.dt, now.age);
    findings.blind = blind || discs.rejected() || !sound(now.pose) || !finite(now.goal) ||
                     !(percept.goal_distance < S(far_away));
    mask_t<S> const trusted = !findings.stale && !findings.blind;
    // What cannot be trusted must not be remembered either.
    Memory<S> next = memory;
    assign_where(trusted, command.course, evaluate(policy, percept, next.policy));
    findings.stuck = progress(percept, next.progress) && trusted;
    assign_where(trusted, memory, next);

    findings.arrived = trusted && percept.goal_distance <= S(arrive_within);
    findings.no_course = trusted && !(command.course.confidence > S(0.0F));
    S const allowed = pace(percept);
    findings.blocked = trusted && !findings.arrived && !(allowed > S(0.0F));
    findings.discs_dropped = S(static_cast<Parameter>(discs.dropped())) > S(0.0F);

    BodyVelocity<S> wanted = steering(command.course, now.pose.heading, allowed);
    mask_t<S> const stop = must_stop(findings);
    wanted.speed = select(stop, S(0.0F), wanted.speed);
    wanted.turn_rate = select(stop, S(0.0F), wanted.turn_rate);
    command.body = drive.within_limits(wanted);
    command.wheels = drive.wheels(command.body);
    return command;
  }
};

}  // namespace wend::inline v0
