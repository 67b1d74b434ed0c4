// wend/lab/winding.hpp - how often a course turns round along a curve, rigorously; and whether it can vanish in a box.
#pragma once

#include <cmath>
#include <cstdint>
#include <numbers>
#include <optional>
#include <utility>
#include <vector>

#include "wend/disc.hpp"
#include "wend/field.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/paths.hpp"
#include "wend/lab/still_world.hpp"
#include "wend/lab/stretch.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// What a policy's courses over a box of positions have in common.
struct CourseSpread {
  bool vanishes_nowhere = false;  ///< they lie in an open half plane, each with some confidence
  bool vanishes_everywhere = false;  ///< none has any confidence
  int paths = 0;                  ///< branches that the policy takes in the box
};

namespace detail {

// The cone spanned by vectors, as long as they lie in an open half plane.
class Cone {
 public:
  // False once they do not. Rounding errs towards false.
  bool add(Vec2<double> const& p) {
    if (empty_) {
      low_ = high_ = p;
      empty_ = false;
      return p.squaredNorm() > 0.0;
    }
    double const after_low = cross(low_, p);
    double const before_high = cross(p, high_);
    if (after_low >= 0.0 && before_high >= 0.0) {
      return p.dot(low_) > 0.0 || p.dot(high_) > 0.0;
    }
    // Beyond one side, and less than half a turn from the other: as the cross product says, or by a hair only.
    double const rounding = 1e-14 * p.norm();
    bool const by_a_hair = p.dot(low_) > 0.0 && p.dot(high_) > 0.0;
    if (before_high < 0.0 && (by_a_hair || after_low > rounding * low_.norm())) {
      high_ = p;
      return true;
    }
    if (after_low < 0.0 && (by_a_hair || before_high > rounding * high_.norm())) {
      low_ = p;
      return true;
    }
    return false;
  }
  bool add(Vec2<Interval> const& box) {
    using Corner = Vec2<double>;
    return add(Corner{box.x().low(), box.y().low()}) && add(Corner{box.x().low(), box.y().high()}) &&
           add(Corner{box.x().high(), box.y().low()}) && add(Corner{box.x().high(), box.y().high()});
  }

 private:
  Vec2<double> low_{0.0, 0.0};
  Vec2<double> high_{0.0, 0.0};
  bool empty_ = true;
};

}  // namespace detail

/// Asks one policy for the courses at points and over boxes of a world at rest. The policy starts with a fresh memory
/// everywhere.
template <typename Policy, int Capacity>
class CourseMap {
 public:
  /// Policy and world are referred to, and must outlive it.
  CourseMap(Policy const& policy, StillWorld<Capacity> const& world)
      : policy_(policy), world_(world), on_paths_(world.template discs_on<PathInterval>()) {}

  /// The course at one point, in double precision.
  [[nodiscard]] Course<double> at(Vec2<double> const& point) const {
    return world_.course(policy_, point, world_.discs());
  }

  /// Looks at every path on its own, so that a course that jumps by less than half a turn counts as going from one side
  /// to the other by the shorter way (Filippov 1988): it does not vanish.
  [[nodiscard]] CourseSpread over(Vec2<Interval> const& box) const {
    int paths = 0;
    bool all_sure = true;
    bool none_sure = true;
    detail::Cone cone;
    bool const apart = for_each_path(most_paths, [&]() {
      ++paths;
      Course<PathInterval> const course = course_over(box);
      Interval const confidence = course.confidence.range();
      none_sure = none_sure && confidence.high() <= 0.0;
      all_sure = all_sure && confidence.low() > 0.0 &&
                 cone.add(Vec2<Interval>{course.direction.x().range(), course.direction.y().range()});
      return all_sure || none_sure;
    });
    return {apart && all_sure, apart && none_sure, paths};
  }

  /// Whether every course over a box leads nearer to a point.
  [[nodiscard]] bool leads_to(Vec2<double> const& point, Vec2<Interval> const& box) const {
    Vec2<Interval> const there{Interval(point.x()) - box.x(), Interval(point.y()) - box.y()};
    return for_each_path(most_paths, [&]() {
      Course<PathInterval> const course = course_over(box);
      Vec2<Interval> const direction{course.direction.x().range(), course.direction.y().range()};
      return course.confidence.range().low() > 0.0 && dot(direction, there).low() > 0.0;
    });
  }

 private:
  static constexpr int most_paths = 12;  // there are more only in boxes that have to be split anyway

  [[nodiscard]] Course<PathInterval> course_over(Vec2<Interval> const& box) const {
    return world_.course(policy_, Vec2<PathInterval>{PathInterval(box.x()), PathInterval(box.y())}, on_paths_);
  }

  Policy const& policy_;
  StillWorld<Capacity> const& world_;
  DiscSet<PathInterval, Capacity> on_paths_;
};

/// By how much the course turns along some stretches, in turns, counter-clockwise. Each is cut until the courses over
/// every piece leave out a half plane: then the course turns between its ends by less than half a turn, the short way.
/// None when some piece shorter than `finest` metres does not: the course vanishes or turns about there.
template <typename Policy, int Capacity>
[[nodiscard]] std::optional<double> turns_along(CourseMap<Policy, Capacity> const& map, std::vector<Stretch> const& way,
                                                double finest) {
  constexpr std::int64_t most_pieces = 1'000'000;
  std::int64_t pieces = 0;
  double angle = 0.0;
  for (Stretch const& stretch : way) {
    double const size = stretch.radius > 0.0 ? stretch.radius * std::abs(stretch.to - stretch.from)
                                             : (stretch.end - stretch.start).norm();
    if (!(size > 0.0)) {
      continue;
    }
    std::vector<std::pair<double, double>> waiting{{0.0, 1.0}};
    while (!waiting.empty()) {
      auto const [a, b] = waiting.back();
      waiting.pop_back();
      if (map.over(stretch.box(a, b)).vanishes_nowhere) {
        Vec2<double> const before = map.at(stretch.at(a)).direction;
        Vec2<double> const after = map.at(stretch.at(b)).direction;
        angle += std::atan2(cross(before, after), before.dot(after));
      } else if ((b - a) * size < finest || ++pieces > most_pieces) {
        return std::nullopt;
      } else {
        double const middle = 0.5 * (a + b);
        waiting.emplace_back(middle, b);
        waiting.emplace_back(a, middle);
      }
    }
  }
  return angle / (2.0 * std::numbers::pi);
}

/// The same along closed curves: a whole number, the winding number, or none.
template <typename Policy, int Capacity>
[[nodiscard]] std::optional<int> winding_number(CourseMap<Policy, Capacity> const& map, std::vector<Stretch> const& way,
                                                double finest) {
  std::optional<double> const turns = turns_along(map, way, finest);
  if (!turns) {
    return std::nullopt;
  }
  double const whole = std::round(*turns);
  return std::abs(*turns - whole) < 1e-6 ? std::optional<int>(static_cast<int>(whole)) : std::nullopt;
}

/// Whether the course points into a circle all the way round it: whoever is inside stays.
template <typename Policy, int Capacity>
[[nodiscard]] bool points_inward(CourseMap<Policy, Capacity> const& map, Disc<double> const& circle) {
  constexpr int pieces = 256;
  Stretch const round = Stretch::round(circle, 0.0, 2.0 * std::numbers::pi);
  for (int i = 0; i < pieces; ++i) {
    if (!map.leads_to(circle.centre, round.box(static_cast<double>(i) / pieces, static_cast<double>(i + 1) / pieces))) {
      return false;
    }
  }
  return true;
}

}  // namespace wend::inline v0::lab
