// The gains of a Kalman filter (Kalman 1960) settle where the discrete algebraic Riccati equation
//   P = F P F' - F P H' (H P H' + R)^-1 H P F' + Q
// has its stabilising solution. That solution comes here from the eigenvectors of the symplectic matrix of the dual
// control problem (Vaughan 1970, A nonrecursive algebraic solution for the discrete Riccati equation; from memory), by
// Eigen's eigensolver, and is put back into the equation; the filter is never asked.
#include <cmath>
#include <complex>

#include <doctest/doctest.h>
#include <Eigen/LU>

#include "../dense.hpp"
#include "wend/sensing/constant_velocity.hpp"

using wend::ConstantVelocity;
using wend::Gains;
using wend::Spread;

namespace {

struct Model {
  Eigen::Matrix2d f, q;
  double r;
};

Model model_of(ConstantVelocity const& filter, double dt) {
  double const a = static_cast<double>(filter.manoeuvre);
  Eigen::Vector2d const g{0.5 * dt * dt, dt};
  Model m;
  m.f << 1.0, dt, 0.0, 1.0;
  m.q = a * a * g * g.transpose();
  m.r = static_cast<double>(filter.noise) * static_cast<double>(filter.noise);
  return m;
}

// The predicted covariance in the steady state.
Eigen::Matrix2d riccati(Model const& m) {
  Eigen::Matrix2d const a = m.f.transpose();
  Eigen::Matrix2d hh = Eigen::Matrix2d::Zero();
  hh(0, 0) = 1.0 / m.r;
  Eigen::Matrix2d const back = a.inverse().transpose();
  Eigen::Matrix4d z;
  z << a + hh * back * m.q, -hh * back, -back * m.q, back;
  dense::Spectrum const all = dense::spectrum(z);
  Eigen::Matrix<std::complex<double>, 4, 2> stable;
  int found = 0;
  for (int i = 0; i < 4 && found < 2; ++i) {
    if (std::abs(all.values(i)) < 1.0) {
      stable.col(found++) = all.vectors.col(i);
    }
  }
  REQUIRE(found == 2);
  Eigen::Matrix2cd const p = stable.bottomRows<2>() * stable.topRows<2>().inverse();
  return p.real();
}

}  // namespace

TEST_CASE_TEMPLATE("the filter's gains and spread settle on the solution of the Riccati equation", S, float, double) {
  double const tolerance = std::is_same_v<S, float> ? 2.0e-3 : 1.0e-6;
  for (ConstantVelocity const& filter : {ConstantVelocity{}, ConstantVelocity{.noise = 0.1F, .manoeuvre = 0.3F},
                                         ConstantVelocity{.noise = 0.01F, .manoeuvre = 5.0F}}) {
    for (double const dt : {0.02, 0.05, 0.2}) {
      Model const m = model_of(filter, static_cast<double>(static_cast<S>(dt)));
      Eigen::Matrix2d const p = riccati(m);
      // it does solve the equation
      double const innovation = p(0, 0) + m.r;
      Eigen::Vector2d const ph = p.col(0);
      Eigen::Matrix2d const again = m.f * (p - ph * ph.transpose() / innovation) * m.f.transpose() + m.q;
      REQUIRE((again - p).norm() < 1e-7 * p.norm());

      Spread<S> spread = filter.first<S>();
      Gains<S> gains;
      for (int k = 0; k < 3000; ++k) {
        spread = filter.predicted(spread, static_cast<S>(dt));
        gains = filter.gains(spread);
        if (k < 2999) {
          spread = filter.updated(spread, gains);
        }
      }
      CAPTURE(dt);
      CHECK(static_cast<double>(spread.position) == doctest::Approx(p(0, 0)).epsilon(tolerance));
      CHECK(static_cast<double>(spread.mixed) == doctest::Approx(p(0, 1)).epsilon(tolerance));
      CHECK(static_cast<double>(spread.velocity) == doctest::Approx(p(1, 1)).epsilon(tolerance));
      CHECK(static_cast<double>(gains.alpha) == doctest::Approx(p(0, 0) / innovation).epsilon(tolerance));
      CHECK(static_cast<double>(gains.rate) == doctest::Approx(p(1, 0) / innovation).epsilon(tolerance));
    }
  }
}

TEST_CASE("every step of the filter is Kalman's, written with matrices, and the spread stays positive definite") {
  ConstantVelocity const filter{};
  Spread<double> spread = filter.first<double>();
  Eigen::Matrix2d p;
  p << spread.position, spread.mixed, spread.mixed, spread.velocity;
  for (int k = 0; k < 200; ++k) {
    double const dt = 0.03 + 0.02 * std::sin(0.7 * k);  // as they come
    Model const m = model_of(filter, dt);
    p = m.f * p * m.f.transpose() + m.q;
    spread = filter.predicted(spread, dt);
    CHECK(spread.position == doctest::Approx(p(0, 0)));
    CHECK(spread.mixed == doctest::Approx(p(0, 1)));
    CHECK(spread.velocity == doctest::Approx(p(1, 1)));
    if (k % 3 != 0) {  // now and then there is no measurement
      Eigen::Vector2d const gain = p.col(0) / (p(0, 0) + m.r);
      Gains<double> const gains = filter.gains(spread);
      CHECK(gains.alpha == doctest::Approx(gain(0)));
      CHECK(gains.rate == doctest::Approx(gain(1)));
      p = (p - gain * p.row(0)).eval();
      spread = filter.updated(spread, gains);
    }
    CHECK(spread.position > 0.0);
    CHECK(spread.position * spread.velocity > spread.mixed * spread.mixed);
  }
}
