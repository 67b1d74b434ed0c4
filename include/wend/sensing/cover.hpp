// wend/sensing/cover.hpp - one disc for the echoes of one thing.
#pragma once

#include "wend/disc.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"
#include "wend/sensing/circle_fit.hpp"
#include "wend/sensing/grouping.hpp"

namespace wend::inline v0 {

namespace detail {

// Sizes that decide what disc stands for a group: metres.
template <PlainNumber S>
struct DiscLimits {
  S widest;      // no covering disc holds echoes farther apart than this from the first
  S largest;     // a fitted circle with a greater radius is taken for a wall
  S kept_clear;  // round the robot's origin: no disc reaches in unless an echo does
};

// A circle needs this many points to carry it: three determine it, and the residual must have something left to say.
inline constexpr int least_points_of_a_circle = 6;

// Passes over the points of one group. From Kasa's circle three to five are usual to settle within a tenth of sigma.
inline constexpr int circle_passes = 8;

// The circle through a group, where its echoes can carry one: enough of them, an arc deeper than three sigma, no wall,
// a residual such as the noise explains, and nothing of it before the nearest echo, which is where a circle through a
// hollow (the inside of a corner or of a room) would lie. Not converged otherwise.
template <PlainNumber S, int Beams>
[[nodiscard]] CircleFit<S> circle_of(Scan<S, Beams> const& scan, Group group, DiscLimits<S> const& limits) noexcept {
  CircleFit<S> none;
  if (group.last - group.first + 1 < least_points_of_a_circle) {
    return none;
  }
  auto const each_point = [&](auto&& visit) noexcept { scan.each_point(group, visit); };
  AlgebraicFit<S> const start = algebraic_fit<S>(each_point);
  // Kasa's radius errs to the small side, so a wall shows already here, before the costlier passes.
  if (start.count < least_points_of_a_circle || !start.sound || start.radius > limits.largest) {
    return none;
  }
  S nearest = S(far_away);
  for (int i = group.first; i <= group.last; ++i) {
    nearest = scan.is_echo(i) ? least(scan.range(i), nearest) : nearest;
  }
  S const rounding = S(1.0e-4F) * nearest;  // stands in where the noise is given as nothing
  S const sigma = scan.noise + rounding;
  CircleFit<S> fit = geometric_fit<circle_passes>(start, S(S(0.1F) * sigma), each_point);
  S const radius = fit.disc.radius;
  S const half_chord_squared = S(0.25F) * squared(length(Vec2<S>(scan.point(group.last) - scan.point(group.first))));
  S const flat = squared(radius) - half_chord_squared;
  S const sagitta = radius - root(greatest(flat, S(0.0F)));
  S const near_side = length(fit.disc.centre) - radius;
  fit.converged = fit.converged && radius <= limits.largest && fit.rms <= S(1.5F) * sigma &&
                  sagitta >= S(3.0F) * sigma && near_side >= nearest - S(3.0F) * sigma;
  return fit;
}

// Calls sink(piece) for the pieces of a group: each as long as its echoes stay within the width of its first, and
// within a third of the nearest one's distance from the robot, so that the disc over them stays clear of the robot.
template <PlainNumber S, int Beams, typename Sink>
void for_each_piece(Scan<S, Beams> const& scan, Group group, S widest, Sink&& sink) noexcept {
  auto const distance_squared = [&](Vec2<S> const& p, Vec2<S> const& q) noexcept {
    Vec2<S> const v = p - q;
    return dot(v, v);
  };
  Group piece{group.first, group.first};
  Vec2<S> first = scan.point(group.first);
  S nearest = distance_squared(first, scan.robot);
  for (int i = group.first + 1; i <= group.last; ++i) {
    if (!scan.is_echo(i)) {
      continue;
    }
    Vec2<S> const p = scan.point(i);
    S const here = distance_squared(p, scan.robot);
    S const nearest_yet = least(here, nearest);
    S const allowed = least(squared(widest), S(nearest_yet * S(1.0F / 9.0F)));
    if (distance_squared(p, first) <= allowed) {
      piece.last = i;
      nearest = nearest_yet;
    } else {
      sink(piece);
      piece = {i, i};
      first = p;
      nearest = here;
    }
  }
  sink(piece);
}

// The disc of a lone echo: as wide as the spacing of the beams at its range, because something narrower is not known,
// and behind the echo, since the echo is its near side.
template <PlainNumber S, int Beams>
[[nodiscard]] Disc<S> disc_behind(Scan<S, Beams> const& scan, int beam, S widest) noexcept {
  S half_spacing = S(0.5F) * widest;
  if constexpr (Beams > 1) {
    int const own = static_cast<int>(Scan<S, Beams>::beam(beam));
    int const neighbour = own + 1 < Beams ? own + 1 : own - 1;
    S const spacing = length(Vec2<S>(scan.direction(neighbour) - scan.direction(own)));
    half_spacing = least(S(S(0.5F) * scan.range(beam) * spacing), half_spacing);
  }
  S const margin = S(2.0F) * scan.noise;
  S const radius = half_spacing + margin;
  return {scaled(scan.direction(beam), S(scan.range(beam) + half_spacing)), radius};
}

// How far behind the chord of its first and last echo a covering disc has its centre, in lengths of that chord. At 0 it
// stands out before a wall by half the chord, at 0.3 by 0.28, and it is 1.17 times as wide as the chord. On partly seen
// round things (the spruces of the tests) 0.3 is where near side and flanks come out right about equally well.
inline constexpr Parameter set_back = 0.3F;

// The disc over the echoes of a piece, with two sigma to spare.
template <PlainNumber S, int Beams>
[[nodiscard]] Disc<S> disc_over(Scan<S, Beams> const& scan, Group piece) noexcept {
  Vec2<S> const first = scan.point(piece.first);
  Vec2<S> const across = scan.point(piece.last) - first;
  Vec2<S> const middle = first + scaled(across, S(0.5F));
  Vec2<S> const side = scaled(left_of(across), S(set_back));
  bool const behind = dot(side, middle) > S(0.0F);  // which side that is depends on the way round the beams run
  Vec2<S> const centre = behind ? Vec2<S>(middle + side) : Vec2<S>(middle - side);
  S reach_squared = S(0.0F);
  scan.each_point(piece, [&](Vec2<S> const& p) noexcept {
    Vec2<S> const v = p - centre;
    reach_squared = greatest(dot(v, v), reach_squared);
  });
  return {centre, root(reach_squared) + S(2.0F) * scan.noise};
}

// Moves a disc straight away from the robot's origin where it reaches nearer than its echoes warrant: neither nearer
// than half the nearest echo's distance, nor into the clear zone unless that echo is in it.
template <PlainNumber S, int Beams>
[[nodiscard]] Disc<S> kept_off(Disc<S> disc, Scan<S, Beams> const& scan, Group piece, S kept_clear) noexcept {
  S nearest_squared = squared(S(far_away)) * S(4.0F);
  scan.each_point(piece, [&](Vec2<S> const& p) noexcept {
    Vec2<S> const v = p - scan.robot;
    nearest_squared = least(dot(v, v), nearest_squared);
  });
  S const nearest = root(nearest_squared);
  S const bound = greatest(S(S(0.5F) * nearest), least(S(nearest - S(2.0F) * scan.noise), kept_clear));
  Polar<S> const out = polar(Vec2<S>(disc.centre - scan.robot));
  if (out.length - disc.radius < bound) {  // with its centre on the robot's origin, away means along the beam
    Vec2<S> const way = out.length > S(no_length) ? out.direction : scan.direction(piece.first);
    disc.centre = scan.robot + scaled(way, S(bound + disc.radius));
  }
  return disc;
}

}  // namespace detail

}  // namespace wend::inline v0
