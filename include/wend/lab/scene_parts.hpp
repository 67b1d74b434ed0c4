// wend/lab/scene_parts.hpp - what a scene file says: what stands where, the trip, the machine, the claims.
#pragma once

#include <string>

#include "wend/lab/claims.hpp"
#include "wend/lab/ground.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/scenes.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// All that a scene file says. What a file leaves out is as it is here.
struct SceneFile {
  std::string title{};  ///< one line of UTF-8, no blanks around it
  World world{};  ///< metres
  Trip trip{};  ///< the scene's own
  Region region{};  ///< where drawn starts and goals lie, and where claims hold: made by region_around if not said
  double clear = 0.5;  ///< metres from a drawn start or goal to the nearest disc's edge, at the least
  double least_way = 0.0;  ///< metres between a drawn start and its goal, at the least
  Vehicle vehicle{};  ///< the machine as it really is
  Claims claims{};  ///< what is to be looked into

  /// For drawn_trip.
  [[nodiscard]] TripBounds draws() const { return {region, clear, least_way, trip.time_limit}; }
  /// For a campaign: this world, and drawn trips in it.
  [[nodiscard]] Scenes scenes() const {
    return {{world},
            [bounds = draws()](Ground const& ground, Draws const& draws) { return drawn_trip(ground, bounds, draws); },
            {}};
  }
};

/// A rectangle around start, goal and all discs as they are at time 0, and `rim` metres more on each side.
[[nodiscard]] inline Region region_around(World const& world, Trip const& trip, double rim = 1.0) {
  Region region{trip.start.position.cwiseMin(trip.goal), trip.start.position.cwiseMax(trip.goal)};
  for (WorldDisc const& d : world.discs) {
    Vec2<double> const half{d.disc.radius, d.disc.radius};
    region.low = region.low.cwiseMin(d.disc.centre - half);
    region.high = region.high.cwiseMax(d.disc.centre + half);
  }
  Vec2<double> const all_round{rim, rim};
  return {region.low - all_round, region.high + all_round};
}

}  // namespace wend::inline v0::lab
