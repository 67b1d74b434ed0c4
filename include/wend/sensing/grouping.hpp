// wend/sensing/grouping.hpp - which neighbouring echoes of a ring belong together.
#pragma once

#include <array>
#include <cstddef>
#include <numbers>
#include <span>

#include "wend/angle.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"
#include "wend/sensing/reading.hpp"

namespace wend::inline v0 {

namespace detail {

// Beams first..last of one thing, both of them echoes; broken readings may lie between. `last` may run past the last
// beam, into the first ones again, on a ring that is closed.
struct Group {
  int first;
  int last;
};

// One row of readings with the directions they were taken in. Points are worked out anew whenever they are asked for,
// in the sensor's frame: two products are cheaper than the memory to keep them.
template <PlainNumber S, int Beams>
struct Scan {
  std::span<S const, static_cast<std::size_t>(Beams)> ranges;
  std::array<Bearing, static_cast<std::size_t>(Beams)> const& directions;
  Limits<S> limits;
  S noise;        // metres, standard deviation of one range
  S widest_gap;   // metres: echoes farther apart are never one thing
  Vec2<S> robot;  // the robot's own origin, in the sensor's frame

  [[nodiscard]] static constexpr std::size_t beam(int i) noexcept {
    return static_cast<std::size_t>(i < Beams ? i : i - Beams);
  }
  [[nodiscard]] Vec2<S> direction(int i) const noexcept {
    Bearing const& b = directions[beam(i)];
    return {S(b.x), S(b.y)};
  }
  [[nodiscard]] S range(int i) const noexcept { return ranges[beam(i)]; }
  [[nodiscard]] Vec2<S> point(int i) const noexcept { return scaled(direction(i), range(i)); }
  [[nodiscard]] bool is_echo(int i) const noexcept { return limits(range(i)) == Reading::echo; }

  template <typename Visit>
  void each_point(Group group, Visit&& visit) const noexcept {
    for (int i = group.first; i <= group.last; ++i) {
      if (is_echo(i)) {
        visit(point(i));
      }
    }
  }

  // Whether two echoes may belong to one surface: the adaptive breakpoint of Borges and Aldon (2004, J. Intell. Robot.
  // Syst. 40:267-297, from memory) with its 3 sigma, for a surface met at 10 degrees at least. Taken from the nearer
  // echo, so that it does not matter which way round the beams run. At wide beam spacings that rule admits any jump;
  // hence `widest_gap`.
  [[nodiscard]] bool linked(int i, int j) const noexcept {
    constexpr Bearing grazing = bearing(10.0 * std::numbers::pi / 180.0);
    Vec2<S> const a = direction(i);
    Vec2<S> const b = direction(j);
    S const sine = magnitude(cross(a, b));
    S const sine_left = S(grazing.y) * dot(a, b) - S(grazing.x) * sine;
    S allowed = widest_gap;
    if (sine_left > S(0.0F)) {
      S const nearer = least(range(i), range(j));
      allowed = least(S(nearer * sine / sine_left + S(3.0F) * noise), widest_gap);
    }
    Vec2<S> const step = scaled(b, range(j)) - scaled(a, range(i));
    return dot(step, step) <= squared(allowed);
  }

  // Whether the first beam is the last one's neighbour: the step between them is no longer than the steps at the ends
  // of the row (half as long again, for a ring that is not quite even) and goes on round the same way.
  [[nodiscard]] bool closed() const noexcept {
    if constexpr (Beams < 3) {
      return false;
    } else {
      Vec2<S> const first = direction(0);
      Vec2<S> const last = direction(Beams - 1);
      auto const square = [](Vec2<S> const& v) noexcept { return dot(v, v); };
      S const step = greatest(square(direction(1) - first), square(last - direction(Beams - 2)));
      return square(first - last) <= S(2.25F) * step && cross(last, first) * cross(first, direction(1)) > S(0.0F);
    }
  }
};

// A broken reading between two echoes of one thing is bridged; three in a row are not. An echo that is known to be
// missing always ends a group. (Common practice, no source.)
inline constexpr int bridged = 2;

// Calls sink(group) once for each group and returns how many readings were what. One pass. On a closed ring the group
// that may reach back over beam 0, the head, waits for the last one, since the two may be one.
template <PlainNumber S, int Beams, typename Sink>
[[nodiscard]] RingCount for_each_group(Scan<S, Beams> const& scan, Sink&& sink) noexcept {
  constexpr Group none{-1, -1};
  RingCount count;
  Group group = none;
  Group head = none;
  int head_first = -1;  // the echo the head would begin with: none but broken readings lie between it and beam 0
  int broken = 0;  // broken readings since the last echo, or since beam 0
  bool fresh = scan.closed();
  auto const end_group = [&]() noexcept {
    if (group.first >= 0 && group.first == head_first) {
      head = group;
    } else if (group.first >= 0) {
      sink(group);
    }
    group = none;
  };
  for (int i = 0; i < Beams; ++i) {
    Reading const reading = scan.limits(scan.range(i));
    tally(count, reading);
    if (reading == Reading::echo) {
      if (group.first >= 0 && scan.linked(group.last, i)) {
        group.last = i;
      } else {
        end_group();
        group = {i, i};
      }
      head_first = fresh ? i : head_first;
      fresh = false;
      broken = 0;
    } else if (is_broken(reading) && broken < bridged) {
      ++broken;
    } else {
      fresh = false;
      end_group();
    }
  }
  if (head.first < 0) {
    if (group.first >= 0) {
      sink(group);
    }
  } else if (group.first >= 0 && broken + head.first <= bridged && scan.linked(group.last, head.first)) {
    sink(Group{group.first, head.last + Beams});
  } else {
    end_group();
    sink(head);
  }
  return count;
}

}  // namespace detail

}  // namespace wend::inline v0
