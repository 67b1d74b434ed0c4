// wend/sensing/ring.hpp - from a row of ranges to the discs that policies know. The rim: it decides with plain
// comparisons, on float or double and on no guest.
#pragma once

#include <array>
#include <cstddef>
#include <limits>
#include <span>
#include <type_traits>

#include "wend/angle.hpp"
#include "wend/disc.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"
#include "wend/sensing/cover.hpp"
#include "wend/sensing/grouping.hpp"
#include "wend/sensing/reading.hpp"

namespace wend::inline v0 {

/// Directions of beams at even spacing: radians, counter-clockwise from the sensor's x axis. A spacing of
/// 2 pi / Beams makes a closed ring; a negative one is a ring that turns clockwise.
template <int Beams>
[[nodiscard]] consteval std::array<Bearing, static_cast<std::size_t>(Beams)> even_bearings(double first,
                                                                                           double spacing) noexcept {
  std::array<Bearing, static_cast<std::size_t>(Beams)> directions{};
  for (int i = 0; i < Beams; ++i) {
    directions[static_cast<std::size_t>(i)] = bearing(first + i * spacing);
  }
  return directions;
}

/// Where a sensor sits on the robot.
struct Mounting {
  Parameter x = 0.0F;  ///< metres, forward of the robot's origin
  Parameter y = 0.0F;  ///< metres, to the left of it
  Bearing turn{};      ///< the sensor's x axis in the robot's frame
};

/// A ring, or a fan, of range beams: a scanner, or a few single rangers round the body. It lives in flash.
///
/// Neighbouring echoes are grouped; a group whose arc can carry a circle becomes that circle, another one a disc over
/// its echoes, a long one such as a wall a chain of discs. Whatever the readings are, every disc is finite and no disc
/// reaches nearer to the robot's origin than half the distance of the nearest echo behind it.
/// A row of n readings costs about n steps, and some ten more for each reading in a group that may be a circle.
template <int Beams>
struct Ring {
  static_assert(Beams > 0, "wend: Ring<Beams> needs one beam at least; write Ring<8>");

  std::array<Bearing, static_cast<std::size_t>(Beams)> directions;  ///< unit, in the sensor's frame, in order round it
  Parameter min_range;  ///< metres, positive: what is nearer cannot be measured
  Parameter max_range;  ///< metres: what is farther is no echo; at most far_away
  Parameter noise;  ///< metres: standard deviation of one range
  Mounting mounting{};  ///< where the ring sits; at the robot's origin unless given

  /// The reading this ranger gives when nothing came back, bit for bit: an infinity, 0, -1, 65.535 or a not-a-number.
  Parameter no_echo = std::numeric_limits<Parameter>::infinity();

  Parameter widest_gap = 0.3F;  ///< metres: echoes farther apart are two things, since a machine may pass between
  Parameter widest_disc = 0.4F;  ///< metres: what is longer and no circle is cut into pieces no longer than this
  Parameter largest_circle = 1.0F;  ///< metres, radius: what is rounder than this is taken for a wall
  Parameter kept_clear = 0.25F;  ///< metres round the robot's origin that no disc reaches into unless an echo does

  /// Adds to `discs`, in the robot's own frame, what one row of readings shows, and returns how many readings were
  /// what. Ranges in metres, one a beam, in the order of `directions`. Not-a-number, infinities, zeros, negative and
  /// out-of-range readings show nothing and are counted; up to two broken ones between two echoes of one thing are
  /// bridged, a missing echo never is. With more discs than fit the nearest are kept (`discs.dropped()`). A mounting
  /// or a direction that is not a number makes `discs.rejected()` true as soon as there is an echo.
  template <PlainNumber S, int Capacity>
  RingCount discs(std::span<std::type_identity_t<S> const, static_cast<std::size_t>(Beams)> ranges,
                  DiscSet<S, Capacity>& discs) const noexcept {
    Vec2<S> const turn{S(mounting.turn.x), S(mounting.turn.y)};
    Pose<S> const sensor{Vec2<S>(S(mounting.x), S(mounting.y)), turn};
    S const sigma = clamp(S(noise), S(0.0F), S(far_away));
    detail::Scan<S, Beams> const scan{ranges,
                                      directions,
                                      detail::Limits<S>::from(min_range, max_range, no_echo),
                                      sigma,
                                      clamp(S(widest_gap), S(0.0F), S(far_away)),
                                      into_frame(sensor, zero2<S>())};
    detail::DiscLimits<S> const limits{clamp(S(widest_disc), S(0.0F), S(far_away)),
                                       clamp(S(largest_circle), S(0.0F), S(far_away)),
                                       clamp(S(kept_clear), S(0.0F), S(far_away))};
    auto const add = [&](Disc<S> const& found, detail::Group piece) noexcept {
      Disc<S> const disc = detail::kept_off(found, scan, piece, limits.kept_clear);
      discs.add({out_of_frame(sensor, disc.centre), disc.radius});
    };
    return detail::for_each_group(scan, [&](detail::Group group) noexcept {
      CircleFit<S> const circle = detail::circle_of(scan, group, limits);
      if (circle.converged) {
        add(circle.disc, group);
        return;
      }
      detail::for_each_piece(scan, group, limits.widest, [&](detail::Group piece) noexcept {
        add(piece.first == piece.last ? detail::disc_behind(scan, piece.first, limits.widest)
                                      : detail::disc_over(scan, piece),
            piece);
      });
    });
  }
};

}  // namespace wend::inline v0
