// wend/fields/path.hpp - a path of straight pieces and arcs, and where on it a machine is.
#pragma once

#include <array>
#include <cstddef>

#include "wend/field.hpp"
#include "wend/promise.hpp"

namespace wend::inline v0 {

/// A point of a path that is a constant; metres.
struct PathPoint {
  Parameter x = 0.0F;  ///< forward, or along the x axis of the frame in use
  Parameter y = 0.0F;  ///< to the left, or along its y axis
};

/// A straight piece, or an arc of half a turn at most. Made by `straight` and `arc`.
struct PathPiece {
  PathPoint start{};  ///< metres
  PathPoint end{};  ///< metres
  PathPoint centre{};  ///< of an arc
  Parameter curvature = 0.0F;  ///< one over metres; positive where it bends to the left, 0 where it is straight
};

namespace detail {

[[nodiscard]] consteval double square_root(double x) noexcept {  // Newton, for constants
  double y = x > 1.0 ? x : 1.0;
  for (int i = 0; i < 100; ++i) {
    y = 0.5 * (y + x / y);
  }
  return x > 0.0 ? y : 0.0;
}

[[nodiscard]] consteval double chord_squared(PathPoint const& a, PathPoint const& b) noexcept {
  double const x = static_cast<double>(b.x) - static_cast<double>(a.x);
  double const y = static_cast<double>(b.y) - static_cast<double>(a.y);
  return x * x + y * y;
}

// Called only by a constant that must not be one.
inline void wend_a_piece_of_a_path_needs_two_different_ends() noexcept {}
inline void wend_an_arc_needs_a_curvature_other_than_0_and_of_2_over_its_chord_at_most() noexcept {}
inline void wend_each_piece_of_a_path_has_to_start_where_the_last_one_ends() noexcept {}

}  // namespace detail

/// A straight piece; its ends must be different. Paths are constants: the compiler works them out, in double.
[[nodiscard]] consteval PathPiece straight(PathPoint start, PathPoint end) noexcept {
  detail::promise(detail::chord_squared(start, end) > 0.0, detail::wend_a_piece_of_a_path_needs_two_different_ends);
  return {start, end, {}, 0.0F};
}

/// An arc from its ends and its signed curvature (one over its radius in metres; positive bends to the left): the one
/// of half a turn at most. A longer one is made of two. For half a turn |curvature| is 2 over the chord.
[[nodiscard]] consteval PathPiece arc(PathPoint start, PathPoint end, Parameter curvature) noexcept {
  double const chord_squared = detail::chord_squared(start, end);
  double const k = static_cast<double>(curvature);
  double const sine_squared = 0.25 * k * k * chord_squared;  // of half the angle that it turns through
  // Half a turn may be off by the rounding of three Parameters.
  detail::promise(k * k > 0.0 && sine_squared < 1.0 + 1.0e-6,
                  detail::wend_an_arc_needs_a_curvature_other_than_0_and_of_2_over_its_chord_at_most);
  detail::promise(chord_squared > 0.0, detail::wend_a_piece_of_a_path_needs_two_different_ends);
  double const x = static_cast<double>(end.x) - static_cast<double>(start.x);
  double const y = static_cast<double>(end.y) - static_cast<double>(start.y);
  // From the middle of the chord to the centre, in chords, to the left.
  double const aside = detail::square_root((1.0 - sine_squared) / chord_squared) / k;
  return {start,
          end,
          {static_cast<Parameter>(static_cast<double>(start.x) + 0.5 * x - aside * y),
           static_cast<Parameter>(static_cast<double>(start.y) + 0.5 * y + aside * x)},
          curvature};
}

/// A path of N pieces. Make it by `path_of`, which checks that they hang together.
template <int N>
struct Path {
  static_assert(N >= 1, "wend: a path needs one piece at least; write path_of(straight({0.0F, 0.0F}, {1.0F, 0.0F}))");
  /// In the order they are driven.
  std::array<PathPiece, static_cast<std::size_t>(N)> pieces{};
};

/// path_of(straight(a, b), arc(b, c, 2.0F), ...): each starts where the last one ends, to a millimetre.
template <typename... Pieces>
[[nodiscard]] consteval auto path_of(Pieces const&... pieces) noexcept {
  constexpr int n = sizeof...(Pieces);
  Path<n> path{{pieces...}};
  for (std::size_t i = 1; i < sizeof...(Pieces); ++i) {
    detail::promise(detail::chord_squared(path.pieces[i - 1].end, path.pieces[i].start) < 1.0e-6,
                    detail::wend_each_piece_of_a_path_has_to_start_where_the_last_one_ends);
  }
  return path;
}

/// Where a machine is beside a piece.
template <Number S>
struct BesidePiece {
  Vec2<S> point;    ///< the nearest one on the piece
  Vec2<S> tangent;  ///< unit, along the line or circle that the piece is part of; (0, 0) at an arc's centre
  S off;            ///< metres to the left of that line or circle
  S along;  ///< in [0, 1]: the nearest point's share of the chord, which for an arc of half a turn grows all the way
};

namespace detail {

template <Number S>
[[nodiscard]] constexpr Vec2<S> on(PathPoint const& p) noexcept {
  return {S(p.x), S(p.y)};
}

template <Number S>
[[nodiscard]] constexpr BesidePiece<S> beside(PathPiece const& piece, Vec2<S> const& position) noexcept {
  Vec2<S> const start = on<S>(piece.start);
  Vec2<S> const end = on<S>(piece.end);
  Vec2<S> const chord = end - start;
  Vec2<S> const from_start = position - start;
  S const per_length = S(1.0F) / dot(chord, chord);
  S const share = dot(from_start, chord) * per_length;
  if (piece.curvature == 0.0F) {
    Vec2<S> const tangent = polar(chord).direction;
    S const along = clamp(share, S(0.0F), S(1.0F));
    return {start + scaled(chord, along), tangent, cross(tangent, from_start), along};
  }
  S const hand = S(piece.curvature < 0.0F ? -1.0F : 1.0F);
  Vec2<S> const centre = on<S>(piece.centre);
  Polar<S> const out = polar(Vec2<S>(position - centre));
  S const radius = length(Vec2<S>(start - centre));
  Vec2<S> const on_circle = centre + scaled(out.direction, radius);
  S const on_chord = dot(Vec2<S>(on_circle - start), chord) * per_length;
  // The arc lies to the right of its chord when it bends to the left. Elsewhere the nearer end is the nearest point.
  mask_t<S> const on_arc = hand * cross(chord, Vec2<S>(on_circle - start)) <= S(0.0F) && on_chord >= S(0.0F) &&
                           on_chord <= S(1.0F);
  mask_t<S> const at_end = share >= S(0.5F);
  return {select(on_arc, on_circle, select(at_end, end, start)), scaled(left_of(out.direction), hand),
          hand * (radius - out.length), select(on_arc, on_chord, select(at_end, S(1.0F), S(0.0F)))};
}

// The point of a piece at a share of its chord in [0, 1].
template <Number S>
[[nodiscard]] constexpr Vec2<S> point_at(PathPiece const& piece, S const& along) noexcept {
  Vec2<S> const start = on<S>(piece.start);
  Vec2<S> const chord = on<S>(piece.end) - start;
  if (piece.curvature == 0.0F) {
    return start + scaled(chord, along);
  }
  S const hand = S(piece.curvature < 0.0F ? -1.0F : 1.0F);
  Vec2<S> const centre = on<S>(piece.centre);
  Polar<S> const way = polar(chord);
  S const forward = (along - S(0.5F)) * way.length;
  Vec2<S> const to_start = start - centre;
  S const rest = dot(to_start, to_start) - squared(forward);
  S const aside = root(select(rest > S(0.0F), rest, S(0.0F)));
  return centre + scaled(way.direction, forward) - scaled(left_of(way.direction), S(hand * aside));
}

}  // namespace detail

/// How far along a path something is: in pieces, the last of them by its share of the chord.
template <Number S>
struct PathProgress {
  S pieces{S(0.0F)};  ///< in [0, N]: 2.25 is a quarter of the chord into the third piece
};

/// Moves the progress on to the point nearest to a machine. It never goes back, and never looks beyond the next piece:
/// so where the path crosses itself, or comes near itself, it cannot jump to another branch. A piece is left when the
/// nearest point on it is its end; and, where corners may be cut, when the first half of the next piece is nearer. N
/// once the end of the path has been passed.
template <Number S, int N>
constexpr void move_on(Path<N> const& path, Vec2<S> const& position, bool corners_may_be_cut,
                       PathProgress<S>& progress) noexcept {
  S reached = clamp(progress.pieces, S(0.0F), S(static_cast<Parameter>(N)));
  for (int k = 0; k < N; ++k) {
    S const before = S(static_cast<Parameter>(k));
    S const after = S(static_cast<Parameter>(k + 1));
    std::size_t const i = static_cast<std::size_t>(k);
    BesidePiece<S> const here = detail::beside(path.pieces[i], position);
    mask_t<S> done = here.along >= S(1.0F);
    if (corners_may_be_cut && k + 1 < N) {
      BesidePiece<S> const next = detail::beside(path.pieces[i + 1], position);
      mask_t<S> const nearer = length(Vec2<S>(next.point - position)) < length(Vec2<S>(here.point - position));
      done = done || (nearer && next.along < S(0.5F));
    }
    S const further = greatest(S(before + here.along), reached);
    mask_t<S> const current = reached >= before && reached < after;
    reached = select(current, select(done, after, further), reached);
  }
  progress.pieces = reached;
}

}  // namespace wend::inline v0
