// Draws against the distributions they claim: 99 % bands, and the test of Kolmogorov and Smirnov.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/random.hpp"

namespace {

using wend::lab::Draws;

constexpr int count = 100000;
constexpr double band99 = 2.5758293;  // the 99.5 % point of the standard normal, as in any table of it
constexpr double kolmogorov99 = 1.6276;  // the 99 % point of the Kolmogorov distribution (Smirnov 1948, table)

struct Moments {
  double mean = 0.0;
  double variance = 0.0;
};

Moments moments(std::vector<double> const& values) {
  Moments m;
  double const n = static_cast<double>(values.size());
  for (double const v : values) {
    m.mean += v / n;
  }
  for (double const v : values) {
    m.variance += (v - m.mean) * (v - m.mean) / (n - 1.0);
  }
  return m;
}

// The largest distance between the share of values up to x and a distribution at x, times the root of their number.
template <typename Distribution>
double kolmogorov(std::vector<double> values, Distribution const& distribution) {
  std::sort(values.begin(), values.end());
  double const n = static_cast<double>(values.size());
  double worst = 0.0;
  for (std::size_t i = 0; i < values.size(); ++i) {
    double const at = distribution(values[i]);
    worst = std::max({worst, std::abs(at - static_cast<double>(i) / n), std::abs(at - static_cast<double>(i + 1) / n)});
  }
  return worst * std::sqrt(n);
}

double normal_cdf(double x) { return 0.5 * std::erfc(-x / std::sqrt(2.0)); }

// Along one part of the address at a time: what is drawn must not depend on which part counts.
template <typename Draw>
std::vector<double> along(int part, Draw const& draw) {
  std::vector<double> values;
  for (std::uint32_t i = 0; i < count; ++i) {
    Draws const draws(part == 3 ? i : 11U, part == 2 ? i : 7U);
    values.push_back(draw(draws, Draws::Address{3, part == 0 ? i : 5U, part == 1 ? i : 9U}));
  }
  return values;
}

double correlation(std::vector<double> const& a, std::vector<double> const& b) {
  Moments const of_a = moments(a);
  Moments const of_b = moments(b);
  double sum = 0.0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    sum += (a[i] - of_a.mean) * (b[i] - of_b.mean);
  }
  return sum / static_cast<double>(a.size()) / std::sqrt(of_a.variance * of_b.variance);
}

}  // namespace

// Moments of the uniform distribution: mean 1/2, variance 1/12, fourth central moment 1/80.
TEST_CASE("uniform draws are even on (0, 1), whichever part of the address counts") {
  for (int part = 0; part < 4; ++part) {
    CAPTURE(part);
    auto const values = along(part, [](Draws const& d, Draws::Address a) { return d.uniform(a); });
    Moments const m = moments(values);
    CHECK(std::abs(m.mean - 0.5) < band99 * std::sqrt(1.0 / 12.0 / count));
    CHECK(std::abs(m.variance - 1.0 / 12.0) < band99 * std::sqrt((1.0 / 80.0 - 1.0 / 144.0) / count));
    CHECK(kolmogorov(values, [](double x) { return x; }) < kolmogorov99);
    CHECK(*std::min_element(values.begin(), values.end()) > 0.0);
    CHECK(*std::max_element(values.begin(), values.end()) < 1.0);
  }
}

// The variance of a sample variance of normal values is 2 / (n - 1).
TEST_CASE("normal draws are normal, whichever part of the address counts") {
  for (int part = 0; part < 4; ++part) {
    CAPTURE(part);
    auto const values = along(part, [](Draws const& d, Draws::Address a) { return d.normal(a); });
    Moments const m = moments(values);
    CHECK(std::abs(m.mean) < band99 / std::sqrt(count));
    CHECK(std::abs(m.variance - 1.0) < band99 * std::sqrt(2.0 / (count - 1)));
    CHECK(kolmogorov(values, normal_cdf) < kolmogorov99);
    // The check can tell: a tenth too wide does not pass.
    CHECK(kolmogorov(values, [](double x) { return normal_cdf(1.1 * x); }) > kolmogorov99);
  }
}

TEST_CASE("draws between two bounds stay between them") {
  Draws const draws(1, 2);
  double low = 5.0;
  double high = -3.0;
  for (std::uint32_t i = 0; i < 10000; ++i) {
    double const x = draws.between(-3.0, 5.0, {0, i});
    low = std::min(low, x);
    high = std::max(high, x);
  }
  CHECK(low > -3.0);
  CHECK(low < -2.99);
  CHECK(high < 5.0);
  CHECK(high > 4.99);
}

TEST_CASE("a draw depends on its address and not on what was drawn before") {
  Draws const draws(42, 3);
  std::vector<double> forward;
  for (std::uint32_t i = 0; i < 1000; ++i) {
    forward.push_back(draws.normal({1, i, i % 7}));
  }
  Draws const others(42, 3);
  int different = 0;
  for (std::uint32_t i = 1000; i-- > 0;) {
    static_cast<void>(others.uniform({2, i}));
    different += others.normal({1, i, i % 7}) != forward[i] ? 1 : 0;
  }
  CHECK(different == 0);
}

// The correlation of independent values is normal with deviation 1 / sqrt(n), for large n (Fisher 1915).
TEST_CASE("draws with neighbouring addresses, runs and seeds are not correlated") {
  std::vector<double> base;
  std::array<std::vector<double>, 7> neighbours;
  for (std::uint32_t i = 0; i < count; ++i) {
    base.push_back(Draws(9, 4).uniform({1, i, 2}));
    neighbours[0].push_back(Draws(9, 4).uniform({1, i + 1, 2}));
    neighbours[1].push_back(Draws(9, 4).uniform({1, i, 3}));
    neighbours[2].push_back(Draws(9, 4).uniform({2, i, 2}));
    neighbours[3].push_back(Draws(9, 5).uniform({1, i, 2}));
    neighbours[4].push_back(Draws(10, 4).uniform({1, i, 2}));
    neighbours[5].push_back(Draws(9, 4).normal({1, i, 2}));
    neighbours[6].push_back(std::abs(Draws(9, 4).normal({1, i, 2})));
  }
  for (std::size_t i = 0; i < neighbours.size(); ++i) {
    CAPTURE(i);
    CHECK(std::abs(correlation(base, neighbours[i])) < band99 / std::sqrt(count));
  }
}

TEST_CASE("seeds and runs count in all their bits") {
  std::vector<double> values;
  for (std::uint32_t bit = 0; bit < 64; ++bit) {
    values.push_back(Draws(std::uint64_t{1} << bit, 0).uniform({0}));
  }
  for (std::uint32_t bit = 0; bit < 48; ++bit) {
    values.push_back(Draws(0, std::uint64_t{1} << bit).uniform({0}));
  }
  std::sort(values.begin(), values.end());
  // Of 112 words of 32 bits two are alike by chance once in 700000 times.
  CHECK(std::adjacent_find(values.begin(), values.end()) == values.end());
}
