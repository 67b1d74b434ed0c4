// tests/chi_squared.hpp - whether a sum of squares lies in the middle 99 % of the chi-squared distribution.
#pragma once

#include <cmath>

namespace chi_squared {

/// The bounds by Wilson and Hilferty (1931), The distribution of chi-square, PNAS 17:684-688: chi^2 / k to the third
/// root is nearly normal, with mean 1 - 2 / (9 k) and variance 2 / (9 k). At k = 30 they are within 0.4 % of the
/// tabled ones (Abramowitz and Stegun 1964, table 26.8, from memory: 13.787 and 53.672), and nearer beyond.
[[nodiscard]] inline double bound(double degrees, double normal_quantile) {
  double const part = 2.0 / (9.0 * degrees);
  return degrees * std::pow(1.0 - part + normal_quantile * std::sqrt(part), 3.0);
}

[[nodiscard]] inline bool within_99_percent(double sum, double degrees) {
  constexpr double normal = 2.5758293035489004;  // the 99.5 % point of the standard normal distribution
  return sum > bound(degrees, -normal) && sum < bound(degrees, normal);
}

}  // namespace chi_squared
