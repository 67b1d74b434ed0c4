// tests/guests.hpp - what the guests are tested with: scenes as rows of numbers, boxes of them with plain scenes
// inside, and Eigen's AutoDiffScalar as a number.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <random>
#include <type_traits>
#include <utility>
#include <vector>

#include <Eigen/Core>
#include <unsupported/Eigen/AutoDiff>

#include "scenes.hpp"
#include "wend/field.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/trilean.hpp"
#include "wend/members.hpp"

namespace guests {

using wend::lab::Trilean;

// --- Scenes as rows of numbers ---------------------------------------------------------------------------------------

// All that goes into a percept: position, heading, goal, four discs, the machine's radius, the time step, and the
// velocities of the discs.
inline constexpr std::size_t inputs = 28;
template <typename S>
using Row = std::array<S, inputs>;

template <typename S>
[[gnu::noinline]] scenes::Scene<S> scene_of(Row<S> const& row) noexcept {
  scenes::Scene<S> scene;
  scene.pose = {{row[0], row[1]}, {row[2], row[3]}};
  scene.goal = {row[4], row[5]};
  for (std::size_t i = 0; i < 4; ++i) {
    scene.put(row[6 + 3 * i], row[7 + 3 * i], row[8 + 3 * i], row[20 + 2 * i], row[21 + 2 * i]);
  }
  scene.robot_radius = row[18];
  scene.dt = row[19];
  return scene;
}

template <typename To, typename From>
Row<To> converted(Row<From> const& row) {
  Row<To> other;
  std::transform(row.begin(), row.end(), other.begin(), [](From const& x) { return To(x); });
  return other;
}

class Random {
 public:
  explicit Random(std::uint64_t seed) : random_(seed) {}
  double between(double low, double high) { return std::uniform_real_distribution<double>(low, high)(random_); }
  bool one_in(std::uint64_t n) { return random_() % n == 0; }

  // A scene in a room of 4 m x 4 m; an odd one may be just where fields switch.
  Row<double> row(bool odd = true) {
    double const angle = between(-3.2, 3.2);
    Row<double> row{between(-2, 2), between(-2, 2), std::cos(angle), std::sin(angle), between(-2, 2), between(-2, 2)};
    for (std::size_t i = 6; i < 18; i += 3) {
      row[i] = between(-2, 2), row[i + 1] = between(-2, 2), row[i + 2] = between(0.1, 0.5);
    }
    row[18] = between(0.1, 0.3);
    row[19] = between(0.03, 0.07);
    for (std::size_t i = 20; i < inputs; ++i) {
      row[i] = between(-0.5, 0.5);
    }
    if (!odd) {
      return row;
    }
    if (one_in(20)) {
      row[0] = row[4], row[1] = row[5];  // on the goal
    } else if (one_in(20)) {
      row[0] = row[6], row[1] = row[7];  // at a disc's centre
    } else if (one_in(20)) {
      row[9] = row[6], row[10] = row[7], row[11] = row[8];  // two discs that are one
    }
    return row;
  }

 private:
  std::mt19937_64 random_;
};

// --- Members of sets
// ---------------------------------------------------------------------------------------------------

// Whether a memory, course or command on plain numbers is a member of one on intervals.
template <typename Set, typename One>
bool holds(Set const& set, One const& one) {
  if constexpr (std::is_same_v<Set, Trilean>) {
    return one ? set.can_be : set.can_be_not;
  } else if constexpr (requires { set.contains(0.0); }) {
    return set.contains(static_cast<double>(one));
  } else if constexpr (requires { set.x(); }) {
    return holds(set.x(), one.x()) && holds(set.y(), one.y());
  } else {
    bool all = true;
    wend::for_each_member(set, one, [&all](auto const& s, auto const& o) noexcept { all = all && holds(s, o); });
    return all;
  }
}

// A memory of anything, as plain numbers.
template <typename One>
void scramble(One& one, Random& random) {
  if constexpr (std::is_same_v<One, bool>) {
    one = random.one_in(2);
  } else if constexpr (std::is_floating_point_v<One>) {
    one = static_cast<One>(random.one_in(8) ? random.between(-1e6, 1e6) : random.between(-2, 2));
  } else if constexpr (requires { one.x(); }) {
    scramble(one.x(), random), scramble(one.y(), random);
  } else {
    wend::for_each_member(one, one, [&random](auto& o, auto&) { scramble(o, random); });
  }
}

inline constexpr int points_a_box = 20;
inline constexpr int ticks_a_run = 8;

// A box of scenes and scenes in it: drawn around one scene and rounded to P, the box being the smallest around them.
template <typename I>
struct Cloud {
  using P = typename I::RoundedAs;
  Row<I> box;
  std::vector<Row<P>> points;

  explicit Cloud(Random& random) {
    Row<double> const middle = random.row();
    Row<double> width;
    double const size = std::exp(random.between(-9.0, -0.7));
    for (double& w : width) {
      w = random.one_in(4) ? 0.0 : size * random.between(0.0, 1.0);
    }
    double const angle = std::atan2(middle[3], middle[2]);
    for (int k = 0; k < points_a_box; ++k) {
      Row<double> point;
      for (std::size_t i = 0; i < inputs; ++i) {
        point[i] = middle[i] + width[i] * random.between(-0.5, 0.5);
      }
      double const turned = angle + size * random.between(-0.5, 0.5);
      point[2] = std::cos(turned), point[3] = std::sin(turned);
      for (std::size_t i = 8; i < 18; i += 3) {
        point[i] = std::max(point[i], 0.0);
      }
      point[19] = std::clamp(point[19], 1e-3, 0.4);
      points.push_back(converted<P>(point));
    }
    for (std::size_t i = 0; i < inputs; ++i) {
      auto const [low, high] = std::minmax_element(points.begin(), points.end(),
                                                   [i](Row<P> const& a, Row<P> const& b) { return a[i] < b[i]; });
      box[i] = I(static_cast<double>((*low)[i]), static_cast<double>((*high)[i]));
    }
  }
};

struct Tally {
  int boxes = 0;
  int courses_out = 0;
  int memories_out = 0;
  int commands_out = 0;
};

// --- Derivatives

/// Eigen's AutoDiffScalar as a number a policy can run on: each result is evaluated at once.
class Auto {
  using Scalar = Eigen::AutoDiffScalar<Eigen::Vector2d>;

 public:
  Auto() : x_(0.0) {}
  explicit Auto(float x) : x_(static_cast<double>(x)) {}
  explicit Auto(double x) : x_(x) {}
  static Auto variable(double x, int k) { return Auto(Scalar(x, 2, k)); }

  [[nodiscard]] double value() const { return x_.value(); }
  [[nodiscard]] double slope(int k) const { return x_.derivatives()[k]; }

  friend Auto operator+(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ + b.x_)); }
  friend Auto operator-(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ - b.x_)); }
  friend Auto operator*(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ * b.x_)); }
  friend Auto operator/(Auto const& a, Auto const& b) { return Auto(Scalar(a.x_ / b.x_)); }
  friend Auto operator-(Auto const& a) { return Auto(Scalar(-a.x_)); }
  friend Auto sqrt(Auto const& a) { return Auto(Scalar(Eigen::sqrt(a.x_))); }
  friend bool operator<(Auto const& a, Auto const& b) { return a.value() < b.value(); }
  friend bool operator>(Auto const& a, Auto const& b) { return a.value() > b.value(); }
  friend bool operator<=(Auto const& a, Auto const& b) { return a.value() <= b.value(); }
  friend bool operator>=(Auto const& a, Auto const& b) { return a.value() >= b.value(); }
  friend Auto select(bool mask, Auto const& a, Auto const& b) { return mask ? a : b; }
  friend bool finite(Auto const& a) { return std::isfinite(a.value()); }

 private:
  explicit Auto(Scalar const& x) : x_(x) {}
  Scalar x_;
};

}  // namespace guests

namespace Eigen {
template <>
struct NumTraits<guests::Auto> : GenericNumTraits<guests::Auto> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 3,
    AddCost = 3,
    MulCost = 5
  };
};
}  // namespace Eigen

namespace guests {

// A memory of doubles as one on another number, without derivatives.
template <typename From, typename To>
void hand_over(From const& from, To& to) {
  if constexpr (std::is_same_v<From, bool>) {
    to = from;
  } else if constexpr (std::is_same_v<From, double>) {
    to = To(from);
  } else if constexpr (requires { from.x(); }) {
    hand_over(from.x(), to.x()), hand_over(from.y(), to.y());
  } else {
    wend::for_each_member(from, to, [](auto const& f, auto& t) { hand_over(f, t); });
  }
}

template <typename S>
std::array<S, 4> numbers_of(wend::Course<S> const& course) {
  return {course.direction.x(), course.direction.y(), course.confidence, course.speed_share};
}

[[nodiscard]] inline bool near(double a, double b, double tolerance) {
  return std::abs(a - b) <= tolerance * std::max(1.0, std::abs(b));
}

}  // namespace guests
