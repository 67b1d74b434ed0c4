// wend/lab/mishap.hpp - what goes wrong between the world and a loop, or between a loop and its wheels.
#pragma once

#include <cstdint>
#include <span>

#include "wend/lab/random.hpp"
#include "wend/loop.hpp"
#include "wend/motion/differential_drive.hpp"

namespace wend::inline v0::lab {

/// When something is about to go wrong, and what chance to draw from: the same in every run of the same number.
struct Moment {
  std::uint32_t tick;  ///< number of the tick, from 0
  double time;  ///< seconds
  Draws const& draws;  ///< those of the run
};

/// A fault, for `simulate`. Each function may change what it is given, and leaves it alone unless overridden. One
/// object serves one run: it may remember what it did.
template <PlainNumber S = float>
class Mishap {
 public:
  /// Virtual, so that whoever holds one by its base may end it.
  virtual ~Mishap() = default;

  /// What the ranger reads, metres; empty where a loop has no ranger.
  virtual void readings(Moment const&, std::span<S>) {}

  /// What else the loop is told: pose, goal, time step, age.
  virtual void situation(Moment const&, Situation<S>&) {}

  /// Seconds by which the next tick comes late. What the loop is then told of the time step is the truth.
  [[nodiscard]] virtual double delay(Moment const&) { return 0.0; }

  /// What the wheels do of what they were told: radians a second.
  virtual void wheels(double /*time*/, WheelRates<double>&) {}
};

}  // namespace wend::inline v0::lab
