// Derivatives of whole runs, against a formula where there is one, and against central differences of the same run in
// double precision.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <span>
#include <stdexcept>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/past_disc.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/lab/sensitivity.hpp"

namespace {

using wend::lab::Dual;
using wend::lab::exact_run;
using wend::lab::Knob;
using wend::lab::KnobEffect;
using wend::lab::sensitivity;
using wend::lab::SensitivityOptions;
using wend::lab::Trip;
using wend::lab::World;

constexpr auto blended =
    wend::blend(wend::ramp(wend::clearance, 0.1F, 0.9F), wend::away_from_discs{}, wend::toward_goal{});
constexpr auto switched =
    wend::guarded(wend::below(wend::clearance, 0.35F, 0.55F), wend::past_disc{}, wend::toward_goal{});

template <typename Policy>
wend::Loop<Policy> loop_of(Policy const& policy) {
  return {policy};
}

// Three beds in a greenhouse, beside the straight way.
World greenhouse() {
  World world;
  world.add(1.5, 0.7, 0.3);
  world.add(3.2, -0.75, 0.35);
  world.add(4.6, 0.62, 0.25);
  return world;
}
Trip across() {
  Trip trip;
  trip.start.position = {0.0, 0.0};
  trip.goal = {5.5, 0.2};
  return trip;
}

// All of it with float steps as small as the knobs' own digits allow: 2^-17 is exact beside numbers under 16.
SensitivityOptions small_steps() {
  SensitivityOptions options;
  options.step_share = 0.0;
  options.least_step = 0x1p-17;
  return options;
}

bool near(double a, double b, double tolerance) { return std::abs(a - b) <= tolerance * std::max(1.0, std::abs(b)); }

}  // namespace

// t = (s - r) / v, so dt/dv = -(s - r) / v^2 and dt/dr = -1 / v; at 0.5 m from the goal Pace does not slow down yet,
// since 0.6 m/s stops within 0.6 * 0.25 + 0.6^2 / (2 * 0.8) = 0.375 m.
TEST_CASE("on a straight run without discs the time follows the speed as the formula says") {
  auto loop = loop_of(wend::toward_goal{});
  loop.arrive_within = 0.5F;
  Trip trip;
  trip.goal = {7.3, 0.0};
  std::array<Knob, 3> const knobs{Knob{"top speed", &loop.pace.top_speed}, Knob{"arrive within", &loop.arrive_within},
                                  Knob{"gain", &loop.steering.gain}};
  auto const found = sensitivity(loop, World{}, trip, knobs);
  auto const v = static_cast<double>(loop.pace.top_speed);
  double const way = 7.3 - 0.5;
  REQUIRE(found.arrived);
  CHECK(found.time == doctest::Approx(way / v).epsilon(1e-12));
  CHECK(found.knobs[0].time_slope == doctest::Approx(-way / (v * v)).epsilon(1e-10));
  CHECK(found.knobs[0].time_difference == doctest::Approx(-way / (v * v)).epsilon(1e-3));  // a step of 1 %
  CHECK(found.knobs[1].time_slope == doctest::Approx(-1.0 / v).epsilon(1e-10));
  CHECK(found.knobs[2].time_slope == 0.0);
  CHECK(found.knobs[2].time_difference == 0.0);
  CHECK(found.least_clearance == static_cast<double>(wend::far_away));
}

TEST_CASE("slopes of smooth knobs are those of central differences with small steps") {
  auto loop = loop_of(blended);
  std::array<Knob, 9> const knobs{
      Knob{"ramp low", &loop.policy.weight.low}, Knob{"ramp high", &loop.policy.weight.high},
      Knob{"top speed", &loop.pace.top_speed},   Knob{"gain", &loop.steering.gain},
      Knob{"margin", &loop.pace.margin},         Knob{"braking", &loop.pace.braking},
      Knob{"reaction", &loop.pace.reaction},     Knob{"robot radius", &loop.robot_radius},
      Knob{"track", &loop.drive.track}};
  auto const found = sensitivity<4>(loop, greenhouse(), across(), knobs, small_steps());  // nine knobs, four at a time
  REQUIRE(found.arrived);
  REQUIRE(found.knobs.size() == knobs.size());
  CHECK(found.least_clearance > 0.0);
  double moved = 0.0;
  for (KnobEffect const& knob : found.knobs) {
    CAPTURE(knob.name);
    CAPTURE(knob.clearance_slope);
    CAPTURE(knob.clearance_difference);
    CAPTURE(knob.time_slope);
    CAPTURE(knob.time_difference);
    CHECK(near(knob.clearance_slope, knob.clearance_difference, 1e-5));
    CHECK(near(knob.time_slope, knob.time_difference, 1e-5));
    moved = std::max(moved, std::abs(knob.clearance_slope));
  }
  CHECK(moved > 0.01);
  CHECK(std::abs(found.knobs[0].clearance_slope) > 1e-3);
  CHECK(std::abs(found.knobs[1].time_slope) > 1e-3);
  CHECK(std::abs(found.knobs[3].time_slope) > 1e-4);
  CHECK(found.knobs[4].time_slope > 0.1);
}

TEST_CASE("the thresholds of a guard have no slope, and differences that show what they do") {
  auto loop = loop_of(switched);
  std::array<Knob, 2> const knobs{Knob{"enter", &loop.policy.guard.enter}, Knob{"leave", &loop.policy.guard.leave}};
  SensitivityOptions options;
  options.step_share = 0.2;
  auto const found = sensitivity(loop, greenhouse(), across(), knobs, options);
  REQUIRE(found.arrived);
  for (KnobEffect const& knob : found.knobs) {
    CHECK(knob.clearance_slope == 0.0);
    CHECK(knob.time_slope == 0.0);
  }
  CHECK(std::abs(found.knobs[0].time_difference) > 0.1);
  CHECK(found.knobs[0].value == static_cast<double>(0.35F));
  CHECK(found.knobs[0].step == doctest::Approx(0.07));
}

TEST_CASE("a run on derivatives is the same run as on double, to the last bit") {
  auto const loop = loop_of(switched);
  auto const plain = exact_run<double>(loop, greenhouse(), across());
  auto const dual = exact_run<Dual<3>>(loop, greenhouse(), across());
  CHECK(plain.arrived == dual.arrived);
  CHECK(plain.time == dual.time.value());
  CHECK(plain.least_clearance == dual.least_clearance.value());
}

TEST_CASE("the exact arc is along_arc of lab/arc.hpp, straight, slow and sharp") {
  wend::Pose<double> const from{{0.3, -0.2}, {0.6, 0.8}};
  for (double const rate : {0.0, 1e-12, -1e-9, 1e-6, 1e-3, -0.05, 0.3, 3.99, 4.01, -8.0}) {
    wend::BodyVelocity<double> const velocity{0.7, rate};
    auto const a = wend::lab::detail::exact_arc(from, velocity, 0.05);
    auto const b = wend::lab::along_arc(from, velocity, 0.05);
    CHECK((a.position - b.position).norm() < 1e-15);
    CHECK((a.heading - b.heading).norm() < 1e-15);
  }
}

// d/dx sin(x)/x = (x cos x - sin x) / x^2, in extended precision; the series takes over below 0.1.
TEST_CASE("sin(x) / x has its derivative, also near 0") {
  for (double x = 1e-3; x < 3.0; x *= 1.1) {
    for (double const at : {x, -x}) {
      auto const found = wend::lab::detail::smooth_sinc(Dual<1>::variable(at, 0));
      auto const y = static_cast<long double>(at);
      CHECK(found.value() == doctest::Approx(static_cast<double>(std::sin(y) / y)).epsilon(1e-15));
      CHECK(std::abs(found.slope(0) - static_cast<double>((y * std::cos(y) - std::sin(y)) / (y * y))) < 1e-14);
    }
  }
  CHECK(wend::lab::detail::smooth_sinc(Dual<1>::variable(0.0, 0)).value() == 1.0);
  CHECK(wend::lab::detail::smooth_sinc(Dual<1>::variable(0.0, 0)).slope(0) == 0.0);
}

TEST_CASE("a run that does not arrive has a least clearance and no time") {
  auto loop = loop_of(wend::toward_goal{});
  Trip trip = across();
  trip.time_limit = 1.0;
  std::array<Knob, 1> const knobs{Knob{"top speed", &loop.pace.top_speed}};
  auto const found = sensitivity(loop, greenhouse(), trip, knobs);
  CHECK_FALSE(found.arrived);
  CHECK(std::isnan(found.time));
  CHECK(std::isnan(found.knobs[0].time_slope));
  CHECK(std::isnan(found.knobs[0].time_difference));
  CHECK(found.knobs[0].clearance_slope < 0.0);  // the faster, the nearer it has come by then
}

TEST_CASE("a machine that starts at the goal arrives at once") {
  auto const loop = loop_of(wend::toward_goal{});
  Trip trip;
  trip.goal = {0.05, 0.0};
  auto const run = exact_run<double>(loop, World{}, trip);
  CHECK(run.arrived);
  CHECK(run.time == 0.0);
}

TEST_CASE("moving discs move in an exact run") {
  World world;
  world.add(2.0, 3.0, 0.2, {0.0, -1.0});  // crosses the way 3 s in
  Trip trip = across();
  auto const loop = loop_of(wend::toward_goal{});
  World standing = world;
  standing.discs[0].velocity = {0.0, 0.0};
  CHECK(exact_run<double>(loop, world, trip).least_clearance < 0.5);
  CHECK(exact_run<double>(loop, standing, trip).least_clearance > 2.0);
}

TEST_CASE("turned knobs are turned back, also when they were turned within turned ones") {
  wend::Parameter const a = 1.0F;
  wend::Parameter const b = 1.0F;
  std::array<Knob, 1> const outer{Knob{"a", &a}};
  std::array<Knob, 2> const inner{Knob{"b", &b}, Knob{"a", &a}};
  {
    wend::lab::TurnedKnobs<2> const turned(outer);
    CHECK(Dual<2>(a).slope(0) == 1.0);
    {
      wend::lab::TurnedKnobs<2> const more(inner);
      CHECK(Dual<2>(a).slope(0) == 0.0);
      CHECK(Dual<2>(a).slope(1) == 1.0);
      CHECK(Dual<2>(b).slope(0) == 1.0);
    }
    CHECK(Dual<2>(a).slope(0) == 1.0);
    CHECK(Dual<2>(b).slope(0) == 0.0);
  }
  CHECK(Dual<2>(a).slope(0) == 0.0);
  CHECK_THROWS_AS((wend::lab::TurnedKnobs<1>(inner)), std::invalid_argument);
}

TEST_CASE("a knob that is not in the loop, and a world with too many discs, are refused") {
  auto loop = loop_of(blended);
  auto const copy = loop;
  std::array<Knob, 1> const elsewhere{Knob{"gain", &copy.steering.gain}};
  std::array<Knob, 1> const nowhere{Knob{"gain", nullptr}};
  CHECK_THROWS_AS(static_cast<void>(sensitivity(loop, greenhouse(), across(), elsewhere)), std::invalid_argument);
  CHECK_THROWS_AS(static_cast<void>(sensitivity(loop, greenhouse(), across(), nowhere)), std::invalid_argument);
  CHECK_THROWS_AS((static_cast<void>(exact_run<double, 2>(loop, greenhouse(), across()))), std::invalid_argument);
  CHECK_THROWS_AS(static_cast<void>(exact_run<double>(loop, greenhouse(), across(), 0.0)), std::invalid_argument);
  CHECK(Dual<8>::knobs[0] == nullptr);  // nothing stays turned
}
