// Circle fits against Gander, Golub and Strebel (1994), Least-squares fitting of circles and ellipses, BIT 34:558-578.
#include <array>
#include <cmath>
#include <cstddef>
#include <limits>

#include <doctest/doctest.h>

#include "wend/sensing/circle_fit.hpp"

namespace {

// The six points of the paper's first example.
template <typename S>
wend::Vec2<S> gander_point(int i) {
  constexpr std::array<std::array<S, 2>, 6> points{{{1, 7}, {2, 6}, {5, 8}, {7, 7}, {9, 5}, {3, 7}}};
  auto const& p = points[static_cast<std::size_t>(i)];
  return {p[0], p[1]};
}

// True when no neighbour of the fitted centre, a step off in any of 16 directions, has a lesser sum of squared
// distances: the fit's own claim, checked by the definition.
bool is_local_minimum(wend::Disc<double> const& disc, double step) {
  auto const cost = [](double x, double y) {
    double mean = 0.0;
    for (int i = 0; i < 6; ++i) {
      mean += std::hypot(gander_point<double>(i).x() - x, gander_point<double>(i).y() - y) / 6.0;
    }
    double sum = 0.0;
    for (int i = 0; i < 6; ++i) {
      double const d = std::hypot(gander_point<double>(i).x() - x, gander_point<double>(i).y() - y) - mean;
      sum += d * d;
    }
    return sum;
  };
  double const here = cost(disc.centre.x(), disc.centre.y());
  for (int k = 0; k < 16; ++k) {
    double const a = k * 3.14159265358979 / 8.0;
    if (cost(disc.centre.x() + step * std::cos(a), disc.centre.y() + step * std::sin(a)) <= here) {
      return false;
    }
  }
  return true;
}

}  // namespace

TEST_CASE_TEMPLATE("fit_circle finds the geometric circle of Gander, Golub and Strebel", S, float, double) {
  wend::CircleFit<S> const fit = wend::fit_circle<S>(6, gander_point<S>);
  CHECK(fit.converged);
  // The paper prints (4.7398, 2.9835), 4.7142 (from memory); the further digits are those of a Gauss-Newton iteration
  // written apart from this project.
  double const tolerance = std::numeric_limits<S>::epsilon() < S(1.0e-10F) ? 1.0e-9 : 2.0e-5;
  CHECK(std::abs(static_cast<double>(fit.disc.centre.x()) - 4.739782410906) < tolerance);
  CHECK(std::abs(static_cast<double>(fit.disc.centre.y()) - 2.983532699292) < tolerance);
  CHECK(std::abs(static_cast<double>(fit.disc.radius) - 4.714226037792) < tolerance);
}

TEST_CASE("the geometric circle is a minimum of the sum of squared distances") {
  wend::CircleFit<double> const fit = wend::fit_circle<double>(6, gander_point<double>);
  CHECK(is_local_minimum(fit.disc, 1.0e-4));
  CHECK_FALSE(is_local_minimum(wend::kasa_circle<double>(6, gander_point<double>).disc, 1.0e-4));
}

TEST_CASE_TEMPLATE("kasa_circle finds the plain algebraic circle of the same points", S, float, double) {
  wend::CircleFit<S> const fit = wend::kasa_circle<S>(6, gander_point<S>);
  CHECK(fit.converged);
  // Kasa (1976), IEEE Trans. Instrum. Meas. 25:8-14; values computed apart from this project.
  double const tolerance = std::numeric_limits<S>::epsilon() < S(1.0e-10F) ? 1.0e-11 : 2.0e-5;
  CHECK(std::abs(static_cast<double>(fit.disc.centre.x()) - 4.742331288344) < tolerance);
  CHECK(std::abs(static_cast<double>(fit.disc.centre.y()) - 3.835122699386) < tolerance);
  CHECK(std::abs(static_cast<double>(fit.disc.radius) - 4.108761522345) < tolerance);
}
