// wend/lab/moves.hpp - what a machine may do within one tick, from every state of a box: for proofs.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <limits>
#include <numbers>
#include <vector>

#include "wend/field.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/arc.hpp"
#include "wend/lab/heading_range.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/world.hpp"
#include "wend/loop.hpp"

namespace wend::inline v0::lab {

/// When a machine samples, and how late it acts: seconds. Readings are taken, `latency` later the wheels take up the
/// new command at once, and hold it for one `period`; until then they hold the one before.
struct Sampling {
  double period = 0.05;  ///< from one sample to the next, over 0
  double latency = 0.05;  ///< from a sample to the wheels, 0 or more
};

/// How a point machine moves: its heading follows the course at once, `length` metres straight ahead in a tick of
/// `period` seconds.
struct Stride {
  double length = 0.05;  ///< metres
  double period = 0.05;  ///< seconds that the policy is told a step takes
};

/// How far off a disc may be seen: metres.
struct ReadingError {
  double radius = 0.02;  ///< its edge, in or out
  double centre = 0.0;   ///< its centre, along each axis
};

/// A set of states: positions, headings in radians, and what the loop or policy remembers.
template <typename Decider>
struct StateBox {
  Interval x,   ///< metres
      y,        ///< metres
      heading;  ///< radians, counter-clockwise
  memory_t<Decider, FloatInterval> memory;  ///< what the decider may remember
};

namespace detail {

// What may happen within a tick: from the box of the state, at most `drift` metres in some direction, then at most
// `reach` metres in the directions of `course`.
struct Move {
  double drift = 0.0;
  Interval reach;
  Vec2<Interval> course{Interval(), Interval()};
};

// All discs of a world as they may be seen.
template <int Capacity>
[[nodiscard]] DiscSet<FloatInterval, Capacity> seen_discs(World const& world, ReadingError const& error) {
  DiscSet<FloatInterval, Capacity> discs;
  Interval const off(-error.centre, error.centre);
  for (WorldDisc const& d : world.discs) {
    Vec2<Interval> const centre = exactly(d.disc.centre) + Vec2<Interval>{off, off};
    Interval const radius(std::max(0.0, d.disc.radius - error.radius), d.disc.radius + error.radius);
    discs.add({as_float(centre), as_float(radius)});
  }
  return discs;
}

// The same with one error for all radii, as a machine would be shown them.
template <int Capacity>
[[nodiscard]] DiscSet<float, Capacity> shown_discs(std::vector<Disc<double>> const& seen,
                                                   Vec2<float> const& viewpoint) {
  DiscSet<float, Capacity> discs;
  for (Disc<double> const& disc : seen) {
    discs.add({disc.centre.cast<float>(), static_cast<float>(disc.radius)}, viewpoint);
  }
  return discs;
}

// A loop that ticks, and a body that follows its commands along arcs.
template <typename Loop, int Capacity>
class LoopMoves {
  using F = FloatInterval;

 public:
  using Decider = Loop;

  LoopMoves(Loop const& loop, Sampling const& sampling, World const& world, Vec2<double> const& goal,
            ReadingError const& error)
      : loop_(loop),
        sampling_(sampling),
        goal_(goal),
        error_(error),
        discs_(seen_discs<Capacity>(world, error)),
        top_speed_(static_cast<double>(loop.pace.top_speed) * (1.0 + 1e-6)) {}  // a unit vector is one to rounding

  [[nodiscard]] double robot_radius() const { return static_cast<double>(loop_.robot_radius); }
  [[nodiscard]] double farthest() const { return top_speed_ * (sampling_.period + sampling_.latency); }
  // How much farther a machine that stands still when it is sampled can get.
  [[nodiscard]] double farthest_from_rest() const { return top_speed_ * sampling_.period; }

  [[nodiscard]] Move move(StateBox<Loop> const& box) const {
    auto memory = box.memory;
    Situation<F> const now{{as_float(Vec2<Interval>{box.x, box.y}), as_float(headings_over(box.heading))},
                           as_float(exactly(goal_)),
                           F(static_cast<Parameter>(sampling_.period))};
    Command<F> const command = loop_.tick(now, discs_, memory);
    // The chord of an arc lies between the headings at its ends, and is no longer than the arc. Until the command bites
    // the machine may turn, and drift.
    double const turned = static_cast<double>(loop_.steering.max_turn_rate) * sampling_.latency;
    Interval const at_start = box.heading + Interval(-turned, turned);
    Interval const on_arc = at_start + Interval(command.body.turn_rate) * Interval(0.0, sampling_.period);
    return {top_speed_ * sampling_.latency, Interval(command.body.speed) * Interval(0.0, sampling_.period),
            headings_over(on_arc)};
  }

  // How far the command before may bring the machine towards a disc of a given clearance, until the new one bites.
  //
  // That command was allowed by Pace, from a place no farther off than it can drive in a period and a latency. Either
  // the disc counted then: the speed is a fixed point of the stopping law, found from above. Or it was left behind, and
  // the machine drove away from it, and since then has turned by so little that it still does.
  [[nodiscard]] double approach(double clearance) const {
    double const since = sampling_.period + sampling_.latency;
    double const error = error_.radius + std::numbers::sqrt2 * error_.centre;
    double const kept = static_cast<double>(loop_.pace.margin) + loop_.pace.template overrun<double>();
    double speed = top_speed_;
    for (int i = 0; i < 8; ++i) {  // each is a bound; more of them hardly tighten it
      Interval const room(clearance + error + speed * since - kept + 1e-6);  // 1e-6 m: more than float can round away
      double const allowed = loop_.pace.stoppable(F(room)).high();
      if (allowed >= speed) {
        break;
      }
      speed = allowed;
    }
    double const turned = static_cast<double>(loop_.steering.max_turn_rate) * since;
    double const left_behind = std::acos(std::clamp(static_cast<double>(loop_.pace.behind), -1.0, 1.0)) + turned;
    double const back =
        left_behind < std::numbers::pi / 2.0 ? 0.0 : -std::cos(std::min(left_behind, std::numbers::pi)) * top_speed_;
    return std::max(speed, back) * sampling_.latency;
  }

  // Drives one tick on float from a standstill, along the exact arc: the least distance to a disc's edge.
  [[nodiscard]] double drive(Pose<double> const& pose, memory_t<Loop, float> memory,
                             std::vector<Disc<double>> const& seen, World const& world) const {
    Vec2<float> const position = pose.position.template cast<float>();
    Situation<float> const now{{position, pose.heading.template cast<float>()},
                               goal_.template cast<float>(),
                               static_cast<float>(sampling_.period)};
    BodyVelocity<float> const body = loop_.tick(now, shown_discs<Capacity>(seen, position), memory).body;
    BodyVelocity<double> const exact{static_cast<double>(body.speed), static_cast<double>(body.turn_rate)};
    double least = std::numeric_limits<double>::infinity();
    for (WorldDisc const& d : world.discs) {
      least = std::min(least, distance_to_arc(pose, exact, sampling_.period, d.disc.centre) - d.disc.radius);
    }
    return least - robot_radius();
  }

 private:
  Loop const& loop_;
  Sampling sampling_;
  Vec2<double> goal_;
  ReadingError error_;
  DiscSet<F, Capacity> discs_;
  double top_speed_;
};

// A policy by itself, and a point machine that follows its course at once.
template <typename Policy, int Capacity>
class PointMoves {
  using F = FloatInterval;

 public:
  using Decider = Policy;

  PointMoves(Policy const& policy, Stride const& stride, Parameter robot_radius, World const& world,
             Vec2<double> const& goal, ReadingError const& error)
      : policy_(policy),
        stride_(stride),
        robot_radius_(robot_radius),
        goal_(goal),
        discs_(seen_discs<Capacity>(world, error)) {}

  [[nodiscard]] double robot_radius() const { return static_cast<double>(robot_radius_); }
  [[nodiscard]] double farthest() const { return stride_.length * (1.0 + 1e-6); }
  [[nodiscard]] double farthest_from_rest() const { return farthest(); }
  [[nodiscard]] double approach(double) const { return 0.0; }

  [[nodiscard]] Move move(StateBox<Policy> const& box) const {
    auto memory = box.memory;
    auto const percept = look(Pose<F>{as_float(Vec2<Interval>{box.x, box.y}), as_float(headings_over(box.heading))},
                              as_float(exactly(goal_)), discs_, F(robot_radius_),
                              F(static_cast<Parameter>(stride_.period)));
    Course<F> const course = evaluate(policy_, percept, memory);
    return {0.0, Interval(0.0, stride_.length), {Interval(course.direction.x()), Interval(course.direction.y())}};
  }

  [[nodiscard]] double drive(Pose<double> const& pose, memory_t<Policy, float> memory,
                             std::vector<Disc<double>> const& seen, World const& world) const {
    Vec2<float> const position = pose.position.template cast<float>();
    auto const discs = shown_discs<Capacity>(seen, position);
    auto const percept = look(Pose<float>{position, pose.heading.template cast<float>()},
                              Vec2<float>(goal_.template cast<float>()), discs, robot_radius_,
                              static_cast<float>(stride_.period));
    Course<float> const course = evaluate(policy_, percept, memory);
    Pose<double> along = pose;
    along.heading = course.direction.template cast<double>();
    double const length = course.confidence > 0.0F ? stride_.length : 0.0;
    double least = std::numeric_limits<double>::infinity();
    for (WorldDisc const& d : world.discs) {
      least = std::min(least, distance_to_arc(along, {length, 0.0}, 1.0, d.disc.centre) - d.disc.radius);
    }
    return least - robot_radius();
  }

 private:
  Policy const& policy_;
  Stride stride_;
  Parameter robot_radius_;
  Vec2<double> goal_;
  DiscSet<F, Capacity> discs_;
};

}  // namespace detail

}  // namespace wend::inline v0::lab
