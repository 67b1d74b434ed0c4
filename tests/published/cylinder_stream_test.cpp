// A uniform stream past a cylinder: the circle theorem (Milne-Thomson 1940, Proc. Camb. Phil. Soc. 36:246-247) gives
// for a stream of speed 1, a circle of radius a and a circulation G the velocity u - i v = 1 - a^2/z^2 - i G/(2 pi z),
// with stagnation points at z = i G/(4 pi) +- sqrt(a^2 - (G/(4 pi))^2) (Milne-Thomson, Theoretical Hydrodynamics,
// chapter 7; from memory).
#include <cmath>
#include <complex>
#include <numbers>

#include <doctest/doctest.h>

#include "wend/field.hpp"
#include "wend/lab/equilibria.hpp"

namespace {

// As a user would write it, on any number. The cylinder is wider than disc and machine by `apart`, so that what lies on
// its edge is a place where the machine can be.
struct past_cylinder {
  wend::Parameter apart = 0.125F;
  wend::Parameter circulation_over_two_pi = 0.0F;

  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    S const x = percept.pose.position.x() - percept.nearest.centre.x();
    S const y = percept.pose.position.y() - percept.nearest.centre.y();
    S const a = percept.nearest.radius + percept.robot_radius + S(apart);
    S const r2 = wend::squared(x) + wend::squared(y);
    S const share = wend::squared(a) / wend::squared(r2);
    S const spin = S(circulation_over_two_pi) / r2;
    S const u = S(1.0F) - share * (wend::squared(x) - wend::squared(y)) - spin * y;
    S const v = S(-2.0F) * share * x * y + spin * x;
    wend::Polar<S> const way = wend::polar(wend::Vec2<S>{u, v});
    return wend::course_along(way, wend::least(way.length, S(1.0F)));
  }
};

constexpr double a = 0.5 + 0.25 + 0.125;

wend::lab::Equilibria around(past_cylinder const& field) {
  wend::lab::World world;
  world.add(0.25, 0.5, 0.5);
  wend::lab::EquilibriaOptions options;
  options.robot_radius = 0.25F;
  return wend::lab::equilibria(field, world, {9.0, 0.0}, {{-3.0, -2.5}, {3.1, 3.1}}, options);
}

}  // namespace

TEST_CASE("a stream past a cylinder stagnates at its front and its back, in saddles") {
  auto const e = around(past_cylinder{});
  CHECK(e.complete());
  // Within, the field is a dipole, which turns twice round it; and the stream does not turn.
  CHECK(e.boundary_index == -2);
  REQUIRE(e.points.size() == 2);
  for (int side : {0, 1}) {
    auto const& point = e.points[static_cast<std::size_t>(side)];
    CHECK(point.kind == wend::lab::EquilibriumKind::saddle);
    CHECK((point.position - wend::Vec2<double>{0.25 + (side == 0 ? -a : a), 0.5}).norm() < 1e-12);
    // The derivative of 1 - a^2/z^2 is 2 a^2/z^3: +-2/a.
    CHECK(point.eigenvalues[0].real() == doctest::Approx(-2.0 / a).epsilon(1e-10));
    CHECK(point.eigenvalues[1].real() == doctest::Approx(2.0 / a).epsilon(1e-10));
  }
  MESSAGE(e.boxes, " boxes");
}

TEST_CASE("with a circulation the stagnation points move round the cylinder as the theorem says") {
  constexpr float g = -0.75F;
  auto const e = around({0.125F, g});
  CHECK(e.complete());
  CHECK(e.boundary_index == -2);
  REQUIRE(e.points.size() == 2);
  double const up = 0.5 * static_cast<double>(g);
  double const beside = std::sqrt(a * a - up * up);
  // u - i v = 1 - a^2/z^2 - i g/z, and u and v above are its parts: i/z = (y + i x)/r^2.
  for (int side : {0, 1}) {
    std::complex<double> const z(side == 0 ? -beside : beside, up);
    REQUIRE(std::abs(1.0 - a * a / (z * z) - std::complex<double>(0.0, 1.0) * static_cast<double>(g) / z) < 1e-14);
    auto const& point = e.points[static_cast<std::size_t>(side)];
    CHECK((point.position - wend::Vec2<double>{0.25 + z.real(), 0.5 + z.imag()}).norm() < 1e-12);
    CHECK(point.kind == wend::lab::EquilibriumKind::saddle);
  }
}
