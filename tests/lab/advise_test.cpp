// Advice on thresholds against tables of the normal distribution, the machine's own Pace, and simulated guards.
#include <algorithm>
#include <cmath>
#include <cstdint>
#include <string>

#include <doctest/doctest.h>

#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/lab/advise.hpp"
#include "wend/lab/random.hpp"
#include "wend/motion/pace.hpp"

namespace {

using namespace wend;
using lab::advise;
using lab::BandLimitedNoise;
using lab::IndependentReadings;

// A disc straight ahead whose clearance reads `value`, and the guard's answer to it.
template <typename Guard>
bool answer(Guard const& guard, double value, memory_t<Guard, double>& memory) {
  DiscSet<double, 1> discs;
  discs.add({{value + 0.5, 0.0}, 0.25});
  return ask(guard, look(Pose<double>{}, Vec2<double>{9.0, 0.0}, discs, 0.25, 0.05), memory);
}

// Switches of below(clearance, enter, leave) over independent readings of a clearance that stands still.
int switches(double enter, double leave, double truth, double sigma, std::uint32_t readings) {
  auto const guard = below(clearance, static_cast<float>(enter), static_cast<float>(leave));
  memory_t<decltype(guard), double> memory;
  lab::Draws const draws(11, 0);
  int count = 0;
  bool was = false;
  for (std::uint32_t i = 0; i < readings; ++i) {
    bool const now = answer(guard, truth + sigma * draws.normal({0, i}), memory);
    count += i > 0 && now != was ? 1 : 0;
    was = now;
  }
  return count;
}

}  // namespace

TEST_CASE("the normal tail and its inverse are those of the tables") {
  // Abramowitz and Stegun 1964, tables 26.1 and 26.5, from memory.
  CHECK(lab::normal_tail(0.0) == 0.5);
  CHECK(lab::normal_tail(1.0) == doctest::Approx(0.15865525).epsilon(1e-7));
  CHECK(lab::normal_tail(2.0) == doctest::Approx(0.02275013).epsilon(1e-6));
  CHECK(lab::normal_tail(3.0) == doctest::Approx(0.00134990).epsilon(1e-5));
  CHECK(lab::normal_tail_inverse(0.025) == doctest::Approx(1.959964).epsilon(1e-6));
  CHECK(lab::normal_tail_inverse(0.005) == doctest::Approx(2.575829).epsilon(1e-6));
  CHECK(lab::normal_tail_inverse(0.001) == doctest::Approx(3.090232).epsilon(1e-6));
  for (double const z : {0.5, 5.0, 12.0, 30.0}) {
    CHECK(lab::normal_tail_inverse(lab::normal_tail(z)) == doctest::Approx(z).epsilon(1e-12));
  }
  CHECK(lab::normal_tail_inverse(0.7) < 1e-12);
}

TEST_CASE("independent readings switch a guard in the middle of its hysteresis as often as the tail says") {
  // Each reading switches with p = Q(w / (2 sigma)), independently: the count is binomial, and its 99 % band is 2.576
  // standard deviations to either side. Thresholds that single precision holds exactly.
  constexpr std::uint32_t readings = 200'000;
  double const sigma = 0.0625;
  for (double const width : {0.0, 0.0625, 0.125, 0.25, 0.375}) {
    IndependentReadings const noise{sigma, 20.0};
    double const p = noise.switches_per_second(width) / noise.per_second;
    double const expected = p * readings;
    double const band = 2.576 * std::sqrt(readings * p * (1.0 - p));
    int const seen = switches(0.5, 0.5 + width, 0.5 + 0.5 * width, sigma, readings);
    MESSAGE("width ", width, ": ", seen, " switches, by formula ", expected, " +- ", band);
    CHECK(std::abs(seen - expected) < band);
  }
}

TEST_CASE("off the middle of its hysteresis a guard switches less often, by the Markov chain's formula") {
  constexpr std::uint32_t readings = 200'000;
  double const sigma = 0.0625;
  double const width = 0.1875;
  IndependentReadings const noise{sigma, 1.0};
  for (double const a : {0.03125, 0.0625}) {
    double const in = lab::normal_tail(a / sigma);
    double const out = lab::normal_tail((width - a) / sigma);
    // Two geometric waits make a cycle; from their variances that of the number of cycles (Feller 1968, XIII.6).
    double const cycle = 1.0 / in + 1.0 / out;
    double const variance = (1.0 - in) / (in * in) + (1.0 - out) / (out * out);
    double const expected = 2.0 * readings / cycle;
    double const band = 2.0 * 2.576 * std::sqrt(readings * variance / (cycle * cycle * cycle));
    int const seen = switches(0.5, 0.5 + width, 0.5 + a, sigma, readings);
    CHECK(std::abs(seen - expected) < band + 2.0);
    CHECK(expected < noise.switches_per_second(width) * readings);
  }
}

TEST_CASE("the advised width gives back the wanted time") {
  for (double const seconds : {1.0, 60.0, 3600.0, 1.0e6}) {
    IndependentReadings const readings{0.02, 20.0};
    CHECK(1.0 / readings.switches_per_second(readings.width_for(seconds)) == doctest::Approx(seconds).epsilon(1e-9));
    BandLimitedNoise const band = BandLimitedNoise::even(0.02, 2.0);
    CHECK(1.0 / band.switches_per_second(band.width_for(seconds)) == doctest::Approx(seconds).epsilon(1e-9));
  }
  CHECK(IndependentReadings{0.02, 20.0}.width_for(0.05) < 1e-9);  // one a reading: any guard keeps that
  CHECK(BandLimitedNoise::even(0.02, 2.0).width_for(0.01) == 0.0);
}

TEST_CASE("the guard is entered where Pace begins to slow the machine down") {
  Pace const pace{0.75F, 0.25F, 0.5F, 0.125F, 0.5F};
  // v t + v^2 / (2 a), the textbook law, and a t^2 / 2 of overrun, and the margin.
  double const by_hand = 0.75 * 0.25 + 0.75 * 0.75 / (2.0 * 0.5) + 0.5 * 0.25 * 0.25 / 2.0 + 0.125;
  CHECK(lab::stopping_clearance(pace) == doctest::Approx(by_hand).epsilon(1e-15));
  auto const allowed = [&pace](double clear) {
    DiscSet<double, 1> discs;
    discs.add({{clear + 0.5, 0.0}, 0.25});
    return pace(look(Pose<double>{}, Vec2<double>{90.0, 0.0}, discs, 0.25, 0.05));
  };
  CHECK(allowed(by_hand + 1e-9) == 0.75);
  CHECK(allowed(by_hand - 1e-6) < 0.75);
  lab::Advice const advice = advise(IndependentReadings{0.02, 20.0}, 600.0, pace, 2.0);
  CHECK(advice.enter == doctest::Approx(by_hand + 0.04));
  CHECK(advice.leave - advice.enter == doctest::Approx(advice.width));
  CHECK(advice.width == doctest::Approx(2.0 * 0.02 * lab::normal_tail_inverse(1.0 / 12000.0)));
  CHECK(advice.between_switches == doctest::Approx(600.0).epsilon(1e-9));
}

TEST_CASE("advice comes in words, with the thresholds as one writes them, and is called no safety function") {
  std::string const text = advise(IndependentReadings{0.02, 20.0}, 3600.0).text;
  CHECK(text.rfind("below(clearance, 0.510F, 0.678F)\n", 0) == 0);
  CHECK(text.find("no safety function") != std::string::npos);
  CHECK(text.find("once in 741,") != std::string::npos);  // 1 / Q(3)
  CHECK(text.size() < 1000);
  CHECK(text.back() == '\n');
  std::string const of_band = advise(BandLimitedNoise::even(0.5, 5.0), 1.0e7, Pace{9.0F, 1.0F, 0.1F, 1.0F}).text;
  CHECK(of_band.back() == '\n');  // not cut off
}
