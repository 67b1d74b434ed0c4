// Drive: what is one, and what a loop takes for one. In each of them, whatever comes in, the wheels stay within limits.
#include <array>
#include <cmath>
#include <limits>
#include <type_traits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/ackermann.hpp"
#include "wend/motion/differential_drive.hpp"
#include "wend/motion/drive.hpp"
#include "wend/motion/omni.hpp"
#include "wend/motion/point_ahead.hpp"

using wend::Ackermann;
using wend::BodyVelocity;
using wend::DifferentialDrive;
using wend::Omni;
using wend::PlanarVelocity;

namespace {

constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();
constexpr float infinity = std::numeric_limits<float>::infinity();
constexpr float greatest = std::numeric_limits<float>::max();
constexpr float denormal = 1.0e-42F;

struct NoDrive {
  float gain = 1.0F;
};

static_assert(wend::Drive<DifferentialDrive> && wend::Drive<DifferentialDrive, wend::lab::Pack<8>>);
static_assert(wend::Drive<Ackermann> && wend::Drive<Ackermann, double>);
static_assert(wend::Drive<Omni<3>> && wend::Drive<Omni<4>, wend::lab::Pack<4>>);
static_assert(!wend::Drive<NoDrive> && !wend::Drive<float>);
static_assert(std::is_same_v<wend::steering_t<DifferentialDrive>, wend::Steering>);
static_assert(std::is_same_v<wend::steering_t<Ackermann>, wend::ArcSteering>);
static_assert(std::is_same_v<wend::body_t<Omni<4>, float>, PlanarVelocity<float>>);
static_assert(std::is_same_v<wend::wheels_t<DifferentialDrive, double>, wend::WheelRates<double>>);
// nothing of it is more than its parameters
static_assert(sizeof(Ackermann) == 4 * sizeof(float) && sizeof(Omni<3>) == 9 * sizeof(float));

constexpr std::array<float, 13> hurtful{0.0F,      -0.0F,        0.3F,     -0.7F,     50.0F,    -50.0F,   greatest,
                                        -greatest, not_a_number, infinity, -infinity, denormal, -denormal};

template <typename S>
bool within(S const& x, float limit) {
  return numbers::all<S>(x <= S(limit) && x >= S(-limit));  // false of not-a-number
}

}  // namespace

TEST_CASE_TEMPLATE("whatever motion is asked for, a car's speed and steering stay within limits", S,
                   WEND_TEST_NUMBERS) {
  Ackermann const car{};
  for (float const speed : hurtful) {
    for (float const turn : hurtful) {
      auto const wheels = car.wheels(BodyVelocity<S>{S(speed), S(turn)});
      CAPTURE(speed);
      CAPTURE(turn);
      CHECK(within<S>(wheels.speed, car.max_speed));
      CHECK(within<S>(wheels.tangent, car.max_tangent));
      auto const body = car.within_limits(BodyVelocity<S>{S(speed), S(turn)});
      CHECK(within<S>(body.speed, car.max_speed * 1.000001F));
      CHECK(within<S>(body.turn_rate, car.max_speed * car.max_tangent / car.wheelbase * 1.000001F));
    }
  }
}

TEST_CASE_TEMPLATE("whatever motion is asked for, no omnidirectional wheel is over its limit", S, WEND_TEST_NUMBERS) {
  Omni<3> const three{};
  Omni<4> const four{};
  for (float const speed : hurtful) {
    for (float const lateral : hurtful) {
      for (float const turn : hurtful) {
        PlanarVelocity<S> const wanted{S(speed), S(lateral), S(turn)};
        bool good = true;
        for (S const& rate : three.wheels(wanted).rates) {
          good = good && within<S>(rate, three.max_rate);
        }
        for (S const& rate : four.wheels(wanted).rates) {
          good = good && within<S>(rate, four.max_rate);
        }
        CAPTURE(speed);
        CAPTURE(lateral);
        CAPTURE(turn);
        CHECK(good);
      }
    }
  }
}

TEST_CASE_TEMPLATE("no steering makes a motion out of a course or a speed that is none", S, WEND_TEST_NUMBERS) {
  wend::Vec2<S> const nose{S(1.0F), S(0.0F)};
  auto const still = [](auto const& body) {
    bool good = numbers::all<S>(body.speed <= S(0.0F) && body.speed >= S(0.0F));
    good = good && numbers::all<S>(body.turn_rate <= S(0.0F) && body.turn_rate >= S(0.0F));
    if constexpr (requires { body.lateral; }) {
      good = good && numbers::all<S>(body.lateral <= S(0.0F) && body.lateral >= S(0.0F));
    }
    return good;
  };
  for (auto const& [x, y] : {std::array{0.0F, 0.0F}, std::array{not_a_number, 0.0F}, std::array{0.6F, not_a_number}}) {
    wend::Course<S> const course{{S(x), S(y)}, S(0.0F)};
    CHECK(still(wend::ArcSteering{}(course, nose, S(0.5F), Ackermann{})));
    CHECK(still(wend::ArcSteering{.reverses = true}(course, nose, S(0.5F), Ackermann{})));
    CHECK(still(wend::OmniSteering{}(course, nose, S(0.5F))));
    CHECK(still(wend::PointAhead{}(course, nose, S(0.5F))));
    CHECK(still(wend::PointAhead{.reverses = true}(course, nose, S(0.5F))));
  }
  wend::Course<S> const ahead{{S(0.6F), S(0.8F)}, S(1.0F)};
  for (float const allowed : {0.0F, -1.0F, not_a_number, -infinity}) {
    CAPTURE(allowed);
    CHECK(still(wend::ArcSteering{}(ahead, nose, S(allowed), Ackermann{})));
    CHECK(numbers::all<S>(wend::OmniSteering{}(ahead, nose, S(allowed)).speed <= S(0.0F)));
    CHECK(numbers::all<S>(wend::PointAhead{}(ahead, nose, S(allowed)).speed <= S(0.0F)));
  }
  CHECK(still(wend::PointAhead{.distance = 0.0F}(ahead, nose, S(0.5F))));
  // a look-ahead of 0 is a parameter gone wrong: it still drives straight on to what is straight ahead
  auto const body = wend::ArcSteering{.look_ahead = 0.0F}({{S(1.0F), S(0.0F)}, S(1.0F)}, nose, S(0.5F), Ackermann{});
  CHECK(numbers::all<S>(body.speed > S(0.4F) && body.turn_rate <= S(0.0F) && body.turn_rate >= S(0.0F)));
}
