// The resting place behind a disc in the potential field of Khatib (1986), Int. J. Robotics Research 5(1):90-98, found
// by equilibria and by hand. The formulas are from memory:
//   goal:  F = -k (x - g)          FIRAS: F = eta (1/rho - 1/rho0) / rho^2 away from the disc, for rho <= rho0
#include <cmath>

#include <doctest/doctest.h>

#include "wend/fields/potential_field.hpp"
#include "wend/lab/equilibria.hpp"

TEST_CASE("Khatib's field with one disc has one saddle, where and as steep as the formula says") {
  using wend::lab::EquilibriumKind;
  constexpr wend::potential_field field{1.5F, 0.0625F, 0.7F, 0.01F};
  double const k = 1.5;
  double const eta = 0.0625;
  double const rho0 = static_cast<double>(0.7F);
  double const contact = 0.5 + static_cast<double>(0.25F);  // radii of disc and machine

  // In line: the goal at 0, the disc at 2, the machine at x beyond it.
  auto const excess = [&](double x) {
    double const rho = x - 2.0 - contact;
    return eta * (1.0 / rho - 1.0 / rho0) / (rho * rho) - k * x;
  };
  double low = 2.0 + contact + 0.02;
  double high = 2.0 + contact + rho0;
  REQUIRE(excess(low) > 0.0);
  REQUIRE(excess(high) < 0.0);
  while (high - low > 1e-14) {
    double const middle = 0.5 * (low + high);
    if (middle <= low || middle >= high) {
      break;
    }
    (excess(middle) > 0.0 ? low : high) = middle;
  }

  wend::lab::World world;
  world.add(2.0, 0.0, 0.5);
  wend::lab::EquilibriaOptions options;
  options.robot_radius = 0.25F;
  options.keep_off = 0.02;  // nearer than `closest` the push no longer follows the formula
  auto const e = wend::lab::equilibria(field, world, {0.0, 0.0}, {{-1.0, -2.0}, {5.0, 2.1}}, options);
  CHECK(e.complete());
  CHECK(e.boundary_index == 0);
  REQUIRE(e.points.size() == 2);
  CHECK(e.points[0].kind == EquilibriumKind::goal);
  auto const& saddle = e.points[1];
  CHECK(saddle.kind == EquilibriumKind::saddle);
  CHECK(saddle.index == -1);
  CHECK(std::abs(saddle.position.x() - low) < 1e-10);
  CHECK(std::abs(saddle.position.y()) < 1e-10);

  // Derivatives of the force by hand, over the sum of the two sizes, which is 2 k x here.
  double const x = low;
  double const rho = x - 2.0 - contact;
  double const along = -k + eta * (-3.0 / (rho * rho * rho * rho) + 2.0 / (rho0 * rho * rho * rho));
  double const across = -k + k * x / (x - 2.0);
  CHECK(saddle.eigenvalues[0].real() == doctest::Approx(along / (2.0 * k * x)).epsilon(1e-9));
  CHECK(saddle.eigenvalues[1].real() == doctest::Approx(across / (2.0 * k * x)).epsilon(1e-9));
  CHECK(saddle.eigenvalues[0].real() < 0.0);
  CHECK(saddle.eigenvalues[1].real() > 0.0);
  MESSAGE("saddle at ", saddle.position.x(), " m, ", e.boxes, " boxes");
}
