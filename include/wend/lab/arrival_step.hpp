// wend/lab/arrival_step.hpp - where one step can lead from a box of states: the policy, or the loop, run on intervals.
#pragma once

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <vector>

#include "wend/field.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/arrival_grid.hpp"
#include "wend/lab/heading_range.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/world.hpp"
#include "wend/loop.hpp"

namespace wend::inline v0::lab {

namespace detail {

// Whether no point of p + s u, for p and u anywhere in their boxes and s from 0 to `reach`, touches the disc of a
// radius round the origin. |p + s u|^2 = |p|^2 + 2 s p.u + s^2 |u|^2 is least at an end or where s = -p.u / |u|^2.
[[nodiscard]] inline bool keeps_clear(Vec2<Interval> const& p, Vec2<Interval> const& u, double reach, double radius) {
  Interval const far = length(p);
  Interval const way = Interval(reach) * length(u);
  if (far.low() > radius && (Interval(far.low()) - way).low() > radius) {
    return true;
  }
  Interval const along = dot(p, u);
  if (along.low() >= 0.0) {
    return far.low() > radius;  // only ever farther off
  }
  Interval const inward(along.low());
  Interval const size((sqr(u.x()) + sqr(u.y())).low());
  if (!(size.low() > 0.0)) {
    return false;  // any direction
  }
  bool const ends_inward = (-inward / size).low() >= reach;
  Interval const least = sqr(Interval(far.low())) + (ends_inward
                                                         ? Interval(2.0 * reach) * inward + sqr(Interval(reach)) * size
                                                         : -(sqr(inward) / size));
  return far.low() > radius && least.low() > sqr(Interval(radius)).high();
}

// Calls f with each way to answer the first masks of a memory that are not decided, up to `depth` of them, so that what
// they lead to can be told apart. The rest stay as they are.
template <typename Memory, typename F>
bool for_each_answer(Memory const& memory, F const& f, int depth = 4) {
  Memory yes = memory;
  if (depth == 0 || !decide_first_mask<FloatInterval>(yes, true)) {
    return f(memory);
  }
  Memory no = memory;
  decide_first_mask<FloatInterval>(no, false);
  return for_each_answer(yes, f, depth - 1) && for_each_answer(no, f, depth - 1);
}

// What the point machine and the whole one have in common: discs at rest, a goal, and a body that is a disc.
template <int Capacity>
class StillSurroundings {
 public:
  StillSurroundings(World const& world, Vec2<double> const& goal, Parameter robot_radius, Parameter arrive_within)
      : world_(world), goal_(goal), robot_radius_(robot_radius), arrive_within_(arrive_within) {
    expect_still("arrival_map", world, Capacity);
  }

  /// Metres between the edges of the machine and the nearest disc.
  [[nodiscard]] Interval clearance(States const& at) const {
    double const none = std::numeric_limits<double>::max();
    Interval least(none);
    for (WorldDisc const& d : world_.discs) {
      least = min(least, length(from(at, d.disc.centre)) - Interval(d.disc.radius) - Interval(robot_radius_));
    }
    return least;
  }

  /// Whether every state of a box is at the goal.
  [[nodiscard]] bool arrived(States const& at) const {
    return length(from(at, goal_)).high() <= static_cast<double>(arrive_within_);
  }

 protected:
  [[nodiscard]] static Vec2<Interval> from(States const& at, Vec2<double> const& point) {
    return {at.x - Interval(point.x()), at.y - Interval(point.y())};
  }

  // Of the way from a box in directions u, over `reach` metres.
  [[nodiscard]] bool way_is_clear(States const& at, Vec2<Interval> const& u, double reach) const {
    return std::all_of(world_.discs.begin(), world_.discs.end(), [&](WorldDisc const& d) {
      double const radius = (Interval(d.disc.radius) + Interval(robot_radius_)).high();
      return keeps_clear(from(at, d.disc.centre), u, reach, radius);
    });
  }

  World const& world_;
  Vec2<double> goal_;
  Parameter robot_radius_;
  Parameter arrive_within_;
};

}  // namespace detail

/// A point machine that follows the policy's course at once: each step leads `length` metres straight along it. The
/// policy is given the exact position rounded to float, any heading and any memory, and computes in float.
template <typename Policy, int Capacity>
class PointSteps : public detail::StillSurroundings<Capacity> {
  using F = FloatInterval;
  using Base = detail::StillSurroundings<Capacity>;

 public:
  /// Whether a state has a heading: a point machine's has none.
  static constexpr bool has_heading = false;

  /// `length` in metres; `dt` in seconds is what the policy is told that a step takes. Policy and world are referred
  /// to.
  PointSteps(Policy const& policy, World const& world, Vec2<double> const& goal, Parameter robot_radius,
             Parameter arrive_within, double length, double dt)
      : Base(world, goal, robot_radius, arrive_within),
        policy_(policy),
        length_(length),
        dt_(static_cast<Parameter>(dt)) {
    for (WorldDisc const& d : world.discs) {
      discs_.add({detail::as_float(detail::exactly(d.disc.centre)), detail::as_float(Interval(d.disc.radius))});
    }
  }

  /// Boxes that hold, between them, the ends of all steps from a box; false when a step may touch a disc.
  [[nodiscard]] bool images(States const& from, std::vector<States>& to) const {
    F const any(-1.0, 1.0);
    Pose<F> const pose{{detail::as_float(from.x), detail::as_float(from.y)}, {any, any}};
    auto const percept =
        look(pose, detail::as_float(detail::exactly(this->goal_)), discs_, F(this->robot_radius_), F(dt_));
    return detail::for_each_answer(any_memory<Policy, F>(), [&](auto memory) {
      Course<F> const course = evaluate(policy_, percept, memory);
      Vec2<Interval> const u{Interval(course.direction.x()), Interval(course.direction.y())};
      to.push_back({from.x + Interval(length_) * u.x(), from.y + Interval(length_) * u.y(), from.heading});
      return this->way_is_clear(from, u, length_);
    });
  }

 private:
  Policy const& policy_;
  double length_;
  Parameter dt_;
  DiscSet<F, Capacity> discs_;
};

/// A machine that turns as it drives: its loop ticks once a step on any memory, and the body moves along the exact arc
/// of the command for one period. The loop is given all discs, goal and pose in the frame of the middle of the box,
/// which is its own frame as a rule, rounded to float, and computes in float.
template <typename Loop, int Capacity>
class LoopSteps : public detail::StillSurroundings<Capacity> {
  using F = FloatInterval;
  using Base = detail::StillSurroundings<Capacity>;

 public:
  /// Whether a state has a heading: it has, since the machine turns as it drives.
  static constexpr bool has_heading = true;

  /// `period` in seconds. The world is referred to.
  LoopSteps(Loop const& loop, World const& world, Vec2<double> const& goal, double period)
      : Base(world, goal, loop.robot_radius, loop.arrive_within), loop_(loop), period_(period) {
    // States at the goal need no step, and to the others the loop does the same without an arrival radius. With one, a
    // box across its edge would hold steps of no length.
    loop_.arrive_within = -1.0F;
  }

  /// Boxes that hold, between them, the ends of all steps from a box; false when a step may touch a disc.
  [[nodiscard]] bool images(States const& from, std::vector<States>& to) const {
    // A heading box far from an axis holds vectors that are too long or too short to be headings; in a frame along its
    // middle it hardly does.
    Vec2<double> const origin{from.x.middle(), from.y.middle()};
    double const middle = from.heading.middle();
    Vec2<Interval> const axis = headings_over(Interval(middle));
    auto const in_frame = [&](Vec2<Interval> const& p) {
      return detail::as_float(turned_into(axis, Vec2<Interval>(p - detail::exactly(origin))));
    };
    DiscSet<F, Capacity> discs;
    for (WorldDisc const& d : this->world_.discs) {
      discs.add({in_frame(detail::exactly(d.disc.centre)), detail::as_float(Interval(d.disc.radius))});
    }
    Situation<F> const now{
        {in_frame({from.x, from.y}), detail::as_float(headings_over(from.heading - Interval(middle)))},
        in_frame(detail::exactly(this->goal_)),
        F(static_cast<Parameter>(period_))};
    return detail::for_each_answer(any_memory<Loop, F>(), [&](auto memory) {
      BodyVelocity<F> const body = loop_.tick(now, discs, memory).body;
      Interval const way = Interval(body.speed) * Interval(period_);
      Interval const half = Interval(0.5) * Interval(body.turn_rate) * Interval(period_);
      // The chord of an arc lies at half the angle turned, and is way * sinc(half the angle) long.
      Interval const chord = way * sinc_over(half);
      Vec2<Interval> const u = headings_over(from.heading + half);
      bool const stays = chord.mag() == 0.0;  // then not even rounding moves it, and it does not touch the next cell
      to.push_back({stays ? from.x : from.x + chord * u.x(), stays ? from.y : from.y + chord * u.y(),
                    from.heading + half + half});
      Vec2<Interval> const along = headings_over(from.heading + half * Interval(0.0, 1.0));
      return way.low() >= 0.0 ? this->way_is_clear(from, along, way.high())
                              : this->way_is_clear(from, {Interval(-1.0, 1.0), Interval(-1.0, 1.0)}, way.mag());
    });
  }

 private:
  // Encloses sin(x) / x, which falls as |x| grows to pi.
  [[nodiscard]] static Interval sinc_over(Interval const& x) {
    constexpr double slack = 1e-14;  // the C library's sine is right to 4 units in the last place
    auto const sinc = [](double at) { return at < 1e-8 ? 1.0 : std::sin(at) / at; };
    return x.mag() < std::numbers::pi ? Interval(sinc(x.mag()) - slack, std::min(1.0, sinc(x.mig()) + slack))
                                      : Interval(-1.0, 1.0);
  }

  Loop loop_;
  double period_;
};

}  // namespace wend::inline v0::lab
