// wend/motion/body_velocity.hpp - what the machine's body is asked to do.
#pragma once

#include "wend/number.hpp"

namespace wend::inline v0 {

/// Motion of the body: along the nose, and about the axle's middle.
template <Number S>
struct BodyVelocity {
  S speed{S(0.0F)};      ///< metres a second, forward positive
  S turn_rate{S(0.0F)};  ///< radians a second, counter-clockwise positive
};

/// Motion of a body that can also go sideways, of its centre.
template <Number S>
struct PlanarVelocity {
  S speed{S(0.0F)};      ///< metres a second, forward positive
  S lateral{S(0.0F)};    ///< metres a second, to the left positive
  S turn_rate{S(0.0F)};  ///< radians a second, counter-clockwise positive
};

}  // namespace wend::inline v0
