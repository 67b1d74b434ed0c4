// wend/lab/sloped.hpp - an interval that knows how steep it is: bounds on a signal and on its gradient.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <limits>

#include <Eigen/Core>

#include "wend/lab/interval.hpp"
#include "wend/lab/trilean.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// The answer to a comparison of two Sloped, and which two: so that `select(a < b, a, b)` is known as the lesser of
/// both, which has a kink but does not jump. After && || ! that is forgotten.
struct SlopedMask {
  Trilean truth;  ///< the answer itself
  std::uint64_t lesser = 0;  ///< the one that is less if the answer is yes; 0 when forgotten
  std::uint64_t other = 0;  ///< the other of the two; 0 when forgotten

  /// @name Logic
  /// @{

  /// Of the answers; which two were compared is forgotten.
  [[nodiscard]] friend SlopedMask operator!(SlopedMask const& a) noexcept { return {!a.truth}; }
  [[nodiscard]] friend SlopedMask operator&&(SlopedMask const& a, SlopedMask const& b) noexcept {
    return {a.truth && b.truth};
  }
  [[nodiscard]] friend SlopedMask operator||(SlopedMask const& a, SlopedMask const& b) noexcept {
    return {a.truth || b.truth};
  }
  [[nodiscard]] friend SlopedMask select(SlopedMask const& m, SlopedMask const& a, SlopedMask const& b) noexcept {
    return {select(m.truth, a.truth, b.truth)};
  }
  /// @}
};

/// What a number computed from a pose can be over a box of positions, and how fast it changes: an enclosure of its
/// gradient by position, a bound on the gradient's length, which is often far better than what the components give, and
/// one on the derivative by the heading, a unit vector. For a number with kinks (a least, a distance) the bounds hold
/// on both sides of each and so are bounds on differences too. For one that may jump within the box they are infinite.
class Sloped {
 public:
  /// The constant 0.
  Sloped() = default;
  /// A constant: it has no slope.
  explicit Sloped(Parameter x) noexcept : value_(x) {}
  /// A constant: it has no slope.
  explicit Sloped(double x) noexcept : value_(x) {}
  /// Coordinate 0 (x) or 1 (y) of a position: metres.
  [[nodiscard]] static Sloped position(Interval const& range, int axis) noexcept {
    Interval const one(1.0);
    return {range, axis == 0 ? one : Interval(), axis == 0 ? Interval() : one, 1.0, 0.0};
  }
  /// A component of any heading at all.
  [[nodiscard]] static Sloped any_heading() noexcept { return {Interval(-1.0, 1.0), Interval(), Interval(), 0.0, 1.0}; }

  /// What the number can be over the box.
  [[nodiscard]] Interval const& value() const noexcept { return value_; }
  /// What its gradient by position can be over the box: per metre, along x and y.
  [[nodiscard]] Vec2<Interval> gradient() const noexcept { return {along_x_, along_y_}; }
  /// Per metre: no two positions in the box differ by more than this times their distance, if it is convex.
  [[nodiscard]] double per_metre() const noexcept { return per_metre_; }
  /// Per radian that the nose turns.
  [[nodiscard]] double per_radian() const noexcept { return per_radian_; }

  /// @name Arithmetic
  /// @{

  /// Bounds of the value, and of its slopes by the chain rule.
  [[nodiscard]] friend Sloped operator+(Sloped const& a, Sloped const& b) noexcept {
    return {a.value_ + b.value_, a.along_x_ + b.along_x_, a.along_y_ + b.along_y_, up(a.per_metre_ + b.per_metre_),
            up(a.per_radian_ + b.per_radian_)};
  }
  [[nodiscard]] friend Sloped operator-(Sloped const& a) noexcept {
    return {-a.value_, -a.along_x_, -a.along_y_, a.per_metre_, a.per_radian_};
  }
  [[nodiscard]] friend Sloped operator-(Sloped const& a, Sloped const& b) noexcept { return a + -b; }
  [[nodiscard]] friend Sloped operator*(Sloped const& a, Sloped const& b) noexcept {
    double const fa = a.value_.mag();
    double const fb = b.value_.mag();
    return {a.value_ * b.value_, a.value_ * b.along_x_ + b.value_ * a.along_x_,
            a.value_ * b.along_y_ + b.value_ * a.along_y_, up(times(fa, b.per_metre_) + times(fb, a.per_metre_)),
            up(times(fa, b.per_radian_) + times(fb, a.per_radian_))};
  }
  [[nodiscard]] friend Sloped operator/(Sloped const& a, Sloped const& b) noexcept {
    // 1 / b, whose derivative is -1 / b^2.
    return a * b.mapped(Interval(1.0) / b.value_, -(Interval(1.0) / sqr(b.value_)));
  }
  Sloped& operator+=(Sloped const& b) noexcept { return *this = *this + b; }
  Sloped& operator*=(Sloped const& b) noexcept { return *this = *this * b; }
  /// @}

  /// Where 0 is inside, the slopes have no bound.
  [[nodiscard]] friend Sloped sqrt(Sloped const& a) noexcept {
    Interval const root = sqrt(a.value_);
    return a.mapped(root, Interval(0.5) / root);
  }
  /// x^2.
  [[nodiscard]] friend Sloped sqr(Sloped const& a) noexcept { return a.mapped(sqr(a.value_), a.value_ + a.value_); }
  /// |x|: a kink at 0, no jump.
  [[nodiscard]] friend Sloped abs(Sloped const& a) noexcept {
    return a.mapped(abs(a.value_), a.value_.low() >= 0.0 ? Interval(1.0)
                                   : a.value_.high() <= 0.0 ? Interval(-1.0) : Interval(-1.0, 1.0));
  }
  /// The lesser: a kink where they are equal, no jump.
  [[nodiscard]] friend Sloped min(Sloped const& a, Sloped const& b) noexcept {
    return a.value_.high() < b.value_.low()   ? a
           : b.value_.high() < a.value_.low() ? b
                                              : a.joined(b, min(a.value_, b.value_));
  }
  /// The greater: a kink where they are equal, no jump.
  [[nodiscard]] friend Sloped max(Sloped const& a, Sloped const& b) noexcept {
    return a.value_.high() < b.value_.low()   ? b
           : b.value_.high() < a.value_.low() ? a
                                              : a.joined(b, max(a.value_, b.value_));
  }

  /// @name Comparison
  /// @{

  /// The answer over the whole box, and which two were compared.
  [[nodiscard]] friend SlopedMask operator<(Sloped const& a, Sloped const& b) noexcept {
    return {a.value_ < b.value_, a.name_, b.name_};
  }
  [[nodiscard]] friend SlopedMask operator<=(Sloped const& a, Sloped const& b) noexcept {
    return {a.value_ <= b.value_, a.name_, b.name_};
  }
  [[nodiscard]] friend SlopedMask operator>(Sloped const& a, Sloped const& b) noexcept { return b < a; }
  [[nodiscard]] friend SlopedMask operator>=(Sloped const& a, Sloped const& b) noexcept { return b <= a; }
  /// @}

  /// Yes where the value is bounded; the slopes are not looked at.
  [[nodiscard]] friend SlopedMask finite(Sloped const& a) noexcept { return {finite(a.value_)}; }
  /// Where the answer is open, the choice may jump from one to the other, unless it is the lesser or the greater of the
  /// two that were compared.
  [[nodiscard]] friend Sloped select(SlopedMask const& m, Sloped const& a, Sloped const& b) noexcept {
    if (!m.truth.undecided()) {
      return m.truth.surely() ? a : b;
    }
    if (m.lesser == a.name_ && m.other == b.name_) {
      return min(a, b);
    }
    if (m.lesser == b.name_ && m.other == a.name_) {
      return max(a, b);
    }
    Sloped both = a.joined(b, hull(a.value_, b.value_));
    both.per_metre_ = both.per_radian_ = infinity;
    return both;
  }

  friend Sloped length(Vec2<Sloped> const& v) noexcept;

 private:
  static constexpr double infinity = std::numeric_limits<double>::infinity();
  inline static thread_local std::uint64_t names = 0;

  Sloped(Interval const& value, Interval const& along_x, Interval const& along_y, double per_metre,
         double per_radian) noexcept
      : value_(value), along_x_(along_x), along_y_(along_y), per_metre_(per_metre), per_radian_(per_radian) {
    if (per_metre_ < infinity) {  // where it may jump, the components know nothing of it
      per_metre_ = std::min(per_metre_, up(std::hypot(along_x.mag(), along_y.mag())));
    }
  }

  // f of this: its value, and the enclosure of f' over the value.
  [[nodiscard]] Sloped mapped(Interval const& value, Interval const& slope) const noexcept {
    return {value, slope * along_x_, slope * along_y_, up(times(slope.mag(), per_metre_)),
            up(times(slope.mag(), per_radian_))};
  }
  // One of two, it is not known which, without a jump between them.
  [[nodiscard]] Sloped joined(Sloped const& b, Interval const& value) const noexcept {
    Sloped either;
    either.value_ = value;
    either.along_x_ = hull(along_x_, b.along_x_), either.along_y_ = hull(along_y_, b.along_y_);
    either.per_metre_ = std::max(per_metre_, b.per_metre_), either.per_radian_ = std::max(per_radian_, b.per_radian_);
    return either;
  }

  // Rounded up by a few units in the last place: more than any of the short formulas here loses. 0 stays 0.
  [[nodiscard]] static double up(double x) noexcept { return x * (1.0 + 0x1p-50); }
  [[nodiscard]] static double times(double a, double b) noexcept { return a == 0.0 || b == 0.0 ? 0.0 : a * b; }

  Interval value_;
  Interval along_x_;
  Interval along_y_;
  double per_metre_ = 0.0;
  double per_radian_ = 0.0;
  std::uint64_t name_ = ++names;  // copies share it: they are the same number
};

}  // namespace wend::inline v0::lab

namespace Eigen {

/// Lets a sloped number be the scalar of an Eigen vector.
template <>
struct NumTraits<wend::lab::Sloped> : GenericNumTraits<wend::lab::Sloped> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 6,
    AddCost = 12,
    MulCost = 24
  };
};

}  // namespace Eigen

namespace wend::inline v0::lab {

/// |v|, whose derivative is v/|v| dv: at most |dv| whatever v is, zero included. Found in place of the general one.
[[nodiscard]] inline Sloped length(Vec2<Sloped> const& v) noexcept {
  Sloped const& x = v.x();
  Sloped const& y = v.y();
  Interval const cosine = cosine_of(x.value_, y.value_);
  Interval const sine = cosine_of(y.value_, x.value_);
  // |J v| <= |v| sqrt(row sum * column sum), for the matrix J of the derivatives: 1 for a distance.
  double const rows = std::max(x.along_x_.mag() + x.along_y_.mag(), y.along_x_.mag() + y.along_y_.mag());
  double const columns = std::max(x.along_x_.mag() + y.along_x_.mag(), x.along_y_.mag() + y.along_y_.mag());
  double const by_parts = Sloped::up(std::hypot(x.per_metre_, y.per_metre_));  // infinite where one may jump
  double const by_matrix = Sloped::up(std::sqrt(Sloped::up(rows * columns)));
  double const steepest = by_parts < Sloped::infinity ? std::min(by_parts, by_matrix) : by_parts;
  return {sqrt(sqr(x.value_) + sqr(y.value_)), cosine * x.along_x_ + sine * y.along_x_,
          cosine * x.along_y_ + sine * y.along_y_, steepest, Sloped::up(std::hypot(x.per_radian_, y.per_radian_))};
}

/// A vector taken apart: found in place of the general one, which would let the length jump where it counts as none
/// (by 1.1e-19 m). The direction does jump there.
[[nodiscard]] inline Polar<Sloped> polar(Vec2<Sloped> const& v) noexcept {
  Sloped const size = length(v);
  SlopedMask const none = size <= Sloped(no_length);
  Sloped const scale = Sloped(1.0F) / select(none, Sloped(1.0F), size);
  Vec2<Sloped> const along = scaled(v, scale);
  return {select(none, zero2<Sloped>(), along), size};
}

}  // namespace wend::inline v0::lab
