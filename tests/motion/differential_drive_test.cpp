// DifferentialDrive: against the kinematics of two wheels on one axle (common practice, no source):
// v = r (right + left) / 2, omega = r (right - left) / track.
#include <cmath>
#include <limits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/differential_drive.hpp"

using wend::BodyVelocity;
using wend::DifferentialDrive;
using wend::WheelRates;

namespace {

constexpr DifferentialDrive drive{.wheel_radius = 0.035F, .track = 0.23F, .max_rate = 17.0F};
constexpr double wheel_radius = static_cast<double>(drive.wheel_radius);
constexpr double track = static_cast<double>(drive.track);
constexpr double max_rate = static_cast<double>(drive.max_rate);

template <typename S>
double rounding() {
  return 8.0 * static_cast<double>(std::numeric_limits<numbers::plain_t<S>>::epsilon());
}

template <typename S>
double plain(S const& x) {
  return static_cast<double>(numbers::first(x));
}

}  // namespace

TEST_CASE_TEMPLATE("wheel rates make the body velocity that was asked for", S, WEND_TEST_NUMBERS) {
  for (float speed = -0.3F; speed < 0.31F; speed += 0.05F) {
    for (float turn_rate = -1.6F; turn_rate < 1.61F; turn_rate += 0.2F) {
      WheelRates<S> const rates = drive.wheels(BodyVelocity<S>{S(speed), S(turn_rate)});
      double const left = plain(rates.left);
      double const right = plain(rates.right);
      CAPTURE(speed);
      CAPTURE(turn_rate);
      REQUIRE(std::fmax(std::abs(left), std::abs(right)) < max_rate);  // nothing saturates in this range
      CHECK(std::abs(wheel_radius * (right + left) / 2.0 - static_cast<double>(speed)) < rounding<S>());
      CHECK(std::abs(wheel_radius * (right - left) / track - static_cast<double>(turn_rate)) < 8.0 * rounding<S>());

      BodyVelocity<S> const again = drive.body(rates);
      CHECK(std::abs(plain(again.speed) - static_cast<double>(speed)) < rounding<S>());
      CHECK(std::abs(plain(again.turn_rate) - static_cast<double>(turn_rate)) < 8.0 * rounding<S>());
    }
  }
}

TEST_CASE("the right wheel is the faster one in a turn to the left") {
  WheelRates<float> const rates = drive.wheels(BodyVelocity<float>{0.2F, 1.0F});
  CHECK(rates.right > rates.left);
  WheelRates<float> const spin = drive.wheels(BodyVelocity<float>{0.0F, 1.0F});
  CHECK(spin.left == -spin.right);
  CHECK(spin.right > 0.0F);
}

TEST_CASE_TEMPLATE("a wheel at its limit slows the other one too, so that the path keeps its curvature", S,
                   WEND_TEST_NUMBERS) {
  int saturated = 0;
  for (float size = 0.5F; size < 1.0e6F; size *= 3.0F) {
    for (int k = 0; k < 64; ++k) {
      double const angle = 0.1 * k;
      float const speed = size * static_cast<float>(std::cos(angle));
      float const turn_rate = size * static_cast<float>(std::sin(angle));
      WheelRates<S> const rates = drive.wheels(BodyVelocity<S>{S(speed), S(turn_rate)});
      double const left = plain(rates.left);
      double const right = plain(rates.right);
      double const fastest = std::fmax(std::abs(left), std::abs(right));
      CAPTURE(size);
      CAPTURE(angle);
      CHECK(fastest <= max_rate);
      double const along = static_cast<double>(speed);
      double const about = static_cast<double>(turn_rate);
      double const asked_left = (along - about * track / 2.0) / wheel_radius;
      double const asked_right = (along + about * track / 2.0) / wheel_radius;
      if (std::fmax(std::abs(asked_left), std::abs(asked_right)) > max_rate * 1.001) {
        ++saturated;
        CHECK(fastest > max_rate * (1.0 - rounding<S>()));  // as fast as it can
        // turn_rate / speed is unchanged when both wheel rates shrink by one factor; cross-multiplied, no division by 0
        double const made_speed = wheel_radius * (right + left) / 2.0;
        double const made_turn_rate = wheel_radius * (right - left) / track;
        double const difference = made_turn_rate * along - made_speed * about;
        CHECK(std::abs(difference) < 8.0 * rounding<S>() * static_cast<double>(size));
        CHECK(made_speed * along + made_turn_rate * about > 0.0);  // and not the other way round
      }
    }
  }
  CHECK(saturated > 300);
}

TEST_CASE_TEMPLATE("wheels stand still for what is not finite, and for what overflows on the way", S,
                   WEND_TEST_NUMBERS) {
  float const nan = std::numeric_limits<float>::quiet_NaN();
  float const infinity = std::numeric_limits<float>::infinity();
  auto const still = [](BodyVelocity<S> const& body) {
    WheelRates<S> const rates = drive.wheels(body);
    return numbers::all<S>(rates.left >= S(0.0F) && rates.left <= S(0.0F) && rates.right >= S(0.0F) &&
                           rates.right <= S(0.0F));
  };
  for (float bad : {nan, -nan, infinity, -infinity}) {
    CHECK(still({S(bad), S(0.0F)}));
    CHECK(still({S(0.0F), S(bad)}));
    CHECK(still({S(bad), S(bad)}));
    CHECK(still({S(bad), S(-bad)}));
  }
  numbers::plain_t<S> const huge = std::numeric_limits<numbers::plain_t<S>>::max();
  CHECK(still({S(huge), S(huge)}));
  // one wheel at rest, the other one over the greatest number there is
  numbers::plain_t<S> const speed = static_cast<numbers::plain_t<S>>(0.9F * drive.wheel_radius) * huge;
  numbers::plain_t<S> const turn_rate = speed / static_cast<numbers::plain_t<S>>(0.5F * drive.track);
  CHECK(still({S(speed), S(turn_rate)}));
  CHECK(still({S(speed), S(-turn_rate)}));
}

TEST_CASE("one bad lane does not stop the wheels of the others") {
  using S = wend::lab::Pack<4>;
  S const speed = numbers::make<S>([](int k) { return k == 2 ? std::numeric_limits<float>::quiet_NaN() : 0.1F; });
  WheelRates<S> const rates = drive.wheels(BodyVelocity<S>{speed, S(0.0F)});
  for (int k = 0; k < 4; ++k) {
    CHECK((rates.left[k] > 0.0F) == (k != 2));
  }
}
