// Intervals: that nothing falls out, against the machine's own arithmetic on members drawn at random (IEEE 754),
// against enumeration where the members can be counted, and at the special values one by one.
// tests/published/mpfi_test.cpp holds the same operations against another interval library.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <limits>
#include <random>
#include <set>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/interval.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

using wend::polar;  // for plain numbers; that of intervals is found by their type, as in the library
using wend::lab::FloatInterval;
using wend::lab::Interval;
using wend::lab::Trilean;

static_assert(wend::Number<Interval> && wend::Number<FloatInterval>);
static_assert(!wend::PlainNumber<Interval>, "a comparison of intervals is no bool");
static_assert(sizeof(Interval) == 16);

constexpr double infinity = std::numeric_limits<double>::infinity();
constexpr double tiny = std::numeric_limits<double>::denorm_min();
constexpr double largest = std::numeric_limits<double>::max();

bool is(Interval const& x, double low, double high) { return x.low() == low && x.high() == high; }
bool is_whole(auto const& x) { return x.low() == -infinity && x.high() == infinity; }

// Numbers of all sizes, with special ones among them.
template <typename P>
class Source {
 public:
  explicit Source(std::uint64_t seed) : random_(seed) {}

  P number() {
    using L = std::numeric_limits<P>;
    switch (random_() % 16) {
      case 0: return P{0};
      case 1: return sign() * L::denorm_min() * static_cast<P>(1 + random_() % 9);
      case 2: return sign() * L::min() * static_cast<P>(1 + random_() % 9) / P{4};
      case 3: return sign() * L::max() / static_cast<P>(1 + random_() % 9);
      case 4: return sign() * static_cast<P>(random_() % 5);
      case 5:
        return sign() *
               std::ldexp(fraction(),
                          static_cast<int>(random_() % static_cast<unsigned>(L::max_exponent - L::min_exponent)) +
                              L::min_exponent);
      default: return sign() * std::ldexp(fraction(), static_cast<int>(random_() % 8) - 4);
    }
  }
  P between(P low, P high) {
    if (random_() % 8 == 0) {
      return random_() % 2 == 0 ? low : high;
    }
    P const share = fraction() * P{2} - P{1};
    return std::clamp(low * (P{1} - share) + high * share, low, high);
  }

 private:
  P sign() { return random_() % 2 == 0 ? P{1} : P{-1}; }
  P fraction() { return std::uniform_real_distribution<P>(P{0.5}, P{1})(random_); }
  std::mt19937_64 random_;
};

// How often a result on members, as a machine computing in P gives it, is not in the result on intervals.
template <typename I, typename OnInterval, typename OnNumber>
int escapes(std::uint64_t seed, OnInterval const& on_interval, OnNumber const& on_number) {
  using P = typename I::RoundedAs;
  Source<P> source(seed);
  int out = 0;
  for (int k = 0; k < 1'000'000; ++k) {
    std::array<P, 4> ends{source.number(), source.number(), source.number(), source.number()};
    if (k % 3 == 0) {
      ends[1] = ends[0], ends[3] = ends[2];  // single numbers, where the result has nothing to spare
    }
    P const a_low = std::min(ends[0], ends[1]);
    P const a_high = std::max(ends[0], ends[1]);
    P const b_low = std::min(ends[2], ends[3]);
    P const b_high = std::max(ends[2], ends[3]);
    I const result = on_interval(I(static_cast<double>(a_low), static_cast<double>(a_high)),
                                 I(static_cast<double>(b_low), static_cast<double>(b_high)));
    P const x = on_number(source.between(a_low, a_high), source.between(b_low, b_high));
    out += x == x && !result.contains(static_cast<double>(x)) ? 1 : 0;  // what is not a number was not defined
  }
  return out;
}

}  // namespace

TEST_CASE_TEMPLATE("what a machine computes for members lies in the result for intervals", I, Interval, FloatInterval) {
  using P = typename I::RoundedAs;
  CHECK(escapes<I>(1, [](I const& a, I const& b) { return a + b; }, [](P a, P b) { return a + b; }) == 0);
  CHECK(escapes<I>(2, [](I const& a, I const& b) { return a - b; }, [](P a, P b) { return a - b; }) == 0);
  CHECK(escapes<I>(3, [](I const& a, I const& b) { return a * b; }, [](P a, P b) { return a * b; }) == 0);
  constexpr P undefined = std::numeric_limits<P>::quiet_NaN();
  CHECK(escapes<I>(
            4, [](I const& a, I const& b) { return a / b; }, [](P a, P b) { return b == P{0} ? undefined : a / b; }) ==
        0);
  CHECK(escapes<I>(5, [](I const& a, I const&) { return sqrt(a); }, [](P a, P) { return std::sqrt(a); }) == 0);
  CHECK(escapes<I>(6, [](I const& a, I const&) { return sqr(a); }, [](P a, P) { return a * a; }) == 0);
  CHECK(escapes<I>(7, [](I const& a, I const&) { return abs(a); }, [](P a, P) { return std::abs(a); }) == 0);
  CHECK(escapes<I>(8, [](I const& a, I const&) { return -a; }, [](P a, P) { return -a; }) == 0);
  CHECK(escapes<I>(9, [](I const& a, I const& b) { return min(a, b); }, [](P a, P b) { return std::min(a, b); }) == 0);
  CHECK(escapes<I>(10, [](I const& a, I const& b) { return max(a, b); }, [](P a, P b) { return std::max(a, b); }) == 0);
}

TEST_CASE_TEMPLATE("the direction that a machine finds for members lies in the box of directions", I, Interval,
                   FloatInterval) {
  using P = typename I::RoundedAs;
  auto const on_box = [](I const& a, I const& b) { return polar(wend::Vec2<I>(a, b)); };
  auto const on_point = [](P a, P b) { return polar(wend::Vec2<P>(a, b)); };
  CHECK(escapes<I>(
            21, [&](I const& a, I const& b) { return on_box(a, b).direction.x(); },
            [&](P a, P b) { return on_point(a, b).direction.x(); }) == 0);
  CHECK(escapes<I>(
            22, [&](I const& a, I const& b) { return on_box(a, b).direction.y(); },
            [&](P a, P b) { return on_point(a, b).direction.y(); }) == 0);
  CHECK(escapes<I>(
            23, [&](I const& a, I const& b) { return on_box(a, b).length; },
            [&](P a, P b) { return on_point(a, b).length; }) == 0);
}

// Intervals of whole numbers from 0 to 4, and their halves as members: enough to tell every order of four ends apart.
TEST_CASE("comparisons of intervals say what can be and what can not") {
  int wrong = 0;
  for (int code = 0; code < 625; ++code) {
    std::array<int, 4> const e{code % 5, code / 5 % 5, code / 25 % 5, code / 125};
    if (e[0] > e[1] || e[2] > e[3]) {
      continue;
    }
    Interval const a(e[0], e[1]);
    Interval const b(e[2], e[3]);
    std::array<std::set<bool>, 4> found;
    for (double x = e[0]; x <= e[1]; x += 0.5) {
      for (double y = e[2]; y <= e[3]; y += 0.5) {
        found[0].insert(x < y), found[1].insert(x <= y), found[2].insert(x > y), found[3].insert(x >= y);
      }
    }
    std::array<Trilean, 4> const answers{a<b, a <= b, a> b, a >= b};
    for (std::size_t k = 0; k < 4; ++k) {
      wrong += answers[k].can_be != found[k].contains(true) || answers[k].can_be_not != found[k].contains(false) ? 1
                                                                                                                 : 0;
    }
  }
  CHECK(wrong == 0);
}

TEST_CASE("comparisons with no bound on a side are undecided unless the other side decides") {
  Interval const some(1.0, 2.0);
  CHECK((some < Interval::whole()).undecided());
  CHECK((Interval::whole() >= some).undecided());
  CHECK((Interval(3.0, infinity) > some).surely());
  CHECK((Interval(-infinity, 0.0) > some).surely_not());
  CHECK((some <= Interval(2.0, infinity)).surely());
}

TEST_CASE("select gives one of two intervals, or the smallest around both") {
  Interval const a(-1.0, 2.0);
  Interval const b(1.0, 5.0);
  CHECK(is(select(Trilean::yes(), a, b), -1.0, 2.0));
  CHECK(is(select(Trilean::no(), a, b), 1.0, 5.0));
  CHECK(is(select(Trilean::both(), a, b), -1.0, 5.0));
  CHECK(is(hull(Interval(3.0), Interval(-3.0)), -3.0, 3.0));
  CHECK(is_whole(select(Trilean::both(), a, Interval::whole())));
  CHECK(is_whole(hull(Interval(3.0, infinity), Interval(-infinity, 0.0))));
}

TEST_CASE("ends that are no ends of an interval give the whole line") {
  double const nan = std::numeric_limits<double>::quiet_NaN();
  for (auto const& x : {Interval(nan), Interval(1.0, nan), Interval(nan, 1.0), Interval(2.0, 1.0), Interval(infinity),
                        Interval(-infinity), Interval(std::numeric_limits<float>::infinity()),
                        Interval(std::numeric_limits<float>::quiet_NaN())}) {
    CHECK(is_whole(x));
    CHECK(finite(x).undecided());
  }
  CHECK(is(Interval(0.1F), static_cast<double>(0.1F), static_cast<double>(0.1F)));
  CHECK(is(Interval(), 0.0, 0.0));
  CHECK(is(Interval(1.0, infinity), 1.0, infinity));
  CHECK(finite(Interval(-largest, largest)).surely());
}

TEST_CASE("what is defined for no member is the whole line, and for some members their result") {
  CHECK(is_whole(sqrt(Interval(-2.0, -1.0))));
  CHECK(sqrt(Interval(-2.0, 4.0)).low() == 0.0);
  CHECK(sqrt(Interval(-2.0, 4.0)).high() >= 2.0);
  CHECK(is_whole(Interval(1.0, 2.0) / Interval(0.0)));
  CHECK(is_whole(Interval(1.0, 2.0) / Interval(-1.0, 1.0)));
  CHECK(is(Interval(0.0) / Interval(0.0, 1.0), 0.0, 0.0));
  Interval const half = Interval(1.0, 2.0) / Interval(0.0, 4.0);
  CHECK(half.low() <= 0.25);
  CHECK(half.low() > 0.2499);
  CHECK(half.high() == infinity);
  Interval const other_half = Interval(1.0, 2.0) / Interval(-4.0, 0.0);
  CHECK(other_half.low() == -infinity);
  CHECK(other_half.high() >= -0.25);
  CHECK(other_half.high() < -0.2499);
  CHECK((Interval(-2.0, 0.0) / Interval(0.0, 1.0)).high() == 0.0);
}

TEST_CASE("a divisor whose lower end is a zero with a sign is no different") {
  for (Interval const& by :
       {sqr(Interval(-1.0, 1.0)), abs(Interval(-1.0, 1.0)), Interval(-0.0, 1.0), Interval(0.0, 1.0)}) {
    CHECK(is_whole(Interval(-5.0, 3.0) / by));
    CHECK((Interval(3.0) / by).low() > 2.9999);
    CHECK((Interval(3.0) / by).high() == infinity);
  }
}

TEST_CASE("no bound times zero is zero, and no bound stays no bound") {
  CHECK(is(Interval(0.0) * Interval::whole(), 0.0, 0.0));
  CHECK(is(Interval::whole() * Interval(0.0), 0.0, 0.0));
  CHECK(is(Interval(0.0, 1.0) * Interval(2.0, infinity), 0.0, infinity));
  CHECK(is_whole(Interval(-1.0, 1.0) * Interval(2.0, infinity)));
  CHECK(is_whole(Interval::whole() + Interval(1.0)));
  CHECK(is_whole(Interval::whole() - Interval::whole()));
  CHECK(is(sqr(Interval::whole()), 0.0, infinity));
  CHECK(is(abs(Interval::whole()), 0.0, infinity));
  CHECK(is(sqrt(Interval::whole()), 0.0, infinity));
  CHECK(is(min(Interval::whole(), Interval(1.0)), -infinity, 1.0));
  CHECK(is(max(Interval::whole(), Interval(1.0)), 1.0, infinity));
  CHECK(is_whole(Interval::whole() / Interval(1.0, 2.0)));
  Interval const small = Interval(1.0) / Interval(2.0, infinity);
  CHECK(small.low() == 0.0);
  CHECK(small.high() >= 0.5);
}

TEST_CASE("an end that is zero for certain stays zero") {
  CHECK((Interval(0.0, 1.0) * Interval(0.0, 1.0)).low() == 0.0);
  CHECK((Interval(-1.0, 0.0) * Interval(0.0, 1.0)).high() == 0.0);
  CHECK((Interval(tiny, 1.0) * Interval(tiny, 1.0)).low() == 0.0);
  CHECK(is(Interval(0.0) * Interval(-1.0, 1.0), 0.0, 0.0));
  CHECK(is(Interval(0.0) + Interval(0.0), 0.0, 0.0));
  CHECK(is(Interval(0.0) / Interval(1.0, 2.0), 0.0, 0.0));
  CHECK(is(sqr(Interval(0.0)), 0.0, 0.0));
  CHECK(is(sqrt(Interval(0.0)), 0.0, 0.0));
  CHECK((Interval(tiny) * Interval(0.25)).high() > 0.0);  // rounded to zero, and not zero
  CHECK((Interval(tiny) * Interval(-0.25)).low() < 0.0);
}

// 2^-1021 and up to its double, half a unit in the last place is the least positive number: a sum that ends half way is
// rounded down, and a step by that half would be rounded away again.
TEST_CASE("a sum near the least normal number reaches beyond its rounding") {
  Interval const up = Interval(0x1p-1021) + Interval(tiny);
  CHECK(up.high() > 0x1p-1021);
  Interval const down = Interval(-0x1p-1021) - Interval(tiny);
  CHECK(down.low() < -0x1p-1021);
}

TEST_CASE("what overflows has no bound on that side and the largest number on the other") {
  Interval const up = Interval(largest) + Interval(largest);
  CHECK(up.high() == infinity);
  CHECK(up.low() <= largest);
  CHECK(up.low() > 0.999 * largest);
  Interval const down = Interval(-largest) * Interval(2.0, 3.0);
  CHECK(down.low() == -infinity);
  CHECK(down.high() < -0.999 * largest);
  double const largest_float = static_cast<double>(std::numeric_limits<float>::max());
  FloatInterval const twice = FloatInterval(largest_float) + FloatInterval(largest_float);
  CHECK(twice.high() == infinity);
  CHECK(finite(twice).undecided());
  CHECK((twice * FloatInterval(0.25F)).contains(infinity));  // in float, once infinite is infinite for good
  CHECK(sqr(FloatInterval(1e25F)).high() == infinity);
  CHECK((FloatInterval(1.0F) / FloatInterval(1e-45F)).high() == infinity);
}

TEST_CASE("a direction whose length overflows is (0, 0) in float, and so may it be in a box") {
  auto const box = polar(wend::Vec2<FloatInterval>(FloatInterval(1e25F), FloatInterval(1.0F)));
  auto const point = polar(wend::Vec2<float>(1e25F, 1.0F));
  CHECK(box.direction.x().contains(static_cast<double>(point.direction.x())));
  CHECK(box.length.contains(static_cast<double>(point.length)));
}

TEST_CASE("middle is a member, width and sizes are those of the ends") {
  CHECK(Interval(1.0, 2.0).middle() == 1.5);
  CHECK(Interval(0.75 * largest, largest).middle() <= largest);
  CHECK(Interval(-largest, largest).middle() == 0.0);
  CHECK(Interval::whole().middle() == 0.0);
  CHECK(Interval(5.0, infinity).middle() == 5.0);
  CHECK(Interval(-infinity, -5.0).middle() == -5.0);
  CHECK(Interval(-infinity, 5.0).middle() == 0.0);
  CHECK(Interval(-1.0, 2.0).width() == 3.0);
  CHECK(Interval(-3.0, 2.0).mag() == 3.0);
  CHECK(Interval(-3.0, 2.0).mig() == 0.0);
  CHECK(Interval(-3.0, -2.0).mig() == 2.0);
  CHECK(Interval(2.0, 3.0).mig() == 2.0);
}

TEST_CASE("an interval keeps its ends when the rounding changes") {
  Interval const x(0.1, 0.2);
  FloatInterval const y(x);
  CHECK(y.low() == 0.1);
  CHECK(y.high() == 0.2);
  CHECK((y * FloatInterval(1.0F)).contains(static_cast<double>(0.1F)));  // and is then rounded by an operation
  CHECK_FALSE((x * Interval(1.0)).contains(static_cast<double>(0.1F) - 1e-8));
}

TEST_CASE("cosine_of near the origin and along the axes") {
  CHECK(cosine_of(Interval(1.0, 2.0), Interval(0.0)).high() >= 1.0);
  CHECK(cosine_of(Interval(1.0, 2.0), Interval(0.0)).low() > 1.0 - 1e-14);
  CHECK(cosine_of(Interval(0.0, 1.0), Interval(-1.0, 1.0)).low() == 0.0);
  CHECK(cosine_of(Interval(-1.0, 1.0), Interval(-1.0, 1.0)).low() <= -1.0);
  CHECK(is(cosine_of(Interval(0.0), Interval(1.0, 2.0)), 0.0, 0.0));
  // The squares of the one end lose their digits here, those of the other do not.
  CHECK(cosine_of(Interval(1e-160, 1e-100), Interval(1e-161, 1e-160)).low() <= std::sqrt(0.5) - 1e-3);
  CHECK(cosine_of(Interval(1e200, 1e300), Interval(1e200, 1e300)).contains(std::sqrt(0.5)));
  CHECK(cosine_of(Interval::whole(), Interval(1.0)).contains(-1.0));
}

TEST_CASE("an interval is a scalar for Eigen") {
  Eigen::Matrix<Interval, 2, 1> const v{Interval(1.0, 2.0), Interval(-1.0, 3.0)};
  Interval const sum = v.sum();
  CHECK(sum.contains(0.0));
  CHECK(sum.contains(5.0));
  CHECK(sum.width() < 5.0 + 1e-14);
}
