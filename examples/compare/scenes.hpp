// Five scenes that tell methods apart, and a stand of trees. The yard of a nursery that does not exist: tubs, hedges of
// tubs, and carts that cross.
#pragma once

#include <cmath>
#include <string>
#include <vector>

#include <wend/lab/simulate.hpp>
#include <wend/lab/world.hpp>

namespace compare {

struct Scene {
  std::string name;
  std::string what;  ///< what it is known to tell apart
  wend::lab::World world;
  wend::lab::Trip trip;
};

/// All scenes but the trees start at (0, 0), nose to the goal at (8, 0): methods whose parameters are places in the
/// world can be set up for them.
inline constexpr double goal_x = 8.0;

namespace detail {

inline wend::lab::Trip along_x() { return {{{0.0, 0.0}, {1.0, 0.0}}, {goal_x, 0.0}, 90.0}; }

/// A hedge: tubs of 10 cm radius, close enough together that nothing passes between.
inline void hedge(wend::lab::World& world, wend::Vec2<double> from, wend::Vec2<double> to) {
  double const length = (to - from).norm();
  int const gaps = static_cast<int>(std::ceil(length / 0.22));
  for (int i = 0; i <= gaps; ++i) {
    wend::Vec2<double> const at = from + (static_cast<double>(i) / gaps) * (to - from);
    world.add(at.x(), at.y(), 0.1);
  }
}

}  // namespace detail

inline std::vector<Scene> scenes() {
  std::vector<Scene> all;

  all.push_back({"open", "nothing stands there", {}, detail::along_x()});

  Scene disc{"disc", "one tub of 0.5 m radius, 1 cm off the line to the goal", {}, detail::along_x()};
  disc.world.add(4.0, 0.01, 0.5);
  all.push_back(disc);

  Scene trap{"trap", "a hedge in the shape of a U, its opening toward the start", {}, detail::along_x()};
  detail::hedge(trap.world, {3.2, 1.1}, {4.8, 1.1});
  detail::hedge(trap.world, {4.8, 1.1}, {4.8, -1.1});
  detail::hedge(trap.world, {4.8, -1.1}, {3.2, -1.1});
  all.push_back(trap);

  Scene passage{"passage", "a lane between two hedges, 0.7 m wide, for a body of 0.4 m", {}, detail::along_x()};
  for (double const side : {-1.0, 1.0}) {
    detail::hedge(passage.world, {3.0, side * 0.45}, {5.0, side * 0.45});
    detail::hedge(passage.world, {3.0, side * 0.45}, {3.0, side * 2.2});
  }
  all.push_back(passage);

  Scene crossers{"crossers", "carts of 0.25 m radius that cross the way at 0.2 to 0.35 m/s", {}, detail::along_x()};
  crossers.world.add(2.2, -1.9, 0.25, {0.0, 0.35});
  crossers.world.add(3.6, 2.6, 0.25, {0.0, -0.30});
  crossers.world.add(5.0, -3.0, 0.25, {-0.05, 0.25});
  crossers.world.add(6.4, 3.0, 0.25, {0.0, -0.20});
  crossers.world.add(9.0, 0.3, 0.25, {-0.25, 0.0});
  all.push_back(crossers);
  return all;
}

}  // namespace compare
