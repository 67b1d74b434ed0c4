// Each lane of a pack does what a float alone does, to the bit.
#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <random>
#include <type_traits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/lab/pack.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

using wend::lab::Pack;

static_assert(wend::Number<Pack<2>> && wend::Number<Pack<4>> && wend::Number<Pack<8>> && wend::Number<Pack<16>>);
static_assert(sizeof(Pack<8>) == 8 * sizeof(float) && std::is_trivially_copyable_v<Pack<8>>);
static_assert(std::is_trivially_copyable_v<Pack<8>::Mask>);
static_assert(!std::is_convertible_v<float, Pack<4>>, "a float spreads over the lanes only where that is written");
static_assert(!std::is_convertible_v<Pack<4>::Mask, bool> && !std::is_constructible_v<bool, Pack<4>::Mask>,
              "a branch on lanes must not compile");

template <typename P>
using Row = std::array<float, static_cast<std::size_t>(P::width())>;

// Random bit patterns: every kind of float turns up, denormals, infinities and not-a-numbers among them.
template <typename P>
Row<P> random_bits(std::mt19937& random) {
  Row<P> result{};
  for (float& x : result) {
    x = std::bit_cast<float>(static_cast<std::uint32_t>(random()));
  }
  return result;
}

template <typename P>
P pack(Row<P> const& row) {
  return P([&row](int k) { return row[static_cast<std::size_t>(k)]; });
}

// Calls check(row of a, row of b) on many rows, some of them with equal members, and all kinds of values.
template <typename P, typename F>
int count_wrong(F const& wrong_lanes) {
  std::mt19937 random(20240607);
  int wrong = 0;
  for (int i = 0; i < 5000; ++i) {
    auto a = random_bits<P>(random);
    auto b = random_bits<P>(random);
    a[0] = static_cast<float>(i % 7) - 3.0F;  // and ordinary values, equal ones among them
    b[0] = static_cast<float>(i % 5) - 2.0F;
    b.back() = a.back();
    wrong += wrong_lanes(a, b);
  }
  return wrong;
}

}  // namespace

TEST_CASE_TEMPLATE("arithmetic on lanes gives the bits of a float", P, Pack<2>, Pack<4>, Pack<8>, Pack<16>) {
  CHECK(count_wrong<P>([](Row<P> const& a, Row<P> const& b) {
          P const x = pack<P>(a);
          P const y = pack<P>(b);
          P const sum = x + y, difference = x - y, product = x * y, quotient = x / y, negative = -x, side = sqrt(x);
          P added = x, multiplied = x;
          added += y;
          multiplied *= y;
          int wrong = 0;
          for (int k = 0; k < P::width(); ++k) {
            float const p = a[static_cast<std::size_t>(k)];
            float const q = b[static_cast<std::size_t>(k)];
            bool const good = numbers::same(sum[k], p + q) && numbers::same(difference[k], p - q) &&
                              numbers::same(product[k], p * q) && numbers::same(quotient[k], p / q) &&
                              numbers::same(negative[k], -p) && numbers::same(side[k], std::sqrt(p)) &&
                              numbers::same(added[k], p + q) && numbers::same(multiplied[k], p * q);
            wrong += good ? 0 : 1;
          }
          return wrong;
        }) == 0);
}

TEST_CASE_TEMPLATE("comparisons and masks answer in each lane as bools do", P, Pack<2>, Pack<4>, Pack<8>, Pack<16>) {
  using Mask = typename P::Mask;
  CHECK(count_wrong<P>([](Row<P> const& a, Row<P> const& b) {
          P const x = pack<P>(a);
          P const y = pack<P>(b);
          Mask const less = x<y, more = x> y, at_most = x <= y, at_least = x >= y, sound = finite(x);
          Mask const both = less && sound, either = less || sound, neither = !(less || sound);
          Mask const chosen = select(less, sound, at_least);
          P const picked = select(less, x, y);
          int wrong = 0;
          for (int k = 0; k < P::width(); ++k) {
            float const p = a[static_cast<std::size_t>(k)];
            float const q = b[static_cast<std::size_t>(k)];
            bool const l = p < q, s = std::isfinite(p);
            bool const good = less[k] == l && more[k] == (p > q) && at_most[k] == (p <= q) && at_least[k] == (p >= q) &&
                              sound[k] == s && both[k] == (l && s) && either[k] == (l || s) &&
                              neither[k] == !(l || s) && chosen[k] == (l ? s : p >= q) &&
                              numbers::same(picked[k], l ? p : q);
            wrong += good ? 0 : 1;
          }
          return wrong;
        }) == 0);
}

TEST_CASE_TEMPLATE("packs and masks can be made from one value, and start at zero and false", P, Pack<2>, Pack<8>) {
  for (int k = 0; k < P::width(); ++k) {
    CHECK(P(2.5F)[k] == 2.5F);
    CHECK(numbers::same(P{}[k], 0.0F));
    CHECK(typename P::Mask(true)[k]);
    CHECK_FALSE(typename P::Mask(false)[k]);
    CHECK_FALSE(typename P::Mask{}[k]);
    CHECK(P([](int lane) { return static_cast<float>(lane * lane); })[k] == static_cast<float>(k * k));
  }
}

TEST_CASE_TEMPLATE("a negative root is no number in its own lane only", P, Pack<4>, Pack<8>) {
  P const roots = sqrt(P([](int k) { return k == 1 ? -1.0F : 4.0F; }));
  CHECK(roots[0] == 2.0F);
  CHECK(std::isnan(roots[1]));
  CHECK(roots[2] == 2.0F);
}

// Eigen's own sums, dot products and norms, on lanes against floats. (Not `vector * number`: Eigen makes an aligned
// vector for the number, which clang refuses for more than four lanes; the library has `scaled` for it.)
TEST_CASE_TEMPLATE("a pack can be the scalar of an Eigen vector", P, Pack<4>, Pack<8>) {
  auto const at = [](int salt, int k) { return 0.37F * static_cast<float>(k + 1) - 0.91F * static_cast<float>(salt); };
  auto const one = [&at](int salt) { return P([&at, salt](int k) { return at(salt, k); }); };
  wend::Vec2<P> const a{one(1), one(2)};
  wend::Vec2<P> const b{one(3), one(4)};
  wend::Vec2<P> const sum = a + b;
  P const product = a.dot(b);
  P const square = a.squaredNorm();
  for (int k = 0; k < P::width(); ++k) {
    wend::Vec2<float> const p{at(1, k), at(2, k)};
    wend::Vec2<float> const q{at(3, k), at(4, k)};
    CHECK(numbers::same(numbers::lane(sum, k), wend::Vec2<float>(p + q)));
    CHECK(numbers::same(product[k], p.dot(q)));
    CHECK(numbers::same(square[k], p.squaredNorm()));
  }
}
