// wend/sensing/constant_velocity.hpp - how far to believe a new measurement of something that moves: the gains of a
// Kalman filter. The rim: plain comparisons, on float or double and on no guest.
#pragma once

#include "wend/disc.hpp"
#include "wend/number.hpp"

namespace wend::inline v0 {

/// How unsure a position and a velocity are, along each axis alike: the covariance matrix [position mixed; mixed
/// velocity].
template <PlainNumber S>
struct Spread {
  S position{S(0.0F)};  ///< metres squared
  S mixed{S(0.0F)};     ///< metres squared a second
  S velocity{S(0.0F)};  ///< metres squared a second squared
};

/// How far a measurement that is off by e metres moves an estimate: the position by alpha e, the velocity by rate e.
/// The beta of an alpha-beta filter is rate times the time step.
template <PlainNumber S>
struct Gains {
  S alpha{S(0.0F)};  ///< in [0, 1]
  S rate{S(0.0F)};   ///< 1/s
};

/// A point that keeps its velocity but for an acceleration that is drawn anew at every step: Kalman's filter (1960, A
/// new approach to linear filtering and prediction problems) for the model of which Kalata (1984, The tracking index: a
/// generalized parameter for alpha-beta and alpha-beta-gamma target trackers) gives the steady gains; they depend on
/// nothing but the tracking index, manoeuvre dt^2 / noise. Its gains start near those of a first look and need no
/// tuning by hand, and a time step may be as it comes.
struct ConstantVelocity {
  Parameter noise = 0.03F;  ///< metres, over 0: standard deviation of a measured position along each axis
  Parameter manoeuvre = 0.5F;  ///< metres a second squared: standard deviation of the acceleration
  Parameter first_speed = 1.0F;  ///< metres a second: standard deviation of a velocity that nothing is known of yet

  /// After one first measurement.
  template <PlainNumber S>
  [[nodiscard]] constexpr Spread<S> first() const noexcept {
    return {squared(S(noise)), S(0.0F), squared(S(first_speed))};
  }

  /// After dt seconds without a measurement, dt not negative.
  template <PlainNumber S>
  [[nodiscard]] constexpr Spread<S> predicted(Spread<S> const& was, S dt) const noexcept {
    S const half = S(0.5F) * dt * dt;
    S const q = squared(S(manoeuvre));
    return {was.position + S(2.0F) * dt * was.mixed + dt * dt * was.velocity + half * half * q,
            was.mixed + dt * was.velocity + half * dt * q, was.velocity + dt * dt * q};
  }

  /// What a measurement is worth, by the spread that was predicted for its moment. `besides` is a variance on top of
  /// `noise` squared, metres squared, where something speaks against this one.
  template <PlainNumber S>
  [[nodiscard]] constexpr Gains<S> gains(Spread<S> const& predicted, S besides = S(0.0F)) const noexcept {
    S const innovation = predicted.position + squared(S(noise)) + besides;
    return {predicted.position / innovation, predicted.mixed / innovation};
  }

  /// After a measurement that was heeded by these gains.
  template <PlainNumber S>
  [[nodiscard]] constexpr Spread<S> updated(Spread<S> const& predicted, Gains<S> const& gains) const noexcept {
    S const kept = S(1.0F) - gains.alpha;
    return {kept * predicted.position, kept * predicted.mixed,
            greatest(S(predicted.velocity - gains.rate * predicted.mixed), S(0.0F))};
  }
};

}  // namespace wend::inline v0
