// The number concept, selection, and the little functions that decide what a not-a-number does.
#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <cstring>
#include <initializer_list>
#include <limits>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/lab/pack.hpp"
#include "wend/number.hpp"

namespace {

template <typename... S>
constexpr bool all_are_numbers = (wend::Number<S> && ...);
static_assert(all_are_numbers<WEND_TEST_NUMBERS>);
static_assert(wend::PlainNumber<float> && wend::PlainNumber<double>);
static_assert(!wend::PlainNumber<wend::lab::Pack<4>>, "a comparison of lanes is no bool");
// An integer has no infinity and no root of its own type: `finite(1)` could mean float or double, and so is no call.
static_assert(!wend::Number<int> && !wend::Number<long> && !wend::Number<bool>);
static_assert(!wend::Number<long double>, "not one of the two formats whose bits `finite` knows");
static_assert(!wend::Number<char const*> && !wend::Number<wend::lab::Pack<4>::Mask>);

// From bits, since under -ffast-math a compiler may assume that these values do not occur.
constexpr float nan_f = std::bit_cast<float>(std::uint32_t{0x7fc00000});
constexpr float inf_f = std::bit_cast<float>(std::uint32_t{0x7f800000});

constexpr std::array<float, 12> specials{0.0F,     -0.0F,    1.0F,      -1.0F, 0.5F,  3.0e38F,
                                         -3.0e38F, 1.0e-45F, -1.0e-45F, nan_f, inf_f, -inf_f};

float special(int i) { return specials[static_cast<std::size_t>(i) % specials.size()]; }

// A number with these bits, in memory. Not by std::bit_cast: under -ffast-math clang 19 takes it that whatever a
// function returns by value is finite.
template <typename T>
class InMemory {
 public:
  template <typename Bits>
  explicit InMemory(Bits bits) {
    static_assert(sizeof(Bits) == sizeof(T));
    std::memcpy(&value_, &bits, sizeof bits);
  }
  [[nodiscard]] T const& operator*() const { return value_; }

 private:
  T value_;
};

// What every two-argument function has to give on all pairs of special values, lane by lane.
template <typename S, typename OnNumber, typename OnPlain>
bool same_on_all_pairs(OnNumber const& on_number, OnPlain const& on_plain) {
  using P = numbers::plain_t<S>;
  bool good = true;
  int const n = static_cast<int>(specials.size());
  for (int shift = 0; shift < n; ++shift) {
    for (int start = 0; start < n; ++start) {
      auto const left = [start](int k) { return special(start + k); };
      auto const right = [start, shift](int k) { return special(start + shift + 5 * k); };
      S const result = on_number(numbers::make<S>(left), numbers::make<S>(right));
      for (int k = 0; k < numbers::lanes<S>(); ++k) {
        P const expected = on_plain(static_cast<P>(left(k)), static_cast<P>(right(k)));
        good = good && numbers::same(numbers::lane(result, k), expected);
      }
    }
  }
  return good;
}

}  // namespace

// IEEE 754-2019, 3.4: a binary number is infinite or not a number exactly when all bits of its exponent are set.
TEST_CASE("finite agrees with the exponent field over every exponent") {
  int wrong = 0;
  for (std::uint32_t sign : {0U, 1U}) {
    for (std::uint32_t exponent = 0; exponent <= 255; ++exponent) {
      for (std::uint32_t fraction : {0U, 1U, 0x400000U, 0x7fffffU}) {
        InMemory<float> const x((sign << 31) | (exponent << 23) | fraction);
        wrong += wend::finite(*x) != (exponent < 255) ? 1 : 0;
      }
    }
  }
  for (std::uint64_t sign : {0U, 1U}) {
    for (std::uint64_t exponent = 0; exponent <= 2047; ++exponent) {
      for (std::uint64_t fraction :
           {std::uint64_t{0}, std::uint64_t{1}, std::uint64_t{0x8000000000000}, std::uint64_t{0xfffffffffffff}}) {
        InMemory<double> const x((sign << 63) | (exponent << 52) | fraction);
        wrong += wend::finite(*x) != (exponent < 2047) ? 1 : 0;
      }
    }
  }
  CHECK(wrong == 0);
}

TEST_CASE("finite knows the values with a name") {
  using F = std::numeric_limits<float>;
  using D = std::numeric_limits<double>;
  for (float const x : {0.0F, -0.0F, F::denorm_min(), -F::denorm_min(), F::min(), F::max(), F::lowest()}) {
    CHECK(wend::finite(x));
  }
  for (double const x : {0.0, -0.0, D::denorm_min(), D::min(), D::max(), D::lowest()}) {
    CHECK(wend::finite(x));
  }
  for (std::uint32_t const bits : {0x7f800000U, 0xff800000U, 0x7fc00000U, 0xffc00000U, 0x7f800001U, 0x7fffffffU}) {
    CHECK_FALSE(wend::finite(*InMemory<float>(bits)));
  }
  static_assert(wend::finite(1.0F) && wend::finite(1.0) && !wend::finite(inf_f) && !wend::finite(nan_f));
}

TEST_CASE_TEMPLATE("select takes a where the mask holds and b elsewhere", S, WEND_TEST_NUMBERS) {
  using wend::select;  // a guest's own is found by its type; the C library has a `select` of its own to hide
  for (int pattern = 0; pattern < (1 << numbers::lanes<S>()); ++pattern) {
    auto const bit = [pattern](int k) { return ((pattern >> k) & 1) != 0; };
    wend::mask_t<S> const mask = numbers::make_mask<S>(bit);
    S const a = numbers::make<S>([](int k) { return 1.0F + static_cast<float>(k); });
    S const b = numbers::make<S>([](int k) { return -1.0F - static_cast<float>(k); });
    S const chosen = select(mask, a, b);
    wend::mask_t<S> const masks = select(mask, !mask, mask);  // false everywhere, whatever the mask
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      CHECK(numbers::holds(mask, k) == bit(k));
      CHECK(numbers::lane(chosen, k) == numbers::lane(bit(k) ? a : b, k));
      CHECK_FALSE(numbers::holds(masks, k));
    }
  }
}

TEST_CASE_TEMPLATE("select hands a not-a-number through only where it is chosen", S, WEND_TEST_NUMBERS) {
  using wend::finite;
  using wend::select;
  wend::mask_t<S> const yes = S(1.0F) > S(0.0F);
  CHECK(numbers::all<S>(finite(select(yes, S(2.0F), S(nan_f)))));
  CHECK(numbers::none<S>(finite(select(!yes, S(2.0F), S(nan_f)))));
}

// The C library's fmin and fmax differ on purpose: they skip a not-a-number on either side, and these only on the left.
TEST_CASE_TEMPLATE("least and greatest are b when a is not a number, and never clean b", S, WEND_TEST_NUMBERS) {
  using P = numbers::plain_t<S>;
  auto const unordered = [](P a, P b) { return numbers::not_a_number(a) || numbers::not_a_number(b); };
  auto const least_by_rule = [&](P a, P b) { return unordered(a, b) ? b : std::fmin(a, b); };
  auto const greatest_by_rule = [&](P a, P b) { return unordered(a, b) ? b : std::fmax(a, b); };
  // Zeros of either sign are equal: which of them fmin gives is not defined, so compare them as one.
  auto const unsigned_zero = [](auto const& f) {
    return [f](auto const& a, auto const& b) {
      auto const x = f(a, b);
      return x + decltype(x)(0.0F);  // -0 + 0 is +0
    };
  };
  CHECK(same_on_all_pairs<S>(unsigned_zero([](S const& a, S const& b) { return wend::least(a, b); }),
                             unsigned_zero(least_by_rule)));
  CHECK(same_on_all_pairs<S>(unsigned_zero([](S const& a, S const& b) { return wend::greatest(a, b); }),
                             unsigned_zero(greatest_by_rule)));
}

TEST_CASE_TEMPLATE("clamp holds any value in its bounds, a not-a-number at the lower one", S, WEND_TEST_NUMBERS) {
  for (int start = 0; start < static_cast<int>(specials.size()); ++start) {
    S const x = numbers::make<S>([start](int k) { return special(start + k); });
    S const held = wend::clamp(x, S(-0.25F), S(0.75F));
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      float const one = special(start + k);
      float const expected = numbers::not_a_number(one) ? -0.25F : std::fmax(-0.25F, std::fmin(one, 0.75F));
      CHECK(static_cast<double>(numbers::lane(held, k)) == static_cast<double>(expected));
    }
  }
}

TEST_CASE_TEMPLATE("magnitude, squared and root do in each lane what the C library does", S, WEND_TEST_NUMBERS) {
  using P = numbers::plain_t<S>;
  for (int start = 0; start < static_cast<int>(specials.size()); ++start) {
    S const x = numbers::make<S>([start](int k) { return special(start + k); });
    S const size = wend::magnitude(x);
    S const square = wend::squared(x);
    S const back = wend::root(size);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      P const one = static_cast<P>(special(start + k));
      CHECK(numbers::same(numbers::lane(size, k) + P(0), std::fabs(one)));  // + 0: |-0| keeps its sign
      CHECK(numbers::same(numbers::lane(square, k), one * one));
      CHECK(numbers::same(numbers::lane(back, k) + P(0), std::sqrt(std::fabs(one))));
    }
  }
}

TEST_CASE("numbers work at compile time") {
  static_assert(wend::least(1.0F, 2.0F) == 1.0F && wend::greatest(1.0, 2.0) == 2.0);
  static_assert(wend::clamp(5.0F, 0.0F, 1.0F) == 1.0F && wend::clamp(nan_f, 0.0F, 1.0F) == 0.0F);
  static_assert(wend::magnitude(-2.0F) == 2.0F && wend::squared(-3.0F) == 9.0F);
  static_assert(wend::select(true, 1, 2) == 1 && !wend::select(false, true, false));
  CHECK(wend::clamp(0.5F, 0.0F, 1.0F) == 0.5F);
}
