// wend/lab/stretch.hpp - curves made of straight lines and arcs, and the boxes that hold their pieces.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <vector>

#include "wend/disc.hpp"
#include "wend/lab/interval.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// A piece of a curve in the plane: from one point straight to another, or round a centre from one angle to another
/// (radians; clockwise when `to` is less than `from`). Metres.
struct Stretch {
  Vec2<double> start{0.0, 0.0};  ///< of an arc too, to 1e-9 m: where two stretches meet, both give the very same point
  Vec2<double> end{0.0, 0.0};  ///< of an arc too
  Vec2<double> centre{0.0, 0.0};  ///< of an arc
  double radius = 0.0;  ///< 0 for a straight one
  double from = 0.0;  ///< radians, at the start of an arc
  double to = 0.0;  ///< radians, at its end

  /// From a straight to b.
  [[nodiscard]] static Stretch straight(Vec2<double> const& a, Vec2<double> const& b) {
    Stretch s;
    s.start = a, s.end = b;
    return s;
  }
  /// Along the edge of a disc, from one angle to another.
  [[nodiscard]] static Stretch round(Disc<double> const& circle, double from, double to) {
    Stretch s;
    s.centre = circle.centre, s.radius = circle.radius, s.from = from, s.to = to;
    s.start = circle.centre + circle.radius * Vec2<double>{std::cos(from), std::sin(from)};
    s.end = circle.centre + circle.radius * Vec2<double>{std::cos(to), std::sin(to)};
    return s;
  }

  /// The point at a share of the way, in [0, 1].
  [[nodiscard]] Vec2<double> at(double share) const {
    if (radius > 0.0 && share > 0.0 && share < 1.0) {
      double const angle = from + share * (to - from);
      return centre + radius * Vec2<double>{std::cos(angle), std::sin(angle)};
    }
    return share < 1.0 ? Vec2<double>(start + share * (end - start)) : end;
  }
  /// A box that holds all points between two shares, and also the two as `at` rounds them.
  [[nodiscard]] Vec2<Interval> box(double a, double b) const {
    Vec2<double> const p = at(a);
    Vec2<double> const q = at(b);
    double const half = 0.5 * std::abs(b - a) * std::abs(to - from);
    // Between two points an arc bulges by no more than this; the rest is for the rounding of sine and cosine, and for
    // ends that were moved to meet others.
    double const bulge = radius * (half < 1.0 ? 0.5 * half * half : 2.0);
    double const moved = radius > 0.0 ? 4e-9 : 0.0;
    double const far = radius + p.cwiseAbs().sum() + q.cwiseAbs().sum();
    double const reach = bulge + moved + 1e-14 * far;
    return {Interval(std::min(p.x(), q.x()) - reach, std::max(p.x(), q.x()) + reach),
            Interval(std::min(p.y(), q.y()) - reach, std::max(p.y(), q.y()) + reach)};
  }
};

/// The boundary of a rectangle less some discs, with what is left of the rectangle on the left hand: metres. The discs
/// may overlap each other and the rectangle's sides.
[[nodiscard]] inline std::vector<Stretch> boundary(Vec2<double> const& low, Vec2<double> const& high,
                                                   std::vector<Disc<double>> const& holes) {
  constexpr double turn = 2.0 * std::numbers::pi;
  std::vector<Stretch> way;
  auto const covered = [&holes](Vec2<double> const& point, std::size_t except) {
    for (std::size_t j = 0; j < holes.size(); ++j) {
      bool const twin = except < holes.size() && (holes[j].centre - holes[except].centre).norm() < 1e-12 &&
                        std::abs(holes[j].radius - holes[except].radius) < 1e-12;
      if (j != except && (twin ? j < except : gap(holes[j], point) < 0.0)) {
        return true;
      }
    }
    return false;
  };
  std::array<Vec2<double>, 5> const corners{low, {high.x(), low.y()}, high, {low.x(), high.y()}, low};
  for (std::size_t side = 0; side < 4; ++side) {
    Vec2<double> const& a = corners[side];
    Vec2<double> const along = corners[side + 1] - a;
    std::vector<double> cuts{0.0, 1.0};
    for (Disc<double> const& hole : holes) {  // |a + t along - c|^2 = r^2
      double const per = along.squaredNorm();
      double const middle = along.dot(hole.centre - a) / per;
      double const across = cross(along, Vec2<double>(hole.centre - a));
      double const rest = hole.radius * hole.radius - across * across / per;
      if (rest > 0.0) {
        double const half = std::sqrt(rest / per);
        cuts.push_back(std::clamp(middle - half, 0.0, 1.0));
        cuts.push_back(std::clamp(middle + half, 0.0, 1.0));
      }
    }
    std::sort(cuts.begin(), cuts.end());
    for (std::size_t i = 0; i + 1 < cuts.size(); ++i) {
      if (!covered(a + 0.5 * (cuts[i] + cuts[i + 1]) * along, holes.size())) {
        way.push_back(Stretch::straight(a + cuts[i] * along, a + cuts[i + 1] * along));
      }
    }
  }
  for (std::size_t i = 0; i < holes.size(); ++i) {
    Disc<double> const& hole = holes[i];
    std::vector<double> cuts{0.0, turn};
    auto const cut = [&cuts](double angle) { cuts.push_back(angle - turn * std::floor(angle / turn)); };
    auto const cut_at = [&](double cosine, double bearing) {
      if (std::abs(cosine) < 1.0) {
        cut(bearing + std::acos(cosine)), cut(bearing - std::acos(cosine));
      }
    };
    cut_at((high.x() - hole.centre.x()) / hole.radius, 0.0);
    cut_at((low.x() - hole.centre.x()) / hole.radius, 0.0);
    cut_at((high.y() - hole.centre.y()) / hole.radius, turn / 4.0);
    cut_at((low.y() - hole.centre.y()) / hole.radius, turn / 4.0);
    for (Disc<double> const& other : holes) {
      Vec2<double> const apart = other.centre - hole.centre;
      double const d = apart.norm();
      if (d > 0.0) {
        cut_at((d * d + hole.radius * hole.radius - other.radius * other.radius) / (2.0 * d * hole.radius),
               std::atan2(apart.y(), apart.x()));
      }
    }
    std::sort(cuts.begin(), cuts.end());
    for (std::size_t k = 0; k + 1 < cuts.size(); ++k) {
      double const middle = 0.5 * (cuts[k] + cuts[k + 1]);
      Vec2<double> const point = hole.centre + hole.radius * Vec2<double>{std::cos(middle), std::sin(middle)};
      bool const inside = low.x() < point.x() && point.x() < high.x() && low.y() < point.y() && point.y() < high.y();
      if (inside && !covered(point, i)) {
        way.push_back(Stretch::round(hole, cuts[k + 1], cuts[k]));  // clockwise round a hole
      }
    }
  }
  // A course may jump at the very corner. It is asked once there, and both that meet start from the same answer.
  constexpr double same = 1e-9;  // metres
  std::vector<Vec2<double>> ends;
  auto const settle = [&ends](Vec2<double>& point) {
    for (Vec2<double> const& other : ends) {
      if ((other - point).norm() < same) {
        point = other;
        return;
      }
    }
    ends.push_back(point);
  };
  for (Stretch& stretch : way) {
    settle(stretch.start), settle(stretch.end);
  }
  return way;
}

}  // namespace wend::inline v0::lab
