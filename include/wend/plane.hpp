// wend/plane.hpp - vectors, poses and frame changes in the plane. Metres; x forward, y left; angles counter-clockwise.
#pragma once

#include <Eigen/Core>

#include "wend/number.hpp"

namespace wend::inline v0 {

/// A vector in the plane. Unaligned on purpose: it may be passed by value, packs without holes, and carries guests
/// whose own alignment is larger than Eigen's.
template <typename S>
using Vec2 = Eigen::Matrix<S, 2, 1, Eigen::DontAlign>;

/// a where the mask holds, b elsewhere, component by component.
template <Number S>
[[nodiscard]] constexpr Vec2<S> select(mask_t<S> const& mask, Vec2<S> const& a, Vec2<S> const& b) noexcept {
  return {select(mask, a.x(), b.x()), select(mask, a.y(), b.y())};
}

/// (0, 0).
template <Number S>
[[nodiscard]] Vec2<S> zero2() noexcept {
  return {S(0.0F), S(0.0F)};
}

/// a . b.
template <Number S>
[[nodiscard]] S dot(Vec2<S> const& a, Vec2<S> const& b) noexcept {
  return a.x() * b.x() + a.y() * b.y();
}

/// The third component of a x b: positive when b lies to the left of a.
template <Number S>
[[nodiscard]] S cross(Vec2<S> const& a, Vec2<S> const& b) noexcept {
  return a.x() * b.y() - a.y() * b.x();
}

/// v turned by +pi/2, to its left.
template <Number S>
[[nodiscard]] Vec2<S> left_of(Vec2<S> const& v) noexcept {
  return {-v.y(), v.x()};
}

/// k v.
template <Number S>
[[nodiscard]] Vec2<S> scaled(Vec2<S> const& v, S const& k) noexcept {
  return {k * v.x(), k * v.y()};
}

/// |v|, in the unit of v. Infinite when a component is over 1.8e19 in single precision (its square overflows).
template <Number S>
[[nodiscard]] S length(Vec2<S> const& v) noexcept {
  return root(S(squared(v.x()) + squared(v.y())));
}

/// A vector taken apart: a unit direction and a length in the unit of the vector.
template <Number S>
struct Polar {
  Vec2<S> direction;  ///< unit, or (0, 0) where there is none
  S length;  ///< in the unit of the vector; 0 or more
};

/// The length up to which a vector counts as none, on every number type: the square of anything longer is a normal
/// number in single precision; below, it loses digits, and with it the direction would no longer be a unit vector.
inline constexpr Parameter no_length = 1.1e-19F;

/// v taken apart. Degenerate: a vector no longer than no_length, or of a length that is not a number, has direction
/// (0, 0). One whose length overflows has no useful direction; `look` lets none of those through.
template <Number S>
[[nodiscard]] Polar<S> polar(Vec2<S> const& v) noexcept {
  S const size = length(v);
  Vec2<S> const unit = scaled(v, S(S(1.0F) / size));  // of size 0 too: what comes of it is not taken
  return {select(size > S(no_length), unit, zero2<S>()), size};
}

/// Where the machine is and which way its nose points: metres, and a unit vector instead of an angle, so that nothing
/// downstream needs a sine.
template <Number S>
struct Pose {
  Vec2<S> position{S(0.0F), S(0.0F)};  ///< metres
  Vec2<S> heading{S(1.0F), S(0.0F)};  ///< unit vector along the nose; (1, 0) unless given
};

/// True where both components are.
template <Number S>
[[nodiscard]] mask_t<S> finite(Vec2<S> const& v) noexcept {
  return finite(v.x()) && finite(v.y());
}

/// True where the position is finite and the heading a unit vector, to the 1 % that rounding and a careless filter may
/// leave; a heading of (0, 0) points nowhere.
template <Number S>
[[nodiscard]] mask_t<S> sound(Pose<S> const& pose) noexcept {
  S const size = dot(pose.heading, pose.heading);
  return finite(pose.position) && size > S(0.98F) && size < S(1.02F);
}

/// A world direction seen from the frame whose x axis is `heading` (a unit vector).
template <Number S>
[[nodiscard]] Vec2<S> turned_into(Vec2<S> const& heading, Vec2<S> const& direction) noexcept {
  return {dot(heading, direction), cross(heading, direction)};
}

/// A direction in the frame whose x axis is `heading`, seen from the world: the inverse of turned_into.
template <Number S>
[[nodiscard]] Vec2<S> turned_out_of(Vec2<S> const& heading, Vec2<S> const& direction) noexcept {
  return {heading.x() * direction.x() - heading.y() * direction.y(),
          heading.y() * direction.x() + heading.x() * direction.y()};
}

/// A world point seen from the frame of a pose.
template <Number S>
[[nodiscard]] Vec2<S> into_frame(Pose<S> const& pose, Vec2<S> const& point) noexcept {
  return turned_into(pose.heading, Vec2<S>(point - pose.position));
}

/// A point in the frame of a pose, seen from the world.
template <Number S>
[[nodiscard]] Vec2<S> out_of_frame(Pose<S> const& pose, Vec2<S> const& point) noexcept {
  return pose.position + turned_out_of(pose.heading, point);
}

}  // namespace wend::inline v0
