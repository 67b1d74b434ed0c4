// The wandering of a heading: Uhlenbeck and Ornstein (1930), On the theory of the Brownian motion, Physical Review
// 36:823-841, as dX = -theta X dt + sigma dW: stationary variance sigma^2 / (2 theta), variance
// sigma^2 / (2 theta) (1 - exp(-2 theta t)) after t from a standing start, correlation exp(-theta t) over t. Bands are
// those of the chi-squared distribution (chi_squared.hpp) and of Fisher's z for correlations. Formulas from memory.
#include <cmath>
#include <cstddef>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "../chi_squared.hpp"

#include "../scenes.hpp"
#include "wend/fields/roam.hpp"

namespace {

constexpr double spread = 0.5;    // radians
constexpr double settling = 2.0;  // seconds
constexpr double theta = 1.0 / settling;
constexpr double two_sided = 2.576;  // 99 % of a normal distribution

// The offset of one machine, tick by tick. It is read off the course, by the angle.
class Wanderer {
 public:
  explicit Wanderer(float seed) { field_.seed = seed; }
  double after(double dt) {
    scene_.goal = {50.0, 0.0};
    scene_.dt = dt;
    auto const course = scenes::answer(field_, scene_, memory_);
    return 2.0 * std::tan(0.5 * std::atan2(course.direction.y(), course.direction.x()));
  }
  double after(double dt, int ticks) {
    double x = 0.0;
    for (int i = 0; i < ticks; ++i) {
      x = after(dt);
    }
    return x;
  }

 private:
  wend::roam field_{.spread = 0.5F, .settling = 2.0F};
  scenes::Scene<double> scene_;
  wend::roam::Memory<double> memory_;
};

// Whether samples of mean 0 that are independent have the variance `expected`, by the two-sided 99 % band.
bool in_band(std::vector<double> const& samples, double expected) {
  double sum = 0.0;
  for (double const x : samples) {
    sum += x * x / expected;
  }
  return chi_squared::within_99_percent(sum, static_cast<double>(samples.size()));
}

double variance(std::vector<double> const& samples) {
  double sum = 0.0;
  for (double const x : samples) {
    sum += x * x / static_cast<double>(samples.size());
  }
  return sum;
}

double correlation(std::vector<double> const& a, std::vector<double> const& b) {
  double aa = 0.0, bb = 0.0, ab = 0.0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    aa += a[i] * a[i];
    bb += b[i] * b[i];
    ab += a[i] * b[i];
  }
  return ab / std::sqrt(aa * bb);
}

// Whether a correlation of n pairs is that of a population with `expected`, by Fisher's z.
bool correlated(double found, double expected, std::size_t n) {
  return std::abs(std::atanh(found) - std::atanh(expected)) < two_sided / std::sqrt(static_cast<double>(n) - 3.0);
}

}  // namespace

TEST_CASE("the stationary variance is sigma^2 / (2 theta), whatever the time step") {
  double const sigma = spread * std::sqrt(2.0 * theta);
  double const expected = sigma * sigma / (2.0 * theta);
  for (double const dt : {0.02, 0.1, 0.5}) {
    Wanderer wanderer(11.0F);
    std::vector<double> samples;
    int const apart = static_cast<int>(std::lround(6.0 * settling / dt));  // a correlation of exp(-6): as good as none
    static_cast<void>(wanderer.after(dt, apart));
    for (int i = 0; i < 4000; ++i) {
      samples.push_back(wanderer.after(dt, apart));
    }
    MESSAGE("dt ", dt, " s: variance ", variance(samples), ", expected ", expected);
    CHECK(in_band(samples, expected));
    CHECK_FALSE(in_band(samples, 1.12 * expected));  // the check would notice an eighth more, or less
    CHECK_FALSE(in_band(samples, expected / 1.12));
  }
}

TEST_CASE("the stationary variance stays with time steps that change at random") {
  std::mt19937 random(3);
  Wanderer wanderer(12.0F);
  std::vector<double> samples;
  for (int i = 0; i < 4000; ++i) {
    double x = 0.0;
    for (double t = 0.0; t < 6.0 * settling;) {
      double const dt = 0.005 + 0.2 * static_cast<double>(random()) / 4294967296.0;
      x = wanderer.after(dt);
      t += dt;
    }
    samples.push_back(x);
  }
  CHECK(in_band(samples, spread * spread));
}

TEST_CASE("the variance grows as 1 - exp(-2 theta t) from a standing start, over many seeds") {
  for (double const t : {0.2, 1.0, 3.0}) {
    std::vector<double> samples;
    for (int seed = 1; seed <= 3000; ++seed) {
      samples.push_back(Wanderer(static_cast<float>(7 * seed)).after(0.02, static_cast<int>(std::lround(t / 0.02))));
    }
    CAPTURE(t);
    CHECK(in_band(samples, spread * spread * (1.0 - std::exp(-2.0 * theta * t))));
  }
}

TEST_CASE("the correlation over t is exp(-theta t)") {
  for (double const t : {0.5, 2.0, 4.0}) {
    Wanderer wanderer(5.0F);
    std::vector<double> before, after;
    static_cast<void>(wanderer.after(0.05, 400));
    for (int i = 0; i < 4000; ++i) {
      before.push_back(wanderer.after(0.05, 240));  // 12 s on, from a pair to the next
      after.push_back(wanderer.after(0.05, static_cast<int>(std::lround(t / 0.05))));
    }
    CAPTURE(t);
    CHECK(correlated(correlation(before, after), std::exp(-theta * t), before.size()));
  }
}

TEST_CASE("steps are as large as those of Brownian motion: their squares add up to sigma^2 a second") {
  double const sigma_squared = 2.0 * theta * spread * spread;
  Wanderer wanderer(9.0F);
  double last = wanderer.after(0.002, 4000);
  std::vector<double> steps;
  for (int i = 0; i < 40'000; ++i) {
    double const now = wanderer.after(0.002);
    steps.push_back((now - last) / std::sqrt(0.002));
    last = now;
  }
  // The pull of theta takes a part in a thousand. Evenly drawn steps have a narrower band than normal ones.
  CHECK(variance(steps) == doctest::Approx(sigma_squared).epsilon(0.02));
}

TEST_CASE("offsets are normally distributed: as many within one, two and three spreads as there should be") {
  // 68.27, 95.45 and 99.73 % (tables of the normal distribution), each with its binomial 99 % band.
  Wanderer wanderer(21.0F);
  double const n = 8000.0;
  double within[3] = {0.0, 0.0, 0.0};
  for (int i = 0; i < 8000; ++i) {
    double const x = std::abs(wanderer.after(0.1, 120)) / spread;
    for (int k = 0; k < 3; ++k) {
      within[k] += x < k + 1 ? 1.0 : 0.0;
    }
  }
  double const expected[3] = {0.682689, 0.954500, 0.997300};
  for (int k = 0; k < 3; ++k) {
    double const p = expected[k];
    CHECK(std::abs(within[k] / n - p) < two_sided * std::sqrt(p * (1.0 - p) / n));
  }
}
