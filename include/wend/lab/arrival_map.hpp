// wend/lab/arrival_map.hpp - from which states every path ends at the goal: rigorous cell mapping.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <stdexcept>
#include <thread>
#include <utility>
#include <vector>

#include "wend/lab/arrival_grid.hpp"
#include "wend/lab/arrival_step.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/world.hpp"

namespace wend::inline v0::lab {

/// What is known about the states of a cell.
enum class Arrival : std::uint8_t {
  undecided,  ///< neither could be shown
  proved,   ///< every path from every one of them is clear of all discs and ends at the goal
  blocked,  ///< in some of them the machine touches a disc, or may
};

/// How finely the map is made, and of which machine.
struct ArrivalOptions {
  double finest = 0.005;   ///< metres: cells are no larger
  int doublings = 3;       ///< cells are first tried in blocks of 2^doublings a side
  int pieces = 2;          ///< cells not proved whole are tried in 2, 4, ... up to so many pieces along each axis
  int headings = 64;       ///< cells of heading, for a loop
  double period = 0.25;    ///< seconds that a loop's command is held
  double step = 0.12;            ///< metres of a step, for a policy alone
  double dt = 0.2;               ///< seconds that such a policy is told a step takes
  Parameter robot_radius = 0.20F;   ///< metres, for a policy alone: a loop brings its own
  Parameter arrive_within = 0.15F;  ///< metres, likewise
  int threads = 1;               ///< the map is the same with any number
  /// Cells at the most, of at most 2^30. Each takes 5.2 bytes; one that takes part in the last round some 300 more for
  /// a policy and 500 for a loop, more where masks are remembered, twice that with several threads.
  std::size_t cell_budget = std::size_t{1} << 26U;
};

/// The cells of a region, and what is known about each.
struct ArrivalMap {
  CellGrid grid;  ///< where the cells lie
  std::vector<Arrival> cells;  ///< of grid.at(index)
  std::int64_t evaluations = 0;  ///< boxes of which the step was worked out

  /// What is known about one cell.
  [[nodiscard]] Arrival at(CellIndex const& c) const { return cells[grid.at(c)]; }

  /// A share of the states that are not blocked, in [0, 1]; 0 when there are none.
  [[nodiscard]] double share(Arrival of) const {
    auto const count = [this](Arrival a) { return static_cast<double>(std::count(cells.begin(), cells.end(), a)); };
    double const free = count(Arrival::proved) + count(Arrival::undecided);
    return free > 0.0 ? count(of) / free : 0.0;
  }

  /// Of a position, over all headings: proved or blocked only if it is with every one.
  [[nodiscard]] Arrival over_headings(int x, int y) const {
    Arrival const first = at({x, y, 0});
    for (int k = 1; k < grid.count().heading; ++k) {
      if (at({x, y, k}) != first) {
        return Arrival::undecided;
      }
    }
    return first;
  }
};

namespace detail {

/// What one thread makes of its share of a round.
struct RoundPart {
  std::vector<WaitingBlock> blocks;  // each leads to `ranges`; one at the goal to none
  std::vector<CellRange> ranges;
  std::vector<CellIndex> left;  // not to be proved in blocks of this size
  std::vector<CellIndex> blocked;
  std::int64_t evaluations = 0;
};

/// Works out where each block of a round leads.
template <typename Steps>
class Round {
 public:
  Round(Steps const& steps, CellGrid const& grid, int size, int pieces)
      : steps_(steps), grid_(grid), size_(size), pieces_(pieces), finer_(finer(grid, pieces)) {}

  void operator()(CellIndex const& first, RoundPart& part) const {
    CellIndex const end = grid_.end_of(first, size_);
    States const states = grid_.states(first, end);
    Interval const clearance = steps_.clearance(states);
    if (!(clearance.low() > 0.0)) {
      (size_ == 1 || clearance.high() < 0.0 ? part.blocked : part.left).push_back(first);
      return;
    }
    std::size_t const known = part.ranges.size();
    if (!steps_.arrived(states) && !lead(first, end, part)) {
      part.ranges.resize(known);
      part.left.push_back(first);
      return;
    }
    part.blocks.push_back({first, known, part.ranges.size()});
  }

 private:
  [[nodiscard]] static CellGrid finer(CellGrid const& grid, int pieces) {
    CellIndex const& count = grid.count();
    return {grid.low(), grid.high(), {count.x * pieces, count.y * pieces, heading_pieces(pieces) * count.heading}};
  }
  [[nodiscard]] static int heading_pieces(int pieces) { return Steps::has_heading ? pieces : 1; }

  // Appends the ranges to which a block leads, piece by piece; false when one may leave the region or touch a disc.
  bool lead(CellIndex const& first, CellIndex const& end, RoundPart& part) const {
    if (pieces_ == 1) {
      return lead(grid_.states(first, end), part);
    }
    int const turns = heading_pieces(pieces_);
    for (int heading = first.heading * turns; heading < end.heading * turns; ++heading) {
      for (int y = first.y * pieces_; y < end.y * pieces_; ++y) {
        for (int x = first.x * pieces_; x < end.x * pieces_; ++x) {
          if (!lead(finer_.states({x, y, heading}, {x + 1, y + 1, heading + 1}), part)) {
            return false;
          }
        }
      }
    }
    return true;
  }

  bool lead(States const& states, RoundPart& part) const {
    ++part.evaluations;
    std::vector<States> images;
    bool const clear = steps_.images(states, images);
    for (States const& image : images) {
      CellRange cells;
      if (!clear || !grid_.cover(image, cells)) {
        return false;
      }
      if (!steps_.arrived(image)) {
        part.ranges.push_back(cells);
      }
    }
    return clear;
  }

  Steps const& steps_;
  CellGrid const& grid_;
  int size_;
  int pieces_;
  CellGrid finer_;
};

/// Shares the blocks of a round out among threads, and puts what they make of them in the blocks' order.
template <typename Steps>
[[nodiscard]] RoundPart work_out(Round<Steps> const& round, std::vector<CellIndex> const& todo, int threads) {
  std::size_t const count = static_cast<std::size_t>(std::max(threads, 1));
  std::vector<RoundPart> parts(count);
  std::vector<std::thread> others;
  auto const work = [&](std::size_t k) {
    for (std::size_t i = todo.size() * k / count; i < todo.size() * (k + 1) / count; ++i) {
      round(todo[i], parts[k]);
    }
  };
  for (std::size_t k = 1; k < count; ++k) {
    others.emplace_back(work, k);
  }
  work(0);
  for (std::thread& other : others) {
    other.join();
  }
  RoundPart all = std::move(parts[0]);
  for (std::size_t k = 1; k < count; ++k) {
    std::size_t const before = all.ranges.size();
    for (WaitingBlock block : parts[k].blocks) {
      block.range += before, block.end += before;
      all.blocks.push_back(block);
    }
    auto const append = [](auto& to, auto const& from) { to.insert(to.end(), from.begin(), from.end()); };
    append(all.ranges, parts[k].ranges);
    append(all.left, parts[k].left);
    append(all.blocked, parts[k].blocked);
    all.evaluations += parts[k].evaluations;
  }
  return all;
}

template <typename Steps>
[[nodiscard]] CellGrid grid_over(Region const& region, ArrivalOptions const& options) {
  double const far = 1e5;  // metres: beyond, a cell's edge is rounded too coarsely
  bool const sound = region.low.x() < region.high.x() && region.low.y() < region.high.y() &&
                     region.low.minCoeff() > -far && region.high.maxCoeff() < far;
  if (!sound || !(options.finest >= 1e-4) || options.doublings < 0 || options.doublings > 20 || options.pieces < 1 ||
      options.headings < 1) {
    throw std::invalid_argument(
        "wend: arrival_map: expected a region with low < high within 100 km, cells of 0.1 mm or "
        "more, doublings from 0 to 20, and at least 1 piece and 1 heading");
  }
  double const across = std::ceil((region.high.x() - region.low.x()) / options.finest - 1e-9);
  double const up = std::ceil((region.high.y() - region.low.y()) / options.finest - 1e-9);
  double const headings = Steps::has_heading ? options.headings : 1;
  if (!(across * up * headings <= std::min(static_cast<double>(options.cell_budget), 0x1p30))) {
    throw std::invalid_argument("wend: arrival_map: the region has more cells than cell_budget; make `finest` larger");
  }
  return {region.low, region.high, {static_cast<int>(across), static_cast<int>(up), static_cast<int>(headings)}};
}

}  // namespace detail

/// The map of a machine of your own, given by its steps: see PointSteps for what they must offer.
///
/// The set of proved cells starts with those all of whose states are at the goal, and takes in each block of cells from
/// which every step leads to proved cells only. So every path from a proved cell ends at the goal, after finitely many
/// steps, whatever happens within the bounds of the enclosure. What is left is tried again in smaller blocks, whose
/// enclosures are tighter (cell mapping: Hsu 1980, J. Applied Mechanics 47:931; subdivision: Dellnitz and Hohmann 1997,
/// Numerische Mathematik 75:293).
template <typename Steps>
[[nodiscard]] ArrivalMap map_arrivals(Steps const& steps, Region const& region, ArrivalOptions const& options = {}) {
  ArrivalMap map;
  map.grid = detail::grid_over<Steps>(region, options);
  map.cells.assign(map.grid.size(), Arrival::undecided);
  detail::OpenCells open(map.grid);
  detail::BackwardSweep sweep(map.grid, open);
  std::vector<CellIndex> todo;
  std::vector<CellIndex> left{{0, 0, 0}};
  // One round for each size of blocks, then one for each number of pieces.
  for (int size = 1 << options.doublings, pieces = 1; pieces <= options.pieces;) {
    todo.clear();
    if (size == 1 << options.doublings && pieces == 1) {
      map.grid.for_each_block({0, 0, 0}, map.grid.count(), size, [&](CellIndex const& c) { todo.push_back(c); });
    } else {
      for (CellIndex const& c : left) {
        map.grid.for_each_block(c, map.grid.end_of(c, pieces == 1 ? 2 * size : 1), size,
                                [&](CellIndex const& part) { todo.push_back(part); });
      }
    }
    detail::RoundPart round = detail::work_out(detail::Round(steps, map.grid, size, pieces), todo, options.threads);
    map.evaluations += round.evaluations;
    for (CellIndex const& c : round.blocked) {
      map.grid.for_each_block(c, map.grid.end_of(c, size), 1,
                              [&](CellIndex const& cell) { map.cells[map.grid.at(cell)] = Arrival::blocked; });
    }
    sweep(round.blocks, round.ranges, size,
          [&map](CellIndex const& cell) { map.cells[map.grid.at(cell)] = Arrival::proved; });
    left = std::move(round.left);
    for (detail::WaitingBlock const& block : round.blocks) {
      if (!block.proved) {
        left.push_back(block.first);
      }
    }
    size > 1 ? size /= 2 : pieces *= 2;
  }
  return map;
}

/// From which states every path ends at the goal without touching a disc or leaving the region.
///
/// Of a policy, for a point machine that follows the course at once, in steps of `options.step`, from any position with
/// any heading and any memory. Of a loop, for a machine that does what it is told, at once, from any position and
/// heading with any memory: states are then cells of (x, y, heading). A path ends at the goal when a step ends within
/// the arrival radius, to rounding; leaving it again is not the map's business.
///
/// The policy is shown all discs of the world, which must stand still and be no more than Capacity. Throws
/// std::invalid_argument otherwise, and when the options make no sense.
template <int Capacity = 32, typename Policy>
[[nodiscard]] ArrivalMap arrival_map(Policy const& policy, World const& world, Vec2<double> const& goal,
                                     Region const& region, ArrivalOptions const& options = {}) {
  if constexpr (requires {
                  policy.arrive_within;
                  policy.steering;
                }) {
    return map_arrivals(LoopSteps<Policy, Capacity>(policy, world, goal, options.period), region, options);
  } else {
    return map_arrivals(PointSteps<Policy, Capacity>(policy, world, goal, options.robot_radius, options.arrive_within,
                                                     options.step, options.dt),
                        region, options);
  }
}

}  // namespace wend::inline v0::lab
