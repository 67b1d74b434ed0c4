// wend/motion/drive.hpp - what a drive is: it knows what its wheels can do, and what they have to do for a motion.
#pragma once

#include <concepts>
#include <type_traits>
#include <utility>

#include "wend/motion/body_velocity.hpp"
#include "wend/motion/steering.hpp"
#include "wend/number.hpp"

namespace wend::inline v0 {

namespace detail {

template <typename D, typename S>
struct BodyOf {
  using type = BodyVelocity<S>;
};
template <typename D, typename S>
  requires requires { typename D::template Body<S>; }
struct BodyOf<D, S> {
  using type = typename D::template Body<S>;
};

template <typename D>
struct SteeringOf {
  using type = Steering;
};
template <typename D>
  requires requires { typename D::Steering; }
struct SteeringOf<D> {
  using type = typename D::Steering;
};

}  // namespace detail

/// How a drive's body can move: its member template `Body<S>`, or a `BodyVelocity<S>` where it has none.
template <typename D, Number S>
using body_t = typename detail::BodyOf<D, S>::type;

/// What a drive tells its wheels: whatever its `wheels` returns.
template <typename D, Number S>
using wheels_t = std::remove_cvref_t<decltype(std::declval<D const&>().wheels(std::declval<body_t<D, S> const&>()))>;

/// How a loop steers a drive unless it is told otherwise: the drive's own member type `Steering`, or wend::Steering.
template <typename D>
using steering_t = typename detail::SteeringOf<D>::type;

/// A drive over S, an immutable plain struct of parameters. `within_limits` is the nearest motion its wheels can do,
/// zero for what is not finite; `wheels` is what they have to do for a motion, never over a limit whatever comes in;
/// `body` is the motion that given wheels make.
template <typename D, typename S = float>
concept Drive = Number<S> && std::is_trivially_copyable_v<D> &&
                requires(D const& drive, body_t<D, S> const& body, wheels_t<D, S> const& wheels) {
                  { drive.within_limits(body) } -> std::same_as<body_t<D, S>>;
                  { drive.body(wheels) } -> std::same_as<body_t<D, S>>;
                };

namespace detail {

// The body velocity that a steering wants of a drive. One that needs to know the drive is told.
template <typename Steer, typename D, Number S>
[[nodiscard]] constexpr auto steered(Steer const& steering, D const& drive, Course<S> const& course,
                                     Vec2<S> const& heading, S const& allowed) noexcept {
  if constexpr (requires { steering(course, heading, allowed, drive); }) {
    return steering(course, heading, allowed, drive);
  } else {
    return steering(course, heading, allowed);
  }
}

// One sentence for each way in which a would-be drive can miss the mark.
template <typename D, typename Steer, typename S>
consteval void check_drive() {
  static_assert(
      requires(D const& d, body_t<D, S> const& b) { d.wheels(b); },
      "wend: this drive cannot be asked for its wheels; write: template <wend::Number S> constexpr auto "
      "wheels(wend::BodyVelocity<S> const& body) const noexcept");
  if constexpr (requires(D const& d, body_t<D, S> const& b) { d.wheels(b); }) {
    static_assert(
        Drive<D, S>,
        "wend: this is not a drive: beside wheels(body) it needs within_limits(body) and body(wheels), const, "
        "both of which return its Body<S>, and it has to be a plain struct of parameters");
    static_assert(
        requires(Steer const& s, D const& d, Course<S> const& c, Vec2<S> const& h) {
          { steered(s, d, c, h, S(0.0F)) } -> std::same_as<body_t<D, S>>;
        },
        "wend: this steering does not fit this drive: steering(course, heading, allowed), or the same with "
        "the drive as a fourth argument, has to return the drive's Body<S>; leave the loop's steering out to "
        "get the drive's own");
  }
}

}  // namespace detail

}  // namespace wend::inline v0
