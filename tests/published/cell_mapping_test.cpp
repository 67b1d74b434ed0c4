// Rigorous cell mapping on maps whose basins are known, and against a theorem about fields among discs.
//
// z -> z^2: the points whose orbits go to 0 are those of the open unit disc; its edge is the Julia set (Milnor 2006,
// Dynamics in One Complex Variable, 3rd ed., section 4). The method: Hsu (1980), A theory of cell-to-cell mapping
// dynamical systems, J. Applied Mechanics 47:931-939.
//
// Koditschek and Rimon (1990), Robot navigation functions on manifolds with boundary, Adv. in Applied Mathematics
// 11:412-442: among discs no smooth field brings every state to the goal; each disc adds one saddle at least. The
// reason is topological and holds for continuous steps too: were every state on a closed curve round a disc brought to
// the goal along ways clear of discs, the curve could be drawn together there without touching the disc.
//
// All from memory.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <limits>
#include <numbers>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/arrival_map.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;
using lab::Arrival;
using lab::CellIndex;
using lab::Interval;

struct squaring {
  static constexpr bool has_heading = false;
  Interval clearance(lab::States const&) const { return Interval(1.0); }
  bool arrived(lab::States const& z) const { return (sqr(z.x) + sqr(z.y)).high() <= 0.25; }
  bool images(lab::States const& z, std::vector<lab::States>& to) const {
    to.push_back({sqr(z.x) - sqr(z.y), Interval(2.0) * z.x * z.y, z.heading});
    return true;
  }
};

// The same with the imaginary axis turned over: -z^2, conjugate. Its basin is the same disc.
struct squaring_and_turning : squaring {
  bool images(lab::States const& z, std::vector<lab::States>& to) const {
    to.push_back({sqr(z.y) - sqr(z.x), Interval(2.0) * z.x * z.y, z.heading});
    return true;
  }
};

// A rotation brings nothing nearer to 0.
struct rotation : squaring {
  bool images(lab::States const& z, std::vector<lab::States>& to) const {
    to.push_back({Interval(0.6) * z.x - Interval(0.8) * z.y, Interval(0.8) * z.x + Interval(0.6) * z.y, z.heading});
    return true;
  }
};

lab::Region const square{{-1.2, -1.2}, {1.2, 1.2}};

// The area proved, and how far from 0 its farthest point lies.
struct Extent {
  double area = 0.0;
  double farthest = 0.0;
};

template <typename Steps>
Extent proved_extent(double finest) {
  lab::ArrivalOptions options;
  options.finest = finest;
  lab::ArrivalMap const map = lab::map_arrivals(Steps{}, square, options);
  Extent extent;
  for (int y = 0; y < map.grid.count().y; ++y) {
    for (int x = 0; x < map.grid.count().x; ++x) {
      if (map.at({x, y, 0}) == Arrival::proved) {
        lab::States const s = map.grid.states({x, y, 0}, {x + 1, y + 1, 1});
        extent.area += s.x.width() * s.y.width();
        extent.farthest = std::max(extent.farthest, std::hypot(s.x.mag(), s.y.mag()));
      }
    }
  }
  return extent;
}

// Whether one can go from a cell to the rim of the map by cells that are not proved and share an edge.
bool reaches_rim(lab::ArrivalMap const& map, CellIndex const& from) {
  CellIndex const& count = map.grid.count();
  std::vector<char> seen(map.grid.size(), 0);
  std::vector<CellIndex> todo{from};
  seen[map.grid.at(from)] = 1;
  while (!todo.empty()) {
    CellIndex const c = todo.back();
    todo.pop_back();
    if (c.x == 0 || c.y == 0 || c.x == count.x - 1 || c.y == count.y - 1) {
      return true;
    }
    for (CellIndex const& n : {CellIndex{c.x - 1, c.y, 0}, {c.x + 1, c.y, 0}, {c.x, c.y - 1, 0}, {c.x, c.y + 1, 0}}) {
      if (map.at(n) != Arrival::proved && seen[map.grid.at(n)] == 0) {
        seen[map.grid.at(n)] = 1;
        todo.push_back(n);
      }
    }
  }
  return false;
}

}  // namespace

TEST_CASE("of z -> z^2 the unit disc is proved to go to 0, from inside, and more of it with finer cells") {
  double missing = std::numbers::pi;
  for (double const finest : {0.04, 0.02, 0.01, 0.005}) {
    Extent const extent = proved_extent<squaring>(finest);
    CHECK(extent.farthest < 1.0);
    CHECK(extent.area < std::numbers::pi);
    CHECK(std::numbers::pi - extent.area < 0.75 * missing);
    missing = std::numbers::pi - extent.area;
  }
  CHECK(missing < 0.02 * std::numbers::pi);
}

TEST_CASE("of a map conjugate to z -> z^2 it is the same disc, and of a rotation nothing but the goal") {
  Extent const extent = proved_extent<squaring_and_turning>(0.01);
  CHECK(extent.farthest < 1.0);
  CHECK(extent.area > 0.96 * std::numbers::pi);
  Extent const turned = proved_extent<rotation>(0.01);
  CHECK(turned.farthest <= 0.5 + 1e-12);
  CHECK(turned.area > 0.9 * std::numbers::pi / 4.0);
}

TEST_CASE("the search for a way to the rim can tell a closed curve from one with a gap, also where it runs aslant") {
  lab::ArrivalMap map;
  map.grid = lab::CellGrid({0.0, 0.0}, {1.0, 1.0}, {9, 9, 1});
  map.cells.assign(81, Arrival::undecided);
  for (int k = 0; k < 3; ++k) {  // a rhombus, cells touching at corners
    for (CellIndex const& c : {CellIndex{1 + k, 4 + k, 0}, {4 + k, 7 - k, 0}, {7 - k, 4 - k, 0}, {4 - k, 1 + k, 0}}) {
      map.cells[map.grid.at(c)] = Arrival::proved;
    }
  }
  CHECK_FALSE(reaches_rim(map, {4, 4, 0}));
  CHECK(reaches_rim(map, {1, 1, 0}));
  map.cells[map.grid.at({1, 4, 0})] = Arrival::undecided;
  CHECK(reaches_rim(map, {4, 4, 0}));
}

TEST_CASE("no curve of proved cells closes round a disc, under a potential field or a blend") {
  lab::World world;
  world.add(1.4, 1.0, 0.3);
  world.add(2.6, 2.9, 0.4);
  world.add(3.7, 1.1, 0.35);
  lab::Region const region{{0.0, 0.0}, {5.0, 4.0}};
  Vec2<double> const goal{4.7, 2.0};
  auto const check = [&](auto const& policy) {
    for (double const finest : {0.02, 0.01}) {
      lab::ArrivalOptions options;
      options.finest = finest;
      lab::ArrivalMap const map = lab::arrival_map<4>(policy, world, goal, region, options);
      CHECK(map.share(Arrival::proved) > 0.75);
      for (lab::WorldDisc const& d : world.discs) {
        CellIndex const middle{static_cast<int>(d.disc.centre.x() / finest),
                               static_cast<int>(d.disc.centre.y() / finest), 0};
        REQUIRE(map.at(middle) == Arrival::blocked);
        CHECK(reaches_rim(map, middle));
      }
    }
  };
  // The gaps are so wide that the blend is continuous: half-way between two discs it goes straight to the goal.
  check(blend(ramp(clearance, 0.10F, 0.40F), away_from_discs{}, toward_goal{}));
  check(potential_field{});
}
