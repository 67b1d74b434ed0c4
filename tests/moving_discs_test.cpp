#include <limits>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/lab/pack.hpp"
#include "wend/moving_discs.hpp"
#include "wend/percept.hpp"

namespace {

using wend::MovingDiscSet;
using wend::Vec2;

template <typename S>
double plain(S const& x) {
  return static_cast<double>(numbers::first(x));
}

}  // namespace

TEST_CASE_TEMPLATE("a velocity stays with its disc, whichever disc gives way", S, WEND_TEST_NUMBERS) {
  MovingDiscSet<S, 3> discs;
  // Each disc moves at a tenth of its distance along y, so that a velocity tells whose it is.
  for (float const x : {5.0F, 2.0F, 9.0F, 1.0F, 7.0F, 3.0F}) {
    discs.add({{S(x), S(0.0F)}, S(0.5F)}, {S(0.0F), S(0.1F * x)});
  }
  REQUIRE(discs.size() == 3);
  CHECK(discs.dropped() == 3);
  double sum = 0.0;
  for (int i = 0; i < discs.size(); ++i) {
    double const x = plain(discs[i].centre.x());
    CHECK(plain(discs.velocities()[i].y()) == doctest::Approx(0.1 * x).epsilon(1e-6));
    sum += x;
  }
  CHECK(sum == doctest::Approx(1.0 + 2.0 + 3.0));  // the nearest three are known
}

TEST_CASE("lanes drop each a disc of its own, and its velocity with it") {
  using Pack = wend::lab::Pack<8>;
  MovingDiscSet<Pack, 1> discs;
  Pack const odd_is_near([](int k) { return k % 2 == 1 ? 1.0F : 4.0F; });
  discs.add({{Pack(2.0F), Pack(0.0F)}, Pack(0.0F)}, {Pack(0.25F), Pack(0.0F)});
  discs.add({{odd_is_near, Pack(0.0F)}, Pack(0.0F)}, {Pack(0.75F), Pack(0.0F)});
  for (int k = 0; k < 8; ++k) {
    CHECK(discs[0].centre.x()[k] == (k % 2 == 1 ? 1.0F : 2.0F));
    CHECK(discs.velocities()[0].x()[k] == (k % 2 == 1 ? 0.75F : 0.25F));
  }
}

TEST_CASE_TEMPLATE("a velocity that is no number is taken for none, and the set says so", S, float, double) {
  for (S const broken : {std::numeric_limits<S>::quiet_NaN(), std::numeric_limits<S>::infinity()}) {
    MovingDiscSet<S, 2> discs;
    discs.add({{S(1), S(0)}, S(0.1F)}, {S(0.5F), S(0)});
    CHECK_FALSE(discs.rejected());
    discs.add({{S(2), S(0)}, S(0.1F)}, {S(0), broken});
    CHECK(discs.rejected());
    CHECK(discs.velocities()[0].x() == S(0.5F));
    CHECK(discs.velocities()[1] == Vec2<S>(S(0), S(0)));
  }
}

TEST_CASE_TEMPLATE("a percept knows how its discs move, and that those of a plain set stand still", S, float, double) {
  MovingDiscSet<S, 4> moving;
  moving.add({{S(1), S(0)}, S(0.1F)}, {S(0), S(-0.5F)});
  moving.add({{S(3), S(0)}, S(0.1F)});
  auto const percept = wend::look<S>({}, {S(5), S(0)}, moving, S(0.2F), S(0.05F));
  CHECK(percept.velocity(0) == Vec2<S>(S(0), S(-0.5F)));
  CHECK(percept.velocity(1) == Vec2<S>(S(0), S(0)));

  wend::DiscSet<S, 4> const& places = moving;
  auto const still = wend::look<S>({}, {S(5), S(0)}, places, S(0.2F), S(0.05F));
  CHECK(still.velocity(0) == Vec2<S>(S(0), S(0)));
  CHECK(still.clearance == percept.clearance);
  CHECK(still.away == percept.away);
}

TEST_CASE_TEMPLATE("a velocity that is found out later is the disc's, and one that is no number is told", S, float,
                   double) {
  MovingDiscSet<S, 2> discs;
  discs.add({{S(1), S(0)}, S(0.1F)});
  discs.add({{S(2), S(0)}, S(0.1F)}, {S(0.5F), S(0)});
  discs.set_velocity(0, {S(0), S(-1)});
  CHECK(discs.velocity(0) == Vec2<S>(S(0), S(-1)));
  CHECK(discs.velocity(1) == Vec2<S>(S(0.5F), S(0)));
  CHECK_FALSE(discs.rejected());
  discs.set_velocity(1, {std::numeric_limits<S>::quiet_NaN(), S(0)});
  CHECK(discs.velocity(1) == Vec2<S>(S(0), S(0)));
  CHECK(discs.rejected());
}
