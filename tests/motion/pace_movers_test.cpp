// Pace among discs that move: against the stopping law with a closing speed, v (t_r + c / a) + v^2 / (2 a) + c t_r = d
// (derived in pace.hpp), by substitution, and by driving a machine with a late drive among crossers.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <deque>
#include <limits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/lab/random.hpp"
#include "wend/motion/pace.hpp"

using wend::Disc;
using wend::MovingDiscSet;
using wend::Pace;
using wend::Pose;
using wend::Vec2;

namespace {

constexpr double robot_radius = 0.2;

template <typename S>
S paced(Pace const& pace, MovingDiscSet<S, 4> const& discs) {
  return pace(wend::look(Pose<S>{}, Vec2<S>(S(50.0F), S(0.0F)), discs, S(0.2F), S(0.05F)));
}

}  // namespace

TEST_CASE_TEMPLATE("the speed before a closing disc solves the stopping law to rounding", S, float, double) {
  double const epsilon = static_cast<double>(std::numeric_limits<S>::epsilon());
  Pace const pace{};
  double const reaction = static_cast<double>(pace.reaction);
  double const braking = static_cast<double>(pace.braking);
  for (double const closing : {0.0, 0.01, 0.3, 1.0, 7.0}) {
    double last = 0.0;
    for (double room = 1.0e-4; room < 1.0e3; room *= 1.09) {
      double const given = static_cast<double>(static_cast<S>(room));
      double const c = static_cast<double>(static_cast<S>(closing));
      double const v = static_cast<double>(pace.stoppable(static_cast<S>(room), static_cast<S>(closing)));
      CAPTURE(room);
      CAPTURE(closing);
      if (given <= c * reaction) {
        CHECK(v == doctest::Approx(0.0).epsilon(1e-6));
      } else {
        double const needed = v * (reaction + c / braking) + v * v / (2.0 * braking) + c * reaction;
        CHECK(std::abs(needed - given) < 16.0 * epsilon * given);
      }
      CHECK(v >= last * (1.0 - 4.0 * epsilon));
      CHECK(v <= static_cast<double>(pace.stoppable(static_cast<S>(room))) * (1.0 + 4.0 * epsilon));
      last = v;
    }
  }
}

TEST_CASE_TEMPLATE("what is no closing speed leaves none or the plain one", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  float const not_a_number = std::numeric_limits<float>::quiet_NaN();
  float const infinity = std::numeric_limits<float>::infinity();
  S const plain = pace.stoppable(S(1.0F));
  for (float const closing : {0.0F, -1.0F, -infinity, not_a_number}) {
    S const v = pace.stoppable(S(1.0F), S(closing));
    CHECK(numbers::all<S>(v >= plain * S(0.999999F) && v <= plain * S(1.000001F)));
  }
  CHECK(numbers::all<S>(pace.stoppable(S(1.0F), S(infinity)) <= S(0.0F)));
  for (float const room : {0.0F, -1.0F, not_a_number, -infinity}) {
    CHECK(numbers::all<S>(pace.stoppable(S(room), S(0.5F)) <= S(0.0F)));
  }
}

TEST_CASE_TEMPLATE("discs that are known to stand still allow the speed that plain ones do", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  for (float const x : {0.4F, 0.6F, 0.9F, -0.5F}) {
    MovingDiscSet<S, 4> discs;
    discs.add({{S(x), S(0.1F)}, S(0.1F)});
    wend::DiscSet<S, 4> const& plain = discs;
    S const v = paced(pace, discs);
    S const as_plain = pace(wend::look(Pose<S>{}, Vec2<S>(S(50.0F), S(0.0F)), plain, S(0.2F), S(0.05F)));
    CHECK(numbers::all<S>(v >= as_plain - S(1.0e-6F) && v <= as_plain + S(1.0e-6F)));
  }
}

TEST_CASE_TEMPLATE("a disc that comes slows the machine, one that goes or crosses does not", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  auto const with = [&](float x, float y, float vx, float vy) {
    MovingDiscSet<S, 4> discs;
    discs.add({{S(x), S(y)}, S(0.1F)}, {S(vx), S(vy)});
    return paced(pace, discs);
  };
  S const still = with(0.9F, 0.0F, 0.0F, 0.0F);
  CHECK(numbers::all<S>(with(0.9F, 0.0F, -0.3F, 0.0F) < still * S(0.9F)));
  CHECK(numbers::all<S>(with(0.9F, 0.0F, 0.3F, 0.0F) >= still));
  CHECK(numbers::all<S>(with(0.9F, 0.0F, 0.0F, 0.3F) >= still));
  // left behind, unless it comes after the machine
  CHECK(numbers::all<S>(with(-0.5F, 0.0F, -0.1F, 0.0F) >= S(pace.top_speed)));
  CHECK(numbers::all<S>(with(-0.5F, 0.0F, 0.8F, 0.0F) <= S(0.0F)));
}

TEST_CASE_TEMPLATE("a moving disc at the machine's very middle leaves no speed", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  MovingDiscSet<S, 4> discs;
  discs.add({{S(0.0F), S(0.0F)}, S(0.1F)}, {S(0.4F), S(0.0F)});
  CHECK(numbers::all<S>(paced(pace, discs) <= S(0.0F)));
}

namespace {

struct Outcome {
  int touched_while_moving = 0;
  int touched_at_rest = 0;
  double least_moving_gap = 1.0e9;  // metres, while the machine moved, to discs that were not left behind
  double driven = 0.0;              // metres
};

// A machine that weaves about among crossers. It is told what the pace allows every `tick`, follows it `delay` later,
// brakes by `brakes` and speeds up by 2 m/s^2. Discs keep their velocity.
Outcome among_crossers(Pace const& pace, double fastest, double brakes, bool told, std::uint64_t seed) {
  constexpr double step = 0.002;
  constexpr int per_tick = 25;  // 0.05 s
  constexpr std::size_t late = 95;  // 0.19 s: with the tick under the reaction time of 0.25 s
  Outcome outcome;
  for (std::uint32_t run = 0; run < 200; ++run) {
    wend::lab::Draws const draws(seed, run);
    struct Mover {
      Vec2<double> at, velocity;
      double radius;
    };
    std::array<Mover, 6> movers;
    for (std::uint32_t i = 0; i < 6; ++i) {
      double const angle = draws.between(-3.2, 3.2, {0, i, 0});
      double const from = draws.between(1.0, 5.0, {0, i, 1});
      double const radius = draws.between(0.2, 0.4, {0, i, 2});
      double const speed = fastest * draws.between(0.3, 1.0, {0, i, 3});
      Vec2<double> const at{from * std::cos(angle), from * std::sin(angle)};
      // towards where the machine may be by then
      Vec2<double> const aim{draws.between(-1.0, 3.0, {0, i, 4}), draws.between(-1.0, 1.0, {0, i, 5})};
      movers[i] = {at, wend::polar(Vec2<double>(aim - at)).direction * speed, radius};
    }
    double x = 0.0, y = 0.0, theta = 0.0, v = 0.0, allowed = 0.0;
    double const weave = draws.between(-0.8, 0.8, {1});
    std::deque<double> under_way(late, 0.0);
    for (int k = 0; k < 5000; ++k) {
      if (k % per_tick == 0) {
        MovingDiscSet<double, 6> discs;
        for (Mover const& mover : movers) {
          discs.add({mover.at, mover.radius}, mover.velocity);
        }
        Pose<double> const pose{{x, y}, {std::cos(theta), std::sin(theta)}};
        wend::DiscSet<double, 6> const& plain = discs;
        Vec2<double> const goal{1000.0, 0.0};
        allowed = told ? pace(wend::look(pose, goal, discs, robot_radius, 0.05))
                       : pace(wend::look(pose, goal, plain, robot_radius, 0.05));
      }
      under_way.push_back(allowed);
      double const wanted = under_way.front();
      under_way.pop_front();
      v = std::clamp(wanted, std::max(0.0, v - brakes * step), v + 2.0 * step);
      theta += weave * v * step;
      x += v * std::cos(theta) * step;
      y += v * std::sin(theta) * step;
      outcome.driven += v * step;
      bool touched = false;
      for (Mover& mover : movers) {
        mover.at += step * mover.velocity;
        Vec2<double> const to_disc{mover.at.x() - x, mover.at.y() - y};
        double const gap = to_disc.norm() - mover.radius - robot_radius;
        touched = touched || gap <= 0.0;
        // A disc that has grazed the machine while it stood may still be near when it drives away from it.
        bool const behind = -(to_disc.x() * std::cos(theta) + to_disc.y() * std::sin(theta)) > 0.5 * to_disc.norm();
        if (v > 1.0e-3 && !behind) {
          outcome.least_moving_gap = std::min(outcome.least_moving_gap, gap);
        }
      }
      if (touched) {
        (v > 1.0e-3 ? outcome.touched_while_moving : outcome.touched_at_rest) += 1;
        break;
      }
    }
  }
  return outcome;
}

}  // namespace

TEST_CASE("a machine that follows this pace never runs into a disc that keeps its velocity and is slow enough") {
  Pace const pace{};
  double const brakes = 2.0;  // what the drive manages; the pace counts on 0.8
  // u (u + v) = (B - b) d with d = 0.2 + 0.2 + 0.05: the fastest disc for which pace.hpp promises it.
  double const v = static_cast<double>(pace.top_speed);
  double const slack = brakes - static_cast<double>(pace.braking);
  double const reach = robot_radius + 0.2 + static_cast<double>(pace.margin);
  double const fastest = -0.5 * v + std::sqrt(0.25 * v * v + slack * reach);
  CHECK(fastest == doctest::Approx(0.4937).epsilon(1e-3));
  Outcome const heeding = among_crossers(pace, fastest, brakes, true, 41);
  double const reaction = static_cast<double>(pace.reaction);
  MESSAGE("least gap while moving: ", heeding.least_moving_gap, " m; touched at rest: ", heeding.touched_at_rest,
          "; driven: ", heeding.driven, " m");
  CHECK(heeding.touched_while_moving == 0);
  CHECK(heeding.least_moving_gap >= static_cast<double>(pace.margin) - 0.5 * slack * reaction * reaction);
  CHECK(heeding.touched_at_rest > 10);  // the pace does not step aside
  CHECK(heeding.driven > 500.0);        // and it does not keep the promise by standing still

  Outcome const heedless = among_crossers(pace, fastest, brakes, false, 41);
  MESSAGE("heedless: touched while moving ", heedless.touched_while_moving, ", driven ", heedless.driven, " m");
  CHECK(heedless.touched_while_moving > 5);
}
