// wend/lab/interval.hpp - a closed interval as a number: what holds for it holds for everything inside.
#pragma once

#include <algorithm>
#include <cmath>
#include <limits>
#include <type_traits>

#ifdef __SSE2__
#include <emmintrin.h>
#endif

#include <Eigen/Core>

#include "wend/lab/trilean.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// A closed interval of double. The result of an operation contains the exact result for all members of its operands,
/// and also what a machine computing in `Rounded` gets for them, operation by operation. So with Rounded = float a
/// statement about an interval is one about the loop as it ships, its rounding included.
///
/// Members are numbers. An infinite end means that there is no bound; what overflows in `Rounded` has an infinite end.
/// Not covered is what a machine makes of infinite numbers where the real ones behave: 0 * infinity counts as 0 here.
///
/// There is no empty interval. Where an operation is defined for some members only, the result is that of those; where
/// it is defined for none (the root of what is negative, a division by zero), and for ends that are not numbers or in
/// the wrong order, it is the whole line: too much, but never wrong. A divisor with zero inside its ends gives the
/// whole line too.
///
/// Kept as the pair (-low, high), so that one instruction works on both ends, and outward is upward for both. Each
/// operation rounds to nearest as ever and then steps outward by slightly more than half a unit in the last place,
/// which reaches the next number and never passes the one after (Rump, Zimmermann, Boldo and Melquiond 2009, BIT
/// 49:419-431). So there is no rounding mode to set, or to forget. It takes a compiler that keeps to IEEE 754: no
/// -ffast-math.
///
/// An end that is zero for certain stays exactly zero, so that the product of what is not negative is not negative.
template <typename Rounded>
class BasicInterval {
  static_assert(std::is_same_v<Rounded, double> || std::is_same_v<Rounded, float>,
                "wend: BasicInterval<Rounded> encloses the rounding of double or of float; write lab::Interval");

  typedef double Ends __attribute__((vector_size(16)));  // g++ 12 drops the attribute from a `using` in a template

  static constexpr bool in_double = std::is_same_v<Rounded, double>;
  static constexpr double infinity = std::numeric_limits<double>::infinity();
  static constexpr double largest = static_cast<double>(std::numeric_limits<Rounded>::max());
  // u (1 + 2u), a little more than half a unit in the last place of 1.
  static constexpr double unit = static_cast<double>(std::numeric_limits<Rounded>::epsilon()) / 2.0;
  static constexpr double step = in_double ? unit * (1.0 + 2.0 * unit) : unit * (1.0 + 0x1p-20);
  // On top of it, the least positive number: what was rounded to zero has to leave it, and a step so short that it has
  // lost its own digits (up to 2^-969 in double) would end half way to the next number, and be rounded back.
  static constexpr double tiny = static_cast<double>(std::numeric_limits<Rounded>::denorm_min());

 public:
  /// The number whose rounding is enclosed: double, or float for what a robot computes.
  using RoundedAs = Rounded;

  /// [0, 0].
  BasicInterval() = default;
  /// The interval of one number: a constant is exact.
  explicit BasicInterval(Parameter x) noexcept : ends_{-static_cast<double>(x), static_cast<double>(x)} {
    if (!v0::finite(x)) {
      *this = whole();
    }
  }
  /// The interval of one number; the whole line for one that is infinite or not a number.
  explicit BasicInterval(double x) noexcept : BasicInterval(x, x) {}
  /// The interval of one number: Eigen writes Scalar(0).
  explicit BasicInterval(int x) noexcept : BasicInterval(static_cast<double>(x)) {}
  /// From low to high, both included. An end may be infinite; the whole line when they are in the wrong order or not
  /// numbers.
  BasicInterval(double low, double high) noexcept : ends_{-low, high} {
    if (!(low <= high) || low == infinity || high == -infinity) {
      *this = whole();
    }
  }
  /// The same interval, with another machine's rounding from here on.
  template <typename Other>
  explicit BasicInterval(BasicInterval<Other> const& other) noexcept : ends_{-other.low(), other.high()} {}

  /// Everything from minus to plus infinity.
  [[nodiscard]] static BasicInterval whole() noexcept { return BasicInterval(both(infinity)); }

  /// The lower end; minus infinity where there is no bound.
  [[nodiscard]] double low() const noexcept { return -ends_[0]; }
  /// The upper end; infinity where there is no bound.
  [[nodiscard]] double high() const noexcept { return ends_[1]; }
  /// A member: the middle, rounded to nearest. Where there is no bound on a side, 0 if that is inside, else the bound
  /// on the other side.
  [[nodiscard]] double middle() const noexcept {
    return bounded() ? 0.5 * high() - 0.5 * ends_[0] : std::clamp(0.0, low(), high());
  }
  /// high - low, rounded to nearest.
  [[nodiscard]] double width() const noexcept { return high() + ends_[0]; }
  /// Whether x is a member; not-a-number never is.
  [[nodiscard]] bool contains(double x) const noexcept { return low() <= x && x <= high(); }
  /// Whether there is a bound on both sides.
  [[nodiscard]] bool bounded() const noexcept { return ends_[0] < infinity && ends_[1] < infinity; }
  /// The largest absolute value inside; infinity without a bound.
  [[nodiscard]] double mag() const noexcept { return std::max(ends_[0], ends_[1]); }
  /// The smallest absolute value inside; 0 where 0 is inside.
  [[nodiscard]] double mig() const noexcept { return std::max({0.0, low(), -high()}); }

  /// @name Arithmetic
  /// @{

  /// Holds what comes of any member of a and any member of b.
  [[nodiscard]] friend BasicInterval operator+(BasicInterval const& a, BasicInterval const& b) noexcept {
    return sum(a.ends_, b.ends_);
  }
  [[nodiscard]] friend BasicInterval operator-(BasicInterval const& a) noexcept {
    return BasicInterval(swapped(a.ends_));
  }
  [[nodiscard]] friend BasicInterval operator-(BasicInterval const& a, BasicInterval const& b) noexcept {
    return sum(a.ends_, swapped(b.ends_));
  }
  [[nodiscard]] friend BasicInterval operator*(BasicInterval const& a, BasicInterval const& b) noexcept {
    Ends const low = both(a.ends_[0]);
    Ends const high = both(a.ends_[1]);
    Ends const turned = swapped(b.ends_);
    // Of the four products of ends the largest is high, and the largest of their negatives is -low. 0 * infinity is 0:
    // the end at infinity is not itself inside.
    Ends const p = or_zero(low * turned);
    Ends const q = or_zero(high * b.ends_);
    // An end of the result can be over zero only where both factors of one of these are.
    Ends const over = larger(smaller(low, turned), smaller(high, b.ends_));
    return outward(larger(larger(p, q), -swapped(smaller(p, q))), over);
  }
  [[nodiscard]] friend BasicInterval operator/(BasicInterval const& a, BasicInterval const& b) noexcept {
    if (b.high() <= 0.0) {
      return b.is_zero() ? whole() : -(a / -b);
    }
    if (b.low() < 0.0) {
      return whole();
    }
    // What moves away from zero is divided by the smaller end, whose zero must not be a negative one.
    Ends const over = a.ends_;
    return outward(a.ends_ / (over > 0.0 ? absolute(both(b.ends_[0])) : both(b.ends_[1])), over);
  }
  BasicInterval& operator+=(BasicInterval const& b) noexcept { return *this = *this + b; }
  BasicInterval& operator*=(BasicInterval const& b) noexcept { return *this = *this * b; }
  /// @}

  /// The roots of those members that have one; the whole line where none has.
  [[nodiscard]] friend BasicInterval sqrt(BasicInterval const& a) noexcept {
    if (a.high() < 0.0) {
      return whole();
    }
    Ends const root = low_negated(roots(larger(low_negated(a.ends_), Ends{})));
    return clipped(root + absolute(root) * step);  // never near the least positive number
  }
  /// x^2, never below 0.
  [[nodiscard]] friend BasicInterval sqr(BasicInterval const& a) noexcept {
    Ends const ends = sizes(a.ends_);
    return outward(ends * absolute(ends), ends);
  }
  /// Exact.
  [[nodiscard]] friend BasicInterval abs(BasicInterval const& a) noexcept { return BasicInterval(sizes(a.ends_)); }
  /// Exact: the lesser of any member of a and any member of b.
  [[nodiscard]] friend BasicInterval min(BasicInterval const& a, BasicInterval const& b) noexcept {
    return BasicInterval(Ends{larger(a.ends_, b.ends_)[0], smaller(a.ends_, b.ends_)[1]});
  }
  /// Exact: the greater of any member of a and any member of b.
  [[nodiscard]] friend BasicInterval max(BasicInterval const& a, BasicInterval const& b) noexcept {
    return BasicInterval(Ends{smaller(a.ends_, b.ends_)[0], larger(a.ends_, b.ends_)[1]});
  }
  /// The smallest interval around both.
  [[nodiscard]] friend BasicInterval hull(BasicInterval const& a, BasicInterval const& b) noexcept {
    return BasicInterval(larger(a.ends_, b.ends_));
  }

  /// @name Comparison
  /// @{

  /// Yes or no where the answer is the same for any member of a and any member of b, else both.
  [[nodiscard]] friend Trilean operator<(BasicInterval const& a, BasicInterval const& b) noexcept {
    return {a.low() < b.high(), a.high() >= b.low()};
  }
  [[nodiscard]] friend Trilean operator<=(BasicInterval const& a, BasicInterval const& b) noexcept {
    return {a.low() <= b.high(), a.high() > b.low()};
  }
  [[nodiscard]] friend Trilean operator>(BasicInterval const& a, BasicInterval const& b) noexcept { return b < a; }
  [[nodiscard]] friend Trilean operator>=(BasicInterval const& a, BasicInterval const& b) noexcept { return b <= a; }
  /// @}

  /// a or b; where the mask is open the hull of both.
  [[nodiscard]] friend BasicInterval select(Trilean m, BasicInterval const& a, BasicInterval const& b) noexcept {
    return m.surely() ? a : m.surely_not() ? b : hull(a, b);
  }
  /// What is bounded is finite; of the rest some may be and some not.
  [[nodiscard]] friend Trilean finite(BasicInterval const& a) noexcept {
    return a.bounded() ? Trilean::yes() : Trilean::both();
  }

  /// x / sqrt(x^2 + y^2), tight: increasing in x, and moving towards 0 as |y| grows, so its bounds lie at corners.
  /// (0, 0), which has no direction, adds nothing.
  [[nodiscard]] friend BasicInterval cosine_of(BasicInterval const& x, BasicInterval const& y) noexcept {
    // Two squares, a sum, a root, a reciprocal and a product: four roundings to first order, the rest in the fifth.
    constexpr double slack = 5.0 * unit;
    Ends const size = sizes(y.ends_);
    Ends const across = x.ends_ > 0.0 ? both(size[0]) : both(size[1]);
    Ends const far = larger(absolute(x.ends_), absolute(across));
    Ends const ratio = x.ends_ / roots(x.ends_ * x.ends_ + across * across);
    Ends const end = ratio + (absolute(ratio) * slack + both(tiny));
    Ends const limit = x.ends_ > 0.0 ? both(1.0 + slack) : Ends{};
    // Beyond these sizes a square would lose digits. A ratio that is not a number is not smaller than the limit.
    return BasicInterval(smaller(larger(smaller(far, both(1e140)), both(1e-140)) == far ? end : both(infinity), limit));
  }

 private:
  template <typename Other>
  friend class BasicInterval;
  explicit BasicInterval(Ends const& ends) noexcept : ends_(ends) {}

  [[nodiscard]] static Ends both(double x) noexcept { return Ends{x, x}; }
  [[nodiscard]] static Ends swapped(Ends const& a) noexcept { return Ends{a[1], a[0]}; }
  // One instruction each; b where a is not a number. Named outright for SSE2, because where b is a constant g++ 12
  // makes four instructions of the expression.
#ifdef __SSE2__
  [[nodiscard]] static Ends larger(Ends const& a, Ends const& b) noexcept { return _mm_max_pd(a, b); }
  [[nodiscard]] static Ends smaller(Ends const& a, Ends const& b) noexcept { return _mm_min_pd(a, b); }
#else
  [[nodiscard]] static Ends larger(Ends const& a, Ends const& b) noexcept { return a > b ? a : b; }
  [[nodiscard]] static Ends smaller(Ends const& a, Ends const& b) noexcept { return a < b ? a : b; }
#endif
  [[nodiscard]] static Ends absolute(Ends const& a) noexcept { return Ends{std::abs(a[0]), std::abs(a[1])}; }
  [[nodiscard]] static Ends low_negated(Ends const& a) noexcept { return Ends{-a[0], a[1]}; }
  [[nodiscard]] static Ends roots(Ends const& a) noexcept { return Ends{std::sqrt(a[0]), std::sqrt(a[1])}; }
  [[nodiscard]] static Ends or_zero(Ends const& a) noexcept { return a == a ? a : Ends{}; }
  [[nodiscard]] bool is_zero() const noexcept { return ends_[0] == 0.0 && ends_[1] == 0.0; }
  // The ends of |x|: (-mig, mag).
  [[nodiscard]] static Ends sizes(Ends const& a) noexcept {
    Ends const turned = swapped(a);
    return Ends{smaller(smaller(a, turned), Ends{})[0], larger(a, turned)[1]};
  }

  // What overflows in float is infinite there; in double it is already.
  [[nodiscard]] static BasicInterval clipped(Ends const& a) noexcept {
    if constexpr (in_double) {
      return BasicInterval(a);
    } else {
      return BasicInterval(a > largest ? both(infinity) : a);
    }
  }
  // An end that overflowed inward comes back to the largest number: beyond it the interval is unbounded anyway.
  [[nodiscard]] static Ends held(Ends const& a) noexcept { return larger(a, both(-largest)); }
  [[nodiscard]] static BasicInterval sum(Ends const& a, Ends const& b) noexcept {
    Ends const rounded = a + b;
    Ends const size = absolute(rounded);
    if constexpr (in_double) {  // a sum that is zero is exact
      return clipped(held(rounded + (size * step + smaller(size, both(tiny)))));
    } else {  // so is one so small that float has no digits for it
      return clipped(held(rounded + size * step));
    }
  }
  // For ends that may have been rounded to zero; those for which `over` is not over zero are not over zero.
  [[nodiscard]] static BasicInterval outward(Ends const& a, Ends const& over) noexcept {
    Ends const from = held(a);
    Ends const limit = over > 0.0 ? both(infinity) : Ends{};
    return clipped(smaller(from + (absolute(from) * step + both(tiny)), limit));
  }

  Ends ends_{};
};

/// Encloses exact arithmetic, and double.
using Interval = BasicInterval<double>;
/// Encloses exact arithmetic, and float: for statements about the loop that ships.
using FloatInterval = BasicInterval<float>;

using v0::polar;

/// A box taken apart, with tight directions: found in place of the general one. Where the length may overflow the
/// direction may come out as (0, 0) too.
template <typename Rounded>
[[nodiscard]] Polar<BasicInterval<Rounded>> polar(Vec2<BasicInterval<Rounded>> const& v) noexcept {
  using I = BasicInterval<Rounded>;
  I const size = length(v);
  Vec2<I> const direction{cosine_of(v.x(), v.y()), cosine_of(v.y(), v.x())};
  return {select(size > I(no_length) && finite(size), direction, zero2<I>()), size};
}

}  // namespace wend::inline v0::lab

namespace Eigen {

/// Lets an interval be the scalar of an Eigen vector.
template <typename Rounded>
struct NumTraits<wend::lab::BasicInterval<Rounded>> : GenericNumTraits<wend::lab::BasicInterval<Rounded>> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 2,
    AddCost = 4,
    MulCost = 8
  };
};

}  // namespace Eigen

namespace wend::inline v0::lab {

namespace detail {

// A number of the plant as the loop gets it: rounded to float.
[[nodiscard]] inline FloatInterval as_float(Interval const& x) { return FloatInterval(x) * FloatInterval(1.0F); }
[[nodiscard]] inline Vec2<FloatInterval> as_float(Vec2<Interval> const& v) {
  return {as_float(v.x()), as_float(v.y())};
}
[[nodiscard]] inline Vec2<Interval> exactly(Vec2<double> const& v) { return {Interval(v.x()), Interval(v.y())}; }

}  // namespace detail

}  // namespace wend::inline v0::lab
