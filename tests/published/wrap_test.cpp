// wrap against the C library: std::atan2 of std::sin and std::cos, and std::remainder (C++ standard, [c.math]; its
// meaning is that of ISO C and IEEE 754-2019, 5.3.1).
#include <algorithm>
#include <cmath>
#include <concepts>
#include <cstdint>
#include <initializer_list>
#include <limits>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "wend/angle.hpp"

namespace {

using Wide = long double;
constexpr Wide pi_wide = std::numbers::pi_v<Wide>;

// How far apart two angles are on the circle. One whole turn at most lies between, so the rounding of the wide pi
// costs one wide rounding and no more.
Wide apart(Wide a, Wide b) { return std::fabs(std::remainder(a - b, 2 * pi_wide)); }

// One unit in the last place of pi: 2.4e-7 in single, 4.4e-16 in double precision.
template <std::floating_point S>
constexpr Wide ulp_of_pi = Wide{2} * static_cast<Wide>(std::numeric_limits<S>::epsilon());

// In units of the last place of pi. The result is within [-pi, pi], so rounding it costs 1/2; wherever the product of
// whole turns and the low part of a turn sends it over an edge, one whole turn is taken off without its low part:
// 0.73 (single) or 0.55 (double) more. What is left below is rounding of that product: up to 1e6 rad a few hundredths.
constexpr Wide exact_to = 1.3L;

struct Worst {
  Wide by_atan2 = 0;      // in ulps of pi
  Wide by_remainder = 0;  // in shares of what the remainder's own error allows
  int out_of_range = 0;
  int values = 0;
};

template <std::floating_point S>
void look_at(S x, Worst& worst) {
  S const result = wend::wrap(x);
  Wide const got = static_cast<Wide>(result);
  Wide const exact = static_cast<Wide>(x);  // the very value that was given, not the number it was rounded from
  Wide const by_atan2 = std::atan2(std::sin(exact), std::cos(exact));
  worst.by_atan2 = std::max(worst.by_atan2, apart(got, by_atan2) / ulp_of_pi<S>);
  // The wide 2 pi is rounded too, by up to half a unit of its last place, and that counts once for every turn.
  Wide const by_remainder = std::remainder(exact, 2 * pi_wide);
  Wide const own_error = std::fabs(exact / (2 * pi_wide)) * Wide{2} * std::numeric_limits<Wide>::epsilon();
  worst.by_remainder = std::max(worst.by_remainder, apart(got, by_remainder) / (exact_to * ulp_of_pi<S> + own_error));
  worst.out_of_range += result > -std::numbers::pi_v<S> && result <= std::numbers::pi_v<S> ? 0 : 1;
  ++worst.values;
}

template <std::floating_point S>
void look_around(S x, Worst& worst) {
  S below = x;
  S above = x;
  for (int step = 0; step < 3; ++step) {
    look_at(below, worst);
    look_at(above, worst);
    below = std::nextafter(below, -std::numeric_limits<S>::max());
    above = std::nextafter(above, std::numeric_limits<S>::max());
  }
}

// A million values: 1e-30 to 1e6 rad evenly in the logarithm, -1e6 to 1e6 and -10 to 10 evenly, and every whole and
// half multiple of pi up to 5e4 with two neighbours on either side.
template <std::floating_point S>
Worst worst_of_a_million() {
  Worst worst;
  std::mt19937_64 random(7);
  auto const even = [&random] { return static_cast<double>(random() >> 11) * 0x1p-53; };
  for (int i = 0; i < 150000; ++i) {
    double const size = std::pow(10.0, -30.0 + 36.0 * even());
    look_at(static_cast<S>(random() % 2 == 0 ? size : -size), worst);
    look_at(static_cast<S>(2.0e6 * even() - 1.0e6), worst);
    look_at(static_cast<S>(20.0 * even() - 10.0), worst);
  }
  for (int k = -50000; k <= 50000; ++k) {
    look_around(static_cast<S>(Wide{0.5L} * k * pi_wide), worst);
  }
  return worst;
}

}  // namespace

TEST_CASE_TEMPLATE("wrap agrees with the C library on a million angles up to 1e6", S, float, double) {
  Worst const worst = worst_of_a_million<S>();
  INFO("worst error in ulps of pi: ", static_cast<double>(worst.by_atan2));
  CHECK(worst.values >= 1000000);
  CHECK(worst.by_atan2 <= exact_to);
  CHECK(worst.by_remainder <= 1);
  CHECK(worst.out_of_range == 0);
  // The check can tell: the remainder by the rounded 2 pi, in the precision of S itself, is off by the low part of a
  // turn for each turn, here 159154 turns.
  constexpr Wide far = 999999;  // exact in S too
  S const plain = std::remainder(static_cast<S>(far), S{2} * std::numbers::pi_v<S>);
  CHECK(apart(static_cast<Wide>(plain), std::atan2(std::sin(far), std::cos(far))) > 1000 * ulp_of_pi<S>);
}

TEST_CASE_TEMPLATE("wrap leaves alone what is in range, and pi is in range and -pi is not", S, float, double) {
  constexpr S pi = std::numbers::pi_v<S>;
  CHECK(wend::wrap(pi) == pi);
  CHECK(wend::wrap(-pi) == pi);
  S const inside = std::nextafter(pi, S{0});
  CHECK(wend::wrap(inside) == inside);
  CHECK(wend::wrap(-inside) == -inside);
  S const over = std::nextafter(std::nextafter(pi, S{4}), S{4});  // two steps: pi itself is rounded by up to half a one
  CHECK(wend::wrap(over) < S{0});
  CHECK(wend::wrap(-over) > S{0});
  std::mt19937_64 random(3);
  int moved = 0;
  for (int i = 0; i < 100000; ++i) {
    S const x = static_cast<S>(6.28 * (static_cast<double>(random() >> 11) * 0x1p-53 - 0.5));
    moved += wend::wrap(x) != x ? 1 : 0;
  }
  CHECK(moved == 0);
  for (S const x : {S{0}, std::numeric_limits<S>::denorm_min(), std::numeric_limits<S>::min(), S(1.0e-30)}) {
    CHECK(wend::wrap(x) == x);
    CHECK(wend::wrap(-x) == -x);
  }
}

TEST_CASE_TEMPLATE("wrap of a huge angle stays in range", S, float, double) {
  int out_of_range = 0;
  for (S x = S{1}; wend::finite(x); x = x * S(1.37F)) {
    for (S const angle : {wend::wrap(x), wend::wrap(-x)}) {
      out_of_range += angle > -std::numbers::pi_v<S> && angle <= std::numbers::pi_v<S> ? 0 : 1;
    }
  }
  CHECK(out_of_range == 0);
  S const most = wend::wrap(std::numeric_limits<S>::max());
  CHECK(std::fabs(most) <= std::numbers::pi_v<S>);
}

TEST_CASE_TEMPLATE("wrap of what is no angle is not a number", S, float, double) {
  using Limits = std::numeric_limits<S>;
  for (S const x : {Limits::quiet_NaN(), Limits::infinity(), -Limits::infinity()}) {
    CHECK(std::isnan(wend::wrap(x)));
  }
}
