// wend/sensing/tracker.hpp - which disc is which from tick to tick, and so how fast each one moves. The rim: plain
// comparisons, on float or double and on no guest.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>

#include "wend/disc.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"
#include "wend/sensing/constant_velocity.hpp"

namespace wend::inline v0 {

/// What is known of one disc over time. A plain struct: it can be logged.
template <PlainNumber S>
struct Track {
  Disc<S> disc{};                   ///< in the frame of the poses
  Vec2<S> velocity{S(0.0F), S(0.0F)};  ///< metres a second over the ground, along the axes of that frame
  Spread<S> spread{};  ///< how sure position and velocity are
  std::uint8_t hits = 0;    ///< ticks on which it was seen, up to 255; 0: no track
  std::uint8_t misses = 0;  ///< ticks since it was seen
};

/// Gives the discs of a tick their velocities. Each disc is predicted from the tick before and takes the nearest disc
/// seen within its gate (nearest-neighbour association, for example Bar-Shalom and Fortmann 1988,
/// Tracking and Data Association), and ConstantVelocity weighs the two. Tracks live in the frame of the poses, so the
/// machine's own motion is no motion of theirs; a pose that jumps is, for as long as the tracks take to settle.
///
/// What is seen is handed on where and as large as it was seen: tracking adds velocities, and nothing else. A disc that
/// is not seen for a few ticks is added where it should be by now. Of a wall, which comes as a chain of discs cut anew
/// every tick, pieces may seem to slide along it as the machine passes.
template <int Tracks = 16>
struct Tracker {
  static_assert(Tracks > 0, "wend: Tracker<Tracks> needs room for one track at least; write Tracker<16>");

  ConstantVelocity motion{};  ///< how a track is predicted, and weighed against what is seen
  Parameter gate = 16.0F;  ///< squared standard deviations: all but 3 in 10000 true pairs (chi-square, 2 dimensions)
  Parameter certain = 4.0F;  ///< squared standard deviations that a velocity must exceed to be told
  Parameter least_speed = 0.1F;  ///< metres a second that it must exceed as well
  Parameter max_speed = 3.0F;  ///< metres a second: a track that is faster is a mistake, and is dropped
  Parameter radius_gain = 0.3F;  ///< in [0, 1]: how far a new radius is believed
  Parameter longest_step = 0.5F;  ///< seconds: after a longer one, nothing is known of how anything moves
  int confirmed_after = 3;  ///< ticks on which a disc must have been seen before its velocity is told
  int dropped_after = 5;  ///< ticks without being seen after which it is forgotten, up to 250

  /// What is known between ticks.
  template <PlainNumber S>
  struct Memory {
    /// Those with no hits are free places.
    std::array<Track<S>, static_cast<std::size_t>(Tracks)> tracks{};
  };

  /// `discs` come as they were seen, in the robot's own frame, and go with velocities; `pose` is the robot's. Without a
  /// sound pose, or with a time step that is none, all tracks are forgotten and every disc stands still. With more
  /// discs than tracks the nearest are tracked; the others stand still. Costs Tracks * discs distances for each pair
  /// found.
  template <PlainNumber S, int Capacity>
  void operator()(Pose<S> const& pose, S dt, MovingDiscSet<S, Capacity>& discs, Memory<S>& memory) const noexcept {
    if (!sound(pose) || !(dt > S(0.0F) && dt <= S(longest_step))) {
      memory = {};
    }
    int const seen = discs.size();
    std::array<Disc<S>, static_cast<std::size_t>(Capacity)> places;
    for (int i = 0; i < seen; ++i) {
      places[index(i)] = {out_of_frame(pose, discs[i].centre), discs[i].radius};
    }
    predict(dt, memory);
    std::array<bool, static_cast<std::size_t>(Capacity)> known{};
    Found const found = pairs(places, seen, known, memory);
    for (int t = 0; t < Tracks; ++t) {
      int const i = found[index(t)];
      if (i >= 0) {
        Track<S>& track = memory.tracks[index(t)];
        heed(places[index(i)], track);
        if (tells(track)) {
          discs.set_velocity(i, turned_into(pose.heading, track.velocity));
        }
      }
    }
    for (Track<S>& track : memory.tracks) {
      if (track.misses > dropped_after) {
        track = {};
      }
      if (track.hits > 0 && track.misses > 0 && track.hits >= confirmed_after) {
        Vec2<S> const velocity = tells(track) ? track.velocity : zero2<S>();
        discs.add({into_frame(pose, track.disc.centre), track.disc.radius}, turned_into(pose.heading, velocity));
      }
    }
    if (sound(pose)) {
      for (int i = 0; i < seen; ++i) {
        if (!known[index(i)] && length(places[index(i)].centre) < S(far_away)) {
          start(places[index(i)], pose.position, memory);
        }
      }
    }
  }

  /// Whether a track has been seen often enough, and moves surely enough, for its velocity to be told.
  template <PlainNumber S>
  [[nodiscard]] constexpr bool tells(Track<S> const& track) const noexcept {
    S const speed = dot(track.velocity, track.velocity);
    return track.hits >= confirmed_after && speed > S(certain) * track.spread.velocity &&
           speed > squared(S(least_speed));
  }

 private:
  // For each track the disc that it is seen as, or -1.
  using Found = std::array<int, static_cast<std::size_t>(Tracks)>;

  [[nodiscard]] static constexpr std::size_t index(int i) noexcept { return static_cast<std::size_t>(i); }

  // Everything moves on and counts as not seen; what cannot be is forgotten.
  template <PlainNumber S>
  void predict(S dt, Memory<S>& memory) const noexcept {
    for (Track<S>& track : memory.tracks) {
      if (track.hits == 0) {
        continue;
      }
      track.disc.centre += scaled(track.velocity, dt);
      track.spread = motion.predicted(track.spread, dt);
      ++track.misses;  // taken back when it is seen
      bool const sane = finite(track.disc.centre) && finite(track.disc.radius) && finite(track.spread.position) &&
                        finite(track.spread.velocity) && length(track.velocity) <= S(max_speed);
      if (!sane) {
        track = {};
      }
    }
  }

  // Which disc each track is seen as: of all tracks and discs that are left, the two that lie nearest within the
  // track's gate, again and again; then any two tracks exchange their discs if that brings them nearer together, by the
  // sum of squares, as when two cross in one place.
  template <PlainNumber S, std::size_t Size>
  [[nodiscard]] Found pairs(std::array<Disc<S>, Size> const& places, int seen, std::array<bool, Size>& known,
                            Memory<S> const& memory) const noexcept {
    auto const off = [&](int t, int i) noexcept {
      Vec2<S> const between = places[index(i)].centre - memory.tracks[index(t)].disc.centre;
      return dot(between, between);
    };
    auto const gate_of = [&](int t) noexcept {
      return S(gate) * (memory.tracks[index(t)].spread.position + squared(S(motion.noise)));
    };
    Found found;
    found.fill(-1);
    for (int round = 0; round < Tracks && round < seen; ++round) {
      int track = -1;
      int disc = -1;
      S nearest = squared(S(far_away));
      for (int t = 0; t < Tracks; ++t) {
        if (memory.tracks[index(t)].hits == 0 || found[index(t)] >= 0) {
          continue;
        }
        S const widest = gate_of(t);
        for (int i = 0; i < seen; ++i) {
          S const here = known[index(i)] ? squared(S(far_away)) : off(t, i);
          if (here <= widest && here < nearest) {
            nearest = here;
            track = t;
            disc = i;
          }
        }
      }
      if (track < 0) {
        break;
      }
      found[index(track)] = disc;
      known[index(disc)] = true;
    }
    for (int t = 0; t < Tracks; ++t) {
      for (int u = t + 1; u < Tracks; ++u) {
        int const i = found[index(t)];
        int const k = found[index(u)];
        if (i >= 0 && k >= 0 && off(t, k) + off(u, i) < off(t, i) + off(u, k) && off(t, k) <= gate_of(t) &&
            off(u, i) <= gate_of(u)) {
          found[index(t)] = k;
          found[index(u)] = i;
        }
      }
    }
    return found;
  }

  template <PlainNumber S>
  void heed(Disc<S> const& place, Track<S>& track) const noexcept {
    // A disc that is suddenly larger is seen as another shape; its centre, which is a guess from what faces the sensor,
    // has moved with it by about as much, and that is no motion.
    Gains<S> const gains = motion.gains(track.spread, squared(S(place.radius - track.disc.radius)));
    Vec2<S> const off = place.centre - track.disc.centre;
    track.disc.centre += scaled(off, gains.alpha);
    track.velocity += scaled(off, gains.rate);
    track.disc.radius += clamp(S(radius_gain), S(0.0F), S(1.0F)) * (place.radius - track.disc.radius);
    track.spread = motion.updated(track.spread, gains);
    track.hits = track.hits < 255 ? static_cast<std::uint8_t>(track.hits + 1) : track.hits;
    track.misses = 0;
  }

  // A track for a disc that has none: in a free place, or in that of the farthest one if that is farther than it.
  template <PlainNumber S>
  void start(Disc<S> const& place, Vec2<S> const& viewpoint, Memory<S>& memory) const noexcept {
    S farthest = gap(place, viewpoint);
    Track<S>* chosen = nullptr;
    for (Track<S>& track : memory.tracks) {
      if (track.hits == 0) {
        chosen = &track;
        break;
      }
      S const here = gap(track.disc, viewpoint);
      if (here > farthest) {
        farthest = here;
        chosen = &track;
      }
    }
    if (chosen != nullptr) {
      *chosen = {place, zero2<S>(), motion.template first<S>(), 1, 0};
    }
  }
};

}  // namespace wend::inline v0
