// wend/lab/world.hpp - what stands and moves around the machine, and what a ranger would see of it.
#pragma once

#include <algorithm>
#include <cmath>
#include <limits>
#include <span>
#include <stdexcept>
#include <string>
#include <vector>

#include "wend/disc.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// A disc at time 0, and its velocity in metres a second.
struct WorldDisc {
  Disc<double> disc;  ///< metres, at time 0
  Vec2<double> velocity{0.0, 0.0};  ///< metres a second; at rest unless given
};

/// Discs at rest or moving, in metres.
struct World {
  std::vector<WorldDisc> discs;  ///< in any order; their places are their numbers

  /// Adds a disc: metres, and metres a second.
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

/// A rectangle of positions, metres.
struct Region {
  Vec2<double> low{0.0, 0.0};  ///< the corner with the least coordinates
  Vec2<double> high{0.0, 0.0};  ///< the corner with the greatest coordinates
};

/// Throws std::invalid_argument for a world with discs that move, or more of them than `capacity`; `who` is named in
/// the message. For whatever takes a world as a policy would find it at any time.
inline void expect_still(char const* who, World const& world, int capacity) {
  if (world.discs.size() > static_cast<std::size_t>(capacity)) {
    throw std::invalid_argument(std::string("wend: ") + who + ": the world has more discs than Capacity; write " + who +
                                "<" + std::to_string(world.discs.size()) + ">(...)");
  }
  for (WorldDisc const& d : world.discs) {
    if (d.velocity.squaredNorm() > 0.0) {
      throw std::invalid_argument(std::string("wend: ") + who + ": expected discs at rest, found one that moves");
    }
  }
}

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
