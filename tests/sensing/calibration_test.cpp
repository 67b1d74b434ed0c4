// Calibration: against straight lines through its points, worked out here, and what a Ring makes of what comes out.
#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <numbers>
#include <span>

#include <doctest/doctest.h>

#include "wend/sensing/calibration.hpp"
#include "wend/sensing/ring.hpp"

using wend::calibration;

namespace {

constexpr float infinity = std::numeric_limits<float>::infinity();
constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();

// Volts that fall with distance, as a triangulating ranger gives them, and counts that rise with it, as an echo
// sounder.
constexpr auto volts = [] {
  auto table = calibration({{0.40F, 0.80F}, {0.75F, 0.40F}, {1.30F, 0.20F}, {2.40F, 0.10F}});
  table.least_reading = 0.05F;
  table.greatest_reading = 3.10F;
  return table;
}();
constexpr auto counts = calibration({{100.0F, 0.05F}, {1000.0F, 0.50F}, {9000.0F, 4.00F}});

static_assert(volts(0.40F) == 0.80F && volts(2.40F) == 0.10F && volts(1.30F) == 0.20F, "worked out by the compiler");
static_assert(counts(550.0) > 0.2749 && counts(550.0) < 0.2751);

}  // namespace

TEST_CASE_TEMPLATE("a reading between two points lies on the line between them", S, float, double) {
  double const epsilon = std::is_same_v<S, float> ? 1e-6 : 1e-9;
  for (double share = 0.0; share <= 1.0; share += 0.125) {
    CHECK(volts(static_cast<S>(0.75 + share * 0.55)) ==
          doctest::Approx(0.40 + share * (0.20 - 0.40)).epsilon(std::max(epsilon, 1e-6)));
    CHECK(counts(static_cast<S>(1000.0 + share * 8000.0)) == doctest::Approx(0.5 + share * 3.5).epsilon(epsilon));
  }
}

TEST_CASE_TEMPLATE("metres never rise where the table falls, and are never outside it", S, float, double) {
  S last = S(0.80F);
  for (double v = 0.40; v <= 2.40; v += 0.0007) {
    S const metres = volts(static_cast<S>(v));
    if (v > 0.4001 && v < 2.3999) {
      CHECK(metres <= last + S(1e-6F));
      CHECK(metres >= S(0.0999F));
      CHECK(metres <= S(0.8001F));
      last = metres;
    }
  }
}

TEST_CASE_TEMPLATE("beyond the far end there is no echo, beyond the near end the nearest, and past the rails nothing",
                   S, float, double) {
  CHECK(volts(S(0.39F)) == std::numeric_limits<S>::infinity());
  CHECK(volts(S(0.06F)) == std::numeric_limits<S>::infinity());
  CHECK(volts(S(2.50F)) == S(0.10F));
  CHECK(volts(S(3.0F)) == S(0.10F));
  for (float const broken : {0.0F, 0.04F, 3.2F, -1.0F, infinity, -infinity, not_a_number}) {
    CAPTURE(broken);
    CHECK(std::isnan(volts(S(broken))));
  }
  CHECK(counts(S(0.0F)) == S(0.05F));
  CHECK(counts(S(9001.0F)) == std::numeric_limits<S>::infinity());
  CHECK(std::isnan(counts(S(not_a_number))));
}

TEST_CASE("a ring takes what comes out of a table for what it is") {
  constexpr wend::Ring<4> ring{wend::even_bearings<4>(0.0, std::numbers::pi / 2.0), 0.05F, 0.75F, 0.005F};
  constexpr auto sensing = wend::calibrated(volts, ring);
  std::array<float, 4> const readings{0.75F, 0.20F, 0.0F, 2.9F};
  wend::DiscSet<float, 8> discs;
  wend::RingCount const count = sensing.discs(std::span<float const, 4>(readings), discs);
  CHECK(count.echoes == 2);
  CHECK(count.no_echo == 1);
  CHECK(count.not_a_number == 1);
  REQUIRE(discs.size() == 2);
  double const pi = std::numbers::pi;
  for (auto const& [angle, range] : {std::array{0.0, 0.40}, std::array{1.5 * pi, 0.10}}) {
    wend::Vec2<float> const echo{static_cast<float>(range * std::cos(angle)),
                                 static_cast<float>(range * std::sin(angle))};
    CHECK(std::min(std::abs(wend::gap(discs[0], echo)), std::abs(wend::gap(discs[1], echo))) < 0.02F);
  }
}
