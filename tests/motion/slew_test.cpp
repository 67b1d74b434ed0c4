// Slew and SmoothSlew: against the limits themselves, by differences of what comes out, and against the least time in
// which a velocity can be changed under a limit on acceleration and jerk (the trapezoid of acceleration; common
// practice, no source): t = v / a + a / j where v >= a^2 / j.
#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/lab/random.hpp"
#include "wend/motion/slew.hpp"

using wend::BodyVelocity;
using wend::PlanarVelocity;
using wend::Slew;
using wend::SlewMoment;
using wend::SmoothSlew;

namespace {

// Runs a slew towards what `wanted(k)` says and returns the speeds.
template <typename S, typename Limits, typename Wanted>
std::vector<double> run(Limits const& slew, double dt, int ticks, Wanted const& wanted) {
  typename Limits::template Memory<BodyVelocity<S>> memory;
  std::vector<double> speeds{0.0};
  for (int k = 0; k < ticks; ++k) {
    memory.body =
        slew(BodyVelocity<S>{static_cast<S>(wanted(k)), S(0)}, SlewMoment<S>{static_cast<S>(dt), {}, {}}, memory);
    speeds.push_back(static_cast<double>(memory.body.speed));
  }
  return speeds;
}

double greatest_change(std::vector<double> const& x) {
  double most = 0.0;
  for (std::size_t i = 1; i < x.size(); ++i) {
    most = std::max(most, std::abs(x[i] - x[i - 1]));
  }
  return most;
}

std::vector<double> differences(std::vector<double> const& x, double dt) {
  std::vector<double> d{0.0};
  for (std::size_t i = 1; i < x.size(); ++i) {
    d.push_back((x[i] - x[i - 1]) / dt);
  }
  return d;
}

}  // namespace

TEST_CASE_TEMPLATE("a speed is met at the acceleration allowed, exactly, and left at the braking allowed", S, float,
                   double) {
  Slew const slew{.acceleration = 1.0F, .braking = 2.0F};
  auto const speeds = run<S>(slew, 0.05, 60, [](int k) { return k < 30 ? 0.6 : 0.0; });
  CHECK(speeds[6] == doctest::Approx(0.3));   // 6 ticks of 0.05 m/s
  CHECK(speeds[12] == doctest::Approx(0.6));
  CHECK(static_cast<S>(speeds[13]) == static_cast<S>(0.6));
  CHECK(speeds[33] == doctest::Approx(0.3));  // 3 ticks of 0.1 m/s
  CHECK(speeds[36] == doctest::Approx(0.0));
  CHECK(speeds.back() == 0.0);
}

TEST_CASE_TEMPLATE("every component of a body's motion has its limit", S, WEND_TEST_NUMBERS) {
  Slew const slew{.acceleration = 1.0F, .braking = 2.0F, .turn_acceleration = 4.0F};
  Slew::Memory<PlanarVelocity<S>> memory;
  PlanarVelocity<S> const next =
      slew(PlanarVelocity<S>{S(0.5F), S(-0.5F), S(1.0F)}, SlewMoment<S>{S(0.1F), {}, {}}, memory);
  auto const is = [](S const& x, float value) {
    return numbers::all<S>(wend::magnitude(S(x - S(value))) < S(1.0e-6F));
  };
  CHECK(is(next.speed, 0.1F));
  CHECK(is(next.lateral, -0.1F));
  CHECK(is(next.turn_rate, 0.4F));
}

TEST_CASE_TEMPLATE("a stop brakes harder, and at once where there is no time step", S, WEND_TEST_NUMBERS) {
  auto const check = [](auto const& slew) {
    typename std::remove_cvref_t<decltype(slew)>::template Memory<BodyVelocity<S>> memory;
    memory.body = {S(0.6F), S(1.0F)};
    auto const yes = S(1.0F) > S(0.0F);
    BodyVelocity<S> const zero{};
    auto again = memory;
    BodyVelocity<S> const hard = slew(zero, SlewMoment<S>{S(0.1F), yes, {}}, again);
    CHECK(numbers::all<S>(wend::magnitude(S(hard.speed - S(0.35F))) < S(1.0e-6F)));
    CHECK(numbers::all<S>(wend::magnitude(S(hard.turn_rate)) < S(1.0e-6F)));
    for (float const dt : {0.0F, 0.05F}) {
      again = memory;
      BodyVelocity<S> const at_once = slew(zero, SlewMoment<S>{S(dt), yes, yes}, again);
      CHECK(numbers::all<S>(at_once.speed <= S(0.0F) && at_once.speed >= S(0.0F)));
    }
    again = memory;
    BodyVelocity<S> const timeless = slew(zero, SlewMoment<S>{S(0.0F), {}, {}}, again);
    CHECK(numbers::all<S>(wend::magnitude(S(timeless.speed - S(0.6F))) < S(1.0e-5F)));
  };
  check(Slew{});
  check(SmoothSlew{});
}

TEST_CASE_TEMPLATE("a memory of nonsense gives finite velocities, and is forgotten", S, float, double) {
  for (S const x :
       {std::numeric_limits<S>::quiet_NaN(), std::numeric_limits<S>::infinity(), -std::numeric_limits<S>::infinity()}) {
    Slew::Memory<BodyVelocity<S>> rough;
    rough.body = {x, x};
    BodyVelocity<S> const a = Slew{}(BodyVelocity<S>{S(0.5F), S(0.5F)}, SlewMoment<S>{S(0.05F), {}, {}}, rough);
    CHECK(std::abs(a.speed) <= S(0.06F));
    SmoothSlew::Memory<BodyVelocity<S>> smooth;
    smooth.body = {x, S(0)};
    smooth.change = {x, x};
    BodyVelocity<S> const b = SmoothSlew{}(BodyVelocity<S>{S(0.5F), S(0.5F)}, SlewMoment<S>{S(0.05F), {}, {}}, smooth);
    CHECK(std::abs(b.speed) <= S(0.06F));
    CHECK(wend::finite(smooth.change.speed));
    CHECK(wend::finite(smooth.change.turn_rate));
  }
}

TEST_CASE("a hard stop without a braking that is one happens at once") {
  for (float const none : {0.0F, -1.0F, std::numeric_limits<float>::quiet_NaN()}) {
    auto const check = [](auto const& slew) {
      typename std::remove_cvref_t<decltype(slew)>::template Memory<BodyVelocity<float>> memory;
      memory.body = {0.5F, 0.5F};
      BodyVelocity<float> const next = slew(BodyVelocity<float>{}, SlewMoment<float>{0.05F, true, false}, memory);
      CHECK(next.speed == 0.0F);
    };
    check(Slew{.braking = none, .stop_braking = none});
    check(SmoothSlew{.braking = none, .stop_braking = none});
  }
}

TEST_CASE("a limit that is no positive number lets nothing change") {
  for (float const none : {0.0F, -1.0F, std::numeric_limits<float>::quiet_NaN()}) {
    Slew::Memory<BodyVelocity<float>> memory;
    BodyVelocity<float> const next = Slew{.acceleration = none, .braking = none}(
        BodyVelocity<float>{0.5F, 0.0F}, SlewMoment<float>{0.05F, {}, {}}, memory);
    CHECK(next.speed == 0.0F);
  }
}

TEST_CASE_TEMPLATE("under a jerk limit no speed overshoots, no acceleration and no jerk is over its limit", S, float,
                   double) {
  double const rounding = std::is_same_v<S, float> ? 2.0e-3 : 1.0e-9;
  for (SmoothSlew const& slew : {SmoothSlew{}, SmoothSlew{.acceleration = 0.5F, .braking = 0.5F, .jerk = 2.0F},
                                 SmoothSlew{.acceleration = 3.0F, .braking = 3.0F, .jerk = 5.0F}}) {
    double const jerk = static_cast<double>(slew.jerk);
    double const limit = static_cast<double>(std::max(slew.acceleration, slew.braking));
    for (double const dt : {0.01, 0.05, 0.013}) {
      for (double const goal : {0.02, 0.1, 0.37, 0.6, 1.9}) {
        auto const speeds = run<S>(slew, dt, static_cast<int>(6.0 / dt), [goal](int) { return goal; });
        auto const accelerations = differences(speeds, dt);
        auto const jerks = differences(accelerations, dt);
        CAPTURE(dt);
        CAPTURE(goal);
        CHECK(*std::max_element(speeds.begin(), speeds.end()) <= goal * (1.0 + 1.0e-6));
        CHECK(speeds.back() == doctest::Approx(goal));
        CHECK(accelerations.back() == doctest::Approx(0.0));
        CHECK(*std::min_element(accelerations.begin(), accelerations.end()) >= -rounding);
        CHECK(greatest_change(speeds) <= limit * dt + 1.0e-3 * rounding);
        CHECK(greatest_change(accelerations) <= jerk * dt + rounding / dt * 0.05);
        CHECK(jerks.size() > 10);
        // and hardly slower than can be: within two ticks and the rounding to whole ones of the least time
        double const a = static_cast<double>(slew.acceleration);
        double const least = goal >= a * a / jerk ? goal / a + a / jerk : 2.0 * std::sqrt(goal / jerk);
        auto const met =
            std::find_if(speeds.begin(), speeds.end(), [goal](double v) { return std::abs(v - goal) < 1.0e-3 * goal; });
        CHECK(static_cast<double>(met - speeds.begin()) * dt < least + 4.0 * dt);
        CHECK(static_cast<double>(met - speeds.begin()) * dt > 0.9 * least - dt);
      }
    }
  }
}

TEST_CASE("under a jerk limit speeding up and slowing down have each its own limit, and both are used") {
  SmoothSlew const slew{.acceleration = 0.5F, .braking = 2.0F, .jerk = 20.0F};
  double const dt = 0.01;
  auto const accelerations = differences(run<double>(slew, dt, 600, [](int k) { return k < 300 ? 0.9 : 0.0; }), dt);
  CHECK(*std::max_element(accelerations.begin(), accelerations.end()) == doctest::Approx(0.5));
  CHECK(*std::min_element(accelerations.begin(), accelerations.end()) == doctest::Approx(-2.0));
}

TEST_CASE("the acceleration that is remembered is the one that was driven, to the last tick before the speed is met") {
  SmoothSlew const slew{};
  for (double const dt : {0.01, 0.05}) {
    SmoothSlew::Memory<BodyVelocity<double>> memory;
    double last = 0.0;
    for (int k = 0; k < 200; ++k) {
      double const wanted = k < 100 ? 0.6 : 0.25;
      memory.body = slew(BodyVelocity<double>{wanted, 0.0}, SlewMoment<double>{dt, {}, {}}, memory);
      CHECK(memory.change.speed == doctest::Approx((memory.body.speed - last) / dt).epsilon(1e-9));
      last = memory.body.speed;
    }
  }
}

TEST_CASE("a target that falls while the machine speeds up is overrun by no more than the jerk makes it") {
  SmoothSlew const slew{};
  double const dt = 0.01;
  auto const speeds = run<double>(slew, dt, 600, [](int k) { return k < 40 ? 0.6 : 0.2; });
  double const at_change = speeds[40];
  double const a = (speeds[40] - speeds[39]) / dt;
  double const jerk = static_cast<double>(slew.jerk);
  CHECK(at_change < 0.6);
  CHECK(*std::max_element(speeds.begin(), speeds.end()) <= at_change + a * a / (2.0 * jerk) + a * dt);
  CHECK(speeds.back() == doctest::Approx(0.2));
  CHECK(*std::min_element(speeds.begin() + 60, speeds.end()) >= 0.2 - 1.0e-9);
}

TEST_CASE("a time step that varies makes an overshoot of no more than a jerk over a step and a half") {
  wend::lab::Draws const draws(3, 0);
  SmoothSlew const slew{};
  double worst = 0.0;
  for (std::uint32_t run_number = 0; run_number < 200; ++run_number) {
    SmoothSlew::Memory<BodyVelocity<double>> memory;
    for (std::uint32_t k = 0; k < 100; ++k) {
      double const dt = 0.05 * (1.0 + 0.4 * draws.between(-1.0, 1.0, {0, run_number, k}));
      memory.body = slew(BodyVelocity<double>{0.6, 0.0}, SlewMoment<double>{dt, {}, {}}, memory);
      worst = std::max(worst, memory.body.speed - 0.6);
    }
    CHECK(memory.body.speed == doctest::Approx(0.6));
  }
  MESSAGE("overshoot: ", worst, " m/s");
  CHECK(worst <= static_cast<double>(slew.jerk) * 0.075 * 0.075);
}
