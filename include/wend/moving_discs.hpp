// wend/moving_discs.hpp - discs that move, for those who know how: from a tracker, a map, or a message.
#pragma once

#include <array>
#include <cstddef>

#include "wend/config.hpp"
#include "wend/disc.hpp"
#include "wend/members.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// A set of discs with a velocity each. It is a DiscSet wherever one is asked for; `look` and the loop hand the
/// velocities on to the fields and the pace that heed them. Velocities are metres a second over the ground, along the
/// axes of the frame in use; one that is not finite is replaced by 0 and sets `rejected`, as a broken disc does.
template <Number S, int Capacity>
class MovingDiscSet : public DiscSet<S, Capacity> {
 public:
  /// Adds one disc; see DiscSet::add for what happens when the set is full. A disc without a velocity stands still.
  void add(Disc<S> const& disc, Vec2<S> velocity = zero2<S>(), Vec2<S> const& viewpoint = zero2<S>()) noexcept {
    mask_t<S> const sound = finite(velocity);
    this->reject(!sound);
    velocity = select(sound, velocity, zero2<S>());
    this->insert(disc, viewpoint, [this, &velocity](int i, mask_t<S> const& where) noexcept {
      Vec2<S>& here = velocities_[static_cast<std::size_t>(i)];
      Vec2<S> const before = here;
      here = select(where, velocity, here);
      velocity = select(where, before, velocity);
    });
  }

  /// Disc i moves like this, as somebody found out after it was added.
  void set_velocity(int i, Vec2<S> const& velocity) noexcept {
    WEND_ASSERT(i >= 0 && i < this->size());
    mask_t<S> const sound = finite(velocity);
    this->reject(!sound);
    velocities_[static_cast<std::size_t>(i)] = select(sound, velocity, zero2<S>());
  }

  /// One velocity a disc, in the order of the discs.
  [[nodiscard]] Vec2<S> const* velocities() const noexcept { return velocities_.data(); }
  /// Of disc i, in [0, size()): metres a second over the ground, along the axes of the frame in use.
  [[nodiscard]] Vec2<S> const& velocity(int i) const noexcept {
    WEND_ASSERT(i >= 0 && i < this->size());
    return velocities_[static_cast<std::size_t>(i)];
  }

 private:
  std::array<Vec2<S>, static_cast<std::size_t>(Capacity)> velocities_{};
};

}  // namespace wend::inline v0
