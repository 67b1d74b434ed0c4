// Statistics against what defines them: coverage by exact sums, order statistics, and rows counted by hand.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <limits>
#include <stdexcept>
#include <vector>

#include <doctest/doctest.h>

#include "../rows.hpp"
#include "wend/lab/statistics.hpp"
#include "wend/lab/tally.hpp"

namespace {

using namespace wend;
using lab::Ending;

// P(X <= k) of a binomial distribution, as a plain sum; by logarithms, since the first terms may be too small for any
// number.
double binomial_up_to(std::uint64_t k, std::uint64_t n, long double p) {
  auto const ln_factorial = [](std::uint64_t m) { return std::lgamma(static_cast<long double>(m) + 1.0L); };
  long double sum = 0.0L;
  for (std::uint64_t i = 0; i <= k; ++i) {
    sum += std::exp(ln_factorial(n) - ln_factorial(i) - ln_factorial(n - i) +
                    static_cast<long double>(i) * std::log(p) + static_cast<long double>(n - i) * std::log1p(-p));
  }
  return static_cast<double>(sum);
}

}  // namespace

// What defines the bound: at the upper one, so few would be seen with probability 2.5 % only; at the lower one, so
// many.
TEST_CASE("at Clopper and Pearson's bounds the tails of the binomial distribution are what they should be") {
  for (std::uint64_t const n : {5U, 40U, 300U, 2000U}) {
    for (std::uint64_t const k : {std::uint64_t{0}, std::uint64_t{1}, n / 3, n / 2, n - 1, n}) {
      for (double const confidence : {0.8, 0.95, 0.999}) {
        CAPTURE(n);
        CAPTURE(k);
        double const tail = 0.5 * (1.0 - confidence);
        lab::Bounds const b = lab::clopper_pearson(k, n, confidence);
        if (k < n) {
          CHECK(binomial_up_to(k, n, static_cast<long double>(b.high)) == doctest::Approx(tail).epsilon(1e-9));
          double const upper = lab::upper_bound_on_probability(k, n, confidence);
          CHECK(binomial_up_to(k, n, static_cast<long double>(upper)) ==
                doctest::Approx(1.0 - confidence).epsilon(1e-9));
        } else {
          CHECK(b.high == 1.0);
        }
        if (k > 0) {
          CHECK(binomial_up_to(n - k, n, 1.0L - static_cast<long double>(b.low)) ==
                doctest::Approx(tail).epsilon(1e-9));
        } else {
          CHECK(b.low == 0.0);
        }
      }
    }
  }
}

// Hanley and Lippman-Hand (1983): after no event in n, 3 / n is the upper bound at 95 % (the rule of three).
TEST_CASE("after no failure the upper bound is about three over the number of runs") {
  for (std::uint64_t const n : {100U, 1000U, 100000U}) {
    CHECK(lab::upper_bound_on_probability(0, n) * static_cast<double>(n) == doctest::Approx(3.0).epsilon(0.02));
  }
  // Exactly 1 - 0.05^(1/n).
  CHECK(lab::upper_bound_on_probability(0, 1000) ==
        doctest::Approx(-std::expm1(std::log(0.05) / 1000.0)).epsilon(1e-12));
}

// Wilson's bounds are the roots of (p' - p)^2 = z^2 p (1 - p) / n, which is how he found them.
TEST_CASE("Wilson's bounds are where the normal test just does not reject") {
  double const z = 1.959963984540054;  // the 97.5 % point of the standard normal, as in any table of it
  for (std::uint64_t const k : {0U, 3U, 50U, 120U}) {
    lab::Bounds const b = lab::wilson(k, 120);
    double const share = static_cast<double>(k) / 120.0;
    for (double const p : {b.low, b.high}) {
      CHECK((share - p) * (share - p) == doctest::Approx(z * z * p * (1.0 - p) / 120.0).epsilon(1e-9));
    }
  }
}

TEST_CASE("counts that cannot be are refused") {
  CHECK_THROWS_AS(static_cast<void>(lab::clopper_pearson(3, 2)), std::invalid_argument);
  CHECK_THROWS_AS(static_cast<void>(lab::wilson(0, 0)), std::invalid_argument);
  CHECK_THROWS_AS(static_cast<void>(lab::upper_bound_on_probability(0, 10, 1.0)), std::invalid_argument);
}

// Hyndman and Fan (1996), definition 7: of 1, 2, 4, 8 the quartiles lie a quarter of the way between order statistics.
TEST_CASE("quantiles are linear between order statistics, and take infinite values") {
  std::vector<double> const four{1.0, 2.0, 4.0, 8.0};
  CHECK(lab::quantile(four, 0.0) == 1.0);
  CHECK(lab::quantile(four, 0.25) == 1.75);
  CHECK(lab::quantile(four, 0.5) == 3.0);
  CHECK(lab::quantile(four, 0.75) == 5.0);
  CHECK(lab::quantile(four, 1.0) == 8.0);
  CHECK(lab::quantile({7.0}, 0.3) == 7.0);
  CHECK(std::isnan(lab::quantile({}, 0.5)));
  double const infinite = std::numeric_limits<double>::infinity();
  CHECK(lab::quantile({1.0, infinite, infinite}, 0.5) == infinite);
  CHECK(lab::quantile({1.0, 2.0, infinite}, 0.5) == 2.0);
  CHECK(lab::quantile({1.0, infinite}, 0.5) == infinite);
}

TEST_CASE("a tally counts endings, and takes times of arrivals only") {
  std::vector<lab::RunRow> const rows{row(0, Ending::arrived, 10.0, 0.5), row(1, Ending::time_out, 99.0, 0.2),
                                      row(2, Ending::contact, 3.0, -0.01), row(3, Ending::arrived, 20.0, 0.4)};
  lab::Tally const t = lab::tally(rows);
  CHECK(t.runs == 4);
  CHECK(t.arrived == 2);
  CHECK(t.contacts == 1);
  CHECK(t.time_outs == 1);
  CHECK(t.time.least == 10.0);
  CHECK(t.time.median == 15.0);
  CHECK(t.time.most == 20.0);
  CHECK(t.clearance.least == -0.01);
  CHECK(t.clearance.most == 0.5);
  CHECK(lab::worst_runs(rows, 3) == std::vector<std::size_t>{2, 1, 3});
  CHECK(lab::worst_runs(rows, 9).size() == 4);
}

TEST_CASE("a comparison pairs runs, and refuses pairs that are none") {
  std::vector<lab::RunRow> const a{row(0, Ending::arrived, 10.0, 0.5), row(1, Ending::arrived, 12.0, 0.3),
                                   row(2, Ending::contact, 3.0, -0.1), row(3, Ending::time_out, 99.0, 0.2)};
  std::vector<lab::RunRow> b{row(0, Ending::arrived, 13.0, 0.6), row(1, Ending::time_out, 99.0, 0.3),
                             row(2, Ending::arrived, 15.0, 0.1), row(3, Ending::time_out, 99.0, 0.4)};
  lab::Comparison const c = lab::compare(a, b);
  CHECK(c.both == 1);
  CHECK(c.only_first == 1);
  CHECK(c.only_second == 1);
  CHECK(c.neither == 1);
  CHECK(c.p_value == 1.0);
  CHECK(c.time_difference.median == 3.0);
  CHECK(c.clearance_difference.most == doctest::Approx(0.2));
  b[2].run = 7;
  CHECK_THROWS_AS(static_cast<void>(lab::compare(a, b)), std::invalid_argument);
  b.pop_back();
  CHECK_THROWS_AS(static_cast<void>(lab::compare(a, b)), std::invalid_argument);
}
