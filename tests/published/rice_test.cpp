// How often noise crosses a level: Rice (1944), Mathematical analysis of random noise, Bell Syst. Tech. J. 23, eq.
// 3.3-11 (from memory), against the noise of his own model (eq. 2.8-6): many cosines of fixed power and random phase,
//   n(t) = sum c_k cos(w_k t + phi_k),   c_k^2 / 2 = the power of the band round w_k.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <cstddef>
#include <cstdint>
#include <numbers>
#include <vector>

#include <doctest/doctest.h>

#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/lab/advise.hpp"
#include "wend/lab/random.hpp"

namespace {

constexpr double pi = std::numbers::pi;
constexpr double sigma = 0.0625;   // metres
constexpr double band = 2.0;       // hertz
constexpr int tones = 120;
constexpr double dt = 0.01;        // seconds: fifty samples to the shortest wave
constexpr double seconds = 2.0 * tones / band;  // until the cosines come round again
constexpr std::uint32_t runs = 60;
constexpr double student = 2.66;   // 99 %, two-sided, 59 degrees of freedom (tables of Student's t, from memory)

// One run of noise of even power from 0 to `band`.
std::vector<double> noise(std::uint32_t run) {
  wend::lab::Draws const draws(1944, run);
  std::array<std::complex<double>, tones> wave;
  std::array<std::complex<double>, tones> step;
  double const size = sigma * std::sqrt(2.0 / tones);
  for (std::uint32_t k = 0; k < tones; ++k) {
    double const w = 2.0 * pi * band * (k + 0.5) / tones;
    wave[k] = std::polar(size, draws.between(0.0, 2.0 * pi, {0, k}));
    step[k] = std::polar(1.0, w * dt);
  }
  std::vector<double> samples(static_cast<std::size_t>(seconds / dt));
  for (double& sample : samples) {
    sample = 0.0;
    for (std::size_t k = 0; k < tones; ++k) {
      sample += wave[k].real();
      wave[k] *= step[k];
    }
  }
  return samples;
}

struct Rates {
  double entered;  // times a second that the guard was entered, mean over the runs
  double band;     // half the 99 % band of that mean, from the spread of the runs
};

// How often below(clearance, enter, leave) is entered while the clearance stands still at `truth`.
Rates simulate(float enter, float leave, double truth, std::vector<std::vector<double>> const& noises) {
  auto const guard = wend::below(wend::clearance, enter, leave);
  std::vector<double> rates;
  for (std::vector<double> const& samples : noises) {
    wend::memory_t<decltype(guard), double> memory;
    bool was = true;  // what it is at the start does not count as entering
    int count = 0;
    for (double const n : samples) {
      wend::DiscSet<double, 1> discs;
      discs.add({{truth + n + 0.5, 0.0}, 0.25});
      bool const now = wend::ask(
          guard, wend::look(wend::Pose<double>{}, wend::Vec2<double>{90.0, 0.0}, discs, 0.25, dt), memory);
      count += now && !was ? 1 : 0;
      was = now;
    }
    rates.push_back(count / seconds);
  }
  double mean = 0.0;
  for (double const r : rates) {
    mean += r / static_cast<double>(rates.size());
  }
  double square = 0.0;
  for (double const r : rates) {
    square += (r - mean) * (r - mean) / static_cast<double>(rates.size() - 1);
  }
  return {mean, student * std::sqrt(square / static_cast<double>(rates.size()))};
}

std::vector<std::vector<double>> const& all_noise() {
  static std::vector<std::vector<double>> const noises = [] {
    std::vector<std::vector<double>> made;
    for (std::uint32_t run = 0; run < runs; ++run) {
      made.push_back(noise(run));
    }
    return made;
  }();
  return noises;
}

}  // namespace

TEST_CASE("noise falsely enters a guard as often as Rice's formula says") {
  auto const model = wend::lab::BandLimitedNoise::even(sigma, band);
  // By hand: for even power the rate through 0 is band / sqrt(3) (Rice 1944, below eq. 3.3-12).
  CHECK(model.upcrossings_per_second(0.0) == doctest::Approx(band / std::sqrt(3.0)).epsilon(1e-14));
  for (double const sigmas : {0.0, 1.0, 2.0, 2.5}) {
    // A clearance that stands still some way over the one threshold.
    Rates const seen = simulate(0.5F, 0.5F, 0.5 + sigmas * sigma, all_noise());
    double const expected = model.upcrossings_per_second(sigmas * sigma);
    MESSAGE(sigmas, " sigma: ", seen.entered, " +- ", seen.band, " a second, by Rice ", expected);
    CHECK(std::abs(seen.entered - expected) < seen.band);
    CHECK(seen.band < 0.25 * expected);  // the check would notice a quarter
  }
}

TEST_CASE("the bound on the switches of a guard with hysteresis holds, and is about twice too high for a wide one") {
  auto const model = wend::lab::BandLimitedNoise::even(sigma, band);
  for (double const sigmas : {0.0, 1.0, 2.0, 3.0, 4.0}) {
    double const width = sigmas * sigma;
    Rates const seen = simulate(0.5F, static_cast<float>(0.5 + width), 0.5 + 0.5 * width, all_noise());
    double const switched = 2.0 * seen.entered;
    double const bound = model.switches_per_second(width);
    MESSAGE("width ", sigmas, " sigma: ", switched, " switches a second, bound ", bound, ", ratio ", switched / bound);
    CHECK(switched - 2.0 * seen.band < bound);
    CHECK(switched > 0.35 * bound);
    // Elsewhere than in the middle it holds too.
    CHECK(2.0 * simulate(0.5F, static_cast<float>(0.5 + width), 0.5 + 0.2 * width, all_noise()).entered < 1.05 * bound);
  }
}
