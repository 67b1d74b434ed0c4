// Mean directions against the R package circular 0.4-95 (R 4.2.2; `mean.circular`, `rho.circular`).
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <fstream>
#include <initializer_list>
#include <limits>
#include <numbers>
#include <span>
#include <vector>

#include <doctest/doctest.h>

#include "wend/angle.hpp"

namespace {

// The values were computed in double precision and are printed to 1e-12 and better. In single precision each angle,
// cosine and sine is rounded to 6e-8 of itself; 310 of them and their sum stay within 2e-6.
template <typename S>
constexpr double tolerance = std::numeric_limits<S>::digits > 24 ? 1.0e-9 : 2.0e-6;

template <typename S>
double off(S x, double expected) {
  return std::abs(static_cast<double>(x) - expected);
}

template <typename S>
wend::CircularMean<S> mean(std::vector<double> const& angles) {
  std::vector<S> const same(angles.begin(), angles.end());
  return wend::circular_mean(std::span<S const>(same));
}

std::vector<double> degrees(std::initializer_list<double> list) {
  std::vector<double> result;
  for (double const angle : list) {
    result.push_back(angle * std::numbers::pi / 180.0);
  }
  return result;
}

}  // namespace

// Homing directions of ten displaced turtles, degrees: Luschi et al. (2001), Behav. Ecol. Sociobiol. 50:528-534.
TEST_CASE_TEMPLATE("circular_mean agrees with R on the homing directions of turtles", S, float, double) {
  wend::CircularMean<S> const got = mean<S>(degrees({40, 303, 326, 285, 296, 314, 20, 308, 299, 296}));
  CHECK(off(got.direction, -42.7646804908 * std::numbers::pi / 180.0) < tolerance<S>);
  CHECK(off(got.resultant_length, 0.818649629674) < tolerance<S>);
}

// 310 wind directions, radians: Agostinelli (2007), Computational Statistics and Data Analysis 51(12); data set `wind`
// of the package. The file holds them rounded to seven digits, and R was given all sixteen: its mean direction differs
// from that of the file by 5.8e-9 rad, its resultant length by 9e-10. So R's values are held to what the rounding can
// do (the direction's standard deviation under it is 1.4e-8 rad; 1e-7 is seven of them), and the tight check is against
// sums over the file itself, exactly rounded (`math.fsum` of Python 3.11, apart from this project).
TEST_CASE_TEMPLATE("circular_mean agrees with R on wind directions", S, float, double) {
  std::ifstream file(WEND_TEST_DATA "/wind.csv");
  std::vector<double> angles;
  for (double angle = 0.0; file >> angle;) {
    angles.push_back(angle);
  }
  REQUIRE(angles.size() == 310);
  wend::CircularMean<S> const got = mean<S>(angles);
  CHECK(off(got.direction, 0.29216883138185673) < tolerance<S>);
  CHECK(off(got.resultant_length, 0.655724701340962) < tolerance<S>);
  double const rounded_data = std::max(tolerance<S>, 1.0e-7);
  CHECK(off(got.direction, 0.292168825578) < rounded_data);
  CHECK(off(got.resultant_length, 0.655724700426) < rounded_data);
}

// Mardia and Jupp (2000), 2.2: turning the data turns the mean and leaves the resultant length.
TEST_CASE("turning all the data turns the mean direction with it") {
  std::vector<double> angles = degrees({40, 303, 326, 285, 296, 314, 20, 308, 299, 296});
  wend::CircularMean<double> const before = mean<double>(angles);
  for (double const by : {0.5, 2.0, -3.0, 100.0}) {
    std::vector<double> turned;
    for (double const angle : angles) {
      turned.push_back(angle + by);
    }
    wend::CircularMean<double> const after = mean<double>(turned);
    CHECK(std::abs(wend::turn(after.direction, before.direction + by)) < 1.0e-13);
    CHECK(std::abs(after.resultant_length - before.resultant_length) < 1.0e-13);
  }
}
