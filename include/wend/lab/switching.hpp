// wend/lab/switching.hpp - where a guarded policy would chatter, and how long it keeps an answer at the least.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <limits>
#include <queue>
#include <utility>
#include <vector>

#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/plane_box.hpp"
#include "wend/lab/prove.hpp"
#include "wend/lab/search.hpp"
#include "wend/lab/sloped.hpp"
#include "wend/lab/still_world.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// What happens to a machine that comes to a switching surface (Filippov 1988, section 4).
enum class SurfaceKind : std::uint8_t {
  sliding,    ///< both courses lead into it: the machine is held on it, switching on every tick
  crossing,   ///< one leads in and the other out: it goes through
  escaping,   ///< both lead out of it
  undecided,  ///< not known
};

/// A box with a piece of the surface in it.
struct SurfacePiece {
  Region box;  ///< metres
  SurfaceKind kind = SurfaceKind::undecided;  ///< what a machine does there
  Vec2<double> point{0.0, 0.0};  ///< on the surface, in the middle of the piece, to second order in the box's size
  double length = 0.0;           ///< metres, to second order; 0 where the surface only may touch the box
};

/// What `switching` found.
struct SwitchingReport {
  double hysteresis = 0.0;           ///< between the thresholds, in the signal's unit
  std::vector<SurfacePiece> pieces;  ///< for equal thresholds; together they hold the whole surface
  double length = 0.0;               ///< of the surface, metres
  double rate = 0.0;                 ///< the signal changes by no more than this in a second; infinite if it may jump
  double least_time = 0.0;           ///< seconds that an answer is kept at the least; 0 when nothing can be said, and
                                     ///< infinite for a signal that never changes
  std::int64_t boxes = 0;            ///< looked at

  /// The part of the surface's length that is of a kind, in [0, 1]; 0 without a surface.
  [[nodiscard]] double share(SurfaceKind kind) const {
    double sum = 0.0;
    for (SurfacePiece const& piece : pieces) {
      sum += piece.kind == kind ? piece.length : 0.0;
    }
    return length > 0.0 ? sum / length : 0.0;
  }
};

/// Of which machine, and how hard to try.
struct SwitchingOptions {
  Parameter robot_radius = 0.20F;  ///< metres
  double keep_off = 0.0;           ///< metres: places with less clearance are not looked at
  double top_speed = 0.6;          ///< metres a second
  double max_turn_rate = 2.0;      ///< radians a second; matters to signals that look at the heading
  double signal_error = 0.0;       ///< the signal as measured is no farther off than this, in its unit
  double coarsest = 0.02;          ///< metres: boxes of the surface are split to this in any case
  double finest = 0.0005;          ///< metres: and to this before they are left undecided
  Vec2<double> heading{1.0, 0.0};  ///< of the nose, for courses and surfaces that depend on it
  std::int64_t box_budget = 400'000;  ///< boxes to look at, at the most
  int threads = 1;  ///< 1 or more, that look at boxes side by side
};

namespace detail {

struct SurfaceBox : PlaneBox {
  SurfaceKind kind = SurfaceKind::undecided;
};

// A signal with its threshold; `outside` is +1 when the guard's no lies above the threshold, -1 when below.
template <typename Signal>
struct Threshold {
  Signal signal;
  double level;
  double outside;
};

template <int Capacity, typename Signal, typename Inside, typename Outside>
class SwitchingSurface {
 public:
  SwitchingSurface(Threshold<Signal> const& at, Inside const& inside, Outside const& outside,
                   StillWorld<Capacity> const& world, SwitchingOptions const& options)
      : at_(at), inside_(inside), outside_(outside), world_(world), options_(options),
        holes_(grown_discs(world, options.keep_off)) {}

  Finding operator()(SurfaceBox& box) const {
    if (box.within_one_of(holes_)) {
      return Finding::holds;
    }
    Sloped const signal = signal_over(box, false);
    if (!(signal.value() - Interval(at_.level)).contains(0.0)) {
      return Finding::holds;
    }
    if (box.size() > options_.coarsest) {
      return Finding::open;
    }
    Vec2<Interval> const out = scaled(signal.gradient(), Interval(at_.outside));
    Vec2<Interval> const position{box.x, box.y};
    Interval const from_inside = dot(world_.course(inside_, position, intervals_).direction, out);
    Interval const from_outside = dot(world_.course(outside_, position, intervals_).direction, out);
    bool const in_leads_out = from_inside.low() > 0.0;
    bool const in_leads_in = from_inside.high() < 0.0;
    bool const out_leads_out = from_outside.low() > 0.0;
    bool const out_leads_in = from_outside.high() < 0.0;
    box.kind = in_leads_out && out_leads_in   ? SurfaceKind::sliding
               : in_leads_in && out_leads_out ? SurfaceKind::escaping
               : (in_leads_out && out_leads_out) || (in_leads_in && out_leads_in) ? SurfaceKind::crossing
                                                                                  : SurfaceKind::undecided;
    return box.kind != SurfaceKind::undecided || box.size() <= options_.finest ? Finding::too_small : Finding::open;
  }

  // The surface in a box as the straight line that it nearly is.
  [[nodiscard]] SurfacePiece piece(SurfaceBox const& box) const {
    Vec2<double> const middle{box.x.middle(), box.y.middle()};
    SurfacePiece piece{{{box.x.low(), box.y.low()}, {box.x.high(), box.y.high()}}, box.kind, middle, 0.0};
    Dual<2> const signal = signal_at(middle);
    Vec2<double> const slope{signal.slope(0), signal.slope(1)};
    double const steep = slope.norm();
    if (!(steep > 0.0) || !finite(steep)) {
      return piece;
    }
    Vec2<double> const normal = slope / steep;
    Vec2<double> const along = left_of(normal);
    Vec2<double> const foot = middle - ((signal.value() - at_.level) / steep) * normal;
    double from = -std::numeric_limits<double>::infinity();
    double to = -from;
    for (int k = 0; k < 2; ++k) {
      double const low = piece.box.low[k] - foot[k];
      double const high = piece.box.high[k] - foot[k];
      if (along[k] == 0.0) {
        to = low <= 0.0 && 0.0 <= high ? to : from;
        continue;
      }
      from = std::max(from, std::min(low / along[k], high / along[k]));
      to = std::min(to, std::max(low / along[k], high / along[k]));
    }
    if (to > from) {
      piece.length = to - from;
      piece.point = foot + 0.5 * (from + to) * along;
    }
    return piece;
  }

  // What the signal changes by in a second, at the most: the steepest boxes are split until that hardly pays.
  [[nodiscard]] double fastest(PlaneBox const& all) const {
    constexpr int most_splits = 20'000;
    constexpr double good_enough = 1.001;
    using Rated = std::pair<double, PlaneBox>;
    auto const slower = [](Rated const& a, Rated const& b) { return a.first < b.first; };
    std::priority_queue<Rated, std::vector<Rated>, decltype(slower)> waiting(slower);
    auto const add = [&](PlaneBox const& box) {
      if (!box.within_one_of(holes_)) {
        Sloped const signal = signal_over(box, true);
        double const turning = signal.per_radian() == 0.0 ? 0.0 : signal.per_radian() * options_.max_turn_rate;
        waiting.emplace((signal.per_metre() * options_.top_speed + turning) * (1.0 + 0x1p-50), box);
      }
    };
    double reached = 0.0;
    add(all);
    for (int i = 0; i < most_splits && !waiting.empty() && waiting.top().first > good_enough * reached; ++i) {
      PlaneBox const box = waiting.top().second;
      Vec2<double> const middle{box.x.middle(), box.y.middle()};
      if (std::none_of(holes_.begin(), holes_.end(), [&](auto const& hole) { return gap(hole, middle) < 0.0; })) {
        Dual<2> const signal = signal_at(middle);
        reached = std::max(reached, std::hypot(signal.slope(0), signal.slope(1)) * options_.top_speed);
      }
      if (waiting.top().first <= good_enough * reached) {
        break;
      }
      waiting.pop();
      auto const halves = box.halves();
      add(halves.first), add(halves.second);
    }
    return waiting.empty() ? 0.0 : waiting.top().first;
  }

 private:
  [[nodiscard]] Sloped signal_over(PlaneBox const& box, bool any_heading) const {
    Vec2<Sloped> const position{Sloped::position(box.x, 0), Sloped::position(box.y, 1)};
    Vec2<Sloped> const any{Sloped::any_heading(), Sloped::any_heading()};
    return any_heading ? at_.signal(world_.percept(position, any, sloped_))
                       : at_.signal(world_.percept(position, sloped_));
  }
  [[nodiscard]] Dual<2> signal_at(Vec2<double> const& point) const {
    using D = Dual<2>;
    return at_.signal(world_.percept(Vec2<D>{D::variable(point.x(), 0), D::variable(point.y(), 1)}, duals_));
  }

  Threshold<Signal> at_;
  Inside const& inside_;
  Outside const& outside_;
  StillWorld<Capacity> const& world_;
  SwitchingOptions const& options_;
  std::vector<Disc<double>> holes_;
  DiscSet<Interval, Capacity> intervals_ = world_.template discs_on<Interval>();
  DiscSet<Sloped, Capacity> sloped_ = world_.template discs_on<Sloped>();
  DiscSet<Dual<2>, Capacity> duals_ = world_.template discs_on<Dual<2>>();
};

template <int Capacity, typename Signal, typename Inside, typename Outside>
[[nodiscard]] SwitchingReport switching(Threshold<Signal> const& at, double hysteresis, Inside const& inside,
                                        Outside const& outside, World const& world, Vec2<double> const& goal,
                                        Region const& region, SwitchingOptions const& options) {
  StillWorld<Capacity> const still("switching", world, goal, options.robot_radius, options.heading);
  SwitchingSurface<Capacity, Signal, Inside, Outside> const surface(at, inside, outside, still, options);
  SurfaceBox const all{
      {Interval(region.low.x(), region.high.x()), Interval(region.low.y(), region.high.y())}, SurfaceKind::undecided};
  SwitchingReport report;
  report.hysteresis = hysteresis;
  report.rate = surface.fastest(all);
  double const way = hysteresis - 2.0 * options.signal_error;
  report.least_time = way > 0.0 ? way / report.rate * (1.0 - 0x1p-50) : 0.0;
  if (hysteresis > 0.0) {
    return report;
  }
  SearchOptions limits;
  limits.box_budget = options.box_budget;
  limits.threads = options.threads;
  auto const searched = search(
      std::vector<SurfaceBox>{all}, surface,
      [](SurfaceBox const& box) {
        auto const halves = box.halves();
        return std::pair<SurfaceBox, SurfaceBox>{{halves.first, box.kind}, {halves.second, box.kind}};
      },
      limits);
  report.boxes = searched.boxes;
  for (SurfaceBox const& box : searched.left) {
    report.pieces.push_back(surface.piece(box));
    report.length += report.pieces.back().length;
  }
  return report;
}

}  // namespace detail

/// Looks at the switch of `guarded(below(signal, enter, leave), inside, outside)` or of the same with `above`, over a
/// region, less the places where the machine would touch a disc.
///
/// With equal thresholds it finds the surface where the signal is at the threshold, in boxes, and tells for each what a
/// machine does there that goes where the course points. The kinds are proved: by the signs, over the whole box, of the
/// signal's gradient times either course. Where both lead into the surface a real machine chatters.
///
/// With different thresholds nothing slides. Whatever the machine does, an answer is kept for (|leave - enter| - 2
/// signal_error) / rate seconds, the signal's greatest rate of change being proved over all places of the region and
/// all headings: its gradient's length times the top speed, and what turning adds. For `clearance` and `goal_distance`
/// that length is 1. Discs that move are not covered. Fields start with a fresh memory everywhere.
///
/// Throws std::invalid_argument for discs that move or are more than Capacity.
template <int Capacity = 32, typename Signal, typename Inside, typename Outside>
[[nodiscard]] SwitchingReport switching(guarded_field<below_guard<Signal>, Inside, Outside> const& policy,
                                        World const& world, Vec2<double> const& goal, Region const& region,
                                        SwitchingOptions const& options = {}) {
  double const enter = static_cast<double>(policy.guard.enter);
  return detail::switching<Capacity>(detail::Threshold<Signal>{policy.guard.signal, enter, 1.0},
                                     static_cast<double>(policy.guard.leave) - enter, policy.inside, policy.outside,
                                     world, goal, region, options);
}
/// The same of a guard made by `above`.
template <int Capacity = 32, typename Signal, typename Inside, typename Outside>
[[nodiscard]] SwitchingReport switching(guarded_field<above_guard<Signal>, Inside, Outside> const& policy,
                                        World const& world, Vec2<double> const& goal, Region const& region,
                                        SwitchingOptions const& options = {}) {
  double const enter = static_cast<double>(policy.guard.enter);
  return detail::switching<Capacity>(detail::Threshold<Signal>{policy.guard.signal, enter, -1.0},
                                     enter - static_cast<double>(policy.guard.leave), policy.inside, policy.outside,
                                     world, goal, region, options);
}

}  // namespace wend::inline v0::lab
