// wend/lab/prove.hpp - a statement about every state, made with the loop that ships.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <limits>
#include <mutex>
#include <numbers>
#include <optional>
#include <utility>
#include <vector>

#include "wend/lab/any_memory.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/moves.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/search.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// The claim that no tick, from any state that is clear of all discs by `distance`, with any memory and any readings
/// within their error, brings any point of the path during that tick nearer than `distance` to a disc: metres between
/// edges.
struct KeepsClear {
  double distance = 0.0;  ///< metres between edges, 0 or more
};

/// What is known about a claim.
enum class Verdict : std::uint8_t {
  proved,     ///< it holds for every state of the region
  refuted,    ///< a counterexample was driven
  undecided   ///< neither, within the budget and down to the finest boxes
};

/// The verdict in a word.
[[nodiscard]] constexpr char const* text(Verdict verdict) noexcept {
  return verdict == Verdict::proved ? "proved" : verdict == Verdict::refuted ? "refuted" : "undecided";
}

/// One state, and one row of discs as they may be seen from there, that break a claim. The machine stands still when
/// the readings are taken.
template <typename Decider>
struct Counterexample {
  Pose<double> pose;  ///< in the world's frame
  memory_t<Decider, float> memory;  ///< what the loop or policy remembers
  std::vector<Disc<double>> seen;  ///< in the world's frame, in the order of the world's discs
  double distance = 0.0;  ///< metres: the least on the path that follows
};

/// What prove returns.
template <typename Decider>
struct Proof {
  Verdict verdict = Verdict::undecided;  ///< undecided where boxes are left
  std::int64_t boxes = 0;                                 ///< looked at
  std::vector<StateBox<Decider>> left;                    ///< not decided
  double left_share = 0.0;                                ///< of the region, by volume over positions and headings
  std::optional<Counterexample<Decider>> counterexample;  ///< when refuted
};

/// How hard to try.
struct ProofOptions : SearchOptions {
  ReadingError error{};  ///< how far off a disc may be seen
  double finest = 0.001;      ///< metres, or radians / 3: boxes no larger in any direction are left undecided
  int first_tries = 20'000;   ///< states tried by driving before any box is looked at
};

namespace detail {

// Decides boxes of states about KeepsClear, for whatever moves in one of the ways of moves.hpp.
template <typename Moves>
class ClearTick {
  using Decider = typename Moves::Decider;
  using Box = StateBox<Decider>;

 public:
  ClearTick(Moves const& moves, World const& world, KeepsClear claim, ProofOptions const& options)
      : moves_(moves), world_(world), claim_(claim), options_(options) {}

  Finding operator()(Box const& box) {
    if (holds(box)) {
      return Finding::holds;
    }
    double const heading = box.heading.middle();
    if (try_to_break(box, {{box.x.middle(), box.y.middle()}, {std::cos(heading), std::sin(heading)}})) {
      return Finding::fails;
    }
    bool const small = std::max({box.x.width(), box.y.width(), box.heading.width() / 3.0}) <= options_.finest;
    auto undecided = box.memory;
    return small && !decide_first_mask<FloatInterval>(undecided, true) ? Finding::too_small : Finding::open;
  }

  // Tries states just outside the claimed distance, all round every disc: where a claim that does not hold breaks
  // first.
  bool try_to_break_near_discs(Box const& all) {
    Draws const draws(1, 0);
    auto const angle = [&draws](std::uint32_t purpose, std::uint32_t i) {
      return draws.between(-std::numbers::pi, std::numbers::pi, {purpose, i});
    };
    for (std::uint32_t i = 0; !world_.discs.empty() && i < static_cast<std::uint32_t>(options_.first_tries); ++i) {
      Disc<double> const& disc = world_.discs[i % world_.discs.size()].disc;
      double const bearing = angle(0, i);
      double const heading = angle(1, i);
      // A product, so that most of them are as near as the claim lets them be.
      double const extra = draws.uniform({2, i}) * draws.uniform({3, i}) * moves_.farthest_from_rest();
      double const away = disc.radius + moves_.robot_radius() + claim_.distance + extra;
      Pose<double> const pose{disc.centre + away * Vec2<double>{std::cos(bearing), std::sin(bearing)},
                              {std::cos(heading), std::sin(heading)}};
      if (all.x.contains(pose.position.x()) && all.y.contains(pose.position.y()) && try_to_break(all, pose)) {
        return true;
      }
    }
    return false;
  }

  // The widest direction in halves; an undecided mask first, once that is finer than a centimetre: most boxes hold
  // whatever is remembered.
  [[nodiscard]] std::pair<Box, Box> split(Box const& box) const {
    std::pair<Box, Box> halves{box, box};
    double const turn = box.heading.width() / 3.0;  // metres at the machine's bow
    double const widest = std::max({box.x.width(), box.y.width(), turn});
    if (widest < 0.01 && decide_first_mask<FloatInterval>(halves.first.memory, true)) {
      decide_first_mask<FloatInterval>(halves.second.memory, false);
      return halves;
    }
    Interval Box::* const side = widest == turn ? &Box::heading : widest == box.x.width() ? &Box::x : &Box::y;
    Interval const whole = box.*side;
    halves.first.*side = Interval(whole.low(), whole.middle());
    halves.second.*side = Interval(whole.middle(), whole.high());
    return halves;
  }

  [[nodiscard]] std::optional<Counterexample<Decider>> const& counterexample() const { return counterexample_; }

 private:
  [[nodiscard]] static Vec2<Interval> from(Vec2<Interval> const& position, Disc<double> const& disc) {
    return position - exactly(disc.centre);
  }

  [[nodiscard]] Interval clearance(Vec2<Interval> const& position, Disc<double> const& disc) const {
    return length(from(position, disc)) - Interval(disc.radius) - Interval(moves_.robot_radius());
  }

  [[nodiscard]] bool holds(Box const& box) const {
    Vec2<Interval> const position{box.x, box.y};
    double nearest = std::numeric_limits<double>::infinity();
    for (WorldDisc const& d : world_.discs) {
      Interval const clear = clearance(position, d.disc);
      if (clear.high() < claim_.distance) {
        return true;  // no state in here is clear to begin with, so none is in the claim
      }
      nearest = std::min(nearest, clear.low());
    }
    if (nearest - moves_.farthest() >= claim_.distance) {
      return true;  // whatever the machine does
    }
    Move const move = moves_.move(box);
    Interval const slack(-move.drift, move.drift);
    Vec2<Interval> const start = position + Vec2<Interval>{slack, slack};
    Vec2<Interval> const path = start + scaled(move.course, hull(move.reach, Interval()));
    for (WorldDisc const& d : world_.discs) {
      Interval const clear = clearance(position, d.disc);
      if (clear.low() - moves_.farthest() >= claim_.distance) {
        continue;
      }
      // The distance changes by way * (direction from the disc . course): a bound over the whole path bounds the loss.
      Interval const change = move.reach * dot(polar(from(path, d.disc)).direction, move.course);
      double const loss = moves_.approach(clear.high()) + std::max(0.0, -change.low());
      // States that are not clear at the start are not in the claim: from the others on, `distance` is given.
      if (!(std::max(clear.low(), claim_.distance) - loss >= claim_.distance)) {
        return false;
      }
    }
    return true;
  }

  // Drives one tick from a state, with the readings that are farthest off and either answer to what is not known.
  bool try_to_break(Box const& box, Pose<double> const& pose) {
    double const gap = world_.gap(pose.position) - moves_.robot_radius();
    if (gap < claim_.distance || gap > claim_.distance + moves_.farthest_from_rest()) {
      return false;
    }
    double const e = options_.error.radius;
    return breaks(box, pose, true, -e) || breaks(box, pose, false, -e) || breaks(box, pose, true, e) ||
           breaks(box, pose, false, e);
  }

  bool breaks(Box const& box, Pose<double> const& pose, bool answer, double radius_error) {
    Counterexample<Decider> example{pose, one_memory<Decider, float>(box.memory, answer), {}, 0.0};
    for (WorldDisc const& d : world_.discs) {
      example.seen.push_back({d.disc.centre, std::max(0.0, d.disc.radius + radius_error)});
    }
    example.distance = moves_.drive(pose, example.memory, example.seen, world_);
    if (!(example.distance < claim_.distance - 1e-9)) {
      return false;
    }
    std::lock_guard const lock(guard_);
    if (!counterexample_) {
      counterexample_ = std::move(example);
    }
    return true;
  }

  Moves const& moves_;
  World const& world_;
  KeepsClear claim_;
  ProofOptions const& options_;
  std::mutex guard_;
  std::optional<Counterexample<Decider>> counterexample_;
};

template <typename Moves>
[[nodiscard]] Proof<typename Moves::Decider> prove_moves(Moves const& moves, World const& world, Region const& region,
                                                         KeepsClear claim, ProofOptions const& options) {
  using Decider = typename Moves::Decider;
  using Box = StateBox<Decider>;
  ClearTick<Moves> tick(moves, world, claim, options);
  Box const all{Interval(region.low.x(), region.high.x()), Interval(region.low.y(), region.high.y()),
                Interval(-std::numbers::pi, std::numbers::pi) + Interval(), any_memory<Decider, FloatInterval>()};
  Proof<Decider> proof;
  if (tick.try_to_break_near_discs(all)) {
    proof.verdict = Verdict::refuted;
    proof.left = {all};
  } else {
    auto result = search(
        std::vector<Box>{all}, [&tick](Box const& box) { return tick(box); },
        [&tick](Box const& box) { return tick.split(box); }, options);
    proof.boxes = result.boxes;
    proof.left = std::move(result.left);
    proof.verdict = result.failed ? Verdict::refuted : proof.left.empty() ? Verdict::proved : Verdict::undecided;
  }
  proof.counterexample = tick.counterexample();
  double const volume = all.x.width() * all.y.width() * all.heading.width();
  for (Box const& box : proof.left) {
    proof.left_share += box.x.width() * box.y.width() * box.heading.width() / volume;
  }
  return proof;
}

}  // namespace detail

/// Proves, refutes or leaves undecided that a loop keeps clear, over all positions of a region, all headings, all that
/// the loop could remember and all readings within their error, by branch and bound. The loop computes on intervals
/// that enclose single precision, so its rounding is part of the statement; the plant is exact: arcs at the commanded
/// velocities (see Sampling), with whatever the command before may do until the new one bites.
///
/// The loop is shown all discs of the world, which must stand still and be no more than Capacity: throws
/// std::invalid_argument otherwise. Discs that the machine is shown elsewhere than in the error, or not at all, are not
/// covered, nor is a drive that does not do what it is told.
template <int Capacity = 32, typename Loop>
[[nodiscard]] Proof<Loop> prove(Loop const& loop, Sampling const& sampling, World const& world,
                                Vec2<double> const& goal, Region const& region, KeepsClear claim,
                                ProofOptions const& options = {}) {
  expect_still("prove", world, Capacity);
  detail::LoopMoves<Loop, Capacity> const moves(loop, sampling, world, goal, options.error);
  return detail::prove_moves(moves, world, region, claim, options);
}

/// The same for a policy by itself and a point machine that strides along its course, whatever its speed: nothing but
/// the policy keeps it clear. `robot_radius` in metres.
template <int Capacity = 32, typename Policy>
[[nodiscard]] Proof<Policy> prove(Policy const& policy, Stride const& stride, Parameter robot_radius,
                                  World const& world, Vec2<double> const& goal, Region const& region, KeepsClear claim,
                                  ProofOptions const& options = {}) {
  expect_still("prove", world, Capacity);
  detail::PointMoves<Policy, Capacity> const moves(policy, stride, robot_radius, world, goal, options.error);
  return detail::prove_moves(moves, world, region, claim, options);
}

/// Drives the tick of a counterexample again, on float along the exact arc: metres, the least distance on the way.
template <int Capacity = 32, typename Loop>
[[nodiscard]] double replay_tick(Loop const& loop, Sampling const& sampling, World const& world,
                                 Vec2<double> const& goal, Counterexample<Loop> const& example) {
  detail::LoopMoves<Loop, Capacity> const moves(loop, sampling, world, goal, {});
  return moves.drive(example.pose, example.memory, example.seen, world);
}

}  // namespace wend::inline v0::lab
