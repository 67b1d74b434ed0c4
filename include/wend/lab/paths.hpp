// wend/lab/paths.hpp - every path that a policy can take over a box, one at a time: intervals that answer yes or no.
#pragma once

#include <array>
#include <cstddef>

#include <Eigen/Core>

#include "wend/config.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/trilean.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

namespace detail {

// The answers to the comparisons that a box leaves undecided, in the order in which they come up.
class Fork {
 public:
  void restart() noexcept { asked_ = 0; }
  [[nodiscard]] bool answer(Trilean const& truth) noexcept {
    if (!truth.undecided()) {
      return truth.surely();
    }
    if (asked_ == most) {
      overflowed_ = true;
      return true;
    }
    if (asked_ == given_) {
      answers_[given_++] = true;
    }
    return answers_[asked_++];
  }
  // Turns the last yes of the path just taken into a no; false when there is none left.
  [[nodiscard]] bool next() noexcept {
    given_ = asked_;
    while (given_ > 0 && !answers_[given_ - 1]) {
      --given_;
    }
    if (given_ == 0) {
      return false;
    }
    answers_[given_ - 1] = false;
    return true;
  }
  [[nodiscard]] bool overflowed() const noexcept { return overflowed_; }

  inline static thread_local Fork* current = nullptr;

 private:
  static constexpr std::size_t most = 24;
  std::array<bool, most> answers_{};
  std::size_t given_ = 0;
  std::size_t asked_ = 0;
  bool overflowed_ = false;
};

}  // namespace detail

/// Calls f once for each way in which the undecided comparisons of PathInterval inside it can be answered, until it
/// returns false or `most` calls have been made. True when there was no further way and f never returned false: then
/// the results together enclose what every member of the box gets, each on the path that it takes.
template <typename F>
[[nodiscard]] bool for_each_path(int most, F const& f) {
  detail::Fork fork;
  detail::Fork* const outer = detail::Fork::current;
  detail::Fork::current = &fork;
  bool complete = false;
  for (int i = 0; i < most && !complete; ++i) {
    fork.restart();
    if (!f() || fork.overflowed()) {
      break;
    }
    complete = !fork.next();
  }
  detail::Fork::current = outer;
  return complete;
}

/// An interval on one path. Where lab::Interval gives the hull of both branches, which for a course that jumps is far
/// more than the two courses, this takes one branch and the next time the other. To be used within for_each_path.
class PathInterval {
 public:
  /// [0, 0].
  PathInterval() = default;
  /// The interval of one number.
  explicit PathInterval(Parameter x) noexcept : range_(x) {}
  /// The interval of one number; the whole line for one that is not finite.
  explicit PathInterval(double x) noexcept : range_(x) {}
  /// The same interval, to be followed on paths.
  explicit PathInterval(Interval const& range) noexcept : range_(range) {}
  /// What the number can be on the present path.
  [[nodiscard]] Interval const& range() const noexcept { return range_; }

  /// @name Arithmetic
  /// @{

  /// As of lab::Interval.
  [[nodiscard]] friend PathInterval operator+(PathInterval const& a, PathInterval const& b) noexcept {
    return PathInterval(a.range_ + b.range_);
  }
  [[nodiscard]] friend PathInterval operator-(PathInterval const& a, PathInterval const& b) noexcept {
    return PathInterval(a.range_ - b.range_);
  }
  [[nodiscard]] friend PathInterval operator-(PathInterval const& a) noexcept { return PathInterval(-a.range_); }
  [[nodiscard]] friend PathInterval operator*(PathInterval const& a, PathInterval const& b) noexcept {
    return PathInterval(a.range_ * b.range_);
  }
  [[nodiscard]] friend PathInterval operator/(PathInterval const& a, PathInterval const& b) noexcept {
    return PathInterval(a.range_ / b.range_);
  }
  PathInterval& operator+=(PathInterval const& b) noexcept { return *this = *this + b; }
  PathInterval& operator*=(PathInterval const& b) noexcept { return *this = *this * b; }
  [[nodiscard]] friend PathInterval sqrt(PathInterval const& a) noexcept { return PathInterval(sqrt(a.range_)); }
  [[nodiscard]] friend PathInterval sqr(PathInterval const& a) noexcept { return PathInterval(sqr(a.range_)); }
  [[nodiscard]] friend PathInterval abs(PathInterval const& a) noexcept { return PathInterval(abs(a.range_)); }
  [[nodiscard]] friend PathInterval min(PathInterval const& a, PathInterval const& b) noexcept {
    return PathInterval(min(a.range_, b.range_));
  }
  [[nodiscard]] friend PathInterval max(PathInterval const& a, PathInterval const& b) noexcept {
    return PathInterval(max(a.range_, b.range_));
  }

  /// @}

  /// @name Comparison
  /// @{

  /// What the present path answers. An answer that was open narrows no range.
  [[nodiscard]] friend bool operator<(PathInterval const& a, PathInterval const& b) noexcept {
    return answer(a.range_ < b.range_);
  }
  [[nodiscard]] friend bool operator<=(PathInterval const& a, PathInterval const& b) noexcept {
    return answer(a.range_ <= b.range_);
  }
  [[nodiscard]] friend bool operator>(PathInterval const& a, PathInterval const& b) noexcept { return b < a; }
  [[nodiscard]] friend bool operator>=(PathInterval const& a, PathInterval const& b) noexcept { return b <= a; }
  /// @}

  /// a or b.
  [[nodiscard]] friend PathInterval select(bool m, PathInterval const& a, PathInterval const& b) noexcept {
    return m ? a : b;
  }
  /// What the present path answers: open for what has no bound.
  [[nodiscard]] friend bool finite(PathInterval const& a) noexcept { return answer(finite(a.range_)); }

 private:
  // Outside of for_each_path there is no one to take the other branch: a set that is asked such a thing is a mistake.
  [[nodiscard]] static bool answer(Trilean const& truth) noexcept {
    WEND_ASSERT(detail::Fork::current != nullptr || !truth.undecided());
    return detail::Fork::current != nullptr ? detail::Fork::current->answer(truth) : truth.can_be;
  }

  Interval range_;
};

}  // namespace wend::inline v0::lab

namespace Eigen {

/// Lets an interval on a path be the scalar of an Eigen vector.
template <>
struct NumTraits<wend::lab::PathInterval> : GenericNumTraits<wend::lab::PathInterval> {
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

/// A box taken apart, with tight directions: found in place of the general one.
[[nodiscard]] inline Polar<PathInterval> polar(Vec2<PathInterval> const& v) noexcept {
  Polar<Interval> const p = polar(Vec2<Interval>{v.x().range(), v.y().range()});
  return {{PathInterval(p.direction.x()), PathInterval(p.direction.y())}, PathInterval(p.length)};
}

}  // namespace wend::inline v0::lab
