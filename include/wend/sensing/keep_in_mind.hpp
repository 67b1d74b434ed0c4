// wend/sensing/keep_in_mind.hpp - what was seen and is out of view now does not cease to be there. The rim: plain
// comparisons, on float or double and on no guest.
#pragma once

#include <array>
#include <cstddef>

#include "wend/disc.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// A disc that is remembered. A plain struct: it can be logged.
template <PlainNumber S>
struct Remembered {
  Disc<S> disc{};                      ///< where it was last seen and has moved to since, in the frame of the poses
  Vec2<S> velocity{S(0.0F), S(0.0F)};  ///< metres a second over the ground, in that frame
  S age{S(-1.0F)};                     ///< seconds since it was seen; negative: nothing is remembered here
};

/// Keeps discs that have left the field of view for some seconds: beside a fan that looks ahead, behind something else,
/// or too near to be measured. A disc kept moves on as it did, and grows, since the longer ago it was seen the less is
/// known of it. One that would be in view and is not seen is gone, and is forgotten. Discs are taken to be seen from
/// the robot's origin.
template <int Kept = 16>
struct KeepInMind {
  static_assert(Kept > 0, "wend: KeepInMind<Kept> needs room for one disc at least; write KeepInMind<16>");

  Parameter seconds = 3.0F;  ///< for how long
  Parameter growth = 0.05F;  ///< metres a second by which the radius grows
  Parameter half_view = -1.0F;  ///< cosine of half the field of view, about the nose: -1 all round, 0 half of all
  Parameter nearest = 0.05F;  ///< metres: what has its edge nearer than this cannot be seen
  Parameter reach = 4.0F;  ///< metres: what has its edge farther than this cannot be seen

  /// What is kept between ticks.
  template <PlainNumber S>
  struct Memory {
    /// Those with a negative age are free places.
    std::array<Remembered<S>, static_cast<std::size_t>(Kept)> discs{};
  };

  /// `discs` come as they were seen, in the robot's own frame, and go with those added that are out of view. Without a
  /// sound pose or a time step nothing is added, and nothing learned or forgotten. When more is to be kept than fits,
  /// the nearest stay.
  template <PlainNumber S, int Capacity>
  void operator()(Pose<S> const& pose, S dt, MovingDiscSet<S, Capacity>& discs, Memory<S>& memory) const noexcept {
    if (!sound(pose) || !(dt > S(0.0F) && dt < S(far_away))) {
      return;
    }
    // What is seen is looked at before anything is added to it: a disc kept hides nothing.
    MovingDiscSet<S, Capacity> const seen = discs;
    for (Remembered<S>& one : memory.discs) {
      if (!(one.age >= S(0.0F))) {
        continue;
      }
      one.age += dt;
      one.disc.centre += scaled(one.velocity, dt);
      Disc<S> const here{into_frame(pose, one.disc.centre), one.disc.radius};
      bool const sane = length(here.centre) < S(far_away) && here.radius >= S(0.0F) && here.radius < S(far_away);
      if (!sane || !(one.age <= S(seconds)) || in_view(here, seen)) {
        one = {};
        continue;
      }
      discs.add({here.centre, here.radius + greatest(S(growth), S(0.0F)) * one.age},
                turned_into(pose.heading, one.velocity));
    }
    for (int i = 0; i < seen.size(); ++i) {
      if (length(seen[i].centre) < S(far_away)) {
        keep({{out_of_frame(pose, seen[i].centre), seen[i].radius},
              turned_out_of(pose.heading, seen.velocity(i)),
              S(0.0F)},
             pose.position, memory);
      }
    }
  }

 private:
  // Whether a disc would be seen if it were there: its middle in the field of view, and nothing before it.
  template <PlainNumber S, int Capacity>
  [[nodiscard]] bool in_view(Disc<S> const& disc, MovingDiscSet<S, Capacity> const& seen) const noexcept {
    Polar<S> const way = polar(disc.centre);
    S const edge = way.length - disc.radius;
    if (!(edge >= S(nearest) && edge <= S(reach) && way.direction.x() >= S(half_view))) {
      return false;
    }
    for (Disc<S> const& other : seen) {
      bool const before = length(other.centre) < edge;
      if (before && ray_to_disc(zero2<S>(), way.direction, other) < edge) {
        return false;
      }
    }
    return true;
  }

  template <PlainNumber S>
  void keep(Remembered<S> const& one, Vec2<S> const& viewpoint, Memory<S>& memory) const noexcept {
    S farthest = gap(one.disc, viewpoint);
    Remembered<S>* chosen = nullptr;
    for (Remembered<S>& place : memory.discs) {
      if (!(place.age >= S(0.0F))) {
        chosen = &place;
        break;
      }
      S const here = gap(place.disc, viewpoint);
      if (here > farthest) {
        farthest = here;
        chosen = &place;
      }
    }
    if (chosen != nullptr) {
      *chosen = one;
    }
  }
};

}  // namespace wend::inline v0
