// wend/sensing/circle_fit.hpp - the circle that lies nearest a handful of points. For the rim of the library: it
// decides with plain comparisons, so it runs on float and double and on no guest.
#pragma once

#include <limits>

#include "wend/disc.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// What a circle fit returns.
template <PlainNumber S>
struct CircleFit {
  Disc<S> disc{};           ///< in the frame and the unit of the points; far away where there is no circle
  S rms{S(0.0F)};           ///< root mean square distance of the points from the circle, in the unit of the points
  bool converged = false;   ///< false: no circle (under three points, all on one line), or it did not settle
};

namespace detail {

// The symmetric 2 x 2 system [xx xy; xy yy] v = (x, y). `sound` is false, and v (0, 0), where it is singular for the
// precision at hand: where its lesser eigenvalue is lost in the rounding of the greater one.
template <PlainNumber S>
struct Solved {
  Vec2<S> v;
  bool sound;
};
template <PlainNumber S>
[[nodiscard]] Solved<S> solve_symmetric(S xx, S xy, S yy, Vec2<S> const& right) noexcept {
  S const trace = xx + yy;
  if (!(trace > S(0.0F)) || !finite(trace)) {
    return {zero2<S>(), false};
  }
  S const scale = S(1.0F) / trace;  // entries of order one, so that the determinant cannot overflow
  xx *= scale;
  xy *= scale;
  yy *= scale;
  S const determinant = xx * yy - xy * xy;
  if (!finite(scale) || !(determinant > S(8.0F) * std::numeric_limits<S>::epsilon())) {
    return {zero2<S>(), false};
  }
  S const k = scale / determinant;
  Vec2<S> const v{k * (yy * right.x() - xy * right.y()), k * (xx * right.y() - xy * right.x())};
  return {v, finite(v.x()) && finite(v.y())};
}

// The algebraic fit, and the points' centroid, which the geometric fit starts from as well.
template <PlainNumber S>
struct AlgebraicFit {
  Vec2<S> centroid;
  Vec2<S> centre;
  S radius;
  int count;
  bool sound;
};

template <PlainNumber S, typename EachPoint>
[[nodiscard]] AlgebraicFit<S> algebraic_fit(EachPoint const& each_point) noexcept {
  int count = 0;
  Vec2<S> sum = zero2<S>();
  each_point([&](Vec2<S> const& p) noexcept { sum += p, ++count; });
  AlgebraicFit<S> fit{sum, sum, S(0.0F), count, false};
  if (count < 3) {
    return fit;
  }
  S const share = S(1.0F) / static_cast<S>(count);
  fit.centroid = scaled(sum, share);
  S xx = S(0.0F);
  S xy = S(0.0F);
  S yy = S(0.0F);
  Vec2<S> right = zero2<S>();
  each_point([&](Vec2<S> const& p) noexcept {  // about the centroid, or single precision would lose the curvature
    Vec2<S> const v = p - fit.centroid;
    xx += v.x() * v.x();
    xy += v.x() * v.y();
    yy += v.y() * v.y();
    right += scaled(v, S(S(0.5F) * dot(v, v)));
  });
  Solved<S> const centre = solve_symmetric(xx, xy, yy, right);
  fit.centre = fit.centroid + centre.v;
  fit.radius = root(S(dot(centre.v, centre.v) + share * (xx + yy)));
  fit.sound = centre.sound && finite(fit.radius);
  return fit;
}

// One pass over the points for a trial centre: the mean distance r from it, the sum of squared deviations from r, and
// the Gauss-Newton system for the centre. The radius is gone from the system because for any centre the best radius is
// that mean. Sums are taken about a direction and a distance near the mean, which keeps their digits on short arcs.
template <PlainNumber S>
struct Pass {
  S radius;
  S cost;
  S xx, xy, yy;
  Vec2<S> right;
};

template <PlainNumber S, typename EachPoint>
[[nodiscard]] Pass<S> measure(Vec2<S> const& centre, S radius, AlgebraicFit<S> const& start,
                              EachPoint const& each_point) noexcept {
  Vec2<S> const middle = polar(Vec2<S>(start.centroid - centre)).direction;
  Pass<S> sum{S(0.0F), S(0.0F), S(0.0F), S(0.0F), S(0.0F), zero2<S>()};
  Vec2<S> lean = zero2<S>();
  each_point([&](Vec2<S> const& p) noexcept {
    Polar<S> const out = polar(Vec2<S>(p - centre));
    Vec2<S> const u = out.direction - middle;
    S const d = out.length - radius;
    lean += u;
    sum.radius += d;
    sum.cost += d * d;
    sum.xx += u.x() * u.x();
    sum.xy += u.x() * u.y();
    sum.yy += u.y() * u.y();
    sum.right += scaled(u, d);
  });
  S const share = S(1.0F) / static_cast<S>(start.count);
  S const mean = share * sum.radius;
  Vec2<S> const mean_lean = scaled(lean, share);
  return {radius + mean,
          greatest(S(sum.cost - mean * sum.radius), S(0.0F)),
          sum.xx - mean_lean.x() * lean.x(),
          sum.xy - mean_lean.x() * lean.y(),
          sum.yy - mean_lean.y() * lean.y(),
          sum.right - scaled(lean, mean)};
}

// Gauss-Newton from the algebraic circle; a step that would not lessen the cost is damped (Levenberg 1944, Marquardt
// 1963). Settled when a step is no longer than the tolerance, in the unit of the points.
template <int Passes, PlainNumber S, typename EachPoint>
[[nodiscard]] CircleFit<S> geometric_fit(AlgebraicFit<S> const& start, S tolerance,
                                         EachPoint const& each_point) noexcept {
  CircleFit<S> fit;
  if (!start.sound) {
    return fit;
  }
  Vec2<S> centre = start.centre;
  Pass<S> best = measure(centre, start.radius, start, each_point);
  S damping = S(0.0F);
  constexpr S slack = S(1.0F) + S(16.0F) * std::numeric_limits<S>::epsilon();  // near the end rounding decides
  for (int pass = 1; pass < Passes && !fit.converged; ++pass) {
    S const load = damping * (best.xx + best.yy);
    Solved<S> const step = solve_symmetric<S>(best.xx + load, best.xy, best.yy + load, best.right);
    if (!step.sound) {
      break;
    }
    Vec2<S> const trial_centre = centre + step.v;
    Pass<S> const trial = measure(trial_centre, best.radius, start, each_point);
    fit.converged = dot(step.v, step.v) <= squared(tolerance);
    if (finite(trial.cost) && trial.cost <= slack * best.cost) {
      centre = trial_centre;
      best = trial;
      damping *= S(0.1F);
    } else {
      damping = greatest(S(S(10.0F) * damping), S(0.01F));
    }
  }
  if (finite(best.cost) && finite(best.radius) && finite(centre.x()) && finite(centre.y())) {
    fit.disc = {centre, best.radius};
    fit.rms = root(S(best.cost / static_cast<S>(start.count)));
  } else {
    fit.converged = false;
  }
  return fit;
}

template <typename PointAt>
[[nodiscard]] auto in_order(int count, PointAt const& point) noexcept {
  return [count, &point](auto&& visit) noexcept {
    for (int i = 0; i < count; ++i) {
      visit(point(i));
    }
  };
}

}  // namespace detail

/// The algebraic circle of Kasa (1976, IEEE Trans. Instrum. Meas. 25:8-14): the least sum of (|p - c|^2 - r^2)^2. Two
/// passes and no iteration; it comes out too small on short noisy arcs. `point(i)` gives a `Vec2<S>` for i in
/// [0, count). Not converged under three points, where all lie on one line, or where a number is not finite.
template <PlainNumber S, typename PointAt>
[[nodiscard]] CircleFit<S> kasa_circle(int count, PointAt const& point) noexcept {
  auto const each_point = detail::in_order(count, point);
  detail::AlgebraicFit<S> const fit = detail::algebraic_fit<S>(each_point);
  if (!fit.sound) {
    return {};
  }
  S const cost = detail::measure(fit.centre, fit.radius, fit, each_point).cost;
  return {{fit.centre, fit.radius}, root(S(cost / static_cast<S>(count))), true};
}

/// The geometric circle: the least sum of squared distances of the points from it, by Gauss-Newton from Kasa's
/// (Gander, Golub and Strebel 1994, BIT 34:558-578). `point(i)` gives a `Vec2<S>` for i in [0, count); it is asked for
/// each point up to Passes + 2 times. Settled when the centre moves by no more than `tolerance` of the radius. Where
/// it has not converged the disc is the best circle met, or one far away when there was none.
template <PlainNumber S, int Passes = 40, typename PointAt>
[[nodiscard]] CircleFit<S> fit_circle(int count, PointAt const& point,
                                      S tolerance = S(64.0F) * std::numeric_limits<S>::epsilon()) noexcept {
  auto const each_point = detail::in_order(count, point);
  detail::AlgebraicFit<S> const start = detail::algebraic_fit<S>(each_point);
  return detail::geometric_fit<Passes>(start, S(tolerance * start.radius), each_point);
}

}  // namespace wend::inline v0
