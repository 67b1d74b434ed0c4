// What a review or a fleet is about: the cellar, a stand of trees, or a scene file.
#pragma once

#include <string>

#include <wend/lab/csv.hpp>
#include <wend/lab/scene_file.hpp>

#include "cellar.hpp"
#include "stand.hpp"

namespace given {

using namespace wend;

/// The cart with everything that drawn runs get wrong beside what its ranger does.
inline lab::Vehicle worn_cart() {
  lab::Vehicle cart = cellar::cart();
  cart.disc_noise = 0.01;
  cart.radius_noise = 0.01;
  cart.disc_dropout = 0.01;
  cart.slip = 0.03;
  cart.wheel_spread = 0.01;
  cart.track_spread = 0.01;
  return cart;
}

/// Of both scenes that come with wend.
inline constexpr lab::Claims usual_claims{.keeps_clear = 0.01, .seen_within = 0.02, .arrives = 0.99, .contacts = 0.001};

inline lab::SceneFile the_cellar() {
  return {.title = "A tray cart crosses the mushroom cellar",
          .world = cellar::world(),
          .trip = cellar::trip(),
          .region = cellar::region,
          .clear = 0.4,
          .least_way = 6.0,
          .vehicle = worn_cart(),
          .claims = usual_claims};
}

/// A stand of trees, crossed from west to east; drawn trips lead half way through it. Throws lab::FileError.
inline lab::SceneFile a_stand(std::string const& file) {
  stand::Stand const trees = stand::read(file);
  lab::Region const region = lab::region_around(trees.world, trees.trip, 0.0);
  double const width = region.high.x() - region.low.x();
  return {.title = "A cart crosses a stand of " + std::to_string(trees.world.discs.size()) + " trees",
          .world = trees.world,
          .trip = trees.trip,
          .region = region,
          .clear = 0.4,
          .least_way = 0.5 * width,
          .vehicle = worn_cart(),
          .claims = usual_claims};
}

/// By the options of the command line; both empty: the cellar. Throws lab::FileError.
inline lab::SceneFile scene(std::string const& scene_file, std::string const& map) {
  if (!scene_file.empty()) {
    lab::SceneFile scene = lab::parse_scene(scene_file, lab::read_whole(scene_file));
    if (scene.title.empty()) {
      scene.title = scene_file;
    }
    return scene;
  }
  return map.empty() ? the_cellar() : a_stand(map);
}

}  // namespace given
