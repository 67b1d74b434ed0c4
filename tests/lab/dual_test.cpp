// Derivatives carried along, against the rules of differentiation and the C library.
#include <cmath>
#include <limits>
#include <random>
#include <type_traits>

#include <doctest/doctest.h>
#include <Eigen/Core>

#include "wend/lab/dual.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

using wend::lab::Dual;

static_assert(wend::Number<Dual<1>> && wend::Number<Dual<8>> && wend::PlainNumber<Dual<2>>);

bool near(double a, double b) { return std::abs(a - b) <= 1e-14 * (1.0 + std::abs(b)); }

// f(x, y) with its partial derivatives, as a calculus book gives them.
struct Known {
  double value;
  double by_x;
  double by_y;
};
bool agrees(Dual<2> const& found, Known const& known) {
  return near(found.value(), known.value) && near(found.slope(0), known.by_x) && near(found.slope(1), known.by_y);
}

}  // namespace

TEST_CASE("each operation follows its rule of differentiation") {
  std::mt19937_64 random(3);
  std::uniform_real_distribution<double> between(0.2, 3.0);
  int wrong = 0;
  for (int k = 0; k < 10'000; ++k) {
    double const a = between(random) * (k % 2 == 0 ? 1.0 : -1.0);
    double const b = between(random) * (k % 3 == 0 ? 1.0 : -1.0);
    auto const x = Dual<2>::variable(a, 0);
    auto const y = Dual<2>::variable(b, 1);
    wrong += agrees(x + y, {a + b, 1.0, 1.0}) ? 0 : 1;
    wrong += agrees(x - y, {a - b, 1.0, -1.0}) ? 0 : 1;
    wrong += agrees(-x, {-a, -1.0, 0.0}) ? 0 : 1;
    wrong += agrees(x * y, {a * b, b, a}) ? 0 : 1;
    wrong += agrees(x / y, {a / b, 1.0 / b, -a / (b * b)}) ? 0 : 1;
    wrong += agrees(sqrt(x * x), {std::abs(a), a > 0.0 ? 1.0 : -1.0, 0.0}) ? 0 : 1;
    wrong += agrees(sin(x), {std::sin(a), std::cos(a), 0.0}) ? 0 : 1;
    wrong += agrees(cos(y), {std::cos(b), 0.0, -std::sin(b)}) ? 0 : 1;
    wrong += agrees(select(x < y, x, y), {std::fmin(a, b), a < b ? 1.0 : 0.0, a < b ? 0.0 : 1.0}) ? 0 : 1;
    Dual<2> sum = x;
    sum += y;
    sum *= x;
    wrong += agrees(sum, {(a + b) * a, 2.0 * a + b, a}) ? 0 : 1;
  }
  CHECK(wrong == 0);
}

TEST_CASE("a chain of operations follows the chain rule") {
  // d/dx and d/dy of atan2's own gradient check: hypot has gradient (x, y) / hypot.
  auto const x = Dual<2>::variable(3.0, 0);
  auto const y = Dual<2>::variable(4.0, 1);
  CHECK(agrees(wend::length(wend::Vec2<Dual<2>>(x, y)), {5.0, 0.6, 0.8}));
  auto const unit = wend::polar(wend::Vec2<Dual<2>>(x, y)).direction;
  CHECK(agrees(unit.x(), {0.6, 16.0 / 125.0, -12.0 / 125.0}));  // y^2 / r^3, -x y / r^3
  CHECK(agrees(unit.y(), {0.8, -12.0 / 125.0, 9.0 / 125.0}));
}

TEST_CASE("comparisons and finite look at the value alone") {
  auto const a = Dual<1>::variable(1.0, 0);
  Dual<1> const b(1.0);
  CHECK(a <= b);
  CHECK(a >= b);
  CHECK_FALSE(a < b);
  CHECK_FALSE(a > b);
  CHECK(finite(a));
  CHECK_FALSE(finite(Dual<1>(std::numeric_limits<double>::infinity())));
  CHECK_FALSE(finite(a / Dual<1>(0.0)));
}

TEST_CASE("the root's slope at 0 is 0, and a branch that is not taken leaves no trace") {
  auto const zero = Dual<1>::variable(0.0, 0);
  CHECK(sqrt(zero).value() == 0.0);
  CHECK(sqrt(zero).slope(0) == 0.0);
  Dual<1> const kept = select(zero > Dual<1>(0.0), Dual<1>(1.0) / zero, zero);
  CHECK(kept.value() == 0.0);
  CHECK(kept.slope(0) == 1.0);
}

TEST_CASE("constants and fresh numbers have no slope; a double is taken exactly") {
  CHECK(Dual<3>().value() == 0.0);
  CHECK(Dual<3>().slope(2) == 0.0);
  CHECK(Dual<3>(0.1).value() == 0.1);
  CHECK(Dual<3>(0.1F).value() == static_cast<double>(0.1F));
  CHECK(Dual<3>(0.1F).slope(0) == 0.0);
}

TEST_CASE("a knob is a parameter by its place, not by its value") {
  wend::Parameter const gain = 2.0F;
  wend::Parameter const other = 2.0F;
  Dual<2>::knobs = {&other, &gain};
  Dual<2> const seeded(gain);
  Dual<2> const first(other);
  Dual<2> const constant(2.0F);
  Dual<3> const elsewhere(gain);  // another N has knobs of its own
  Dual<2>::knobs = {};
  CHECK(seeded.slope(0) == 0.0);
  CHECK(seeded.slope(1) == 1.0);
  CHECK(first.slope(0) == 1.0);
  CHECK(constant.slope(1) == 0.0);
  CHECK(elsewhere.slope(1) == 0.0);
  CHECK(Dual<2>(gain).slope(1) == 0.0);
}

TEST_CASE("a dual number is a scalar for Eigen") {
  Eigen::Matrix<Dual<2>, 2, 1> const v{Dual<2>::variable(2.0, 0), Dual<2>::variable(3.0, 1)};
  Dual<2> const square = v.dot(v);
  CHECK(agrees(square, {13.0, 4.0, 6.0}));
}
