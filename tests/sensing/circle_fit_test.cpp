// Circles from points: what must hold for any fit, whatever it is given. The published example is in tests/published/.
#include <bit>
#include <cmath>
#include <concepts>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "../dense.hpp"
#include "wend/sensing/circle_fit.hpp"

namespace {

template <typename S>
using Points = std::vector<wend::Vec2<S>>;

template <typename S>
wend::CircleFit<S> fit(Points<S> const& points) {
  return wend::fit_circle<S>(static_cast<int>(points.size()),
                             [&](int i) { return points[static_cast<std::size_t>(i)]; });
}

template <typename S>
wend::CircleFit<S> kasa(Points<S> const& points) {
  return wend::kasa_circle<S>(static_cast<int>(points.size()),
                              [&](int i) { return points[static_cast<std::size_t>(i)]; });
}

// Points on a circle at even angles from `begin` over `arc` radians, each moved along the radius by `noise` * N(0, 1).
template <typename S>
Points<S> arc(double x, double y, double radius, double begin, double arc, int count, double noise = 0.0,
              unsigned seed = 1) {
  std::mt19937 random(seed);
  std::normal_distribution<double> normal;
  Points<S> points;
  for (int i = 0; i < count; ++i) {
    double const a = begin + arc * i / (count - 1);
    double const r = radius + noise * normal(random);
    points.emplace_back(static_cast<S>(x + r * std::cos(a)), static_cast<S>(y + r * std::sin(a)));
  }
  return points;
}

template <typename S>
double error(wend::CircleFit<S> const& fit, double x, double y, double radius) {
  return std::hypot(static_cast<double>(fit.disc.centre.x()) - x, static_cast<double>(fit.disc.centre.y()) - y) +
         std::abs(static_cast<double>(fit.disc.radius) - radius);
}

template <typename S>
bool all_finite(wend::CircleFit<S> const& fit) {
  return wend::finite(fit.disc.centre.x()) && wend::finite(fit.disc.centre.y()) && wend::finite(fit.disc.radius) &&
         wend::finite(fit.rms) && fit.disc.radius >= S(0.0F);
}

}  // namespace

TEST_CASE_TEMPLATE("points that lie on a circle give that circle", S, float, double) {
  double const rounding = static_cast<double>(std::numeric_limits<S>::epsilon());
  for (double const span : {0.8, 1.5, 3.0, 6.2}) {
    wend::CircleFit<S> const found = fit(arc<S>(2.0, -1.5, 0.4, 0.3, span, 12));
    CHECK(found.converged);
    CHECK(error(found, 2.0, -1.5, 0.4) < 400.0 * rounding / (span * span));  // a short arc says less of its centre
    CHECK(static_cast<double>(found.rms) < 10.0 * rounding);
  }
}

TEST_CASE("single precision keeps its digits far from the origin") {
  // Coordinates at 1 km are rounded to 6e-5 m; plain moments about the origin would lose a 0.4 m circle altogether.
  wend::CircleFit<float> const found = fit(arc<float>(1000.0, -1000.0, 0.4, 0.0, 3.0, 40));
  CHECK(found.converged);
  CHECK(error(found, 1000.0, -1000.0, 0.4) < 3.0e-4);
}

TEST_CASE_TEMPLATE("the algebraic fit agrees with a least squares solution by Eigen's orthogonal decomposition", S,
                   float, double) {
  // Kasa's circle is the linear problem 2 x a + 2 y b + c = x^2 + y^2 (Kasa 1976).
  for (unsigned seed = 1; seed <= 20; ++seed) {
    Points<double> const points = arc<double>(0.7, 0.2, 0.5, 1.0, 2.5, 15, 0.02, seed);
    Points<S> own;
    Eigen::MatrixXd a(15, 3);
    Eigen::VectorXd b(15);
    for (int i = 0; i < 15; ++i) {
      auto const& p = points[static_cast<std::size_t>(i)];
      own.push_back(p.template cast<S>());
      a.row(i) << 2.0 * p.x(), 2.0 * p.y(), 1.0;
      b(i) = p.squaredNorm();
    }
    Eigen::Vector3d const v = dense::least_squares(a, b);
    wend::CircleFit<S> const found = kasa(own);
    double const tolerance = std::same_as<S, float> ? 1.0e-5 : 1.0e-12;
    CHECK(found.converged);
    CHECK(error(found, v(0), v(1), std::sqrt(v(2) + v(0) * v(0) + v(1) * v(1))) < tolerance);
  }
}

TEST_CASE("on short noisy arcs the geometric fit is nearly free of the algebraic fit's bias") {
  // Chernov and Lesort (2005, J. Math. Imaging Vis. 23:239-252, from memory): Kasa's radius is biased low on arcs.
  double algebraic = 0.0;
  double geometric = 0.0;
  for (unsigned seed = 1; seed <= 400; ++seed) {
    Points<float> const points = arc<float>(0.0, 0.0, 0.5, 0.0, 1.6, 20, 0.02, seed);
    algebraic += static_cast<double>(kasa(points).disc.radius) / 400.0 - 0.5 / 400.0;
    wend::CircleFit<float> const found = fit(points);
    CHECK(found.converged);
    geometric += static_cast<double>(found.disc.radius) / 400.0 - 0.5 / 400.0;
  }
  CHECK(algebraic < -0.02);
  CHECK(std::abs(geometric) < 0.25 * std::abs(algebraic));
}

TEST_CASE("the residual is that of the noise") {
  // Three parameters are fitted: the expected squared residual is sigma^2 (n - 3) / n (standard least squares theory).
  double sum = 0.0;
  for (unsigned seed = 1; seed <= 400; ++seed) {
    double const rms = static_cast<double>(fit(arc<float>(1.0, 2.0, 0.4, 0.0, 3.0, 12, 0.01, seed)).rms);
    sum += rms * rms / 400.0;
  }
  CHECK(std::sqrt(sum) == doctest::Approx(0.01 * std::sqrt(9.0 / 12.0)).epsilon(0.04));
}

TEST_CASE_TEMPLATE("points that carry no circle do not converge and give a disc far away", S, float, double) {
  S const nan = std::numeric_limits<S>::quiet_NaN();
  S const infinity = std::numeric_limits<S>::infinity();
  S const denormal = std::numeric_limits<S>::denorm_min();
  Points<S> line;
  for (int i = 0; i < 20; ++i) {
    line.emplace_back(static_cast<S>(1 + 2 * i), static_cast<S>(3 - i));
  }
  std::vector<Points<S>> const cases{{},
                                     {{S(1), S(2)}},
                                     {{S(1), S(2)}, {S(2), S(1)}},
                                     Points<S>(7, wend::Vec2<S>(S(3), S(4))),
                                     line,
                                     {{S(1), S(2)}, {nan, S(1)}, {S(3), S(3)}, {S(4), S(0)}},
                                     {{S(1), S(2)}, {infinity, S(1)}, {S(3), S(3)}, {S(4), S(0)}},
                                     {{denormal, S(0)}, {S(0), denormal}, {-denormal, S(0)}, {S(0), -denormal}}};
  for (Points<S> const& points : cases) {
    CAPTURE(points.size());
    for (wend::CircleFit<S> const& found : {fit(points), kasa(points)}) {
      CHECK_FALSE(found.converged);
      CHECK(found.disc.centre.x() == S(wend::far_away));
      CHECK(found.disc.radius == S(0.0F));
      CHECK(found.rms == S(0.0F));
    }
  }
}

TEST_CASE_TEMPLATE("whatever bits come in, the circle is finite", S, float, double) {
  using Bits = std::conditional_t<std::same_as<S, double>, std::uint64_t, std::uint32_t>;
  std::mt19937_64 random(7);
  int converged = 0;
  for (int trial = 0; trial < 5000; ++trial) {
    Points<S> points;
    for (int i = 0; i < 3 + trial % 6; ++i) {
      points.emplace_back(std::bit_cast<S>(static_cast<Bits>(random())), std::bit_cast<S>(static_cast<Bits>(random())));
    }
    wend::CircleFit<S> const found = fit(points);
    REQUIRE(all_finite(found));
    REQUIRE(all_finite(kasa(points)));
    converged += found.converged ? 1 : 0;
  }
  CHECK(converged < 5000);
}

TEST_CASE("few passes still give a finite circle and say that it did not settle") {
  Points<double> const points = arc<double>(0.0, 0.0, 0.5, 0.0, 1.2, 12, 0.03, 3);
  auto const point = [&](int i) { return points[static_cast<std::size_t>(i)]; };
  wend::CircleFit<double> const hasty = wend::fit_circle<double, 2>(12, point);
  CHECK_FALSE(hasty.converged);
  CHECK(all_finite(hasty));
  CHECK(hasty.rms <= wend::kasa_circle<double>(12, point).rms);
  CHECK(wend::fit_circle<double>(12, point).rms <= hasty.rms);
}
