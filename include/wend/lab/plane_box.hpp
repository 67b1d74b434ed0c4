// wend/lab/plane_box.hpp - boxes of positions for searches over a region: halves, clusters, hulls.
#pragma once

#include <algorithm>
#include <cstddef>
#include <utility>
#include <vector>

#include "wend/disc.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/still_world.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab::detail {

struct PlaneBox {
  Interval x, y;
  bool no_opinion = false;

  [[nodiscard]] double size() const { return std::max(x.width(), y.width()); }
  [[nodiscard]] std::pair<PlaneBox, PlaneBox> halves() const {
    std::pair<PlaneBox, PlaneBox> both{*this, *this};
    Interval PlaneBox::*const side = x.width() >= y.width() ? &PlaneBox::x : &PlaneBox::y;
    both.first.*side = Interval((this->*side).low(), (this->*side).middle());
    both.second.*side = Interval((this->*side).middle(), (this->*side).high());
    return both;
  }
  /// Whether it lies wholly inside a disc.
  [[nodiscard]] bool within(Disc<double> const& disc) const {
    Vec2<Interval> const from_centre{x - Interval(disc.centre.x()), y - Interval(disc.centre.y())};
    return length(from_centre).high() < disc.radius;
  }
  [[nodiscard]] bool within_one_of(std::vector<Disc<double>> const& discs) const {
    return std::any_of(discs.begin(), discs.end(), [this](Disc<double> const& disc) { return within(disc); });
  }
};

// Boxes that lie no farther apart than `reach` metres in either direction, gathered: sweeps from left to right.
inline std::vector<std::vector<PlaneBox>> clusters(std::vector<PlaneBox> boxes, double reach) {
  std::sort(boxes.begin(), boxes.end(), [](PlaneBox const& a, PlaneBox const& b) {
    return std::pair(a.x.low(), a.y.low()) < std::pair(b.x.low(), b.y.low());
  });
  std::vector<std::size_t> parent(boxes.size());
  auto const root = [&parent](std::size_t i) {
    while (parent[i] != i) {
      i = parent[i] = parent[parent[i]];
    }
    return i;
  };
  std::vector<std::size_t> active;
  for (std::size_t i = 0; i < boxes.size(); ++i) {
    parent[i] = i;
    std::erase_if(active, [&](std::size_t j) { return boxes[j].x.high() + reach < boxes[i].x.low(); });
    for (std::size_t const j : active) {
      if (boxes[j].y.low() <= boxes[i].y.high() + reach && boxes[i].y.low() <= boxes[j].y.high() + reach) {
        parent[root(j)] = root(i);
      }
    }
    active.push_back(i);
  }
  std::vector<std::vector<PlaneBox>> gathered;
  std::vector<std::size_t> place(boxes.size(), boxes.size());
  for (std::size_t i = 0; i < boxes.size(); ++i) {
    std::size_t& at = place[root(i)];
    if (at == boxes.size()) {
      at = gathered.size();
      gathered.emplace_back();
    }
    gathered[at].push_back(boxes[i]);
  }
  return gathered;
}

inline Region hull_of(std::vector<PlaneBox> const& boxes) {
  Interval x = boxes.front().x;
  Interval y = boxes.front().y;
  for (PlaneBox const& box : boxes) {
    x = hull(x, box.x), y = hull(y, box.y);
  }
  return {{x.low(), y.low()}, {x.high(), y.high()}};
}

[[nodiscard]] inline bool holds(Region const& region, Vec2<double> const& p) {
  return region.low.x() <= p.x() && p.x() <= region.high.x() && region.low.y() <= p.y() && p.y() <= region.high.y();
}
inline Region grown(Region const& region, double by) {
  return {region.low - Vec2<double>{by, by}, region.high + Vec2<double>{by, by}};
}

inline bool outside(std::vector<Disc<double>> const& holes, Vec2<double> const& p) {
  return std::all_of(holes.begin(), holes.end(), [&p](Disc<double> const& hole) { return gap(hole, p) > 0.0; });
}
// Whether a region meets no hull but its own.
inline bool alone(std::vector<Region> const& hulls, std::size_t own, Region const& region) {
  for (std::size_t j = 0; j < hulls.size(); ++j) {
    Region const& h = hulls[j];
    if (j != own && h.low.x() <= region.high.x() && region.low.x() <= h.high.x() && h.low.y() <= region.high.y() &&
        region.low.y() <= h.high.y()) {
      return false;
    }
  }
  return true;
}

/// Discs of a world grown by the machine's radius and a distance kept off: places that are out of the question.
template <int Capacity>
[[nodiscard]] std::vector<Disc<double>> grown_discs(StillWorld<Capacity> const& world, double keep_off) {
  std::vector<Disc<double>> holes;
  for (Disc<double> const& disc : world.discs()) {
    double const radius = disc.radius + static_cast<double>(world.robot_radius()) + keep_off;
    if (radius > 0.0) {
      holes.push_back({disc.centre, radius});
    }
  }
  return holes;
}

}  // namespace wend::inline v0::lab::detail
