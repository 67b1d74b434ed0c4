// What Sloped says of a box, against values, derivatives and differences at points in it (on double and Dual).
#include <algorithm>
#include <cmath>
#include <limits>
#include <random>

#include <doctest/doctest.h>

#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/sloped.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

using wend::Vec2;
using wend::lab::Dual;
using wend::lab::Interval;
using wend::lab::Sloped;

static_assert(wend::Number<Sloped>);

constexpr double infinity = std::numeric_limits<double>::infinity();

// Some of everything a signal may do.
struct Mixture {
  template <wend::Number S>
  S operator()(Vec2<S> const& p) const {
    Vec2<S> const a = p - Vec2<S>{S(0.5F), S(-0.25F)};
    Vec2<S> const b = p - Vec2<S>{S(-1.5F), S(1.0F)};
    using wend::length;  // unqualified, so that Sloped's own is found: the general one has no bound where a root is 0
    S const nearer = wend::least(length(a), length(b));
    S const product = p.x() * p.y() - S(0.5F) * wend::squared(p.x());
    return wend::greatest(S(nearer + product), S(p.x() / (S(1.0F) + length(b)))) + wend::magnitude(p.y());
  }
};

Sloped over(Interval const& x, Interval const& y) {
  return Mixture{}(Vec2<Sloped>{Sloped::position(x, 0), Sloped::position(y, 1)});
}

}  // namespace

TEST_CASE("Sloped encloses values, gradients and differences of what is computed on it") {
  std::mt19937 random(3);
  std::uniform_real_distribution<double> place(-2.0, 2.0);
  std::uniform_real_distribution<double> share(0.0, 1.0);
  int unbounded = 0, values = 0, slopes = 0, steeper = 0, farther = 0;
  double const rounding = 1e-14;  // of Dual and of the differences, which are computed in double
  for (int i = 0; i < 2000; ++i) {
    double const size = std::pow(10.0, -3.0 * share(random));
    double const left = place(random);
    double const low = place(random);
    Interval const about_nothing(-rounding, rounding);
    Sloped const whole = over(Interval(left, left + size), Interval(low, low + size));
    unbounded += whole.per_metre() < infinity ? 0 : 1;
    for (int k = 0; k < 10; ++k) {
      Vec2<double> const p{left + size * share(random), low + size * share(random)};
      Vec2<double> const q{left + size * share(random), low + size * share(random)};
      Dual<2> const at_p = Mixture{}(Vec2<Dual<2>>{Dual<2>::variable(p.x(), 0), Dual<2>::variable(p.y(), 1)});
      values += whole.value().contains(at_p.value()) ? 0 : 1;
      slopes += (whole.gradient().x() + about_nothing).contains(at_p.slope(0)) &&
                        (whole.gradient().y() + about_nothing).contains(at_p.slope(1))
                    ? 0
                    : 1;
      steeper += std::hypot(at_p.slope(0), at_p.slope(1)) <= whole.per_metre() + rounding ? 0 : 1;
      farther += std::abs(at_p.value() - Mixture{}(q)) <= whole.per_metre() * (p - q).norm() + rounding ? 0 : 1;
    }
  }
  CHECK(unbounded == 0);
  CHECK(values == 0);
  CHECK(slopes == 0);
  CHECK(steeper == 0);
  CHECK(farther == 0);
}

TEST_CASE("Sloped knows that a distance changes by no more than the way, whatever the box") {
  for (double const size : {1e-6, 0.1, 3.0, 1000.0}) {
    Vec2<Sloped> const p{Sloped::position(Interval(-size, 2.0 * size), 0), Sloped::position(Interval(-size, size), 1)};
    CHECK(length(p).per_metre() == doctest::Approx(1.0).epsilon(1e-14));
    CHECK(length(p).per_metre() >= 1.0);
    Sloped const other = length(Vec2<Sloped>(p - Vec2<Sloped>{Sloped(0.01), Sloped(0.02)}));
    CHECK(wend::least(length(p), other).per_metre() == doctest::Approx(1.0).epsilon(1e-14));
  }
}

TEST_CASE("Sloped tells the lesser of two, however it is chosen, from a choice that may jump") {
  Vec2<Sloped> const p{Sloped::position(Interval(-1.0, 1.0), 0), Sloped::position(Interval(-1.0, 1.0), 1)};
  Sloped const a = p.x();
  Sloped const b = p.y();
  CHECK(select(a < b, a, b).per_metre() <= 1.0 + 1e-14);
  CHECK(select(b > a, a, b).per_metre() <= 1.0 + 1e-14);
  CHECK(select(a < b, b, a).per_metre() <= 1.0 + 1e-14);  // the greater
  CHECK(select(a < b, a, a + Sloped(1.0)).per_metre() == infinity);
  CHECK(select(a < Sloped(0.0), a, b).per_metre() == infinity);
  CHECK(select((a < b) && (a < b), a, b).per_metre() == infinity);  // not wrong, only forgotten
  CHECK(select(a < Sloped(2.0), a, b).per_metre() <= 1.0 + 1e-14);
  // Equal bounds do not make two numbers the same: here they are each other's mirror image.
  Sloped const mirrored = -Sloped::position(Interval(-1.0, 1.0), 0);
  CHECK(select(a < b, mirrored, b).per_metre() == infinity);
  // The lesser of the two is also enclosed as such.
  Sloped const high = Sloped::position(Interval(0.0, 3.0), 0);
  CHECK(select(a < high, a, high).value().high() == 1.0);
}

TEST_CASE("a root at 0 and a quotient by what may be 0 have no bound") {
  Sloped const x = Sloped::position(Interval(0.0, 1.0), 0);
  CHECK(sqrt(x).per_metre() == infinity);
  CHECK((Sloped(1.0) / x).per_metre() == infinity);
  CHECK((Sloped(0.0) * sqrt(x)).per_metre() == 0.0);
  CHECK((Sloped(1.0) / (x + Sloped(1.0))).per_metre() == doctest::Approx(1.0));
}
