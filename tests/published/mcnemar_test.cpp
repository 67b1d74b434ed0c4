// McNemar's test against Agresti's example: approval of a prime minister by 1600 people, asked twice (Agresti 1990,
// Categorical Data Analysis, section 10.1; also the example of R's mcnemar.test): 794 approved twice, 150 the first
// time only, 86 the second time only, 570 never. From memory. The exact p-value is summed here in whole numbers.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/statistics.hpp"

namespace {

using namespace wend;

// A row of Pascal's triangle in the decimal system, exact: digits base 1e9, lowest first.
using Big = std::vector<std::uint64_t>;
constexpr std::uint64_t base = 1000000000U;

void add(Big& a, Big const& b) {
  a.resize(std::max(a.size(), b.size()) + 1, 0);
  std::uint64_t carry = 0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    std::uint64_t const sum = a[i] + (i < b.size() ? b[i] : 0U) + carry;
    a[i] = sum % base;
    carry = sum / base;
  }
  while (a.size() > 1 && a.back() == 0) {
    a.pop_back();
  }
}

long double value(Big const& a) {
  long double result = 0.0L;
  for (std::size_t i = a.size(); i-- > 0;) {
    result = result * static_cast<long double>(base) + static_cast<long double>(a[i]);
  }
  return result;
}

// Twice the probability of at most `fewer` heads in n tosses of a coin.
double exact(std::uint64_t fewer, std::uint64_t n) {
  std::vector<Big> row{{1}};
  for (std::uint64_t i = 0; i < n; ++i) {
    row.push_back({0});
    for (std::size_t k = row.size() - 1; k > 0; --k) {
      add(row[k], row[k - 1]);
    }
  }
  Big sum{0};
  for (std::uint64_t k = 0; k <= fewer; ++k) {
    add(sum, row[k]);
  }
  return static_cast<double>(std::ldexp(value(sum), 1 - static_cast<int>(n)));
}

}  // namespace

TEST_CASE("McNemar's exact test of Agresti's example gives the sum of binomial coefficients") {
  double const p = lab::mcnemar(150, 86);
  double const expected = exact(86, 236);
  CHECK(std::abs(p / expected - 1.0) < 1e-12);
  CHECK(lab::mcnemar(86, 150) == p);
  // Agresti's own statistic is (86 - 150)^2 / 236 = 17.36, with one degree of freedom: a p-value of 3.1e-5. The exact
  // one is of that size, and larger.
  double const asymptotic = std::erfc(std::sqrt(64.0 * 64.0 / 236.0 / 2.0));
  CHECK(asymptotic == doctest::Approx(3.1e-5).epsilon(0.01));
  CHECK(p > asymptotic);
  CHECK(p < 1.5 * asymptotic);
}

TEST_CASE("McNemar's exact test of few pairs is what can be counted on fingers") {
  CHECK(lab::mcnemar(0, 0) == 1.0);
  CHECK(lab::mcnemar(4, 4) == 1.0);
  CHECK(lab::mcnemar(1, 5) == doctest::Approx(2.0 * 7.0 / 64.0).epsilon(1e-14));
  CHECK(lab::mcnemar(0, 10) == doctest::Approx(2.0 / 1024.0).epsilon(1e-14));
  CHECK(lab::mcnemar(7, 6) == 1.0);
}

TEST_CASE("McNemar's exact test is the exact sum for all splits of up to sixty pairs") {
  double worst = 0.0;
  for (std::uint64_t n = 1; n <= 60; n += 7) {
    for (std::uint64_t fewer = 0; 2 * fewer < n; ++fewer) {
      double const expected = std::min(1.0, exact(fewer, n));
      worst = std::max(worst, std::abs(lab::mcnemar(fewer, n - fewer) / expected - 1.0));
    }
  }
  CHECK(worst < 1e-12);
}
