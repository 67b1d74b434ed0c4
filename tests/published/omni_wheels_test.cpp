// Inverse kinematics of omnidirectional machines: Pin and Killough (1994), A new family of omnidirectional and
// holonomic wheeled platforms for mobile robots, IEEE Trans. Robotics and Automation 10(4); Siegwart and Nourbakhsh
// (2004), Introduction to autonomous mobile robots, section 3.2, whose worked machine has its wheels at 60, 180 and 300
// degrees from the x axis (both from memory; the book counts wheel rates the other way round). Rows of [-sin a, cos a,
// l] / r:
//   a = 60:  [-sqrt(3)/2,  1/2, l] / r
//   a = 180: [0,          -1,   l] / r
//   a = 300: [ sqrt(3)/2,  1/2, l] / r
#include <array>
#include <cmath>
#include <numbers>

#include <doctest/doctest.h>

#include "../dense.hpp"
#include "wend/motion/omni.hpp"

using wend::Omni;
using wend::PlanarVelocity;

TEST_CASE("three wheels at 60, 180 and 300 degrees have the rates of the published matrix") {
  Omni<3> const drive{.distance = 0.15F, .wheel_radius = 0.04F, .max_rate = 1000.0F};
  double const half_root = 0.5 * std::sqrt(3.0);
  std::array<std::array<double, 3>, 3> const rows{{{-half_root, 0.5, 0.15}, {0.0, -1.0, 0.15}, {half_root, 0.5, 0.15}}};
  for (PlanarVelocity<double> const& v :
       {PlanarVelocity<double>{1.0, 0.0, 0.0}, PlanarVelocity<double>{0.0, 1.0, 0.0},
        PlanarVelocity<double>{0.0, 0.0, 1.0}, PlanarVelocity<double>{0.3, -0.7, 2.0}}) {
    auto const wheels = drive.wheels(v);
    for (std::size_t i = 0; i < 3; ++i) {
      double const expected = (rows[i][0] * v.speed + rows[i][1] * v.lateral + rows[i][2] * v.turn_rate) / 0.04;
      CHECK(wheels.rates[i] == doctest::Approx(expected).epsilon(1e-6));
    }
  }
}

TEST_CASE("going straight ahead on three wheels leaves the one behind at rest, and turning gives all one rate") {
  Omni<3> const drive{};
  auto const ahead = drive.wheels(PlanarVelocity<double>{0.3, 0.0, 0.0});
  CHECK(std::abs(ahead.rates[1]) < 1e-6);
  CHECK(ahead.rates[0] == doctest::Approx(-ahead.rates[2]));
  auto const turning = drive.wheels(PlanarVelocity<double>{0.0, 0.0, 1.0});
  CHECK(turning.rates[0] == doctest::Approx(turning.rates[1]));
  CHECK(turning.rates[1] == doctest::Approx(turning.rates[2]));
}

// The pseudo-inverse, by a library: Eigen's complete orthogonal decomposition of the matrix built column by column.
TEST_CASE("the body velocity from rates is that of the pseudo-inverse") {
  Omni<4> const drive{};
  Omni<5> const odd{
      .at = {wend::bearing(0.1), wend::bearing(1.0), wend::bearing(2.4), wend::bearing(3.9), wend::bearing(5.5)}};
  auto const check = [](auto const& machine) {
    constexpr int wheels = static_cast<int>(std::tuple_size_v<decltype(machine.at)>);
    Eigen::Matrix<double, wheels, 3> jacobian;
    PlanarVelocity<double> const units[] = {{0.1, 0.0, 0.0}, {0.0, 0.1, 0.0}, {0.0, 0.0, 0.1}};
    for (int column = 0; column < 3; ++column) {
      auto const rates = machine.wheels(units[column]).rates;
      for (int i = 0; i < wheels; ++i) {
        jacobian(i, column) = 10.0 * rates[static_cast<std::size_t>(i)];
      }
    }
    wend::OmniRates<double, wheels> given;
    Eigen::Matrix<double, wheels, 1> right;
    for (int i = 0; i < wheels; ++i) {
      right(i) = given.rates[static_cast<std::size_t>(i)] = std::sin(1.7 * i + 0.3) * 5.0;
    }
    Eigen::Vector3d const expected = dense::least_squares(jacobian, right);
    PlanarVelocity<double> const body = machine.body(given);
    CHECK(body.speed == doctest::Approx(expected(0)).epsilon(1e-6));
    CHECK(body.lateral == doctest::Approx(expected(1)).epsilon(1e-6));
    CHECK(body.turn_rate == doctest::Approx(expected(2)).epsilon(1e-6));
  };
  check(drive);
  check(odd);
}
