// Arrival maps against runs of the policy on float, step by step, from random states; against geometry worked out in
// double; and against cases in which the answer is plain.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <random>
#include <stdexcept>
#include <string>
#include <utility>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/arc.hpp"
#include "wend/lab/arrival_map.hpp"
#include "wend/lab/arrival_picture.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;
using lab::Arrival;
using lab::CellIndex;

constexpr auto policy = blend(ramp(clearance, 0.10F, 0.60F), away_from_discs{}, toward_goal{});
constexpr lab::ArrivalOptions fine{};
lab::Region const region{{0.0, 0.0}, {5.0, 4.0}};
Vec2<double> const goal{4.7, 2.0};

lab::World three_discs() {
  lab::World world;
  world.add(1.4, 1.0, 0.3);
  world.add(2.6, 2.9, 0.4);
  world.add(3.7, 1.1, 0.35);
  return world;
}

// Two of these stand so close that the blend never gets through between them, as runs show.
lab::World a_trap() {
  lab::World world;
  world.add(1.6, 1.2, 0.3);
  world.add(2.6, 2.6, 0.4);
  world.add(3.6, 1.4, 0.35);
  return world;
}

DiscSet<float, 4> on_float(lab::World const& world) {
  DiscSet<float, 4> discs;
  for (lab::WorldDisc const& d : world.discs) {
    discs.add({d.disc.centre.cast<float>(), static_cast<float>(d.disc.radius)});
  }
  return discs;
}

// Metres from a segment to the nearest disc, less the robot's radius.
double clear_of(lab::World const& world, Vec2<double> const& from, Vec2<double> const& to, double robot_radius) {
  double least = std::numeric_limits<double>::infinity();
  Vec2<double> const way = to - from;
  for (lab::WorldDisc const& d : world.discs) {
    double const share = way.squaredNorm() > 0.0 ? way.dot(d.disc.centre - from) / way.squaredNorm() : 0.0;
    Vec2<double> const nearest = from + std::clamp(share, 0.0, 1.0) * way;
    least = std::min(least, (nearest - d.disc.centre).norm() - d.disc.radius - robot_radius);
  }
  return least;
}

enum class End : std::uint8_t { arrived, contact, left, lost };

// The point machine in double, its policy on float, with a heading that is where the last step went.
template <typename Policy>
End drive(Policy const& p, lab::World const& world, Vec2<double> at, Vec2<double> const& to, lab::Region const& within,
          lab::ArrivalOptions const& options, memory_t<Policy, float> memory = {}) {
  DiscSet<float, 4> const discs = on_float(world);
  Vec2<float> heading{1.0F, 0.0F};
  for (int step = 0; step < 5000; ++step) {
    if ((at - to).norm() <= static_cast<double>(options.arrive_within)) {
      return End::arrived;
    }
    auto const percept = look(Pose<float>{at.cast<float>(), heading}, Vec2<float>(to.cast<float>()), discs,
                              options.robot_radius, static_cast<float>(options.dt));
    heading = evaluate(p, percept, memory).direction;
    Vec2<double> const next = at + options.step * heading.cast<double>();
    if (clear_of(world, at, next, static_cast<double>(options.robot_radius)) <= 0.0) {
      return End::contact;
    }
    at = next;
    if (at.x() < within.low.x() || at.y() < within.low.y() || at.x() > within.high.x() || at.y() > within.high.y()) {
      return End::left;
    }
  }
  return End::lost;
}

struct Random {
  std::mt19937 engine{20240501};  // the standard says which numbers it gives
  double between(double low, double high) { return low + (high - low) * static_cast<double>(engine()) / 4294967295.0; }
};

// The cell of a state.
CellIndex cell_of(lab::ArrivalMap const& map, Vec2<double> const& at, double heading = 0.0) {
  auto const& grid = map.grid;
  auto const number = [](double x, double low, double high, int count) {
    return std::clamp(static_cast<int>((x - low) / (high - low) * count), 0, count - 1);
  };
  return {number(at.x(), grid.low().x(), grid.high().x(), grid.count().x),
          number(at.y(), grid.low().y(), grid.high().y(), grid.count().y),
          number(heading, -std::numbers::pi, std::numbers::pi, grid.count().heading)};
}

struct Tally {
  int starts = 0;
  int arrived = 0;
  int proved = 0;
  int proved_and_arrived = 0;
};

// Drives from free positions drawn evenly, until `wanted` of them were in proved cells.
template <typename Policy>
Tally drive_many(Policy const& p, lab::World const& world, lab::ArrivalMap const& map, int wanted,
                 lab::ArrivalOptions const& options) {
  Random random;
  Tally tally;
  while (tally.proved < wanted && tally.starts < 10 * wanted) {
    Vec2<double> const at{random.between(region.low.x(), region.high.x()),
                          random.between(region.low.y(), region.high.y())};
    if (world.gap(at) <= static_cast<double>(options.robot_radius)) {
      continue;
    }
    bool const arrived = drive(p, world, at, goal, region, options) == End::arrived;
    bool const proved = map.at(cell_of(map, at)) == Arrival::proved;
    ++tally.starts;
    tally.arrived += arrived ? 1 : 0;
    tally.proved += proved ? 1 : 0;
    tally.proved_and_arrived += proved && arrived ? 1 : 0;
  }
  return tally;
}

// A field of a user's own: to the left round the goal, ever nearer.
struct spiral_in {
  template <Number S, int N>
  Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Vec2<S> const& in = percept.goal_direction;
    return course_along(Vec2<S>(in - scaled(left_of(in), S(1.5F))), S(1.0F));
  }
};

// The mistake of a sign: off the goal.
struct off_goal {
  template <Number S, int N>
  Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    return course_along(Vec2<S>(-percept.goal_direction), S(1.0F));
  }
};

}  // namespace

TEST_CASE("of three discs at least 95 % of the free area is proved, and all of 10 000 starts in it arrive") {
  lab::World const world = three_discs();
  lab::ArrivalMap const map = lab::arrival_map<4>(policy, world, goal, region);
  CHECK(map.share(Arrival::proved) >= 0.95);
  CHECK(map.share(Arrival::proved) < 1.0);  // the watersheds
  CHECK(map.share(Arrival::proved) + map.share(Arrival::undecided) == doctest::Approx(1.0));
  Tally const tally = drive_many(policy, world, map, 10'000, fine);
  CHECK(tally.proved == 10'000);
  CHECK(tally.proved_and_arrived == 10'000);
}

TEST_CASE("where a quarter of the starts never arrives, none of these is proved, and nearly all of the others are") {
  lab::World const world = a_trap();
  lab::ArrivalOptions options;
  options.finest = 0.01;
  lab::ArrivalMap const map = lab::arrival_map<4>(policy, world, goal, region, options);
  Tally const tally = drive_many(policy, world, map, 3'000, options);
  double const arriving = static_cast<double>(tally.arrived) / tally.starts;
  CHECK(arriving < 0.75);
  CHECK(tally.proved_and_arrived == tally.proved);
  CHECK(map.share(Arrival::proved) > arriving - 0.05);
}

TEST_CASE("finer cells prove more, and smaller pieces of a cell do") {
  lab::World const world = three_discs();
  double before = 0.0;
  for (double const finest : {0.04, 0.02, 0.01}) {
    lab::ArrivalOptions options;
    options.finest = finest;
    options.pieces = 1;
    double const whole = lab::arrival_map<4>(policy, world, goal, region, options).share(Arrival::proved);
    options.pieces = 2;
    double const in_pieces = lab::arrival_map<4>(policy, world, goal, region, options).share(Arrival::proved);
    CHECK(whole > before);
    CHECK(in_pieces > whole);
    before = whole;
  }
}

TEST_CASE("blocks that are tried first change the work, hardly the map: every cell that one proves arrives") {
  lab::World const world = three_discs();
  lab::ArrivalOptions options;
  options.finest = 0.01;
  options.doublings = 0;
  lab::ArrivalMap const cells = lab::arrival_map<4>(policy, world, goal, region, options);
  options.doublings = 3;
  lab::ArrivalMap const blocks = lab::arrival_map<4>(policy, world, goal, region, options);
  CHECK(blocks.evaluations < cells.evaluations);
  CHECK(std::abs(blocks.share(Arrival::proved) - cells.share(Arrival::proved)) < 0.005);
}

TEST_CASE("the map is the same with any number of threads") {
  lab::World const world = three_discs();
  lab::ArrivalOptions options;
  options.finest = 0.02;
  lab::ArrivalMap const one = lab::arrival_map<4>(policy, world, goal, region, options);
  for (int const threads : {2, 3, 7}) {
    options.threads = threads;
    lab::ArrivalMap const many = lab::arrival_map<4>(policy, world, goal, region, options);
    CHECK(many.cells == one.cells);
    CHECK(many.evaluations == one.evaluations);
  }
}

TEST_CASE("a cell is blocked exactly when some point of it lies in a disc that the robot's radius was added to") {
  lab::World const world = three_discs();
  lab::ArrivalOptions options;
  options.finest = 0.02;
  lab::ArrivalMap const map = lab::arrival_map<4>(policy, world, goal, region, options);
  int wrong = 0;
  int blocked = 0;
  for (int y = 0; y < 200; ++y) {
    for (int x = 0; x < 250; ++x) {
      double least = 1e9;
      for (lab::WorldDisc const& d : world.discs) {
        Vec2<double> const nearest{std::clamp(d.disc.centre.x(), 0.02 * x, 0.02 * (x + 1)),
                                   std::clamp(d.disc.centre.y(), 0.02 * y, 0.02 * (y + 1))};
        least = std::min(least, (nearest - d.disc.centre).norm() - d.disc.radius - 0.2);
      }
      bool const is_blocked = map.at({x, y, 0}) == Arrival::blocked;
      blocked += is_blocked ? 1 : 0;
      wrong += is_blocked != (least <= 0.0) && std::abs(least) > 1e-7 ? 1 : 0;  // 0.2F is not 0.2
    }
  }
  CHECK(wrong == 0);
  CHECK(blocked > 3000);
}

TEST_CASE("with nothing in the way every cell of a convex region is proved, and with no way to the goal none") {
  lab::ArrivalOptions options;
  options.finest = 0.02;
  lab::World const empty;
  CHECK(lab::arrival_map(toward_goal{}, empty, goal, region, options).share(Arrival::proved) == 1.0);
  CHECK(lab::arrival_map(toward_goal{}, empty, {6.0, 2.0}, region, options).share(Arrival::proved) == 0.0);
  lab::World full;
  full.add(2.5, 2.0, 9.0);
  lab::ArrivalMap const map = lab::arrival_map(toward_goal{}, full, goal, region, options);
  CHECK(map.share(Arrival::proved) == 0.0);
  CHECK(map.share(Arrival::undecided) == 0.0);
  CHECK(std::count(map.cells.begin(), map.cells.end(), Arrival::blocked) == static_cast<int>(map.cells.size()));
}

TEST_CASE("a field of a user's own is mapped as any other") {
  lab::World const empty;
  lab::ArrivalOptions options;
  options.finest = 0.02;
  lab::Region const square{{-1.0, -1.0}, {1.0, 1.0}};
  Vec2<double> const middle{0.0, 0.0};
  lab::ArrivalMap const map = lab::arrival_map(spiral_in{}, empty, middle, square, options);
  CHECK(map.share(Arrival::proved) > 0.9);  // from the corners it leaves the region
  CHECK(map.share(Arrival::proved) < 1.0);
  Random random;
  int wrong = 0;
  int left = 0;
  for (int k = 0; k < 2000; ++k) {
    Vec2<double> const at{random.between(-1.0, 1.0), random.between(-1.0, 1.0)};
    End const end = drive(spiral_in{}, empty, at, middle, square, options);
    left += end == End::left ? 1 : 0;
    wrong += map.at(cell_of(map, at)) == Arrival::proved && end != End::arrived ? 1 : 0;
  }
  CHECK(wrong == 0);
  CHECK(left > 0);
}

TEST_CASE("a policy with a sign that is wrong proves nothing but the goal itself") {
  lab::World const world = three_discs();
  lab::ArrivalOptions options;
  options.finest = 0.01;
  lab::ArrivalMap const map = lab::arrival_map<4>(blend(ramp(clearance, 0.10F, 0.60F), away_from_discs{}, off_goal{}),
                                                  world, goal, region, options);
  int proved = 0;
  int away = 0;
  for (int y = 0; y < 400; ++y) {
    for (int x = 0; x < 500; ++x) {
      if (map.at({x, y, 0}) == Arrival::proved) {
        ++proved;
        away += std::hypot(0.01 * x + 0.005 - goal.x(), 0.01 * y + 0.005 - goal.y()) > 0.15 ? 1 : 0;
      }
    }
  }
  CHECK(proved > 600);  // pi (0.15 m)^2 are 707 cells
  CHECK(away == 0);
}

TEST_CASE("a step must not jump over a disc, though both of its ends are clear") {
  lab::World pin;
  pin.add(1.06, 0.5, 0.005);
  lab::ArrivalOptions options;
  options.finest = 0.01;
  options.robot_radius = 0.01F;
  lab::Region const strip{{0.0, 0.0}, {3.0, 1.0}};
  lab::ArrivalMap const map = lab::arrival_map(toward_goal{}, pin, {2.5, 0.5}, strip, options);
  auto const at = [&map](double x, double y) { return map.at(cell_of(map, {x, y})); };
  CHECK(at(1.001, 0.501) == Arrival::undecided);  // 0.06 m before the pin, steps of 0.12 m
  CHECK(at(0.5, 0.501) == Arrival::undecided);
  CHECK(at(1.001, 0.601) == Arrival::proved);
  CHECK(at(1.151, 0.501) == Arrival::proved);  // past it
  pin.discs.clear();
  lab::ArrivalMap const free = lab::arrival_map(toward_goal{}, pin, {2.5, 0.5}, strip, options);
  CHECK(free.at(cell_of(free, {1.001, 0.501})) == Arrival::proved);
}

TEST_CASE("a step of the policy on float ends in the cells that were stated for its cell, and clears what it should") {
  lab::World const world = a_trap();
  lab::PointSteps<decltype(policy), 4> const steps(policy, world, goal, 0.2F, 0.15F, 0.12, 0.2);
  DiscSet<float, 4> const discs = on_float(world);
  Random random;
  int outside = 0;
  int touching = 0;
  int stated = 0;
  int tight = 0;
  for (int const size : {1, 2, 4, 8}) {
    lab::CellGrid const grid({0.0, 0.0}, {5.0, 4.0}, {1000 / size, 800 / size, 1});
    for (int k = 0; k < 3000; ++k) {
      CellIndex const c{static_cast<int>(random.between(0.0, grid.count().x - 0.001)),
                        static_cast<int>(random.between(0.0, grid.count().y - 0.001)), 0};
      lab::States const states = grid.states(c, {c.x + 1, c.y + 1, 1});
      std::vector<lab::States> images;
      lab::CellRange cells;
      if (!(steps.clearance(states).low() > 0.0) || !steps.images(states, images) || !grid.cover(images.at(0), cells)) {
        continue;
      }
      ++stated;
      tight += (cells.last.x - cells.first.x + 1) * (cells.last.y - cells.first.y + 1) <= 16 ? 1 : 0;
      for (int j = 0; j < 10; ++j) {
        Vec2<double> const at{random.between(states.x.low(), states.x.high()),
                              random.between(states.y.low(), states.y.high())};
        auto const percept =
            look(Pose<float>{at.cast<float>(), {1.0F, 0.0F}}, Vec2<float>(goal.cast<float>()), discs, 0.2F, 0.2F);
        Vec2<double> const to = at + 0.12 * evaluate(policy, percept).direction.cast<double>();
        CellIndex const end{static_cast<int>(to.x() / 5.0 * grid.count().x),
                            static_cast<int>(to.y() / 4.0 * grid.count().y), 0};
        outside += images[0].x.contains(to.x()) && images[0].y.contains(to.y()) && cells.contains(end, 1) ? 0 : 1;
        touching += clear_of(world, at, to, 0.2) > 0.0 ? 0 : 1;
      }
    }
  }
  CHECK(outside == 0);
  CHECK(touching == 0);
  CHECK(stated > 5000);
  CHECK(tight > stated / 2);  // else it would be easy
}

TEST_CASE("ways are clear exactly when the nearest of their points is, over boxes of points") {
  Random random;
  int clear = 0;
  int wrong = 0;
  for (int k = 0; k < 20'000; ++k) {
    double const angle = random.between(-3.14, 3.14);
    Vec2<double> const p{random.between(-0.6, 0.6), random.between(-0.6, 0.6)};
    Vec2<double> const u{std::cos(angle), std::sin(angle)};
    double const w = random.between(0.0, 0.02);
    double const reach = random.between(0.0, 0.5);
    double const radius = random.between(0.1, 0.5);
    auto const box = [w](Vec2<double> const& v) {
      return Vec2<lab::Interval>{lab::Interval(v.x() - w, v.x() + w), lab::Interval(v.y() - w, v.y() + w)};
    };
    lab::World disc;
    disc.add(0.0, 0.0, radius);
    if (lab::detail::keeps_clear(box(p), box(u), reach, radius)) {
      ++clear;
      for (int j = 0; j < 5; ++j) {
        Vec2<double> const from{p.x() + random.between(-w, w), p.y() + random.between(-w, w)};
        Vec2<double> const along{u.x() + random.between(-w, w), u.y() + random.between(-w, w)};
        wrong += clear_of(disc, from, from + reach * along, 0.0) > 0.0 ? 0 : 1;
      }
    } else {
      // Not clear by more than the boxes are wide: |p| + reach can be off by 2 w each, and the bound is first order.
      wrong += clear_of(disc, p, p + reach * u, 0.0) < 12.0 * w + 1e-9 ? 0 : 1;
    }
  }
  CHECK(wrong == 0);
  CHECK(clear > 5000);
}

TEST_CASE("a box is covered by the cells on its own side of an edge, and by all headings only when it is that wide") {
  lab::CellGrid const grid({0.0, -1.0}, {2.0, 1.0}, {20, 10, 8});
  lab::CellRange cells;
  lab::States const one = grid.states({3, 4, 2}, {4, 5, 3});
  REQUIRE(grid.cover(one, cells));
  CHECK(cells.first.x == 3);
  CHECK(cells.last.x == 3);
  CHECK(cells.first.y == 4);
  CHECK(cells.last.y == 4);
  REQUIRE(grid.cover({lab::Interval(0.25, 0.31), lab::Interval(-1.0, 1.0), lab::Interval(3.0, 3.4)}, cells));
  CHECK(cells.first.x == 2);
  CHECK(cells.last.x == 3);
  CHECK(cells.first.y == 0);
  CHECK(cells.last.y == 9);
  CHECK(cells.first.heading == 7);  // from 3 pi / 4 up to pi, and on from there
  CHECK(cells.last.heading == 8);
  CHECK(cells.contains({2, 0, 0}, 8));
  CHECK(cells.contains({2, 0, 7}, 8));
  CHECK_FALSE(cells.contains({2, 0, 1}, 8));
  CHECK_FALSE(cells.contains({1, 0, 0}, 8));
  REQUIRE(grid.cover({lab::Interval(0.25, 0.31), lab::Interval(-1.0, 1.0), lab::Interval(-9.0, -8.9)}, cells));
  CHECK(cells.contains({2, 0, cell_of({grid, {}, 0}, {0.3, 0.0}, -8.95 + 2.0 * std::numbers::pi).heading}, 8));
  REQUIRE(grid.cover({lab::Interval(0.25, 0.31), lab::Interval(0.0), lab::Interval(-3.0, 3.0)}, cells));
  CHECK(cells.last.heading - cells.first.heading == 7);
  CHECK_FALSE(grid.cover({lab::Interval(-0.001, 0.1), lab::Interval(0.0), lab::Interval(0.0)}, cells));
  CHECK_FALSE(grid.cover({lab::Interval(0.0, 0.1), lab::Interval(0.9, 1.001), lab::Interval(0.0)}, cells));
  CHECK_FALSE(grid.cover({lab::Interval::whole(), lab::Interval(0.0), lab::Interval(0.0)}, cells));
}

TEST_CASE("a policy that remembers arrives from proved cells whatever it remembers") {
  lab::World const world = three_discs();
  constexpr auto wary = guarded(held(below(clearance, 0.30F, 0.50F), 0.5F),
                                blend(ramp(clearance, 0.05F, 0.50F), away_from_discs{}, toward_goal{}), policy);
  lab::ArrivalOptions options;
  options.finest = 0.02;
  lab::ArrivalMap const map = lab::arrival_map<4>(wary, world, goal, region, options);
  CHECK(map.share(Arrival::proved) > 0.5);
  Random random;
  int wrong = 0;
  int proved = 0;
  while (proved < 2000) {
    Vec2<double> const at{random.between(0.0, 5.0), random.between(0.0, 4.0)};
    if (map.at(cell_of(map, at)) != Arrival::proved) {
      continue;
    }
    ++proved;
    memory_t<std::remove_const_t<decltype(wary)>, float> memory;
    memory.is_inside = random.between(0.0, 1.0) < 0.5;
    memory.guard.on = random.between(0.0, 1.0) < 0.5;
    memory.guard.guard.on = random.between(0.0, 1.0) < 0.5;
    memory.guard.started = random.between(0.0, 1.0) < 0.5;
    memory.guard.since = static_cast<float>(random.between(0.0, 1.0));
    wrong += drive(wary, world, at, goal, region, options, memory) == End::arrived ? 0 : 1;
  }
  CHECK(wrong == 0);
}

TEST_CASE("where it depends on what is remembered whether a policy arrives, nothing is proved") {
  lab::World const empty;
  lab::ArrivalOptions options;
  options.finest = 0.02;
  lab::Region const square{{-2.0, -2.0}, {2.0, 2.0}};
  Vec2<double> const middle{0.0, 0.0};
  auto const proved_from = [&](lab::ArrivalMap const& map, double low, double high) {
    int count = 0;
    for (int k = 0; k < 2000; ++k) {
      double const angle = 0.01 * k;
      double const far = low + (high - low) * k / 2000.0;
      Vec2<double> const at{far * std::cos(angle), far * std::sin(angle)};
      count += map.at(cell_of(map, at)) == Arrival::proved ? 1 : 0;
    }
    return count;
  };
  // Between 0.8 m and 1.6 m the guards keep their answer: one is yes, the other no, where that leads off the goal.
  lab::ArrivalMap const if_on = lab::arrival_map(guarded(below(goal_distance, 0.8F, 1.6F), toward_goal{}, off_goal{}),
                                                 empty, middle, square, options);
  lab::ArrivalMap const if_off = lab::arrival_map(guarded(above(goal_distance, 1.6F, 0.8F), off_goal{}, toward_goal{}),
                                                  empty, middle, square, options);
  CHECK(proved_from(if_on, 0.0, 0.75) == 2000);
  CHECK(proved_from(if_off, 0.0, 0.75) == 2000);
  CHECK(proved_from(if_on, 0.83, 2.0) == 0);
  CHECK(proved_from(if_off, 0.83, 2.0) == 0);
}

TEST_CASE("every box is covered, also where it passes an edge by one unit in the last place") {
  lab::CellGrid const grid({-0.7, 0.1}, {1.9, 3.4}, {737, 911, 1});
  double const inf = std::numeric_limits<double>::infinity();
  int wrong = 0;
  for (int k = 1; k + 2 < 737; ++k) {
    lab::States const one = grid.states({k, k, 0}, {k + 1, k + 1, 1});
    for (double const low : {std::nextafter(one.x.low(), -inf), one.x.low(), std::nextafter(one.x.low(), inf)}) {
      for (double const high : {std::nextafter(one.x.high(), -inf), one.x.high(), std::nextafter(one.x.high(), inf)}) {
        lab::CellRange cells;
        bool const inside = grid.cover({lab::Interval(low, high), one.y, one.heading}, cells);
        int const first = low < one.x.low() ? k - 1 : k;
        int const last = high > one.x.high() ? k + 1 : k;
        wrong += inside && cells.first == CellIndex{first, k, 0} && cells.last == CellIndex{last, k, 0} ? 0 : 1;
      }
    }
  }
  CHECK(wrong == 0);
}

namespace {

constexpr Loop<decltype(blend(ramp(clearance, 0.10F, 0.40F), away_from_discs{}, toward_goal{}))> loop{
    .policy = blend(ramp(clearance, 0.10F, 0.40F), away_from_discs{}, toward_goal{}),
    .robot_radius = 0.15F,
    .arrive_within = 0.20F};
Vec2<double> const dock{1.6, 0.8};
lab::Region const yard{{0.0, 0.0}, {2.0, 1.6}};

lab::World one_disc() {
  lab::World world;
  world.add(0.95, 0.75, 0.15);
  return world;
}

// One tick on float, and the exact arc that it commands.
Pose<double> tick_on_float(Pose<double> const& pose, DiscSet<float, 4> const& discs, double period,
                           memory_t<std::remove_const_t<decltype(loop)>, float>& memory, bool& arrived, double& clear) {
  Situation<float> const now{
      {pose.position.cast<float>(), pose.heading.cast<float>()}, dock.cast<float>(), static_cast<float>(period)};
  Command<float> const command = loop.tick(now, discs, memory);
  arrived = command.findings.arrived;
  BodyVelocity<double> const body{static_cast<double>(command.body.speed), static_cast<double>(command.body.turn_rate)};
  lab::WorldDisc const d = one_disc().discs.at(0);
  clear = lab::distance_to_arc(pose, body, period, d.disc.centre) - d.disc.radius - 0.15;
  return lab::along_arc(pose, body, period);
}

}  // namespace

TEST_CASE("a loop that turns as it drives arrives from all of 1000 states in proved cells of position and heading") {
  lab::World const world = one_disc();
  lab::ArrivalOptions options;
  options.finest = 0.03;
  options.headings = 96;
  options.pieces = 1;
  options.period = 0.4;
  lab::ArrivalMap const map = lab::arrival_map<4>(loop, world, dock, yard, options);
  CHECK(map.share(Arrival::proved) > 0.4);
  MESSAGE("share of the free states proved: ", map.share(Arrival::proved));
  DiscSet<float, 4> const discs = on_float(world);
  Random random;
  int proved = 0;
  int wrong = 0;
  for (int k = 0; proved < 1000 && k < 20'000; ++k) {
    double const angle = random.between(-3.1415, 3.1415);
    Pose<double> pose{{random.between(0.0, 2.0), random.between(0.0, 1.6)}, {std::cos(angle), std::sin(angle)}};
    if (map.at(cell_of(map, pose.position, angle)) != Arrival::proved) {
      continue;
    }
    ++proved;
    memory_t<std::remove_const_t<decltype(loop)>, float> memory;
    bool arrived = false;
    bool sound = true;
    for (int step = 0; step < 2000 && !arrived && sound; ++step) {
      double clear = 0.0;
      pose = tick_on_float(pose, discs, options.period, memory, arrived, clear);
      sound = clear > 0.0 && pose.position.x() >= 0.0 && pose.position.y() >= 0.0 && pose.position.x() <= 2.0 &&
              pose.position.y() <= 1.6;
    }
    wrong += arrived && sound ? 0 : 1;
  }
  CHECK(proved == 1000);
  CHECK(wrong == 0);
}

TEST_CASE("a tick of the loop on float ends in the cells that were stated for its cell") {
  lab::World const world = one_disc();
  lab::LoopSteps<std::remove_const_t<decltype(loop)>, 4> const steps(loop, world, dock, 0.4);
  DiscSet<float, 4> const discs = on_float(world);
  lab::CellGrid const grid({0.0, 0.0}, {2.0, 1.6}, {100, 80, 128});
  Random random;
  int stated = 0;
  int outside = 0;
  int tight = 0;
  for (int k = 0; k < 3000; ++k) {
    CellIndex const c{static_cast<int>(random.between(0.0, 99.99)), static_cast<int>(random.between(0.0, 79.99)),
                      static_cast<int>(random.between(0.0, 127.99))};
    lab::States const states = grid.states(c, {c.x + 1, c.y + 1, c.heading + 1});
    std::vector<lab::States> images;
    lab::CellRange cells;
    if (!(steps.clearance(states).low() > 0.0) || !steps.images(states, images) || !grid.cover(images.at(0), cells)) {
      continue;
    }
    ++stated;
    tight += images[0].x.width() < 0.1 && images[0].y.width() < 0.1 && images[0].heading.width() < 0.5 ? 1 : 0;
    for (int j = 0; j < 10; ++j) {
      double const angle = random.between(states.heading.low(), states.heading.high());
      Pose<double> const from{
          {random.between(states.x.low(), states.x.high()), random.between(states.y.low(), states.y.high())},
          {std::cos(angle), std::sin(angle)}};
      memory_t<std::remove_const_t<decltype(loop)>, float> memory;
      bool arrived = false;
      double clear = 0.0;
      Pose<double> const to = tick_on_float(from, discs, 0.4, memory, arrived, clear);
      if (!arrived) {
        CellIndex const end = cell_of({grid, {}, 0}, to.position, std::atan2(to.heading.y(), to.heading.x()));
        outside += cells.contains(end, 128) && clear > 0.0 ? 0 : 1;
      }
    }
  }
  CHECK(outside == 0);
  CHECK(stated > 1500);
  CHECK(tight > stated / 2);
}

TEST_CASE("a world, a region or options that make no sense are told") {
  lab::World world;
  for (int k = 0; k < 5; ++k) {
    world.add(k, 3.0, 0.1);
  }
  CHECK_THROWS_WITH_AS(static_cast<void>(lab::arrival_map<4>(policy, world, goal, region)),
                       doctest::Contains("arrival_map<5>"), std::invalid_argument);
  lab::World moving;
  moving.add(1.0, 1.0, 0.1, {0.1, 0.0});
  CHECK_THROWS_AS(static_cast<void>(lab::arrival_map(policy, moving, goal, region)), std::invalid_argument);
  lab::World const empty;
  CHECK_THROWS_AS(static_cast<void>(lab::arrival_map(policy, empty, goal, {{1.0, 0.0}, {1.0, 1.0}})),
                  std::invalid_argument);
  double const nan = std::numeric_limits<double>::quiet_NaN();
  CHECK_THROWS_AS(static_cast<void>(lab::arrival_map(policy, empty, goal, {{0.0, nan}, {1.0, 1.0}})),
                  std::invalid_argument);
  lab::ArrivalOptions options;
  options.cell_budget = 1000;
  CHECK_THROWS_WITH_AS(static_cast<void>(lab::arrival_map(policy, empty, goal, region, options)),
                       doctest::Contains("finest"), std::invalid_argument);
  options = {};
  options.finest = 0.0;
  CHECK_THROWS_AS(static_cast<void>(lab::arrival_map(policy, empty, goal, region, options)), std::invalid_argument);
  options = {};
  options.pieces = 0;
  CHECK_THROWS_AS(static_cast<void>(lab::arrival_map(policy, empty, goal, region, options)), std::invalid_argument);
}

namespace {

// The area of a path of rectangles "Mx yHxVyHxz", and how many there are.
std::pair<long, int> area_of(std::string const& path) {
  long area = 0;
  int count = 0;
  for (std::size_t at = path.find('M'); at != path.npos; at = path.find('M', at + 1)) {
    std::size_t used = at + 1;
    auto const next = [&path, &used]() {
      std::size_t length = 0;
      int const value = std::stoi(path.substr(used), &length);
      used += length + 1;
      return value;
    };
    int const left = next();
    int const top = next();
    int const right = next();
    int const bottom = next();
    area += static_cast<long>(right - left) * (bottom - top);
    ++count;
  }
  return {area, count};
}

std::string between(std::string const& text, std::string const& from, std::string const& to) {
  std::size_t const start = text.find(from);
  REQUIRE(start != text.npos);
  return text.substr(start + from.size(), text.find(to, start + from.size()) - start - from.size());
}

}  // namespace

TEST_CASE("the picture covers each cell once, tells the kinds apart by a pattern, and stays small") {
  lab::World const world = a_trap();
  lab::ArrivalMap const map = lab::arrival_map<4>(policy, world, goal, region);
  std::string const svg = lab::arrival_picture("a < b & \"c\"", map, world, goal);
  CHECK(svg.size() < 200'000);
  CHECK(svg.find("a < b") == svg.npos);
  CHECK(svg.find("<title>a &lt; b &amp; &quot;c&quot;</title>") != svg.npos);
  auto const [undecided, pieces] = area_of(between(between(svg, "-undecided\">", "/>"), " d=\"", "\""));
  CHECK(undecided == std::count(map.cells.begin(), map.cells.end(), Arrival::undecided));
  CHECK(pieces < 6000);
  auto const [blocked, rows] = area_of(between(between(svg, "<path class=\"blocked\"", "/>"), " d=\"", "\""));
  CHECK(blocked == std::count(map.cells.begin(), map.cells.end(), Arrival::blocked));
  CHECK(rows < 1000);
  // What is hatched is cut out by the cells, and the legend shows the same.
  std::string const pattern = between(svg, "<pattern id=\"", "\"");
  std::string const clip = "clip-path=\"url(#" + pattern.substr(0, pattern.rfind('-')) + "-undecided)\"";
  CHECK(svg.find("fill=\"url(#" + pattern + ")\" " + clip) != svg.npos);
  CHECK(svg.find("height=\"16\" stroke=\"#7d7766\" fill=\"url(#" + pattern + ")\"") != svg.npos);
  double const shown = std::stod(between(svg, "ends at the goal, ", " %"));
  CHECK(shown <= 100.0 * map.share(Arrival::proved));
  CHECK(shown > 100.0 * map.share(Arrival::proved) - 0.11);
  CHECK(std::stod(between(svg, "undecided, ", " %")) == doctest::Approx(100.0 - shown));
}

TEST_CASE("two pictures on one page do not share the names of their patterns") {
  lab::World const world = a_trap();
  lab::ArrivalOptions options;
  options.finest = 0.04;
  std::string const one =
      lab::arrival_picture("t", lab::arrival_map<4>(policy, world, goal, region, options), world, goal);
  options.step = 0.1;
  std::string const other =
      lab::arrival_picture("t", lab::arrival_map<4>(policy, world, goal, region, options), world, goal);
  CHECK(between(one, "<pattern id=\"", "\"") != between(other, "<pattern id=\"", "\""));
}
