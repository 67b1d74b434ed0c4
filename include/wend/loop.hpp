// wend/loop.hpp - one control tick: readings or a percept in, wheel rates and a status out.
#pragma once

#include <cstddef>
#include <span>
#include <type_traits>

#include "wend/disc.hpp"
#include "wend/field.hpp"
#include "wend/members.hpp"
#include "wend/motion/differential_drive.hpp"
#include "wend/motion/drive.hpp"
#include "wend/motion/pace.hpp"
#include "wend/motion/slew.hpp"
#include "wend/motion/steering.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/watch/freshness.hpp"
#include "wend/watch/progress.hpp"
#include "wend/watch/status.hpp"

namespace wend::inline v0 {

/// What one tick decides. Wheels and body are the drive's: see wheels_t and body_t.
template <Number S, typename Wheels = WheelRates<S>, typename Body = BodyVelocity<S>>
struct Command {
  Wheels wheels;           ///< finite and within the drive's limits whatever came in
  Body body;               ///< what those wheels make of the body
  Course<S> course;        ///< what the policy wanted, in the percept's frame; none when stale or blind
  Findings<S> findings{};  ///< everything that held
};

/// The finding that matters most.
template <PlainNumber S, typename Wheels, typename Body>
[[nodiscard]] constexpr Status status_of(Command<S, Wheels, Body> const& command) noexcept {
  return status_of(command.findings);
}

/// What goes into a tick besides readings or discs. Pose and goal in one frame, metres; heading a unit vector.
template <Number S>
struct Situation {
  Pose<S> pose;  ///< of the machine
  Vec2<S> goal{S(0.0F), S(0.0F)};  ///< metres, in the frame of the pose
  S dt{S(0.05F)};  ///< seconds since the last tick
  S age{S(0.0F)};  ///< seconds since the oldest of readings and pose was measured
};

/// For a loop that is given discs and has no ranger.
struct no_sensing {};

namespace detail {

template <typename SlewType, typename Body, typename Owner>
struct SlewMemory {
  using type = typename SlewType::template Memory<Body>;
};
template <typename Body, typename Owner>
struct SlewMemory<no_slew, Body, Owner> {
  using type = NoMemory<Owner, 2>;
};

}  // namespace detail

/// A whole control loop: parameters only, so one constant in flash serves every tick. All that changes is in a
/// `memory_t<decltype(loop), S>`; start it fresh for a new goal.
///
/// A sensing is asked `discs(ranges, set)`, or, when it has a member template `Memory<S>`, `discs(ranges, pose, dt,
/// set, memory)` with a set of moving discs. A steering is asked `steering(course, heading, allowed)`, and is told the
/// drive too when it wants to know it.
template <typename Policy, typename Sensing = no_sensing, typename DriveType = DifferentialDrive,
          typename SteeringType = steering_t<DriveType>, typename SlewType = no_slew>
struct Loop {
  [[no_unique_address]] Policy policy;  ///< a heading field: the course
  [[no_unique_address]] Sensing sensing{};  ///< from readings to discs, where the loop is given readings
  DriveType drive{};  ///< from the body's motion to wheel rates, and back
  SteeringType steering{};  ///< from a course to the body's motion
  Pace pace{};  ///< the speed that is allowed: room to stop in
  Freshness freshness{};  ///< how old readings may be
  Progress progress{};  ///< when the machine counts as stuck
  Parameter robot_radius = 0.20F;  ///< metres, of the circle round the drive's reference point that holds the machine
  Parameter arrive_within = 0.15F;  ///< metres, from the robot's centre to the goal
  Parameter min_alive = 0.5F;  ///< share of the beams that must work
  [[no_unique_address]] SlewType slew{};  ///< limits on how fast the body's velocities change; none by default

  /// All that changes from tick to tick.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Policy, S, Loop, 0> policy;  ///< of the policy
    Progress::Memory<S> progress;  ///< of the watch for being stuck
    [[no_unique_address]] detail::PlacedMemory<Sensing, S, Loop, 1> sensing;  ///< of the sensing
    /// Of the slew.
    [[no_unique_address]] typename detail::SlewMemory<SlewType, body_t<DriveType, S>, Loop>::type slew;
  };
  /// What a tick returns.
  template <Number S>
  using Decision = Command<S, wheels_t<DriveType, S>, body_t<DriveType, S>>;

  /// Discs in, command out, everything in the frame of the situation's pose and goal.
  template <Number S, int N>
  [[nodiscard]] constexpr auto tick(Situation<S> const& now, DiscSet<S, N> const& discs,
                                    Memory<S>& memory) const noexcept {
    return tick(now, discs, mask_t<S>{}, memory);
  }
  /// The same with discs that move.
  template <Number S, int N>
  [[nodiscard]] constexpr auto tick(Situation<S> const& now, MovingDiscSet<S, N> const& discs,
                                    Memory<S>& memory) const noexcept {
    return tick(now, discs, mask_t<S>{}, memory);
  }

  /// Readings in, command out. The discs are made in the robot's own frame, and so is the course. Capacity is the
  /// number of discs kept.
  template <int Capacity = 16, PlainNumber S, std::size_t Beams>
  [[nodiscard]] auto tick(Situation<S> const& now, std::span<S const, Beams> ranges, Memory<S>& memory) const noexcept {
    bool const lost = !sound(now.pose);
    Situation<S> own{{}, into_frame(now.pose, now.goal), now.dt, now.age};
    auto const too_few = [&](auto const& count) noexcept {
      return S(count.alive()) < S(min_alive) * S(static_cast<int>(Beams));
    };
    if constexpr (std::is_empty_v<decltype(memory.sensing)>) {
      DiscSet<S, Capacity> discs;
      bool const blind = too_few(sensing.discs(ranges, discs));
      return tick(own, discs, blind || lost, memory);
    } else {
      MovingDiscSet<S, Capacity> discs;
      bool blind = lost;
      // Readings from nobody knows where or when teach nothing; the machine stops for them anyway.
      if (!lost && !freshness.stale(now.dt, now.age)) {
        blind = too_few(sensing.discs(ranges, now.pose, now.dt, discs, memory.sensing));
      }
      return tick(own, discs, blind, memory);
    }
  }

 private:
  // The steering may know that the machine moves another way than its nose points.
  template <Number S, int N>
  [[nodiscard]] constexpr S paced(Percept<S, N> const& percept, Course<S> const& course) const noexcept {
    if constexpr (requires { steering.way(course, percept.pose.heading); }) {
      return pace(percept, steering.way(course, percept.pose.heading));
    } else {
      return pace(percept);
    }
  }

  template <Number S, typename Discs>
  [[nodiscard]] constexpr auto tick(Situation<S> const& now, Discs const& discs, mask_t<S> const& blind,
                                    Memory<S>& memory) const noexcept {
    detail::check_drive<DriveType, SteeringType, S>();
    Decision<S> command;
    Findings<S>& findings = command.findings;
    auto const percept = look(now.pose, now.goal, discs, S(robot_radius), now.dt);
    findings.stale = freshness.stale(now.dt, now.age);
    findings.blind = blind || discs.rejected() || !sound(now.pose) || !finite(now.goal) ||
                     !(percept.goal_distance < S(far_away));
    mask_t<S> const trusted = !findings.stale && !findings.blind;
    // What cannot be trusted must not be remembered either.
    auto next_policy = memory.policy;
    auto next_progress = memory.progress;
    assign_where(trusted, command.course, evaluate(policy, percept, next_policy));
    findings.stuck = progress(percept, next_progress) && trusted;
    assign_where(trusted, memory.policy, next_policy);
    assign_where(trusted, memory.progress, next_progress);

    findings.arrived = trusted && percept.goal_distance <= S(arrive_within);
    findings.no_course = trusted && !(command.course.confidence > S(0.0F));
    S const allowed = paced(percept, command.course);
    findings.blocked = trusted && !findings.arrived && !(allowed > S(0.0F));
    findings.discs_dropped = S(static_cast<Parameter>(discs.dropped())) > S(0.0F);

    body_t<DriveType, S> wanted = detail::steered(steering, drive, command.course, now.pose.heading, allowed);
    mask_t<S> const stop = must_stop(findings);
    for_each_member(wanted, wanted, [&stop](S& x, S&) noexcept { x = select(stop, S(0.0F), x); });
    if constexpr (!std::is_same_v<SlewType, no_slew>) {
      SlewMoment<S> const moment{percept.dt, stop || findings.blocked, findings.stale};
      wanted = slew(drive.within_limits(wanted), moment, memory.slew);
    }
    command.body = drive.within_limits(wanted);
    command.wheels = drive.wheels(command.body);
    if constexpr (!std::is_same_v<SlewType, no_slew>) {
      memory.slew.body = command.body;
    }
    return command;
  }
};

}  // namespace wend::inline v0
