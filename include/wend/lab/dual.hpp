// wend/lab/dual.hpp - a number that carries its derivatives along.
#pragma once

#include <array>
#include <cmath>
#include <cstddef>

#include <Eigen/Core>

#include "wend/number.hpp"

namespace wend::inline v0::lab {

/// A double and its derivatives with respect to N independent ones (forward differentiation; Wengert 1964). Comparisons
/// and `finite` look at the value alone, so `select` picks the branch that the value takes, and the derivative is that
/// of the branch: where two branches meet in a kink it is the derivative on one side.
template <int N>
class Dual {
  static_assert(N >= 1, "wend: lab::Dual<N> needs one variable at least; write lab::Dual<2>");
  using Slopes = Eigen::Array<double, N, 1, Eigen::DontAlign>;

 public:
  /// The constant 0.
  Dual() noexcept : slopes_(Slopes::Zero()) {}
  /// A constant. A parameter of a policy counts as one, unless it is one of the knobs below.
  explicit Dual(Parameter const& x) noexcept : Dual(static_cast<double>(x)) {
    // Of a constant in the code the compiler knows that it is no knob, and drops the loop.
    for (int k = 0; k < N; ++k) {
      if (knobs[static_cast<std::size_t>(k)] == &x) {
        slopes_[k] = 1.0;
      }
    }
  }
  /// A constant.
  explicit Dual(double x) noexcept : value_(x), slopes_(Slopes::Zero()) {}
  /// A constant: Eigen writes Scalar(0).
  explicit Dual(int x) noexcept : Dual(static_cast<double>(x)) {}
  /// Independent variable number k, from 0.
  [[nodiscard]] static Dual variable(double x, int k) noexcept {
    Dual v(x);
    v.slopes_[k] = 1.0;
    return v;
  }

  /// The number itself.
  [[nodiscard]] double value() const noexcept { return value_; }
  /// Its derivative with respect to variable k, in [0, N).
  [[nodiscard]] double slope(int k) const noexcept { return slopes_[k]; }

  /// Parameters that count as independent variables for this thread, by their place in memory; null for none.
  /// Set by lab::TurnedKnobs (lab/sensitivity.hpp).
  inline static constinit thread_local std::array<Parameter const*, static_cast<std::size_t>(N)> knobs{};

  /// @name Arithmetic
  /// @{

  /// The value, and its slopes by the chain rule.
  [[nodiscard]] friend Dual operator+(Dual const& a, Dual const& b) noexcept {
    return {a.value_ + b.value_, a.slopes_ + b.slopes_};
  }
  [[nodiscard]] friend Dual operator-(Dual const& a, Dual const& b) noexcept {
    return {a.value_ - b.value_, a.slopes_ - b.slopes_};
  }
  [[nodiscard]] friend Dual operator-(Dual const& a) noexcept { return {-a.value_, -a.slopes_}; }
  [[nodiscard]] friend Dual operator*(Dual const& a, Dual const& b) noexcept {
    return {a.value_ * b.value_, a.slopes_ * b.value_ + b.slopes_ * a.value_};
  }
  [[nodiscard]] friend Dual operator/(Dual const& a, Dual const& b) noexcept {
    double const inverse = 1.0 / b.value_;
    double const quotient = a.value_ / b.value_;
    return {quotient, (a.slopes_ - b.slopes_ * quotient) * inverse};
  }
  Dual& operator+=(Dual const& b) noexcept { return *this = *this + b; }
  Dual& operator*=(Dual const& b) noexcept { return *this = *this * b; }
  /// @}

  /// The root's slope at 0, where it has none, is 0.
  [[nodiscard]] friend Dual sqrt(Dual const& a) noexcept {
    double const r = std::sqrt(a.value_);
    return {r, a.slopes_ * (r > 0.0 ? 0.5 / r : 0.0)};
  }
  /// Of an angle in radians.
  [[nodiscard]] friend Dual sin(Dual const& a) noexcept { return {std::sin(a.value_), a.slopes_ * std::cos(a.value_)}; }
  /// Of an angle in radians.
  [[nodiscard]] friend Dual cos(Dual const& a) noexcept {
    return {std::cos(a.value_), a.slopes_ * -std::sin(a.value_)};
  }

  /// @name Comparison
  /// @{

  /// Of the values alone.
  [[nodiscard]] friend bool operator<(Dual const& a, Dual const& b) noexcept { return a.value_ < b.value_; }
  [[nodiscard]] friend bool operator>(Dual const& a, Dual const& b) noexcept { return a.value_ > b.value_; }
  [[nodiscard]] friend bool operator<=(Dual const& a, Dual const& b) noexcept { return a.value_ <= b.value_; }
  [[nodiscard]] friend bool operator>=(Dual const& a, Dual const& b) noexcept { return a.value_ >= b.value_; }
  /// @}

  /// a or b with its slopes.
  [[nodiscard]] friend Dual select(bool m, Dual const& a, Dual const& b) noexcept { return m ? a : b; }
  /// Whether the value is; the slopes are not looked at.
  [[nodiscard]] friend bool finite(Dual const& a) noexcept { return wend::finite(a.value_); }

 private:
  Dual(double value, Slopes const& slopes) noexcept : value_(value), slopes_(slopes) {}

  double value_ = 0.0;
  Slopes slopes_;
};

}  // namespace wend::inline v0::lab

namespace Eigen {

/// Lets a dual number be the scalar of an Eigen vector.
template <int N>
struct NumTraits<wend::lab::Dual<N>> : GenericNumTraits<wend::lab::Dual<N>> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 1 + N,
    AddCost = 1 + N,
    MulCost = 1 + 2 * N
  };
};

}  // namespace Eigen
