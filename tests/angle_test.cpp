// Turns, circular means and bearings. wrap itself is tested in published/wrap_test.cpp.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <initializer_list>
#include <limits>
#include <numbers>
#include <random>
#include <span>
#include <vector>

#include <doctest/doctest.h>

#include "wend/angle.hpp"

namespace {

constexpr double pi = std::numbers::pi;

template <typename S>
wend::CircularMean<S> mean(std::initializer_list<S> angles) {
  return wend::circular_mean(std::span<S const>(angles.begin(), angles.size()));
}

// 801 angles over [-100, 100], worked out by the compiler, as every bearing is.
constexpr int half_table = 400;
constexpr double angle_at(int i) { return 0.25 * (i - half_table); }

consteval auto bearings() {
  std::array<wend::Bearing, 2 * half_table + 1> table{};
  for (int i = 0; i <= 2 * half_table; ++i) {
    table[static_cast<std::size_t>(i)] = wend::bearing(angle_at(i));
  }
  return table;
}

consteval auto chords() {
  std::array<wend::Parameter, 2 * half_table + 1> table{};
  for (int i = 0; i <= 2 * half_table; ++i) {
    table[static_cast<std::size_t>(i)] = wend::chord(angle_at(i));
  }
  return table;
}

// In units of the last place of a float of this size, of 1e-7 at the least: a cosine that ought to be 0 is not held to
// digits that the angle itself does not have.
double ulps_off(float got, double expected) {
  double const size = std::max(std::abs(expected), 1.0e-7);
  double const ulp = std::ldexp(1.0, std::ilogb(size) - 23);
  return std::abs(static_cast<double>(got) - expected) / ulp;
}

}  // namespace

// Common practice, no source: a heading reversed is the same whichever way round one turns.
TEST_CASE_TEMPLATE("adding pi and subtracting pi give the same heading", S, float, double) {
  S const half_turn = std::numbers::pi_v<S>;
  std::mt19937 random(5);
  S worst{0};
  for (int i = 0; i < 100000; ++i) {
    S const heading = wend::wrap(static_cast<S>(random()) * S(1.0e-6));
    S const plus = wend::wrap(heading + half_turn);
    S const minus = wend::wrap(heading - half_turn);
    worst = std::max(worst, std::fabs(wend::turn(plus, minus)));
  }
  // Two sums rounded to half a unit of 2 pi each, two wraps, and the rounding of pi itself: six units of pi are ample.
  CHECK(worst <= S{12} * std::numeric_limits<S>::epsilon());
}

TEST_CASE_TEMPLATE("turn is the shortest way round, counter-clockwise positive", S, float, double) {
  S const tolerance = S{8} * std::numeric_limits<S>::epsilon();
  S const degree = std::numbers::pi_v<S> / S{180};
  CHECK(std::fabs(wend::turn(S{0}, S{90} * degree) - S{90} * degree) <= tolerance);
  CHECK(std::fabs(wend::turn(S{170} * degree, S{-170} * degree) - S{20} * degree) <= tolerance);
  CHECK(std::fabs(wend::turn(S{-170} * degree, S{170} * degree) + S{20} * degree) <= tolerance);
  CHECK(std::fabs(wend::turn(S{10} * degree, S{350} * degree) + S{20} * degree) <= tolerance);
  CHECK(std::fabs(wend::turn(S{725} * degree, S{0}) + S{5} * degree) <= S{8} * tolerance);
  CHECK(wend::turn(S{0}, std::numbers::pi_v<S>) == std::numbers::pi_v<S>);
  CHECK(wend::turn(std::numbers::pi_v<S>, S{0}) == std::numbers::pi_v<S>);
  CHECK(std::isnan(wend::turn(S{0}, std::numeric_limits<S>::quiet_NaN())));
  CHECK(std::isnan(wend::turn(std::numeric_limits<S>::infinity(), S{0})));
}

TEST_CASE_TEMPLATE("turn is antisymmetric but at pi, and no more than pi", S, float, double) {
  constexpr S half_turn = std::numbers::pi_v<S>;
  std::mt19937 random(6);
  int wrong = 0;
  for (int i = 0; i < 100000; ++i) {
    S const a = (static_cast<S>(random()) * S(0x1p-32F) - S(0.5F)) * S{40};
    S const b = i % 10 == 0 ? a + half_turn : (static_cast<S>(random()) * S(0x1p-32F) - S(0.5F)) * S{40};
    S const there = wend::turn(a, b);
    S const back = wend::turn(b, a);
    bool const in_range = there > -half_turn && there <= half_turn;
    bool const opposite = there == half_turn ? back == half_turn : back == -there;
    // The C library's way to the same: the angle of a unit vector seen from the other.
    S const expected = std::atan2(std::sin(b - a), std::cos(b - a));
    S const off = std::fabs(std::remainder(there - expected, S{2} * half_turn));
    // a - b is rounded to half a unit of 40, twice in all, and so are the wraps.
    wrong += in_range && opposite && off <= S{80} * std::numeric_limits<S>::epsilon() ? 0 : 1;
  }
  CHECK(wrong == 0);
}

TEST_CASE_TEMPLATE("circular_mean of nothing is direction 0 and length 0", S, float, double) {
  wend::CircularMean<S> const none = wend::circular_mean(std::span<S const>());
  CHECK(none.direction == S{0});
  CHECK(none.resultant_length == S{0});
}

TEST_CASE_TEMPLATE("circular_mean of angles that cancel has no direction, though the sine of a rounded pi is not 0", S,
                   float, double) {
  S const p = std::numbers::pi_v<S>;
  for (wend::CircularMean<S> const got :
       {mean<S>({S{0}, p}), mean<S>({S{0}, p / S{2}, p, -p / S{2}}), mean<S>({S{1}, S{1} + p}),
        mean<S>({S(0.1F), S(0.1F) + S{2} * p / S{3}, S(0.1F) - S{2} * p / S{3}})}) {
    CHECK(got.direction == S{0});
    CHECK(got.resultant_length == S{0});
  }
}

TEST_CASE_TEMPLATE("circular_mean of angles that agree has length 1 and no more", S, float, double) {
  for (int count = 1; count < 200; ++count) {
    std::vector<S> const same(static_cast<std::size_t>(count), S(0.1F) * static_cast<S>(count));
    wend::CircularMean<S> const got = wend::circular_mean(std::span<S const>(same));
    CHECK(got.resultant_length <= S{1});
    CHECK(got.resultant_length > S{1} - S{200} * std::numeric_limits<S>::epsilon());
    CHECK(std::fabs(wend::turn(got.direction, same.front())) < S{200} * std::numeric_limits<S>::epsilon());
  }
}

TEST_CASE_TEMPLATE("circular_mean is in (-pi, pi], and 359 and 1 degree have their mean at 0", S, float, double) {
  S const degree = std::numbers::pi_v<S> / S{180};
  CHECK(std::fabs(mean<S>({S{359} * degree, S{1} * degree}).direction) < S{8} * std::numeric_limits<S>::epsilon());
  CHECK(mean<S>({-std::numbers::pi_v<S>}).direction > S{0});
  CHECK(mean<S>({-std::numbers::pi_v<S>}).direction <= std::numbers::pi_v<S>);
}

TEST_CASE_TEMPLATE("circular_mean over a reading that is no number is no number", S, float, double) {
  wend::CircularMean<S> const got = mean<S>({S{0}, std::numeric_limits<S>::infinity()});
  CHECK(std::isnan(got.direction));
  CHECK(std::isnan(got.resultant_length));
}

TEST_CASE("bearing agrees with the C library's cosine and sine over [-100, 100]") {
  constexpr auto table = bearings();
  double worst = 0.0;
  for (int i = 0; i <= 2 * half_table; ++i) {
    wend::Bearing const& b = table[static_cast<std::size_t>(i)];
    worst = std::max({worst, ulps_off(b.x, std::cos(angle_at(i))), ulps_off(b.y, std::sin(angle_at(i)))});
  }
  INFO("worst: ", worst);
  CHECK(worst <= 0.51);  // a correctly rounded value is off by 0.5; the rest is the rounding of the series
}

TEST_CASE("bearing at the quarters is exact to what a rounded pi leaves") {
  constexpr std::array quarters{wend::bearing(0.0), wend::bearing(pi / 2), wend::bearing(pi), wend::bearing(-pi / 2),
                                wend::bearing(-pi)};
  constexpr std::array<float, 5> x{1, 0, -1, 0, -1};
  constexpr std::array<float, 5> y{0, 1, 0, -1, 0};
  for (std::size_t i = 0; i < 5; ++i) {
    CHECK(std::abs(quarters[i].x - x[i]) < 1.0e-14F);
    CHECK(std::abs(quarters[i].y - y[i]) < 1.0e-14F);
  }
  static_assert(wend::bearing(0.0).x == 1.0F && wend::bearing(0.0).y == 0.0F);
}

TEST_CASE("chord agrees with 2 sin(|angle| / 2) of the C library") {
  constexpr auto table = chords();
  double worst = 0.0;
  for (int i = 0; i <= 2 * half_table; ++i) {
    worst = std::max(worst, ulps_off(table[static_cast<std::size_t>(i)], 2.0 * std::sin(std::abs(angle_at(i)) / 2.0)));
  }
  CHECK(worst <= 0.51);
}

// Euclid: the chord is the distance between the ends of two unit vectors.
TEST_CASE("chord rises from 0 to 2 over [0, pi], and is as long as the way between two unit vectors") {
  static_assert(wend::chord(0.0) == 0.0F && wend::chord(pi) == 2.0F && wend::chord(-1.0) == wend::chord(1.0));
  constexpr std::array rising{wend::chord(0.0), wend::chord(0.2), wend::chord(0.3), wend::chord(1.0),
                              wend::chord(2.0), wend::chord(3.0), wend::chord(pi)};
  CHECK(std::is_sorted(rising.begin(), rising.end()));
  constexpr wend::Bearing one = wend::bearing(0.7);
  constexpr wend::Bearing other = wend::bearing(0.7 + 1.1);
  CHECK(std::abs(std::hypot(one.x - other.x, one.y - other.y) - wend::chord(1.1)) < 2.0e-7F);
}
