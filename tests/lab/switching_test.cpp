// Switching surfaces against arcs worked out by hand from the two fields (sliding: Filippov 1988, Differential
// Equations with Discontinuous Righthand Sides, section 4), and times against plain kinematics.
#include <algorithm>
#include <cmath>
#include <cstdint>
#include <limits>
#include <numbers>
#include <stdexcept>
#include <type_traits>

#include <doctest/doctest.h>

#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/past_disc.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/switching.hpp"

namespace {

using namespace wend;
using lab::Region;
using lab::SurfaceKind;
using lab::switching;
using lab::SwitchingOptions;
using lab::SwitchingReport;
using lab::World;

Region const hall{{-4.0, -3.5}, {4.1, 3.6}};
Vec2<double> const goal{3.0, 0.5};
constexpr double pi = std::numbers::pi;

World one_disc() {
  World world;
  world.add(0.25, -0.125, 0.5);
  return world;
}
World three_discs() {
  World world;
  world.add(-1.5, 1.5, 0.3), world.add(1.9, 1.6, 0.3), world.add(0.2, -1.9, 0.3);
  return world;
}

// Radius of the circle on which the clearance to one_disc is at a threshold.
double radius_at(float threshold) {
  return 0.5 + static_cast<double>(0.20F) + static_cast<double>(threshold);
}

// A signal and a field as a user would write them: how far to the right a place is, and a wind on a fixed bearing.
struct to_the_right {
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return percept.pose.position.x();
  }
};
struct wind {
  Parameter x, y;
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const&) const noexcept {
    return course_along(Vec2<S>{S(x), S(y)}, S(1.0F));
  }
};
struct twice_the_clearance_and_the_distance {
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    return S(2.0F) * percept.clearance + percept.goal_distance;
  }
};

}  // namespace

TEST_CASE("between away and toward the surface slides where both point into it: all but what faces the goal") {
  // On the circle the inner course always leads out. The outer one leads in where (goal - p) . (p - centre) < 0: for a
  // bearing off the goal's of more than acos(r / D).
  World const world = one_disc();
  double const r = radius_at(0.4F);
  double const apart = (goal - world.discs[0].disc.centre).norm();
  double const expected = 1.0 - std::acos(r / apart) / pi;
  for (bool turned : {false, true}) {
    SwitchingReport const report =
        turned ? switching(guarded(above(clearance, 0.4F, 0.4F), toward_goal{}, away_from_discs{}), world, goal, hall)
               : switching(guarded(below(clearance, 0.4F, 0.4F), away_from_discs{}, toward_goal{}), world, goal, hall);
    CHECK(report.hysteresis == 0.0);
    CHECK(report.least_time == 0.0);
    CHECK(report.length == doctest::Approx(2.0 * pi * r).epsilon(1e-4));
    double const undecided = report.share(SurfaceKind::undecided);
    CHECK(undecided < 1e-3);
    CHECK(report.share(SurfaceKind::sliding) == doctest::Approx(expected - 0.5 * undecided).epsilon(1e-3));
    CHECK(report.share(SurfaceKind::crossing) == doctest::Approx(1.0 - expected - 0.5 * undecided).epsilon(1e-3));
    CHECK(report.share(SurfaceKind::escaping) == 0.0);
    for (lab::SurfacePiece const& piece : report.pieces) {
      if (piece.length == 0.0) {
        continue;
      }
      Vec2<double> const out = piece.point - world.discs[0].disc.centre;
      CHECK(out.norm() == doctest::Approx(r).epsilon(2e-4));
      CHECK(lab::detail::holds(piece.box, piece.point));
      double const inward = out.dot(goal - piece.point);
      CHECK((piece.kind != SurfaceKind::sliding || inward < 1e-3));
      CHECK((piece.kind != SurfaceKind::crossing || inward > -1e-3));
    }
    MESSAGE("sliding ", report.share(SurfaceKind::sliding), ", by hand ", expected, "; ", report.boxes, " boxes");
  }
}

TEST_CASE("the boxes of a switching surface together hold all of it") {
  World const world = one_disc();
  SwitchingReport const report =
      switching(guarded(below(clearance, 0.4F, 0.4F), away_from_discs{}, toward_goal{}), world, goal, hall);
  double const r = radius_at(0.4F);
  for (int i = 0; i < 5000; ++i) {
    double const bearing = 2.0 * pi * i / 5000.0;
    Vec2<double> const p = world.discs[0].disc.centre + r * Vec2<double>{std::cos(bearing), std::sin(bearing)};
    bool held = false;
    for (lab::SurfacePiece const& piece : report.pieces) {
      // As far as 5000 points can be put on the circle: to rounding.
      held = held || lab::detail::holds(lab::detail::grown(piece.box, 1e-12), p);
    }
    CHECK(held);
  }
}

TEST_CASE("away turned round makes the same surface escape, and winds across a line do as their signs say") {
  // Away now counts outside the circle and toward within: where it slid, both lead off.
  SwitchingReport const report =
      switching(guarded(above(clearance, 0.4F, 0.4F), away_from_discs{}, toward_goal{}), one_disc(), goal, hall);
  double const apart = (goal - one_disc().discs[0].disc.centre).norm();
  double const expected = 1.0 - std::acos(radius_at(0.4F) / apart) / pi;
  CHECK(report.share(SurfaceKind::escaping) == doctest::Approx(expected).epsilon(1e-3));
  CHECK(report.share(SurfaceKind::sliding) == 0.0);
  // The line x = 0.5, inside to the left of it. Winds (left, right of it) of (+, -) slide, (-, +) escape, else cross.
  auto const line = [](Parameter left, Parameter right) {
    auto const policy = guarded(below(to_the_right{}, 0.5F, 0.5F), wind{left, 1.0F}, wind{right, -0.5F});
    return switching(policy, World{}, goal, hall);
  };
  CHECK(line(1.0F, -1.0F).share(SurfaceKind::sliding) == 1.0);
  CHECK(line(-1.0F, 1.0F).share(SurfaceKind::escaping) == 1.0);
  CHECK(line(1.0F, 0.5F).share(SurfaceKind::crossing) == 1.0);
  CHECK(line(-1.0F, -0.5F).share(SurfaceKind::crossing) == 1.0);
  CHECK(line(0.0F, 1.0F).share(SurfaceKind::undecided) == 1.0);  // along the line: neither in nor out
  CHECK(line(1.0F, -1.0F).length == doctest::Approx(7.1).epsilon(1e-9));
}

TEST_CASE("with a hysteresis on clearance or goal distance an answer lasts for the width over the top speed") {
  SwitchingOptions options;
  options.top_speed = 0.75;
  double const by_clearance = (static_cast<double>(0.5F) - static_cast<double>(0.3F)) / 0.75;
  auto const hysteresis = guarded(below(clearance, 0.3F, 0.5F), past_disc{}, toward_goal{});
  for (World const& world : {one_disc(), three_discs()}) {
    SwitchingReport const report = switching(hysteresis, world, goal, hall, options);
    CHECK(report.least_time == doctest::Approx(by_clearance).epsilon(1e-12));
    CHECK(report.least_time <= by_clearance);
    CHECK(report.rate == doctest::Approx(0.75).epsilon(1e-12));
    CHECK(report.pieces.empty());
  }
  SwitchingReport const of_goal =
      switching(guarded(above(goal_distance, 0.5F, 0.3F), toward_goal{}, past_disc{}), one_disc(), goal, hall, options);
  CHECK(of_goal.least_time == doctest::Approx(by_clearance).epsilon(1e-12));
  options.signal_error = 0.05;
  CHECK(switching(hysteresis, one_disc(), goal, hall, options).least_time ==
        doctest::Approx(by_clearance - 0.1 / 0.75).epsilon(1e-9));
  options.signal_error = 0.2;
  CHECK(switching(hysteresis, one_disc(), goal, hall, options).least_time == 0.0);
}

TEST_CASE("a signal of one's own is as steep as its steepest place") {
  // Straight between disc and goal, behind the disc, both distances grow together: 2 + 1.
  auto const policy = guarded(below(twice_the_clearance_and_the_distance{}, 1.0F, 1.5F), past_disc{}, toward_goal{});
  SwitchingReport const report = switching(policy, one_disc(), goal, hall);
  CHECK(report.rate == doctest::Approx(3.0 * 0.6).epsilon(2e-3));
  CHECK(report.rate >= 3.0 * 0.6);
}

TEST_CASE("a signal that jumps gives no least time, and one that looks at the heading counts the turning") {
  auto const before = guarded(above(disc_before_goal, 0.5F, 0.3F), past_disc{}, toward_goal{});
  SwitchingReport const jumps = switching(before, three_discs(), goal, hall);  // where the nearest disc changes
  CHECK(jumps.rate == std::numeric_limits<double>::infinity());
  CHECK(jumps.least_time == 0.0);
  // Off the goal, heading_error changes by no more than turning does, and what the goal's bearing changes by.
  Vec2<double> const far{8.0, 0.0};
  auto const nose = guarded(above(heading_error, 0.5F, 0.3F), past_disc{}, toward_goal{});
  SwitchingOptions options;
  SwitchingReport const turning = switching(nose, World{}, far, hall, options);
  double const least = options.max_turn_rate + options.top_speed / (8.0 - 4.1);
  CHECK(turning.rate > least);
  CHECK(turning.rate < 1.6 * least);
}

TEST_CASE("a machine that moves as it likes keeps an answer for the time that switching guarantees") {
  auto const policy = guarded(below(clearance, 0.3F, 0.5F), past_disc{}, toward_goal{});
  SwitchingOptions const options;
  World const world = three_discs();
  double const least_time = switching(policy, world, goal, hall, options).least_time;
  DiscSet<double, 4> discs;
  for (lab::WorldDisc const& d : world.discs) {
    discs.add(d.disc);
  }
  memory_t<below_guard<signals::clearance>, double> memory;
  lab::Draws const draws(4, 0);
  double const dt = 0.01;
  Vec2<double> p{-0.9, 1.5};
  bool was = false;
  double since = 1e9;
  double shortest = 1e9;
  int switches = 0;
  for (std::uint32_t i = 0; i < 100'000; ++i) {
    // Back and forth past a disc, a little aslant, at top speed.
    std::uint32_t const leg = i / 70;
    double const bearing = (leg % 2 == 0 ? 0.0 : pi) + draws.between(-0.2, 0.2, {0, leg});
    p += options.top_speed * dt * Vec2<double>{std::cos(bearing), std::sin(bearing)};
    p.y() = 1.5;
    p.x() = std::clamp(p.x(), -0.95, 0.2);
    auto const seen = look(Pose<double>{p, {1.0, 0.0}}, goal, discs, static_cast<double>(0.2F), dt);
    bool const now = ask(policy.guard, seen, memory);
    since += dt;
    if (now != was) {
      shortest = switches > 1 ? std::min(shortest, since) : shortest;
      ++switches;
      since = 0.0;
      was = now;
    }
  }
  CHECK(switches > 100);
  CHECK(shortest >= least_time);
  CHECK(shortest < 1.5 * least_time);
  MESSAGE("guaranteed ", least_time, " s, shortest seen ", shortest, " s, ", switches, " switches");
}

TEST_CASE("switching refuses discs that move or do not fit") {
  auto const policy = guarded(below(clearance, 0.3F, 0.5F), past_disc{}, toward_goal{});
  World moving;
  moving.add(0.0, 0.0, 0.3, {0.1, 0.0});
  CHECK_THROWS_AS(static_cast<void>(switching(policy, moving, goal, hall)), std::invalid_argument);
  CHECK_THROWS_AS(static_cast<void>(switching<2>(policy, three_discs(), goal, hall)), std::invalid_argument);
}
