// wend/watch/status.hpp - why the machine does what it does, this tick.
#pragma once

#include <cstdint>

#include "wend/number.hpp"

namespace wend::inline v0 {

/// The one thing to know about a tick. The first group of causes stops the machine; of several that hold at once, the
/// one that comes first in `status_of` is given.
enum class Status : std::uint8_t {
  ok,             ///< on its way
  arrived,        ///< stopped: within the arrival radius of the goal
  no_course,      ///< stopped: the policy has no opinion (its fields cancel, or none spoke)
  blind,  ///< stopped: too few beams alive, a disc that cannot be one, or a pose or goal that is not a number
  stale,  ///< stopped: the readings are too old, or the time step is not one
  blocked,  ///< may turn, must not drive: no room left to stop in
  stuck,  ///< drives on, but has come no nearer to the goal for too long
  discs_dropped,  ///< drives on: more discs than the set can hold; the nearest ones are known
};

/// All findings of a tick, each a mask of the number's own kind: several can hold at once.
template <Number S>
struct Findings {
  mask_t<S> stale{};  ///< the readings are too old, or the time step is not one
  mask_t<S> blind{};  ///< too few beams alive, a disc that cannot be one, or a pose or goal that is not a number
  mask_t<S> arrived{};  ///< within the arrival radius of the goal
  mask_t<S> no_course{};  ///< the policy has no opinion
  mask_t<S> blocked{};  ///< no room left to stop in: the machine may turn and must not drive
  mask_t<S> stuck{};  ///< the goal has come no nearer for too long
  mask_t<S> discs_dropped{};  ///< there were more discs than the set can hold
};

/// Whether wheels must stand still.
template <Number S>
[[nodiscard]] constexpr mask_t<S> must_stop(Findings<S> const& f) noexcept {
  return f.stale || f.blind || f.arrived || f.no_course;
}

/// The finding that matters most.
template <PlainNumber S>
[[nodiscard]] constexpr Status status_of(Findings<S> const& f) noexcept {
  return f.stale           ? Status::stale
         : f.blind         ? Status::blind
         : f.arrived       ? Status::arrived
         : f.no_course     ? Status::no_course
         : f.blocked       ? Status::blocked
         : f.stuck         ? Status::stuck
         : f.discs_dropped ? Status::discs_dropped
                           : Status::ok;
}

/// The status in words.
[[nodiscard]] constexpr char const* text(Status status) noexcept {
  switch (status) {
    case Status::ok: return "ok";
    case Status::arrived: return "arrived";
    case Status::no_course: return "no course";
    case Status::blind: return "blind";
    case Status::stale: return "stale";
    case Status::blocked: return "blocked";
    case Status::stuck: return "stuck";
    case Status::discs_dropped: return "discs dropped";
  }
  return "unknown";
}

}  // namespace wend::inline v0
