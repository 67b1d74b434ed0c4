// wend/fields/velocity_cone.hpp - which relative velocities lead to a contact, and when: what the fields for moving
// discs share.
#pragma once

#include "wend/disc.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// The cone of relative velocities that lead to a contact sooner or later (Fiorini and Shiller 1998, Int. J. Robotics
/// Research 17(7)): its axis points to the disc, its half-angle is asin(r / d), kept as sine and cosine.
/// `left` and `right` are its edges, the tangents to the disc grown by the machine, as unit vectors.
template <Number S>
struct VelocityCone {
  Vec2<S> left;  ///< unit vector along the left edge
  Vec2<S> right;  ///< unit vector along the right edge
  S sine;  ///< of the half-angle, in [0, 1]
  S cosine;  ///< of the half-angle, in [0, 1]
};

/// The cone of a disc whose centre lies at `offset` from the machine's, grown to `radius` (both radii and a margin;
/// metres). Where the two touch or overlap it is a half-plane: sine 1, cosine 0. Centre on centre its edges are (0, 0).
template <Number S>
[[nodiscard]] VelocityCone<S> velocity_cone(Vec2<S> const& offset, S const& radius) noexcept {
  Polar<S> const to_disc = polar(offset);
  mask_t<S> const apart = to_disc.length > radius;
  S const tangent_squared = (to_disc.length - radius) * (to_disc.length + radius);
  S const distance = select(apart, to_disc.length, S(1.0F));
  S const sine = select(apart, S(radius / distance), S(1.0F));
  S const cosine = select(apart, S(root(select(apart, tangent_squared, S(1.0F))) / distance), S(0.0F));
  Vec2<S> const ahead = scaled(to_disc.direction, cosine);
  Vec2<S> const aside = scaled(left_of(to_disc.direction), sine);
  return {ahead + aside, ahead - aside, sine, cosine};
}

/// Seconds until a machine that keeps the velocity `relative` to a disc (its own less the disc's, metres a second)
/// touches it, in [0, far_away]; far_away where it never does. Overlapping, 0 while they close in and far_away while
/// they part or keep still. 0 where a number among them is not one.
template <Number S>
[[nodiscard]] S contact_time(Vec2<S> const& offset, S const& radius, Vec2<S> const& relative) noexcept {
  // The smaller root of |offset - t relative|^2 = radius^2, in the form that does not subtract near equals.
  S const closing = dot(offset, relative);
  S const reach = squared(radius) * (squared(relative.x()) + squared(relative.y()));
  S const deep = reach - squared(cross(offset, relative));
  // What moves along the tangent at contact must not hang on a rounding: 1e-4 rad of closing in are forgiven.
  constexpr Parameter forgiven = 1.0e-8F;  // the square of the sine
  mask_t<S> const clear = closing <= S(0.0F) || squared(closing) <= S(forgiven) * reach || deep < S(0.0F);
  S const apart = length(offset);
  S const ahead = (apart - radius) * (apart + radius);
  S const when = ahead / (closing + root(select(deep > S(0.0F), deep, S(0.0F))));
  return select(clear, S(far_away), clamp(when, S(0.0F), S(far_away)));
}

}  // namespace wend::inline v0
