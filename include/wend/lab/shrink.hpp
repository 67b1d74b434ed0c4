// wend/lab/shrink.hpp - makes a scene in which something goes wrong as small as it gets, so that a person can look at
// it.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <vector>

#include "wend/lab/simulate.hpp"
#include "wend/lab/world.hpp"

namespace wend::inline v0::lab {

/// A world and a trip through it.
struct Scene {
  World world;  ///< what stands and moves in it
  Trip trip;  ///< from where to where
};

namespace detail {

// To 0.1 mm, so that what is printed with four decimals is what was run.
inline double rounded(double metres) { return std::round(metres * 1.0e4) / 1.0e4; }

inline Scene rounded(Scene scene) {
  auto const round = [](Vec2<double>& p) { p = {rounded(p.x()), rounded(p.y())}; };
  for (WorldDisc& d : scene.world.discs) {
    round(d.disc.centre);
    round(d.velocity);
    d.disc.radius = rounded(d.disc.radius);
  }
  round(scene.trip.start.position);
  round(scene.trip.start.heading);
  scene.trip.start.heading.normalize();
  round(scene.trip.goal);
  return scene;
}

}  // namespace detail

/// A smaller scene in which a run fails too. `run` drives through a scene, with its ticks kept; `fails` judges a run.
/// It takes discs away, many at first and then one by one (Zeller and Hildebrandt 2002, "Simplifying and isolating
/// failure-inducing input"), then starts later on the way that failed, as late as it still fails, and then takes discs
/// away once more. What is left cannot lose one more disc. Places are rounded to 0.1 mm where it still fails then. The
/// scene given has to fail; it is given back where nothing smaller does. A start that overlaps a disc is not taken:
/// `radius` is the body's, metres.
template <typename DriveThrough, typename Fails>
[[nodiscard]] Scene shrunk(Scene scene, double radius, DriveThrough const& run, Fails const& fails) {
  auto const fails_in = [&](Scene const& s) { return s.world.gap(s.trip.start.position) > radius && fails(run(s)); };
  if (Scene const plain = detail::rounded(scene); fails_in(plain)) {
    scene = plain;
  }
  auto const without_discs = [&] {
    std::size_t chunk = std::max<std::size_t>(scene.world.discs.size() / 2, 1);
    while (!scene.world.discs.empty()) {
      bool taken = false;
      for (std::size_t first = 0; first < scene.world.discs.size();) {
        Scene fewer = scene;
        auto const from = fewer.world.discs.begin() + static_cast<std::ptrdiff_t>(first);
        auto const left = static_cast<std::ptrdiff_t>(std::min(chunk, scene.world.discs.size() - first));
        fewer.world.discs.erase(from, from + left);
        if (fails_in(fewer)) {
          scene = fewer;
          taken = true;
        } else {
          first += chunk;
        }
      }
      if (chunk == 1 && !taken) {
        return;
      }
      chunk = std::max<std::size_t>(chunk / 2, 1);
    }
  };
  // As late on its way as it still fails: halving is right where later starts fail no more from some tick on, and
  // elsewhere still ends at a start that fails.
  auto const from_later_on = [&] {
    std::vector<Tick> const ticks = run(scene).ticks;
    Scene const from_the_start = scene;
    std::size_t fails_from = 0;
    std::size_t holds_from = ticks.size();
    while (holds_from - fails_from > 1) {
      std::size_t const middle = fails_from + (holds_from - fails_from) / 2;
      Tick const& tick = ticks[middle];
      Scene later = from_the_start;
      later.trip.start = tick.pose;
      for (WorldDisc& d : later.world.discs) {
        d.disc = World::at(d, tick.time);
      }
      later = detail::rounded(later);
      if (fails_in(later)) {
        fails_from = middle;
        scene = later;
      } else {
        holds_from = middle;
      }
    }
  };
  without_discs();
  from_later_on();
  without_discs();
  return scene;
}

}  // namespace wend::inline v0::lab
