// Omni: against the rolling condition of each wheel, stated here from the velocity of its contact point.
#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/omni.hpp"

using wend::Course;
using wend::Omni;
using wend::OmniSteering;
using wend::PlanarVelocity;
using wend::Vec2;

namespace {

constexpr double pi = std::numbers::pi;

// Wheels at no even angles.
constexpr Omni<3> uneven{.at = {wend::bearing(0.2), wend::bearing(1.9), wend::bearing(4.0)}, .distance = 0.2F};

template <int N>
void check_rolling(Omni<N> const& drive) {
  for (PlanarVelocity<double> const& body :
       {PlanarVelocity<double>{0.2, -0.1, 0.4}, PlanarVelocity<double>{0.0, 0.3, 0.0},
        PlanarVelocity<double>{-0.25, 0.0, -1.0}}) {
    auto const wheels = drive.wheels(body);
    for (std::size_t i = 0; i < static_cast<std::size_t>(N); ++i) {
      double const a = std::atan2(static_cast<double>(drive.at[i].y), static_cast<double>(drive.at[i].x));
      // velocity of the contact point, v + omega x r, along the wheel's rolling direction, which is square to r
      double const r = static_cast<double>(drive.distance);
      double const vx = body.speed - body.turn_rate * r * std::sin(a);
      double const vy = body.lateral + body.turn_rate * r * std::cos(a);
      double const along = -vx * std::sin(a) + vy * std::cos(a);
      CHECK(wheels.rates[i] * static_cast<double>(drive.wheel_radius) == doctest::Approx(along).epsilon(1e-6));
    }
    PlanarVelocity<double> const back = drive.body(wheels);
    CHECK(back.speed == doctest::Approx(body.speed).epsilon(1e-6));
    CHECK(back.lateral == doctest::Approx(body.lateral).epsilon(1e-6));
    CHECK(back.turn_rate == doctest::Approx(body.turn_rate).epsilon(1e-6));
  }
}

}  // namespace

TEST_CASE("each wheel rolls by what its contact point moves along it, and the body is got back from the rates") {
  check_rolling(Omni<3>{});
  check_rolling(Omni<4>{});
  check_rolling(Omni<5>{});
  check_rolling(uneven);
}

TEST_CASE_TEMPLATE("saturation slows all three velocities by one factor", S, WEND_TEST_NUMBERS) {
  Omni<4> const drive{};
  PlanarVelocity<S> const wanted{S(3.0F), S(-1.5F), S(6.0F)};
  PlanarVelocity<S> const can = drive.within_limits(wanted);
  CHECK(numbers::all<S>(can.speed < wanted.speed));
  CHECK(numbers::all<S>(wend::magnitude(S(can.lateral * S(-2.0F) - can.speed)) < S(1.0e-6F)));
  CHECK(numbers::all<S>(wend::magnitude(S(can.turn_rate - S(2.0F) * can.speed)) < S(1.0e-6F)));
  S fastest = S(0.0F);
  for (S const& rate : drive.wheels(wanted).rates) {
    fastest = wend::greatest(wend::magnitude(rate), fastest);
  }
  CHECK(numbers::all<S>(fastest <= S(drive.max_rate) && fastest > S(drive.max_rate * 0.99999F)));
}

TEST_CASE_TEMPLATE("saturation backward is that forward, the other way round", S, WEND_TEST_NUMBERS) {
  Omni<3> const drive{};
  PlanarVelocity<S> const can = drive.within_limits(PlanarVelocity<S>{S(0.1F), S(0.0F), S(-30.0F)});
  PlanarVelocity<S> const mirrored = drive.within_limits(PlanarVelocity<S>{S(-0.1F), S(0.0F), S(30.0F)});
  CHECK(numbers::all<S>(can.turn_rate > S(-7.0F) && can.turn_rate < S(-6.0F)));  // 25 rad/s * 0.04 m / 0.15 m = 6.67
  CHECK(numbers::all<S>(wend::magnitude(S(can.turn_rate + mirrored.turn_rate)) < S(1.0e-5F)));
  CHECK(numbers::all<S>(wend::magnitude(S(can.speed * S(-300.0F) - can.turn_rate)) < S(1.0e-4F)));
}

TEST_CASE("four rates that do not fit together give the motion nearest to them") {
  Omni<4> const drive{};
  wend::OmniRates<double, 4> const rates{{1.0, 2.0, -1.0, 3.5}};
  auto const misfit = [&](PlanarVelocity<double> const& body) {
    double sum = 0.0;
    auto const made = drive.wheels(body).rates;
    for (std::size_t i = 0; i < 4; ++i) {
      sum += (made[i] - rates.rates[i]) * (made[i] - rates.rates[i]);
    }
    return sum;
  };
  PlanarVelocity<double> const best = drive.body(rates);
  double const least = misfit(best);
  CHECK(least > 0.1);
  for (double const off : {-1.0e-3, 1.0e-3}) {
    CHECK(misfit({best.speed + off, best.lateral, best.turn_rate}) > least);
    CHECK(misfit({best.speed, best.lateral + off, best.turn_rate}) > least);
    CHECK(misfit({best.speed, best.lateral, best.turn_rate + 10.0 * off}) > least);
  }
}

TEST_CASE_TEMPLATE("the body goes straight along the course, whichever way the nose points", S, WEND_TEST_NUMBERS) {
  OmniSteering const steering{};
  for (double course = -3.0; course < 3.2; course += 0.5) {
    for (double nose = -2.93; nose < 3.2; nose += 0.7) {
      auto const at = [](double angle) {
        return Vec2<S>(S(static_cast<float>(std::cos(angle))), S(static_cast<float>(std::sin(angle))));
      };
      PlanarVelocity<S> const body = steering(Course<S>{at(course), S(1.0F)}, at(nose), S(0.4F));
      Vec2<S> const over_ground = wend::turned_out_of(at(nose), Vec2<S>(body.speed, body.lateral));
      CHECK(numbers::all<S>(wend::length(Vec2<S>(over_ground - wend::scaled(at(course), S(0.4F)))) < S(1.0e-6F)));
      double const turn = std::remainder(course - nose, 2.0 * pi);
      CHECK(numbers::all<S>(body.turn_rate * S(static_cast<float>(turn)) > S(0.0F)));
      CHECK(numbers::all<S>(wend::magnitude(body.turn_rate) <= S(1.5F)));
      CHECK(numbers::all<S>(wend::dot(steering.way(Course<S>{at(course), S(1.0F)}, at(nose)), at(course)) > S(0.99F)));
    }
  }
}

TEST_CASE("with a gain of 0 the nose stays as it is") {
  OmniSteering const steering{.gain = 0.0F};
  for (double const angle : {-2.0, 0.3, 3.0}) {
    Course<double> const course{{std::cos(angle), std::sin(angle)}, 1.0};
    PlanarVelocity<double> const body = steering(course, {1.0, 0.0}, 0.5);
    CHECK(body.turn_rate == 0.0);
    CHECK(std::hypot(body.speed, body.lateral) == doctest::Approx(0.5));
  }
}

TEST_CASE("driven in ticks while its nose comes round, it leaves the straight line by less than half a tick's turn") {
  OmniSteering const steering{};
  Omni<3> const drive{};
  double x = 0.0, y = 0.0, theta = 2.0, far = 0.0;
  double const dt = 0.05;
  for (int k = 0; k < 200; ++k) {
    PlanarVelocity<double> const body =
        drive.body(drive.wheels(steering(Course<double>{{1.0, 0.0}, 1.0}, {std::cos(theta), std::sin(theta)}, 0.4)));
    for (int i = 0; i < 50; ++i) {
      double const step = dt / 50;
      x += step * (body.speed * std::cos(theta) - body.lateral * std::sin(theta));
      y += step * (body.speed * std::sin(theta) + body.lateral * std::cos(theta));
      theta += step * body.turn_rate;
    }
    far = std::max(far, std::abs(y));
  }
  CHECK(x == doctest::Approx(4.0).epsilon(1e-3));
  CHECK(far <
        0.5 * dt * 2.0 * 0.4 + 1e-3);  // turned by 2 rad in all: the sum of the half ticks' turns, times the way of one
  CHECK(std::abs(std::sin(theta)) < 1e-3);
}
