// wend/sensing/followed.hpp - a sensing and what is made of its discs afterwards: tracking them, keeping them in mind.
#pragma once

#include "wend/disc.hpp"
#include "wend/field.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

namespace detail {

// Readings to discs, by a sensing that remembers or one that does not.
template <typename Sensing, typename Ranges, PlainNumber S, int Capacity, typename Memory>
auto sense(Sensing const& sensing, Ranges const& ranges, Pose<S> const& pose, S dt, MovingDiscSet<S, Capacity>& discs,
           [[maybe_unused]] Memory& memory) noexcept {
  if constexpr (requires { sensing.discs(ranges, pose, dt, discs, memory); }) {
    return sensing.discs(ranges, pose, dt, discs, memory);
  } else {
    DiscSet<S, Capacity>& places = discs;
    auto const count = sensing.discs(ranges, places);
    for (int i = 0; i < discs.size(); ++i) {
      discs.set_velocity(i, zero2<S>());  // a plain set does not know of velocities, and left them as they were
    }
    return count;
  }
}

}  // namespace detail

/// A sensing whose discs a step then works on: `step(pose, dt, discs, memory)` with a member template `Memory<S>`, such
/// as a Tracker or a KeepInMind. It is a sensing itself, so steps can follow each other:
///
///     constexpr auto seeing = followed_by(followed_by(ring, Tracker<16>{}), KeepInMind<16>{});
///     constexpr Loop<Policy, std::remove_const_t<decltype(seeing)>> loop{.policy = policy, .sensing = seeing};
template <typename Sensing, typename Step>
struct Followed {
  [[no_unique_address]] Sensing sensing;  ///< what makes discs of readings
  Step step{};  ///< what works on them

  /// What the two remember.
  template <PlainNumber S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Sensing, S, Followed, 0> sensing;  ///< of the sensing
    typename Step::template Memory<S> step;  ///< of the step
  };

  /// As the sensing's own; `pose` is the robot's, in any one frame, and dt the seconds since the last tick.
  template <PlainNumber S, typename Ranges, int Capacity>
  auto discs(Ranges const& ranges, Pose<S> const& pose, S dt, MovingDiscSet<S, Capacity>& discs,
             Memory<S>& memory) const noexcept {
    auto const count = detail::sense(sensing, ranges, pose, dt, discs, memory.sensing);
    step(pose, dt, discs, memory.step);
    return count;
  }
};

/// See Followed.
template <typename Sensing, typename Step>
[[nodiscard]] constexpr Followed<Sensing, Step> followed_by(Sensing const& sensing, Step const& step) noexcept {
  return {sensing, step};
}

}  // namespace wend::inline v0
