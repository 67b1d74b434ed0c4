// Draws on lanes against the draws of one run, the standard library's functions, and the distributions they claim.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <vector>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/lab/lane_draws.hpp"
#include "wend/lab/random.hpp"

namespace {

using namespace wend;

template <typename S>
std::uint32_t word_in(lab::words_t<S> const& words, int k) {
  if constexpr (std::is_same_v<S, float>) {
    return words;
  } else {
    return words[k];
  }
}

}  // namespace

TEST_CASE_TEMPLATE("each lane draws the words that its own run draws", S, float, lab::Pack<2>, lab::Pack<4>,
                   lab::Pack<8>, lab::Pack<16>) {
  constexpr std::uint64_t seed = 0xFEDCBA9876543210ULL;
  lab::LaneDraws<S> draws(seed);
  auto const run_of = [](int k) { return 0xABC00000000ULL + 17U * static_cast<std::uint64_t>(k); };
  for (int k = 0; k < lab::lane_count<S>(); ++k) {
    draws.start(k, run_of(k));
  }
  int wrong = 0;
  for (std::uint32_t tick = 0; tick < 20; ++tick) {
    lab::words_t<S> item{};
    for (int k = 0; k < lab::lane_count<S>(); ++k) {
      lab::LaneDraws<S>::set(item, k, static_cast<std::uint32_t>(3 * k));
    }
    auto const words = draws.words(21, item);
    for (int k = 0; k < lab::lane_count<S>(); ++k) {
      // The address of Draws: run, tick, item, purpose; its uniform is (word + 1/2) / 2^32 of the first word.
      double const expected = lab::Draws(seed, run_of(k)).uniform({21, tick, static_cast<std::uint32_t>(3 * k)});
      wrong += (static_cast<double>(word_in<S>(words[0], k)) + 0.5) * 0x1p-32 == expected ? 0 : 1;
      auto const all = lab::philox({static_cast<std::uint32_t>(run_of(k)), tick, static_cast<std::uint32_t>(3 * k),
                                    (21U << 16U) ^ static_cast<std::uint32_t>(run_of(k) >> 32U)},
                                   {static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32U)});
      for (std::size_t i = 0; i < 4; ++i) {
        wrong += word_in<S>(words[i], k) == all[i] ? 0 : 1;
      }
    }
    draws.next_tick();
  }
  CHECK(wrong == 0);
}

TEST_CASE_TEMPLATE("normal numbers on lanes have the bits of one alone", S, lab::Pack<2>, lab::Pack<4>, lab::Pack<8>,
                   lab::Pack<16>) {
  lab::LaneDraws<S> draws(3);
  for (int k = 0; k < lab::lane_count<S>(); ++k) {
    draws.start(k, static_cast<std::uint64_t>(k));
  }
  int wrong = 0;
  for (std::uint32_t tick = 0; tick < 200; ++tick) {
    auto const words = draws.words(1);
    auto const pair = lab::normals_of<S>(words[0], words[1]);
    S const even = lab::even_of<S>(words[2]);
    for (int k = 0; k < lab::lane_count<S>(); ++k) {
      auto const one = lab::normals_of<float>(words[0][k], words[1][k]);
      wrong += numbers::same(pair.first[k], one.first) && numbers::same(pair.second[k], one.second) &&
                       numbers::same(even[k], lab::even_of<float>(words[2][k]))
                   ? 0
                   : 1;
    }
    draws.next_tick();
  }
  CHECK(wrong == 0);
}

// The standard library in double precision as the judge.
TEST_CASE("the logarithm is good to single precision") {
  double worst = 0.0;
  for (std::uint32_t i = 0; i < 200000; ++i) {
    float const x = lab::uniform_of<float>(i * 21474U);
    double const expected = std::log(static_cast<double>(x));
    double const error = std::abs(static_cast<double>(lab::log_of(x)) - expected);
    worst = std::max(worst, error / std::max(0.5, std::abs(expected)));
  }
  MESSAGE("worst error ", worst);
  CHECK(worst < 3e-7);
}

TEST_CASE("a normal pair is that of Box and Muller, in double precision") {
  double worst = 0.0;
  lab::LaneDraws<float> draws(8);
  draws.start(0, 1);
  for (int i = 0; i < 100000; ++i) {
    auto const words = draws.words(2);
    auto const pair = lab::normals_of<float>(words[0], words[1]);
    double const radius = std::sqrt(-2.0 * std::log(static_cast<double>(lab::uniform_of<float>(words[0]))));
    double const a = 0.78539816339744831 * static_cast<double>(lab::even_of<float>(words[1]));
    double along = radius * std::cos(a) * ((words[1] & 1U) != 0 ? -1.0 : 1.0);
    double aside = radius * std::sin(a);
    if ((words[1] & 2U) != 0) {
      std::swap(along, aside);
    }
    worst = std::max(
        {worst, std::abs(static_cast<double>(pair.first) - along), std::abs(static_cast<double>(pair.second) - aside)});
    draws.next_tick();
  }
  MESSAGE("worst error ", worst);
  CHECK(worst < 3e-6);
}

// Kolmogorov and Smirnov, 99 % point 1.6276 (Smirnov 1948, table); moments in 99 % bands of 1e5 values.
TEST_CASE("normal pairs are normal, each and together, and uniform numbers even") {
  constexpr int count = 100000;
  std::vector<double> first, second, even;
  double product = 0.0;
  double squares = 0.0;
  lab::LaneDraws<float> draws(15);
  draws.start(0, 6);
  for (int i = 0; i < count; ++i) {
    auto const words = draws.words(4);
    auto const pair = lab::normals_of<float>(words[0], words[1]);
    first.push_back(static_cast<double>(pair.first));
    second.push_back(static_cast<double>(pair.second));
    even.push_back(static_cast<double>(lab::uniform_of<float>(words[2])));
    product += first.back() * second.back() / count;
    squares += first.back() * first.back() * second.back() * second.back() / count;
    draws.next_tick();
  }
  auto const kolmogorov = [](std::vector<double> values, auto const& distribution) {
    std::sort(values.begin(), values.end());
    double const n = static_cast<double>(values.size());
    double worst = 0.0;
    for (std::size_t i = 0; i < values.size(); ++i) {
      double const at = distribution(values[i]);
      worst =
          std::max({worst, std::abs(at - static_cast<double>(i) / n), std::abs(at - static_cast<double>(i + 1) / n)});
    }
    return worst * std::sqrt(n);
  };
  auto const normal = [](double x) { return 0.5 * std::erfc(-x / std::sqrt(2.0)); };
  CHECK(kolmogorov(first, normal) < 1.6276);
  CHECK(kolmogorov(second, normal) < 1.6276);
  CHECK(kolmogorov(even, [](double x) { return x; }) < 1.6276);
  // Of independent ones the product has mean 0 and variance 1, and its square mean 1 and variance 8.
  CHECK(std::abs(product) < 2.5758293 / std::sqrt(count));
  CHECK(std::abs(squares - 1.0) < 2.5758293 * std::sqrt(8.0 / count));
  CHECK(*std::min_element(even.begin(), even.end()) > 0.0);
  CHECK(*std::max_element(even.begin(), even.end()) < 1.0);
  CHECK(lab::uniform_of<float>(0xFFFFFFFFU) < 1.0F);
  CHECK(lab::uniform_of<float>(0U) > 0.0F);
}
