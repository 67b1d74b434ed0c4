// wend/lab/equilibria.hpp - every place where a policy would come to rest, and a count that shows when one is missing.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <cstddef>
#include <cstdint>
#include <optional>
#include <utility>
#include <vector>

#include <Eigen/Core>
#include <Eigen/LU>

#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/plane_box.hpp"
#include "wend/lab/prove.hpp"
#include "wend/lab/search.hpp"
#include "wend/lab/still_world.hpp"
#include "wend/lab/winding.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// What a machine that follows the course does near an equilibrium (by its eigenvalues; Strogatz 2015, section 5.2).
enum class EquilibriumKind : std::uint8_t {
  sink,        ///< comes to rest there from all sides
  source,      ///< leaves it to all sides
  saddle,      ///< comes from two sides and leaves to the two others
  centre,      ///< circles, as far as first derivatives tell
  degenerate,  ///< first derivatives do not tell
  goal,        ///< the goal: the course points to it all round
};

/// A place where confidence * direction is zero. Eigenvalues are those of its derivative by position, 1/metre: with the
/// speed taken as confidence times v, multiply by v for 1/second.
struct Equilibrium {
  Vec2<double> position{0.0, 0.0};  ///< metres
  EquilibriumKind kind = EquilibriumKind::degenerate;  ///< what a machine does near it
  int index = 0;  ///< of Poincare: how often the course turns on a small way round
  std::array<std::complex<double>, 2> eigenvalues{};  ///< smaller real part first; both 0 for the goal
};

/// Why a place could not be settled.
enum class Doubt : std::uint8_t {
  jump,  ///< the course jumps there, and may do so through zero: where fields are switched, a resting place
  degenerate,  ///< it vanishes or nearly does, and more cannot be said
  no_opinion,  ///< the policy has no opinion in the whole box
  budget,  ///< not looked at closely enough for want of budget
};

/// A cluster of boxes in which the course may vanish. Outside of all of them and off the points found it does not.
struct Unresolved {
  Region box;  ///< the smallest around all boxes of the cluster
  std::int64_t boxes = 0;  ///< in the cluster
  Doubt doubt = Doubt::degenerate;  ///< why it could not be settled
  std::optional<int> index;  ///< sum of the indices of all that is in it, where it could be counted
};

/// What `equilibria` found, and whether that is all there is.
struct Equilibria {
  std::vector<Equilibrium> points;  ///< by x, then y
  std::vector<Unresolved> unresolved;  ///< where there may be more; empty when nothing is in doubt
  std::optional<int> boundary_index;  ///< sum of all indices by the boundary; none if the course vanishes on it
  int found_index = 0;  ///< the sum over `points` and the unresolved whose index is known
  bool index_agrees = false;  ///< both sums are known and equal
  std::int64_t boxes = 0;  ///< looked at

  /// Nothing is missing, and nothing in doubt.
  [[nodiscard]] bool complete() const noexcept { return index_agrees && unresolved.empty(); }
};

/// Of which machine, and how hard to try.
struct EquilibriaOptions {
  Parameter robot_radius = 0.20F;  ///< metres
  double keep_off = 0.0;  ///< metres: places with less clearance are not looked at
  double finest = 0.001;  ///< metres: boxes no larger are not split
  double goal_radius = 0.01;  ///< metres: see `equilibria`
  Vec2<double> heading{1.0, 0.0};  ///< of the nose, for policies that ask
  std::int64_t box_budget = 400'000;  ///< boxes to look at, at the most
  int threads = 1;  ///< 1 or more, that look at boxes side by side
};

namespace detail {

// confidence * direction at a point, and its derivative by position.
struct Flow {
  Eigen::Vector2d value;
  Eigen::Matrix2d slope;
};

template <typename Policy, int Capacity>
[[nodiscard]] Flow flow_at(Policy const& policy, StillWorld<Capacity> const& world,
                           DiscSet<Dual<2>, Capacity> const& discs, Vec2<double> const& point) {
  using D = Dual<2>;
  Course<D> const course = world.course(policy, Vec2<D>{D::variable(point.x(), 0), D::variable(point.y(), 1)}, discs);
  Vec2<D> const v = scaled(course.direction, course.confidence);
  Flow flow;
  flow.value << v.x().value(), v.y().value();
  flow.slope << v.x().slope(0), v.x().slope(1), v.y().slope(0), v.y().slope(1);
  return flow;
}

// The roots of x^2 - trace x + determinant, smaller real part first. Two real ones come from the larger, by their
// product: their difference would cancel (Higham 2002, Accuracy and stability of numerical algorithms, section 1.8).
[[nodiscard]] inline std::array<std::complex<double>, 2> eigenvalues_of(Eigen::Matrix2d const& a) {
  double const middle = 0.5 * (a(0, 0) + a(1, 1));
  double const half = 0.5 * (a(0, 0) - a(1, 1));
  double const square = half * half + a(0, 1) * a(1, 0);
  if (square < 0.0) {
    double const turning = std::sqrt(-square);
    return {std::complex<double>{middle, turning}, std::complex<double>{middle, -turning}};
  }
  double const larger = middle + std::copysign(std::sqrt(square), middle);
  double const smaller = larger == 0.0 ? 0.0 : a.determinant() / larger;
  return {std::min(larger, smaller), std::max(larger, smaller)};
}

// Newton's method from the middle of a region; none when it leaves the region or does not settle.
template <typename Policy, int Capacity>
[[nodiscard]] std::optional<Equilibrium> refine(Policy const& policy, StillWorld<Capacity> const& world,
                                                Region const& within) {
  DiscSet<Dual<2>, Capacity> const discs = world.template discs_on<Dual<2>>();
  Vec2<double> point = 0.5 * (within.low + within.high);
  Flow flow = flow_at(policy, world, discs, point);
  constexpr int most_steps = 40;
  for (int i = 0; i < most_steps && flow.value.squaredNorm() > 0.0; ++i) {
    double const determinant = flow.slope.determinant();
    if (determinant == 0.0 || !finite(determinant)) {
      return std::nullopt;
    }
    Eigen::Matrix2d adjugate;
    adjugate << flow.slope(1, 1), -flow.slope(0, 1), -flow.slope(1, 0), flow.slope(0, 0);
    Eigen::Vector2d const step = -(adjugate * flow.value) / determinant;
    if (step.norm() < 1e-15 * (1.0 + point.norm())) {
      break;
    }
    Vec2<double> const next = point + step;
    if (!holds(within, next)) {
      return std::nullopt;
    }
    point = next;
    flow = flow_at(policy, world, discs, point);
  }
  if (!(flow.value.norm() < 1e-9)) {
    return std::nullopt;
  }
  if (flow.value.squaredNorm() == 0.0) {  // no opinion at the very point, and no derivative: take the one beside it
    flow = flow_at(policy, world, discs, point + Vec2<double>{0.6e-8, 0.8e-8});
  }
  Equilibrium e;
  e.position = point;
  e.eigenvalues = eigenvalues_of(flow.slope);
  double const low = e.eigenvalues[0].real();
  double const high = e.eigenvalues[1].real();
  double const determinant = flow.slope.determinant();
  constexpr double nothing = 1e-9;  // of the derivative's own size
  if (std::abs(determinant) <= nothing * flow.slope.squaredNorm()) {
    e.kind = EquilibriumKind::degenerate;
    return e;
  }
  e.index = determinant > 0.0 ? 1 : -1;
  e.kind = determinant < 0.0                                                                 ? EquilibriumKind::saddle
           : std::abs(high) <= nothing * flow.slope.norm() && e.eigenvalues[0].imag() != 0.0 ? EquilibriumKind::centre
           : high < 0.0                                                                      ? EquilibriumKind::sink
           : low > 0.0                                                                       ? EquilibriumKind::source
                       : EquilibriumKind::degenerate;
  return e;
}

}  // namespace detail

/// All places of a region where the course of a policy vanishes, for a point that goes where the course points. Places
/// where the machine would touch a disc are left out: discs grown by the machine's radius and `keep_off`.
///
/// Boxes over which every path of the policy gives courses within an open half plane, each with confidence, hold none.
/// What is left is split down to `finest`, gathered in clusters, and Newton's method looks for the point in each. The
/// index of a point is the sign of the determinant of the derivative. Whatever stays in doubt is in `unresolved`.
///
/// The sum of all indices is known beforehand: the number of turns of the course along the region's boundary, less
/// those round what was cut out (Poincare and Hopf; Guillemin and Pollack 1974, chapter 3.5). It is counted by
/// intervals and without regard to what was found, so a place that was missed shows. Two that cancel, as a saddle and a
/// sink, would not.
///
/// The goal is a place of rest where the course is not even continuous: it has length one all round. If the course on
/// the circle of `goal_radius` round it, in the region and clear of all discs, points inward everywhere (proved by
/// intervals), the inside of that circle counts as one sink of index 1 and is not looked into. Otherwise the goal is a
/// place like others.
///
/// Fresh memory everywhere: a guard with hysteresis counts as not yet entered, between its thresholds as outside.
/// Throws std::invalid_argument for discs that move or are more than Capacity.
template <int Capacity = 32, typename Policy>
[[nodiscard]] Equilibria equilibria(Policy const& policy, World const& world, Vec2<double> const& goal,
                                    Region const& region, EquilibriaOptions const& options = {}) {
  using detail::PlaneBox;
  StillWorld<Capacity> const still("equilibria", world, goal, options.robot_radius, options.heading);
  CourseMap const map(policy, still);
  Equilibria result;

  std::vector<Disc<double>> const holes = detail::grown_discs(still, options.keep_off);
  Disc<double> const at_goal{goal, options.goal_radius};
  bool const goal_apart = detail::holds(detail::grown(region, -1.001 * options.goal_radius), goal) &&
                          std::all_of(holes.begin(), holes.end(), [&](Disc<double> const& hole) {
                            return gap(hole, goal) > 1.001 * options.goal_radius;
                          });
  if (goal_apart && points_inward(map, at_goal)) {
    result.points.push_back({goal, EquilibriumKind::goal, 1, {}});
  }
  bool const goal_is_cut_out = !result.points.empty();
  double const shortest = 1e-3 * options.finest;  // metres: pieces of a boundary are cut no shorter

  auto const decide = [&](PlaneBox& box) {
    if (box.within_one_of(holes) || (goal_is_cut_out && box.within(at_goal))) {
      return Finding::holds;
    }
    CourseSpread const spread = map.over({box.x, box.y});
    if (spread.vanishes_nowhere) {
      return Finding::holds;
    }
    box.no_opinion = spread.vanishes_everywhere;
    return box.no_opinion || box.size() <= options.finest ? Finding::too_small : Finding::open;
  };
  SearchOptions limits;
  limits.box_budget = options.box_budget;
  limits.threads = options.threads;
  auto searched = search(
      std::vector<PlaneBox>{{Interval(region.low.x(), region.high.x()), Interval(region.low.y(), region.high.y())}},
      decide, [](PlaneBox const& box) { return box.halves(); }, limits);
  result.boxes = searched.boxes;

  // Boxes a few widths away from a zero are the last to be excluded, and not always are; they belong to it.
  double const apart = 6.0 * options.finest;
  std::vector<std::vector<PlaneBox>> const gathered = detail::clusters(std::move(searched.left), apart);
  std::vector<Region> hulls;
  hulls.reserve(gathered.size());
  for (std::vector<PlaneBox> const& cluster : gathered) {
    hulls.push_back(detail::hull_of(cluster));
  }
  for (std::size_t i = 0; i < gathered.size(); ++i) {
    std::vector<PlaneBox> const& cluster = gathered[i];
    Unresolved doubtful{hulls[i], static_cast<std::int64_t>(cluster.size()), Doubt::degenerate, {}};
    auto const any = [&cluster](auto const& what) { return std::any_of(cluster.begin(), cluster.end(), what); };
    if (any([](PlaneBox const& box) { return box.no_opinion; })) {
      doubtful.doubt = Doubt::no_opinion;
    } else if (any([&options](PlaneBox const& box) { return box.size() > options.finest; })) {
      doubtful.doubt = Doubt::budget;
    } else {
      // Grown by two boxes its rim is clear of the cluster, and in most cases of all zeros.
      Region const around = detail::grown(doubtful.box, 2.0 * options.finest);
      constexpr std::size_t most_hulls = 2'000;  // beyond, nobody reads the list, and comparing all with all is slow
      bool const alone = gathered.size() <= most_hulls && detail::alone(hulls, i, around);
      std::optional<int> const turns = alone ? winding_number(map, boundary(around.low, around.high, {}), shortest)
                                             : std::nullopt;
      std::optional<Equilibrium> found = detail::refine(policy, still, around);
      if (found && found->kind == EquilibriumKind::degenerate) {
        found->index = turns.value_or(0);
      }
      // When the rim knows of more than the point that Newton's method ran into, the cluster stays in doubt.
      if (found && (turns ? *turns == found->index : found->kind != EquilibriumKind::degenerate)) {
        if (detail::holds(region, found->position) && detail::outside(holes, found->position)) {
          result.points.push_back(*found);
        }
        continue;
      }
      bool const inside = detail::holds(region, around.low) && detail::holds(region, around.high) &&
                          std::all_of(holes.begin(), holes.end(), [&around](Disc<double> const& hole) {
                            return gap(hole, Vec2<double>(0.5 * (around.low + around.high))) >
                                   0.5 * (around.high - around.low).norm();
                          });
      doubtful.index = inside ? turns : std::nullopt;
      bool const on_jump = any([&map](PlaneBox const& box) { return map.over({box.x, box.y}).paths > 1; });
      doubtful.doubt = on_jump ? Doubt::jump : Doubt::degenerate;
    }
    result.unresolved.push_back(doubtful);
  }

  std::sort(result.points.begin(), result.points.end(), [](Equilibrium const& a, Equilibrium const& b) {
    return std::pair(a.position.x(), a.position.y()) < std::pair(b.position.x(), b.position.y());
  });
  result.boundary_index = winding_number(map, boundary(region.low, region.high, holes), shortest);
  bool all_known = result.boundary_index.has_value();
  for (Equilibrium const& point : result.points) {
    result.found_index += point.index;
  }
  for (Unresolved const& doubtful : result.unresolved) {
    result.found_index += doubtful.index.value_or(0);
    all_known = all_known && doubtful.index.has_value();
  }
  result.index_agrees = all_known && *result.boundary_index == result.found_index;
  return result;
}

}  // namespace wend::inline v0::lab
