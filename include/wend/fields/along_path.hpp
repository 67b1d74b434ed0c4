// wend/fields/along_path.hpp - along a path: by pursuit of a point on it, or by a vector field round it.
#pragma once

#include "wend/field.hpp"
#include "wend/fields/path.hpp"

namespace wend::inline v0 {

/// The curvature of the arc that leaves a pose along its heading and leads to a point: 2 x / L^2 with x the point's
/// distance to the left of the nose and L its distance (Coulter 1992, Carnegie Mellon CMU-RI-TR-92-01, eq. 3). One over
/// metres, positive to the left; 0 for the pose's own place. For a machine that is steered by curvature.
template <Number S>
[[nodiscard]] constexpr S pursuit_curvature(Pose<S> const& pose, Vec2<S> const& point) noexcept {
  Polar<S> const to_point = polar(Vec2<S>(point - pose.position));
  mask_t<S> const some = to_point.length > S(no_length);
  S const aside = cross(pose.heading, to_point.direction);
  return select(some, S(S(2.0F) * aside / select(some, to_point.length, S(1.0F))), S(0.0F));
}

namespace detail {

// Where a piece, followed from a share of its chord on, leaves a circle round a point that it starts inside of: the
// share of the chord, and the place; over 1 where it does not.
template <Number S>
struct WayOut {
  S along;
  Vec2<S> point;
};

template <Number S>
[[nodiscard]] constexpr WayOut<S> way_out(PathPiece const& piece, S const& from, Vec2<S> const& middle,
                                          S const& radius) noexcept {
  S const never = S(2.0F);
  Vec2<S> const start = on<S>(piece.start);
  Vec2<S> const chord = on<S>(piece.end) - start;
  Vec2<S> const to_middle = middle - start;
  S const per_length = S(1.0F) / dot(chord, chord);
  if (piece.curvature == 0.0F) {
    Vec2<S> const tangent = polar(chord).direction;
    S const rest = squared(radius) - squared(cross(tangent, to_middle));
    S const half = root(select(rest > S(0.0F), rest, S(0.0F)));
    S const along = dot(chord, Vec2<S>(to_middle + scaled(tangent, half))) * per_length;
    return {select(rest > S(0.0F), along, never), start + scaled(chord, along)};
  }
  S const hand = S(piece.curvature < 0.0F ? -1.0F : 1.0F);
  Vec2<S> const centre = on<S>(piece.centre);
  Vec2<S> const arm = start - centre;
  S const arc_radius = length(arm);
  Polar<S> const out = polar(Vec2<S>(middle - centre));
  // Of the triangle centre, middle, way out: the angle at the centre. What lies inside is that much to either side.
  S const reach = S(0.5F) * (squared(arc_radius) + squared(out.length) - squared(radius)) / out.length;
  S const rest = squared(arc_radius) - squared(reach);
  S const across = root(select(rest > S(0.0F), rest, S(0.0F)));
  Vec2<S> const point = centre + scaled(out.direction, reach) + scaled(left_of(out.direction), S(hand * across));
  Vec2<S> const from_start = point - start;
  S const along = dot(from_start, chord) * per_length;
  mask_t<S> const valid = out.length > S(no_length) && rest > S(0.0F) && hand * cross(chord, from_start) <= S(0.0F) &&
                          along > from;
  return {select(valid, along, never), point};
}

// What overflows or is not a number is no place to be led from.
template <Number S>
[[nodiscard]] constexpr mask_t<S> on_the_map(Vec2<S> const& position) noexcept {
  return length(position) < S(far_away);
}

}  // namespace detail

/// Pure pursuit (Coulter 1992, CMU-RI-TR-92-01): toward a point that moves along the path and keeps `look_ahead` from
/// the machine. The point never goes back, and never leaves the path to get farther: so where the path crosses itself
/// or comes near itself it cannot jump to another branch. When the machine is farther from it, it waits; when the
/// machine has overtaken it on its piece, it starts from there. At the path's end it stays.
///
/// The more look-ahead the calmer, and the more of the corners is cut: on a circle of radius R a machine whose nose is
/// always on the course runs on one of root(R^2 - look_ahead^2), one that is steered by `pursuit_curvature` toward
/// `target` on the circle itself.
///
/// No opinion past the path's end, that is with the point at the end and the end the nearest point of the last piece;
/// and beyond far_away. The path is in the frame of the percept, so that has to be one that stays put. The goal and
/// discs are not looked at.
template <int N>
struct along_path {
  Path<N> path;  ///< in the frame of the percept
  Parameter look_ahead = 0.5F;  ///< metres, over 0

  template <Number S>
  using Memory = PathProgress<S>;  ///< of the point that is pursued

  /// Toward the point that is pursued, with confidence 1. Moves the point on.
  template <Number S, int Discs>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, Discs> const& percept, Memory<S>& memory) const noexcept {
    Vec2<S> const& position = percept.pose.position;
    mask_t<S> const some = detail::on_the_map(position);
    Memory<S> next = memory;
    move_on(path, position, false, next);
    Vec2<S> const point = lead(position, next);
    assign_where(some, memory, next);
    mask_t<S> const ended = memory.pieces >= S(static_cast<Parameter>(N)) &&
                            detail::beside(path.pieces.back(), position).along >= S(1.0F);
    return course_along(Vec2<S>(select(some && !ended, Vec2<S>(point - position), zero2<S>())), S(1.0F));
  }

  /// The point that is pursued; metres.
  template <Number S>
  [[nodiscard]] constexpr Vec2<S> target(Memory<S> const& memory) const noexcept {
    Vec2<S> point = detail::point_at(path.pieces.front(), S(0.0F));
    for (int k = 0; k < N; ++k) {
      S const share = memory.pieces - S(static_cast<Parameter>(k));
      Vec2<S> const here = detail::point_at(path.pieces[static_cast<std::size_t>(k)], clamp(share, S(0.0F), S(1.0F)));
      point = select(share > S(0.0F), here, point);
    }
    return point;
  }

 private:
  // Moves the point along the path, out of the circle round the machine.
  template <Number S>
  [[nodiscard]] constexpr Vec2<S> lead(Vec2<S> const& position, PathProgress<S>& progress) const noexcept {
    S const radius = S(look_ahead);
    Vec2<S> point = detail::on<S>(path.pieces.back().end);
    S pieces = S(static_cast<Parameter>(N));
    mask_t<S> found{};
    for (int k = 0; k < N; ++k) {
      PathPiece const& piece = path.pieces[static_cast<std::size_t>(k)];
      S const before = S(static_cast<Parameter>(k));
      S const from = clamp(S(progress.pieces - before), S(0.0F), S(1.0F));
      Vec2<S> const first = detail::point_at(piece, from);
      mask_t<S> const beyond = length(Vec2<S>(first - position)) >= radius;
      detail::WayOut<S> const out = detail::way_out(piece, from, position, radius);
      mask_t<S> const ahead = !found && progress.pieces < S(static_cast<Parameter>(k + 1));
      mask_t<S> const here = ahead && (beyond || out.along <= S(1.0F));
      point = select(here, Vec2<S>(select(beyond, first, out.point)), point);
      pieces = select(here, S(before + select(beyond, from, out.along)), pieces);
      found = found || here;
    }
    progress.pieces = pieces;
    return point;
  }
};

/// `along_path{path}` finds its number of pieces by itself.
template <int N>
along_path(Path<N>) -> along_path<N>;
/// So does `along_path{path, look_ahead}`.
template <int N>
along_path(Path<N>, Parameter) -> along_path<N>;

/// A vector field round the path (Nelson, Barber, McLain and Beard 2007, IEEE Trans. Robotics 23(3)). At d metres to
/// the left of the line or circle that the present piece is part of, the course leans from its tangent to the right by
/// the angle c with
///
///     tan c = gain d / root(1 + (gain d / steepest)^2).
///
/// The source has c = chi (2 / pi) atan(gain d) for a line, chi being the angle far off, and c = atan(gain d) for a
/// circle. With `steepest` beyond all bounds this is the source's form to the letter, for a circle, and for a line with
/// chi = pi/2. With a finite one it is another curve between the same ends: slope `gain` on the path, and far off the
/// angle whose tangent is `steepest`. In either form d and the sine of c have the same sign, so d^2 / 2 falls along the
/// way: the source's Lyapunov function.
///
/// A piece is left for the next one past its end, or where the next one's first half is nearer; the machine never turns
/// back to one that it has left, and cannot jump to another branch. There is no look-ahead, so a corner is turned at
/// once. No opinion at an arc's very centre, once the end has been passed, and beyond far_away. The path is in the
/// frame of the percept, so that has to be one that stays put. The goal and discs are not looked at.
template <int N>
struct onto_path {
  Path<N> path;  ///< in the frame of the percept
  Parameter gain = 3.0F;  ///< one over metres: slope of the course to the path, for each metre off
  Parameter steepest = 4.0F;  ///< slope of the course to the path far off

  /// Which piece the machine is on.
  template <Number S>
  using Memory = PathProgress<S>;

  /// Along the path and leaning back to it, with confidence 1. Moves the progress on.
  template <Number S, int Discs>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, Discs> const& percept, Memory<S>& memory) const noexcept {
    Vec2<S> const& position = percept.pose.position;
    mask_t<S> const some = detail::on_the_map(position);
    Memory<S> next = memory;
    move_on(path, position, true, next);
    assign_where(some, memory, next);
    Vec2<S> way = zero2<S>();
    for (int k = 0; k < N; ++k) {
      mask_t<S> const current = memory.pieces >= S(static_cast<Parameter>(k)) &&
                                memory.pieces < S(static_cast<Parameter>(k + 1));
      BesidePiece<S> const here = detail::beside(path.pieces[static_cast<std::size_t>(k)], position);
      S const slope = S(gain) * here.off;
      S const lean = slope / root(S(S(1.0F) + squared(S(slope / S(steepest)))));
      way = select(current, Vec2<S>(here.tangent - scaled(left_of(here.tangent), lean)), way);
    }
    return course_along(Vec2<S>(select(some, way, zero2<S>())), S(1.0F));
  }
};

/// `onto_path{path}` finds its number of pieces by itself.
template <int N>
onto_path(Path<N>) -> onto_path<N>;
/// So does `onto_path{path, gain}`.
template <int N>
onto_path(Path<N>, Parameter) -> onto_path<N>;
/// So does `onto_path{path, gain, steepest}`.
template <int N>
onto_path(Path<N>, Parameter, Parameter) -> onto_path<N>;

}  // namespace wend::inline v0
