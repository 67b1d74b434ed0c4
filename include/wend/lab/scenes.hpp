// wend/lab/scenes.hpp - where the runs of a campaign take place: worlds, starts and goals by the number of the run.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <memory>
#include <numbers>
#include <stdexcept>
#include <utility>
#include <vector>

#include "wend/lab/ground.hpp"
#include "wend/lab/lane_draws.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/shrink.hpp"
#include "wend/lab/simulate.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// Where runs take place. Either a list of worlds, of which each run draws one, and `trip`, which draws a start and a
/// goal in it; or `scene`, which makes a world and a trip for each run. Both are given the run's own draws, of which
/// any purpose may be used, and may be called from several threads at once. They must depend on nothing else.
struct Scenes {
  std::vector<World> worlds{};  ///< to draw one from; not looked at where `scene` is set
  /// Draws a start and a goal in the world that was drawn; not asked where `scene` is set.
  std::function<Trip(Ground const&, Draws const&)> trip{};
  /// Makes a world and a trip for each run; none unless set.
  std::function<Scene(Draws const&)> scene{};
};

/// What a drawn trip has to be.
struct TripBounds {
  Region region;            ///< metres: for start and goal
  double clear = 0.5;       ///< metres from either to the nearest disc's edge
  double least_way = 0.0;   ///< metres between them
  double time_limit = 120.0;  ///< seconds
};

/// Draws a start, a heading and a goal within bounds. Throws std::invalid_argument after 10 000 draws in vain.
[[nodiscard]] inline Trip drawn_trip(Ground const& ground, TripBounds const& bounds, Draws const& draws) {
  auto const point = [&](std::uint32_t purpose, std::uint32_t i) -> Vec2<double> {
    return {draws.between(bounds.region.low.x(), bounds.region.high.x(), {purpose, i, 0}),
            draws.between(bounds.region.low.y(), bounds.region.high.y(), {purpose, i, 1})};
  };
  for (std::uint32_t i = 0; i < 10000; ++i) {
    Vec2<double> const start = point(1, i);
    Vec2<double> const goal = point(2, i);
    if ((goal - start).norm() >= bounds.least_way && ground.gap(start) >= bounds.clear &&
        ground.gap(goal) >= bounds.clear) {
      double const angle = draws.between(-std::numbers::pi, std::numbers::pi, {3, i});
      return {{start, {std::cos(angle), std::sin(angle)}}, goal, bounds.time_limit};
    }
  }
  throw std::invalid_argument("wend: drawn_trip: found no start and goal within these bounds in 10000 draws");
}

namespace detail {

// One run's world and trip.
struct SceneOf {
  std::shared_ptr<Ground const> ground{};
  Trip trip{};
  std::uint64_t number = 0;  // of the world
};

// The worlds of a campaign with their indexes, shared by all threads.
class GroundList {
 public:
  GroundList(Scenes const& scenes, int told) : scenes_(scenes), most_discs_(told) {
    if (scenes.scene) {
      return;
    }
    if (scenes.worlds.empty() || !scenes.trip) {
      throw std::invalid_argument("wend: campaign: expected worlds and a trip, or a scene, found neither");
    }
    std::size_t most = 0;
    for (World const& world : scenes.worlds) {
      most = std::max(most, world.discs.size());
      grounds_.push_back(std::make_shared<Ground const>(world));
    }
    most_discs_ = static_cast<int>(std::min(most, static_cast<std::size_t>(told)));
  }

  // How many discs can be near at once; where worlds are made run by run, as many as are told at all.
  [[nodiscard]] int most_discs() const noexcept { return most_discs_; }

  [[nodiscard]] SceneOf scene(std::uint64_t seed, std::uint64_t run) const {
    // Another key than that of the noise: no purpose can be used twice.
    Draws const draws(~seed, run);
    if (scenes_.scene) {
      Scene made = scenes_.scene(draws);
      return {std::make_shared<Ground const>(std::move(made.world)), made.trip, run};
    }
    double const share = Draws(seed, run).uniform({of_world});
    auto const number = static_cast<std::size_t>(share * static_cast<double>(grounds_.size()));
    return {grounds_[number], scenes_.trip(*grounds_[number], draws), number};
  }

 private:
  Scenes const& scenes_;
  int most_discs_;
  std::vector<std::shared_ptr<Ground const>> grounds_;
};

}  // namespace detail

}  // namespace wend::inline v0::lab
