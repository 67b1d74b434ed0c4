// wend/lab/statistics.hpp - how sure one may be after so many runs: bounds on a probability, quantiles, pairs.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <stdexcept>
#include <string>
#include <vector>

namespace wend::inline v0::lab {

namespace detail {

// ln of the gamma function, x > 0: Stirling's series from 12 on, by the recurrence below. std::lgamma writes to a
// global variable, which threads would share.
[[nodiscard]] inline double log_gamma(double x) {
  double below = 1.0;
  while (x < 12.0) {
    below *= x;
    x += 1.0;
  }
  double const z = 1.0 / (x * x);
  double const series = (1.0 / 12.0 - z * (1.0 / 360.0 - z * (1.0 / 1260.0 - z * (1.0 / 1680.0 - z / 1188.0)))) / x;
  return (x - 0.5) * std::log(x) - x + 0.5 * std::log(2.0 * std::numbers::pi) + series - std::log(below);
}

// The continued fraction of the incomplete beta function (Abramowitz and Stegun 1964, 26.5.8), by Lentz's method. Quick
// for x under (a + 1) / (a + b + 2).
[[nodiscard]] inline double beta_fraction(double x, double a, double b) {
  constexpr double tiny = 1e-300;
  constexpr int most = 100000;
  auto const kept = [](double v) { return std::abs(v) < tiny ? tiny : v; };
  double c = 1.0;
  double d = 1.0 / kept(1.0 - (a + b) * x / (a + 1.0));
  double result = d;
  for (int m = 1; m < most; ++m) {
    double const even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
    d = 1.0 / kept(1.0 + even * d);
    c = kept(1.0 + even / c);
    result *= d * c;
    double const odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
    d = 1.0 / kept(1.0 + odd * d);
    c = kept(1.0 + odd / c);
    result *= d * c;
    if (std::abs(d * c - 1.0) < 1e-16) {
      break;
    }
  }
  return result;
}

inline void expect_counts(char const* who, std::uint64_t count, std::uint64_t runs, double confidence) {
  if (runs == 0 || count > runs || !(confidence > 0.0 && confidence < 1.0)) {
    throw std::invalid_argument(std::string("wend: ") + who +
                                ": expected a count of at least one run, and a confidence between 0 and 1");
  }
}

}  // namespace detail

/// The regularised incomplete beta function I_x(a, b), a and b over 0, x in [0, 1]: increasing in x from 0 to 1.
[[nodiscard]] inline double incomplete_beta(double x, double a, double b) {
  if (!(x > 0.0)) {
    return 0.0;
  }
  if (!(x < 1.0)) {
    return 1.0;
  }
  double const front = std::exp(detail::log_gamma(a + b) - detail::log_gamma(a) - detail::log_gamma(b) +
                                a * std::log(x) + b * std::log1p(-x));
  return x < (a + 1.0) / (a + b + 2.0) ? front * detail::beta_fraction(x, a, b) / a
                                       : 1.0 - front * detail::beta_fraction(1.0 - x, b, a) / b;
}

/// The x at which I_x(a, b) is `share`: by halving, to the last bit that counts.
[[nodiscard]] inline double beta_quantile(double share, double a, double b) {
  double low = 0.0;
  double high = 1.0;
  for (int i = 0; i < 1100 && low < high; ++i) {  // the smallest number over 0 is reached by 1074 halvings
    double const middle = 0.5 * (low + high);
    if (middle <= low || middle >= high) {
      break;
    }
    (incomplete_beta(middle, a, b) < share ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

/// The z that a standard normal number is below with probability `share`, in (0, 1).
[[nodiscard]] inline double normal_quantile(double share) {
  double low = -40.0;
  double high = 40.0;
  for (int i = 0; i < 200; ++i) {
    double const middle = 0.5 * (low + high);
    (0.5 * std::erfc(-middle * std::numbers::sqrt2 / 2.0) < share ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

/// Two bounds on a probability.
struct Bounds {
  double low = 0.0;  ///< in [0, 1]
  double high = 1.0;  ///< in [0, 1], not under `low`
};

/// Clopper and Pearson (1934): the probability behind `count` of `runs` lies within with at least this confidence,
/// whatever it is. Throws std::invalid_argument for counts that cannot be.
[[nodiscard]] inline Bounds clopper_pearson(std::uint64_t count, std::uint64_t runs, double confidence = 0.95) {
  detail::expect_counts("clopper_pearson", count, runs, confidence);
  double const k = static_cast<double>(count);
  double const n = static_cast<double>(runs);
  double const tail = 0.5 * (1.0 - confidence);
  // The upper end by the lower one of the other outcome: a small number keeps its digits.
  return {count == 0 ? 0.0 : beta_quantile(tail, k, n - k + 1.0), count == runs ? 1.0
                                                                  : 2 * count < runs
                                                                      ? beta_quantile(1.0 - tail, k + 1.0, n - k)
                                                                      : 1.0 - beta_quantile(tail, n - k, k + 1.0)};
}

/// The probability behind `count` of `runs` is no more than this, with at least this confidence (Clopper and Pearson,
/// one-sided). After no failure in n runs about 3 / n at 95 %.
[[nodiscard]] inline double upper_bound_on_probability(std::uint64_t count, std::uint64_t runs,
                                                       double confidence = 0.95) {
  detail::expect_counts("upper_bound_on_probability", count, runs, confidence);
  double const k = static_cast<double>(count);
  double const n = static_cast<double>(runs);
  if (count == runs) {
    return 1.0;
  }
  return 2 * count < runs ? beta_quantile(confidence, k + 1.0, n - k)
                          : 1.0 - beta_quantile(1.0 - confidence, n - k, k + 1.0);
}

/// Wilson (1927): narrower than Clopper and Pearson, and right on the average of probabilities rather than for each.
[[nodiscard]] inline Bounds wilson(std::uint64_t count, std::uint64_t runs, double confidence = 0.95) {
  detail::expect_counts("wilson", count, runs, confidence);
  double const n = static_cast<double>(runs);
  double const share = static_cast<double>(count) / n;
  double const z = normal_quantile(0.5 + 0.5 * confidence);
  double const middle = share + z * z / (2.0 * n);
  double const half = z * std::sqrt(share * (1.0 - share) / n + z * z / (4.0 * n * n));
  double const per = 1.0 / (1.0 + z * z / n);
  return {count == 0 ? 0.0 : std::max(0.0, (middle - half) * per),
          count == runs ? 1.0 : std::min(1.0, (middle + half) * per)};
}

/// The quantile of a sample at `share` in [0, 1]: linear between the order statistics, the lowest at 0 and the highest
/// at 1 (definition 7 of Hyndman and Fan 1996). The values have to be sorted; infinite ones may be among them. Not a
/// number for an empty sample.
[[nodiscard]] inline double quantile(std::vector<double> const& sorted, double share) {
  if (sorted.empty()) {
    return std::numeric_limits<double>::quiet_NaN();
  }
  double const place = std::clamp(share, 0.0, 1.0) * static_cast<double>(sorted.size() - 1);
  auto const below = static_cast<std::size_t>(place);
  double const part = place - static_cast<double>(below);
  double const low = sorted[below];
  if (!(part > 0.0) || low == sorted[below + 1]) {
    return low;
  }
  return std::isinf(low) ? low : low + part * (sorted[below + 1] - low);
}

/// McNemar's test in its exact form: of pairs that differ, `only_first` went one way and `only_second` the other. The
/// probability of a split at least as uneven, if both ways were equally likely; 1 where no pair differs.
[[nodiscard]] inline double mcnemar(std::uint64_t only_first, std::uint64_t only_second) {
  std::uint64_t const fewer = std::min(only_first, only_second);
  std::uint64_t const more = std::max(only_first, only_second);
  if (fewer == more) {
    return 1.0;
  }
  // At most `fewer` of all go the rarer way: a tail of the binomial distribution, as an incomplete beta function.
  return std::min(1.0, 2.0 * incomplete_beta(0.5, static_cast<double>(more), static_cast<double>(fewer) + 1.0));
}

}  // namespace wend::inline v0::lab
