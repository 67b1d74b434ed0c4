// The generator of roam: Wichmann and Hill (1982), Algorithm AS 183: an efficient and portable pseudo-random number
// generator, Applied Statistics 31:188-190. Checked in whole numbers, and against Zeisler (1986), A remark on algorithm
// AS 183, Applied Statistics 35:89: the three generators are one multiplicative one with modulus 27817185604309 and
// multiplier 16555425264690 (both from memory; that they belong together is checked by their remainders).
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <vector>

#include <doctest/doctest.h>

#include "../chi_squared.hpp"

#include "wend/fields/roam.hpp"
#include "wend/lab/interval.hpp"

namespace {

__extension__ typedef unsigned __int128 Wide;

constexpr std::uint64_t modulus = 27817185604309U;
constexpr std::uint64_t multiplier = 16555425264690U;

template <typename S>
wend::WichmannHill<S> started(float seed) {
  wend::WichmannHill<S> draw;
  draw.start(S(seed));
  return draw;
}

std::vector<double> draws(float seed, int count) {
  auto generator = started<float>(seed);
  std::vector<double> all;
  for (int i = 0; i < count; ++i) {
    all.push_back(static_cast<double>(generator.next()));
  }
  return all;
}

// Two-sided 99 % band of the chi-squared test for equally likely bins.
bool evenly_filled(std::vector<double> const& counts) {
  double total = 0.0;
  for (double const c : counts) {
    total += c;
  }
  double const expected = total / static_cast<double>(counts.size());
  double sum = 0.0;
  for (double const c : counts) {
    sum += (c - expected) * (c - expected) / expected;
  }
  return chi_squared::within_99_percent(sum, static_cast<double>(counts.size() - 1));
}

}  // namespace

TEST_CASE("the states in float and in double are those of whole numbers, step by step") {
  auto in_float = started<float>(1234.0F);
  auto in_double = started<double>(1234.0F);
  std::int64_t x = std::lround(in_double.x), y = std::lround(in_double.y), z = std::lround(in_double.z);
  CHECK(x == 1234);
  int off = 0;
  double worst = 0.0;
  for (int i = 0; i < 300'000; ++i) {
    double const got = in_double.next();
    double const single = static_cast<double>(in_float.next());
    x = 171 * x % 30269;
    y = 172 * y % 30307;
    z = 170 * z % 30323;
    double const xs = static_cast<double>(x), ys = static_cast<double>(y), zs = static_cast<double>(z);
    double const expected = std::fmod(xs / 30269.0 + ys / 30307.0 + zs / 30323.0, 1.0);
    off += in_double.x == xs && in_double.y == ys && in_double.z == zs ? 0 : 1;
    off += static_cast<double>(in_float.x) == xs && static_cast<double>(in_float.y) == ys &&
                   static_cast<double>(in_float.z) == zs
               ? 0
               : 1;
    off += std::abs(std::remainder(got - expected, 1.0)) < 1.0e-15 ? 0 : 1;
    worst = std::max(worst, std::abs(std::remainder(single - expected, 1.0)));
  }
  CHECK(off == 0);
  CHECK(worst < 5.0e-7);
}

TEST_CASE("its numbers are those of Zeisler's single generator") {
  constexpr std::uint64_t m[3] = {30269U, 30307U, 30323U};
  static_assert(m[0] * m[1] * m[2] == modulus);
  static_assert(multiplier % m[0] == 171U && multiplier % m[1] == 172U && multiplier % m[2] == 170U);
  auto generator = started<double>(77.0F);
  // The fraction of the single generator's state: x / m0 + y / m1 + z / m2 modulo 1, over the common denominator.
  auto const over = [&](wend::WichmannHill<double> const& g) {
    Wide const sum = static_cast<Wide>(std::lround(g.x)) * (m[1] * m[2]) +
                     static_cast<Wide>(std::lround(g.y)) * (m[0] * m[2]) +
                     static_cast<Wide>(std::lround(g.z)) * (m[0] * m[1]);
    return static_cast<std::uint64_t>(sum % modulus);
  };
  std::uint64_t state = over(generator);
  int off = 0;
  for (int i = 0; i < 100'000; ++i) {
    double const got = generator.next();
    state = static_cast<std::uint64_t>(static_cast<Wide>(state) * multiplier % modulus);
    double const expected = static_cast<double>(state) / static_cast<double>(modulus);
    off += state == over(generator) ? 0 : 1;
    off += std::abs(std::remainder(got - expected, 1.0)) < 1.0e-15 ? 0 : 1;
  }
  CHECK(off == 0);
}

TEST_CASE("a hundred thousand draws fill a hundred bins, and pairs a grid, as evenly as chance does") {
  for (float const seed : {1.0F, 2.0F, 30268.0F}) {
    std::vector<double> const all = draws(seed, 100'000);
    std::vector<double> bins(100, 0.0);
    std::vector<double> pairs(400, 0.0);
    double mean = 0.0, square = 0.0, lag = 0.0;
    for (std::size_t i = 0; i < all.size(); ++i) {
      CHECK_UNARY(all[i] >= 0.0 && all[i] <= 1.0);
      bins[static_cast<std::size_t>(std::min(all[i] * 100.0, 99.0))] += 1.0;
      mean += all[i] / 1.0e5;
      square += (all[i] - 0.5) * (all[i] - 0.5) / 1.0e5;
      if (i % 2 == 1) {
        pairs[20 * static_cast<std::size_t>(std::min(all[i] * 20.0, 19.0)) +
              static_cast<std::size_t>(std::min(all[i - 1] * 20.0, 19.0))] += 1.0;
      }
      if (i > 0) {
        lag += (all[i] - 0.5) * (all[i - 1] - 0.5) * 12.0 / 1.0e5;
      }
    }
    CAPTURE(seed);
    CHECK(evenly_filled(bins));
    CHECK(evenly_filled(pairs));
    CHECK(std::abs(mean - 0.5) < 2.576 * std::sqrt(1.0 / 12.0 / 1.0e5));
    CHECK(std::abs(square - 1.0 / 12.0) < 2.576 * std::sqrt(1.0 / 180.0 / 1.0e5));  // variance of (u - 1/2)^2
    CHECK(std::abs(lag) < 2.576 / std::sqrt(1.0e5));
  }
}

TEST_CASE("series of different seeds are not correlated, not even where one seed is a small multiple of the other") {
  std::vector<double> const one = draws(100.0F, 100'000);
  for (float const seed : {101.0F, 200.0F, 300.0F, 50.0F, 30169.0F}) {
    std::vector<double> const other = draws(seed, 100'000);
    double sum = 0.0;
    for (std::size_t i = 0; i < one.size(); ++i) {
      sum += (one[i] - 0.5) * (other[i] - 0.5) * 12.0 / 1.0e5;
    }
    CAPTURE(seed);
    CHECK(std::abs(sum) < 3.29 / std::sqrt(1.0e5));  // 99.9 %, for five of them
  }
}

TEST_CASE("seeds out of range and states from elsewhere are brought into range") {
  CHECK(started<float>(0.0F).x == 1.0F);
  CHECK(started<float>(-5.0F).x == 1.0F);
  CHECK(started<float>(1.0e9F).x == 30268.0F);
  for (float const odd : {-1.0e6F, 0.3F, 1.0e6F, 30269.0F, 15000.5F}) {
    wend::WichmannHill<float> generator{odd, odd, odd};
    for (int i = 0; i < 1000; ++i) {
      generator.start(3.0F);
      float const u = generator.next();
      CHECK_UNARY(u >= 0.0F && u <= 1.0F);
      CHECK_UNARY(generator.x >= 1.0F && generator.x <= 30268.0F);
    }
  }
}

TEST_CASE("a generator of which nothing is known stays within its range") {
  using wend::lab::Interval;
  wend::WichmannHill<Interval> generator{Interval::whole(), Interval::whole(), Interval::whole()};
  for (int i = 0; i < 20; ++i) {
    generator.start(Interval(3.0F));
    Interval const u = generator.next();
    CHECK(u.low() >= 0.0);
    CHECK(u.high() <= 1.0);
    CHECK(generator.x.low() >= 1.0);
    CHECK(generator.z.high() <= 30322.0);
  }
}
