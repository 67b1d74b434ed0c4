// Intervals against MPFI (Revol and Rouillier 2005, "Motivations for an arbitrary precision interval arithmetic and the
// MPFI library", Reliable Computing 11:275-290), an interval library of its own making: with the 53 bits of a double it
// gives the tightest result there is, and with 400 bits practically the exact one.
#include <doctest/doctest.h>

#ifndef WEND_HAS_MPFI

#include <cstdio>

TEST_CASE("intervals enclose what MPFI gives") { std::puts("skipped: MPFI not found"); }

#else

#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <cstdint>
#include <limits>
#include <random>
#include <string>

#include <mpfi.h>

#include "wend/lab/interval.hpp"

namespace {

using wend::lab::Interval;

constexpr double infinity = std::numeric_limits<double>::infinity();
constexpr double largest = std::numeric_limits<double>::max();

// One interval of MPFI.
class Mpfi {
 public:
  explicit Mpfi(mpfr_prec_t bits) { mpfi_init2(x_, bits); }
  Mpfi(Mpfi const&) = delete;
  Mpfi& operator=(Mpfi const&) = delete;
  ~Mpfi() { mpfi_clear(x_); }

  [[nodiscard]] mpfi_ptr get() { return x_; }
  void set(Interval const& a) { mpfi_interv_d(x_, a.low(), a.high()); }
  // The ends rounded outward to double.
  [[nodiscard]] double low() const { return mpfr_get_d(&x_->left, MPFR_RNDD); }
  [[nodiscard]] double high() const { return mpfr_get_d(&x_->right, MPFR_RNDU); }
  [[nodiscard]] bool is_nan() const { return mpfi_nan_p(x_) != 0; }
  [[nodiscard]] bool lies_in(Interval const& a) const {
    return mpfr_cmp_d(&x_->left, a.low()) >= 0 && mpfr_cmp_d(&x_->right, a.high()) <= 0;
  }

 private:
  mpfi_t x_;
};

// How many numbers of double precision lie from a to b: the order of their bits is that of their values.
std::int64_t steps_between(double a, double b) {
  auto const place = [](double x) {
    auto const bits = std::bit_cast<std::int64_t>(x + 0.0);
    return bits < 0 ? std::numeric_limits<std::int64_t>::min() - bits : bits;
  };
  return std::abs(place(b) - place(a));
}

class Boxes {
 public:
  explicit Boxes(std::uint64_t seed) : random_(seed) {}

  Interval next() {
    switch (random_() % 12) {
      case 0: return Interval(number());
      case 1: return Interval(0.0, std::abs(number()));
      case 2: return Interval(-std::abs(number()), 0.0);
      case 3: return Interval(number(), infinity);
      case 4: return Interval(-infinity, number());
      case 5: {
        double const x = number();
        return Interval(x, std::nextafter(x, infinity));
      }
      case 6: return random_() % 8 == 0 ? Interval::whole() : Interval(0.0);
      default: {
        double const a = number();
        double const b = number();
        return Interval(std::min(a, b), std::max(a, b));
      }
    }
  }

 private:
  double number() {
    double const sign = random_() % 2 == 0 ? 1.0 : -1.0;
    double const fraction = std::uniform_real_distribution<double>(0.5, 1.0)(random_);
    switch (random_() % 12) {
      case 0: return 0.0;
      case 1: return sign * std::numeric_limits<double>::denorm_min() * static_cast<double>(1 + random_() % 99);
      case 2: return sign * std::ldexp(fraction, -1020 + static_cast<int>(random_() % 4));
      case 3: return sign * std::ldexp(fraction, static_cast<int>(random_() % 2097) - 1073);
      case 4: return sign * largest / static_cast<double>(1 + random_() % 3);
      case 5: return sign * static_cast<double>(random_() % 17) / 4.0;
      default: return sign * std::ldexp(fraction, static_cast<int>(random_() % 12) - 6);
    }
  }
  std::mt19937_64 random_;
};

struct Report {
  int not_tight_one = 0;      // boxes on which the result does not contain MPFI's with 53 bits
  int not_exact_one = 0;      // the same with 400 bits
  std::int64_t most_wide = 0;  // numbers of double precision that both ends together go beyond MPFI's
  int compared = 0;
};

// One operation on a million random pairs of boxes. `theirs(result, a, b)` is MPFI's.
template <typename Ours, typename Theirs>
Report compare(std::uint64_t seed, Ours const& ours, Theirs const& theirs) {
  Report report;
  Boxes boxes(seed);
  Mpfi a(53), b(53), tight(53), exact(400);
  for (int k = 0; k < 1'000'000; ++k) {
    Interval const x = boxes.next();
    Interval const y = boxes.next();
    Interval const result = ours(x, y);
    a.set(x), b.set(y);
    theirs(tight.get(), a.get(), b.get());
    theirs(exact.get(), a.get(), b.get());
    if (tight.is_nan()) {
      continue;  // defined for no member, or not for all: ours is checked in tests/lab/interval_test.cpp
    }
    ++report.compared;
    report.not_tight_one += tight.lies_in(result) ? 0 : 1;
    report.not_exact_one += exact.lies_in(result) ? 0 : 1;
    report.most_wide = std::max(report.most_wide,
                                steps_between(result.low(), tight.low()) + steps_between(result.high(), tight.high()));
  }
  return report;
}

void check(char const* name, Report const& report, std::int64_t ulps) {
  CAPTURE(std::string(name));
  MESSAGE(std::string(name) << ": at most " << report.most_wide << " ulp wider, both ends together, on "
                            << report.compared);
  CHECK(report.not_tight_one == 0);
  CHECK(report.not_exact_one == 0);
  CHECK(report.most_wide <= ulps);
  CHECK(report.compared > 500'000);
}

// MPFI has no minimum of intervals; MPFR, which it stands on, has that of numbers.
void mpfi_min(mpfi_ptr r, mpfi_srcptr a, mpfi_srcptr b) {
  mpfr_min(&r->left, &a->left, &b->left, MPFR_RNDD), mpfr_min(&r->right, &a->right, &b->right, MPFR_RNDU);
}
void mpfi_max(mpfi_ptr r, mpfi_srcptr a, mpfi_srcptr b) {
  mpfr_max(&r->left, &a->left, &b->left, MPFR_RNDD), mpfr_max(&r->right, &a->right, &b->right, MPFR_RNDU);
}

// x / hypot(x, y) to 200 bits, rounded to nearest in double.
class PreciseCosine {
 public:
  PreciseCosine() { mpfr_inits2(200, x_, y_, r_, static_cast<mpfr_ptr>(nullptr)); }
  PreciseCosine(PreciseCosine const&) = delete;
  PreciseCosine& operator=(PreciseCosine const&) = delete;
  ~PreciseCosine() { mpfr_clears(x_, y_, r_, static_cast<mpfr_ptr>(nullptr)); }

  double operator()(double x, double y) {
    mpfr_set_d(x_, x, MPFR_RNDN), mpfr_set_d(y_, y, MPFR_RNDN);
    mpfr_hypot(r_, x_, y_, MPFR_RNDN);
    mpfr_div(r_, x_, r_, MPFR_RNDN);
    return mpfr_get_d(r_, MPFR_RNDN);
  }

 private:
  mpfr_t x_;
  mpfr_t y_;
  mpfr_t r_;
};

}  // namespace

TEST_CASE("intervals enclose what MPFI gives, and are at most 4 ulp wider") {
  check("+", compare(1, [](auto& a, auto& b) { return a + b; }, mpfi_add), 4);
  check("-", compare(2, [](auto& a, auto& b) { return a - b; }, mpfi_sub), 4);
  check("*", compare(3, [](auto& a, auto& b) { return a * b; }, mpfi_mul), 4);
  // 0 / [0, 1] is the whole half-line to MPFI, and 0 here: a division by zero has no result. So only its own is
  // checked.
  check("/",
        compare(
            4, [](auto& a, auto& b) { return a.mag() == 0.0 && b.contains(0.0) ? Interval::whole() : a / b; },
            [](auto r, auto a, auto b) {
              mpfi_is_zero(a) != 0 && mpfi_has_zero(b) != 0 ? mpfi_interv_d(r, -infinity, infinity) : mpfi_div(r, a, b);
            }),
        4);
  // Of negative numbers MPFI has no root at all.
  check("sqrt",
        compare(
            5, [](auto& a, auto&) { return sqrt(abs(a)); },
            [](auto r, auto a, auto) { mpfi_abs(r, a), mpfi_sqrt(r, r); }),
        4);
  check("sqr", compare(6, [](auto& a, auto&) { return sqr(a); }, [](auto r, auto a, auto) { mpfi_sqr(r, a); }), 4);
  check("abs", compare(7, [](auto& a, auto&) { return abs(a); }, [](auto r, auto a, auto) { mpfi_abs(r, a); }), 0);
  check("min", compare(8, [](auto& a, auto& b) { return min(a, b); }, mpfi_min), 0);
  check("max", compare(9, [](auto& a, auto& b) { return max(a, b); }, mpfi_max), 0);
  check("hull", compare(10, [](auto& a, auto& b) { return hull(a, b); }, mpfi_union), 0);
}

// Whatever is extreme on a box, x / hypot(x, y) takes its extremes where x and y are at an end or at zero.
TEST_CASE("cosine_of encloses the range found with 200 bits at all places where an extreme can be, and is tight") {
  std::mt19937_64 random(17);
  std::uniform_real_distribution<double> between(-3.0, 3.0);
  PreciseCosine cosine;
  int out = 0;
  std::int64_t most = 0;
  for (int k = 0; k < 200'000; ++k) {
    auto const side = [&] {
      double const scale = k % 5 == 0 ? std::ldexp(1.0, static_cast<int>(random() % 200) - 100) : 1.0;
      double const low = between(random) * scale;
      double const width = std::exp(std::uniform_real_distribution<double>(-12.0, 1.0)(random)) * scale;
      return random() % 8 == 0 ? Interval(0.0, width) : random() % 8 == 0 ? Interval(low) : Interval(low, low + width);
    };
    Interval const x = side();
    Interval const y = side();
    double low = 2.0;
    double high = -2.0;
    for (double const px : {x.low(), x.high(), x.contains(0.0) ? 0.0 : x.low()}) {
      for (double const py : {y.low(), y.high(), y.contains(0.0) ? 0.0 : y.low()}) {
        if (px != 0.0 || py != 0.0) {
          low = std::min(low, cosine(px, py));
          high = std::max(high, cosine(px, py));
        }
      }
    }
    Interval const found = cosine_of(x, y);
    out += found.low() <= low && high <= found.high() ? 0 : 1;
    // Ends are compared in units of the last place of their size; an end at 0 is exactly there, or the origin is.
    bool const at_origin = x.contains(0.0) && y.contains(0.0);
    if (!at_origin) {
      most = std::max({most, steps_between(found.low(), low), steps_between(found.high(), high)});
    }
  }
  CHECK(out == 0);
  MESSAGE("cosine_of: each end at most " << most << " ulp beyond the range");
  CHECK(most <= 12);
}

#endif
