// wend/lab/world.hpp - what stands and moves around the machine, and what a ranger would see of it.
#pragma once

#include <algorithm>
#include <cmath>
#include <limits>
#include <span>
#include <vector>

#include "wend/disc.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// A disc at time 0, and its velocity in metres a second.
struct WorldDisc {
  Disc<double> disc;
  Vec2<double> velocity{0.0, 0.0};
};

/// Discs at rest or moving, in metres.
struct World {
  std::vector<WorldDisc> discs;

  void add(double x, double y, double radius, Vec2<double> const& velocity = {0.0, 0.0}) {
    discs.push_back({{{x, y}, radius}, velocity});
  }

  /// A disc where it is after `time` seconds.
  [[nodiscard]] static Disc<double> at(WorldDisc const& d, double time) {
    return {d.disc.centre + time * d.velocity, d.disc.radius};
  }

  /// All discs of which some point is within `reach` of a point at a time, into `near`.
  void within(Vec2<double> const& point, double reach, double time, std::vector<Disc<double>>& near) const {
    near.clear();
    for (WorldDisc const& d : discs) {
      Disc<double> const now = at(d, time);
      double const far = reach + now.radius;
      if ((now.centre - point).squaredNorm() <= far * far) {
        near.push_back(now);
      }
    }
  }

  /// Metres from a point to the nearest edge at a time; negative inside a disc; infinite in an empty world.
  [[nodiscard]] double gap(Vec2<double> const& point, double time = 0.0) const {
    double least = std::numeric_limits<double>::infinity();
    for (WorldDisc const& d : discs) {
      least = std::min(least, v0::gap(at(d, time), point));
    }
    return least;
  }
};

/// Metres along a ray to the first of some discs; infinite when it meets none.
[[nodiscard]] inline double cast_ray(std::span<Disc<double> const> discs, Vec2<double> const& origin,
                                     Vec2<double> const& direction) {
  double nearest = std::numeric_limits<double>::infinity();
  for (Disc<double> const& disc : discs) {
    Vec2<double> const to_centre = disc.centre - origin;
    if (std::abs(cross(direction, to_centre)) <= disc.radius) {  // most discs miss most rays: a quick no
      double const reach = ray_to_disc(origin, direction, disc);
      if (reach < static_cast<double>(far_away)) {
        nearest = std::min(nearest, reach);
      }
    }
  }
  return nearest;
}

}  // namespace wend::inline v0::lab
