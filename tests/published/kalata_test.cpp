// Steady gains in closed form. Kalata (1984), The tracking index: a generalized parameter for alpha-beta and
// alpha-beta-gamma target trackers, IEEE Trans. AES 20(2) (from memory): with the tracking index
//   L = manoeuvre dt^2 / noise,  r = (4 + L - sqrt(8 L + L^2)) / 4,
//   alpha = 1 - r^2,  beta = 2 (2 - alpha) - 4 sqrt(1 - alpha),  and  L^2 = beta^2 / (1 - alpha).
// Benedict and Bordner (1962), Synthesis of an optimal set of radar track-while-scan smoothing equations, IRE Trans. AC
// 7(4) (from memory): beta = alpha^2 / (2 - alpha), the best transient for a given noise. Both agree to third order in
// alpha (expand the root), so for a slow filter the gains have to lie near that line too.
#include <cmath>

#include <doctest/doctest.h>

#include "wend/sensing/constant_velocity.hpp"

using wend::ConstantVelocity;
using wend::Gains;
using wend::Spread;

namespace {

struct AlphaBeta {
  double alpha, beta, index;
};

AlphaBeta settled(ConstantVelocity const& filter, double dt) {
  Spread<double> spread = filter.first<double>();
  Gains<double> gains;
  for (int k = 0; k < 20000; ++k) {
    spread = filter.predicted(spread, dt);
    gains = filter.gains(spread);
    spread = filter.updated(spread, gains);
  }
  return {gains.alpha, gains.rate * dt,
          static_cast<double>(filter.manoeuvre) * dt * dt / static_cast<double>(filter.noise)};
}

}  // namespace

TEST_CASE("the steady gains are those of the tracking index, whatever makes it up") {
  for (float const noise : {0.01F, 0.03F, 0.2F}) {
    for (float const manoeuvre : {0.2F, 1.0F, 20.0F}) {
      for (double const dt : {0.02, 0.05, 0.3}) {
        AlphaBeta const got = settled(ConstantVelocity{.noise = noise, .manoeuvre = manoeuvre}, dt);
        double const l = got.index;
        double const r = (4.0 + l - std::sqrt(8.0 * l + l * l)) / 4.0;
        double const alpha = 1.0 - r * r;
        double const beta = 2.0 * (2.0 - alpha) - 4.0 * std::sqrt(1.0 - alpha);
        CAPTURE(l);
        CHECK(got.alpha == doctest::Approx(alpha).epsilon(1e-6));
        CHECK(got.beta == doctest::Approx(beta).epsilon(1e-6));
        CHECK(got.beta * got.beta / (1.0 - got.alpha) == doctest::Approx(l * l).epsilon(1e-5));
      }
    }
  }
}

TEST_CASE("a tracking index of 1 gives alpha 0.75 and beta 0.5") {
  // r = (5 - 3) / 4 = 1/2, by hand
  AlphaBeta const got = settled(ConstantVelocity{.noise = 0.25F, .manoeuvre = 1.0F}, 0.5);
  CHECK(got.index == doctest::Approx(1.0));
  CHECK(got.alpha == doctest::Approx(0.75).epsilon(1e-9));
  CHECK(got.beta == doctest::Approx(0.5).epsilon(1e-9));
}

TEST_CASE("a slow filter lies on the line of Benedict and Bordner") {
  for (double const dt : {0.02, 0.05, 0.1}) {
    AlphaBeta const got = settled(ConstantVelocity{.noise = 0.1F, .manoeuvre = 0.2F}, dt);
    CAPTURE(got.alpha);
    CHECK(got.alpha < 0.2);
    double const line = got.alpha * got.alpha / (2.0 - got.alpha);
    CHECK(got.beta == doctest::Approx(line).epsilon(got.alpha * got.alpha));  // the orders on which they differ
    CHECK(got.beta > line * (1.0 - 1e-9));
  }
}
