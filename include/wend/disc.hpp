// wend/disc.hpp - discs: the one shape in which the machine knows what it must not touch. Metres.
#pragma once

#include <array>
#include <cstddef>

#include "wend/config.hpp"
#include "wend/members.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// So far that nothing there matters, yet its square still fits single precision: metres.
inline constexpr Parameter far_away = 1.0e6F;

/// A disc: centre in the frame in use, and radius; metres.
template <Number S>
struct Disc {
  Vec2<S> centre{S(far_away), S(0.0F)};  ///< metres; far away, so that it touches nothing, unless given
  S radius{S(0.0F)};  ///< metres, 0 or more
};

/// Distance from a point to the edge of a disc; negative inside.
template <Number S>
[[nodiscard]] S gap(Disc<S> const& disc, Vec2<S> const& point) noexcept {
  return length(Vec2<S>(point - disc.centre)) - disc.radius;
}

/// How far along a ray (a unit direction from an origin) the first point of a disc lies. 0 when the ray starts inside;
/// far_away when it misses or the disc lies behind, and when a number among them is not one: ask `finite` first.
template <Number S>
[[nodiscard]] S ray_to_disc(Vec2<S> const& origin, Vec2<S> const& direction, Disc<S> const& disc) noexcept {
  Vec2<S> const to_centre = disc.centre - origin;
  S const along = dot(direction, to_centre);
  S const across = cross(direction, to_centre);
  S const half_chord_squared = squared(disc.radius) - squared(across);
  mask_t<S> const crosses = half_chord_squared >= S(0.0F);
  S const half_chord = root(select(crosses, half_chord_squared, S(0.0F)));
  S const reach = select(along - half_chord > S(0.0F), S(along - half_chord), S(0.0F));
  return select(crosses && along + half_chord >= S(0.0F), reach, S(far_away));
}

/// Up to Capacity discs, without a heap. When it is full the disc farthest from the viewpoint gives way, so that the
/// nearest ones are always known, and `dropped` counts. A disc with a negative radius or a number that is not finite
/// is replaced by one far away and sets `rejected`: what it stood for is unknown, and the loop stops for it.
template <Number S, int Capacity>
class DiscSet {
  static_assert(Capacity > 0, "wend: DiscSet<S, Capacity> needs room for one disc at least; write DiscSet<float, 8>");

 public:
  /// Adds one disc. `viewpoint` decides which one is farthest; it is the origin in the robot's own frame.
  void add(Disc<S> const& disc, Vec2<S> const& viewpoint = zero2<S>()) noexcept {
    insert(disc, viewpoint, [](int, mask_t<S> const&) noexcept {});
  }

  /// How many discs there are, up to the capacity.
  [[nodiscard]] int size() const noexcept { return size_; }
  /// How many discs there is room for.
  [[nodiscard]] static constexpr int capacity() noexcept { return Capacity; }
  /// How many discs did not fit.
  [[nodiscard]] int dropped() const noexcept { return dropped_; }
  /// Whether a disc came in that cannot be one.
  [[nodiscard]] mask_t<S> rejected() const noexcept { return rejected_; }

  /// Disc i, in [0, size()), in no particular order once the set has been full.
  [[nodiscard]] Disc<S> const& operator[](int i) const noexcept {
    WEND_ASSERT(i >= 0 && i < size_);
    return discs_[static_cast<std::size_t>(i)];
  }
  /// The first disc, for a loop over all.
  [[nodiscard]] Disc<S> const* begin() const noexcept { return discs_.data(); }
  /// One past the last disc.
  [[nodiscard]] Disc<S> const* end() const noexcept { return discs_.data() + size_; }

 protected:
  // Adds a disc. What somebody keeps beside the discs goes along by `exchange(i, where)`: what belongs to place i and
  // what is carried change hands where the mask holds.
  /// Adds a disc, for a set that keeps something beside each disc. `exchange(i, where)` is called for each place at
  /// which what is kept beside place i and what is carried along have to change hands where the mask holds.
  template <typename Exchange>
  void insert(Disc<S> disc, Vec2<S> const& viewpoint, Exchange const& exchange) noexcept {
    mask_t<S> const sound = finite(disc.centre.x()) && finite(disc.centre.y()) && finite(disc.radius) &&
                            disc.radius >= S(0.0F);
    rejected_ = rejected_ || !sound;
    disc.centre = select(sound, disc.centre, Disc<S>{}.centre);
    disc.radius = select(sound, disc.radius, S(0.0F));
    if (size_ < Capacity) {
      at(size_) = disc;
      exchange(size_, !mask_t<S>{});
      ++size_;
      return;
    }
    S farthest = gap(disc, viewpoint);
    for (int i = 0; i < Capacity; ++i) {  // whichever is farther is carried on; the last one carried is dropped
      S const here = gap(at(i), viewpoint);
      mask_t<S> const swap = farthest < here;
      Disc<S> const carried = disc;
      assign_where(swap, disc, at(i));
      assign_where(swap, at(i), carried);
      exchange(i, swap);
      farthest = select(swap, here, farthest);
    }
    ++dropped_;
  }

  // A number among what somebody keeps beside the discs cannot be one.
  /// Sets `rejected` where a number that is kept beside the discs cannot be one.
  void reject(mask_t<S> const& unsound) noexcept { rejected_ = rejected_ || unsound; }

 private:
  [[nodiscard]] Disc<S>& at(int i) noexcept { return discs_[static_cast<std::size_t>(i)]; }

  std::array<Disc<S>, static_cast<std::size_t>(Capacity)> discs_{};
  int size_ = 0;
  int dropped_ = 0;
  mask_t<S> rejected_{};
};

}  // namespace wend::inline v0
