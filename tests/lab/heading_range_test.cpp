// Boxes of headings, against the C library's cosine and sine in extended precision.
#include <algorithm>
#include <cmath>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "wend/lab/heading_range.hpp"
#include "wend/lab/interval.hpp"

namespace {

using wend::lab::FloatInterval;
using wend::lab::Interval;

constexpr double pi = std::numbers::pi;

// The range of cos over [low, high], from its ends and the multiples of pi between them.
struct Range {
  long double low;
  long double high;
};
Range cosine_range(double low, double high, long double shift) {
  long double const pi_l = std::numbers::pi_v<long double>;
  long double const a = static_cast<long double>(low) - shift;
  long double const b = static_cast<long double>(high) - shift;
  Range range{std::min(std::cos(a), std::cos(b)), std::max(std::cos(a), std::cos(b))};
  if (std::floor(b / (2.0L * pi_l)) >= std::ceil(a / (2.0L * pi_l))) {
    range.high = 1.0L;
  }
  if (std::floor((b - pi_l) / (2.0L * pi_l)) >= std::ceil((a - pi_l) / (2.0L * pi_l))) {
    range.low = -1.0L;
  }
  return range;
}

// Largest excess of an enclosure over the range; negative where it does not enclose it.
double excess(Interval const& found, Range const& range) {
  auto const below = static_cast<double>(range.low - static_cast<long double>(found.low()));
  auto const above = static_cast<double>(static_cast<long double>(found.high()) - range.high);
  return std::min(below, above) < 0.0 ? std::min(below, above) : std::max(below, above);
}

}  // namespace

TEST_CASE("headings_over encloses the cosine and sine of a range of angles and is tight") {
  std::mt19937_64 random(11);
  double least = 1.0;
  double most = 0.0;
  for (int k = 0; k < 200'000; ++k) {
    double const scale = k % 4 == 0 ? 100.0 : 4.0;
    double const low = std::uniform_real_distribution<double>(-scale, scale)(random);
    double const width = std::exp(std::uniform_real_distribution<double>(-20.0, 1.83)(random));
    Interval const angle(low, low + width);
    auto const box = wend::lab::headings_over(angle);
    long double const quarter = std::numbers::pi_v<long double> / 2.0L;
    for (double const e : {excess(box.x(), cosine_range(low, low + width, 0.0L)),
                           excess(box.y(), cosine_range(low, low + width, quarter)),
                           excess(wend::lab::cosine_over<Interval>(angle), cosine_range(low, low + width, 0.0L))}) {
      least = std::min(least, e);
      most = std::max(most, e);
    }
  }
  CHECK(least >= 0.0);
  CHECK(most < 2e-15);  // the slack for the C library, and the rounding of a long double
}

TEST_CASE("headings_over encloses every unit vector of a whole turn, a quarter and a single angle") {
  auto const turn = wend::lab::headings_over(Interval(-pi, pi));
  auto const more = wend::lab::headings_over(Interval(-3.0, 30.0));
  for (auto const& box : {turn, more, wend::lab::headings_over(Interval::whole())}) {
    CHECK(box.x().low() == -1.0);
    CHECK(box.x().high() == 1.0);
    CHECK(box.y().low() == -1.0);
    CHECK(box.y().high() == 1.0);
  }
  auto const left = wend::lab::headings_over<FloatInterval>(Interval(0.25 * pi, 0.75 * pi));
  CHECK(left.x().high() == doctest::Approx(std::sqrt(0.5)));
  CHECK(left.x().low() == doctest::Approx(-std::sqrt(0.5)));
  CHECK(left.y().high() == 1.0);
  CHECK(left.y().low() == doctest::Approx(std::sqrt(0.5)));
  auto const one = wend::lab::headings_over(Interval(1.0));
  CHECK(one.x().contains(std::cos(1.0)));
  CHECK(one.y().contains(std::sin(1.0)));
  CHECK(std::max(one.x().width(), one.y().width()) < 3e-15);
}

TEST_CASE("a peak counts when an end of the range lies on it, whatever pi is rounded to") {
  for (int k = -20; k <= 20; ++k) {
    double const peak = k * pi;
    for (auto const& angle : {Interval(peak, peak + 0.1), Interval(peak - 0.1, peak)}) {
      Interval const cosine = wend::lab::cosine_over<Interval>(angle);
      CHECK((k % 2 == 0 ? cosine.high() : -cosine.low()) == 1.0);
    }
  }
}

TEST_CASE("beyond a million radians a range of angles means nothing") {
  CHECK(wend::lab::cosine_over<Interval>(Interval(2e6, 2e6 + 0.1)).low() == -1.0);
  CHECK(wend::lab::headings_over(Interval(-2e6, -2e6 + 0.1)).y().high() == 1.0);
}
