// wend/lab/advise.hpp - thresholds for a guard: as early as braking asks for, as far apart as the noise asks for.
#pragma once

#include <array>
#include <cmath>
#include <cstdio>
#include <numbers>
#include <string>

#include "wend/motion/pace.hpp"
#include "wend/number.hpp"

namespace wend::inline v0::lab {

/// Q(z): the probability that a standard normal number is over z.
[[nodiscard]] inline double normal_tail(double z) { return 0.5 * std::erfc(z / std::numbers::sqrt2); }

/// The z with Q(z) = p, for p in (0, 0.5]; 0 for larger p. By bisection in [0, 39]; beyond, Q is 0 in double.
[[nodiscard]] inline double normal_tail_inverse(double p) {
  double low = 0.0;
  double high = 39.0;
  for (int i = 0; i < 100; ++i) {
    double const middle = 0.5 * (low + high);
    (normal_tail(middle) > p ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

/// Readings with independent Gaussian errors: each its own draw, as from a ranger that averages nothing.
struct IndependentReadings {
  double sigma = 0.02;         ///< standard deviation, in the signal's unit
  double per_second = 20.0;    ///< readings, and answers of the guard

  /// Switches a second, both ways counted, of a guard with a hysteresis of `width` while the true signal stands still
  /// in the middle, which is where it switches most. Each reading then crosses the threshold that matters with p =
  /// Q(width / (2 sigma)), whatever came before, so the guard is a Markov chain that changes with p at each reading.
  /// Anywhere else it is 2 / (1/Q(a / sigma) + 1/Q(b / sigma)) readings' worth, a + b = width, and less, 1/Q being
  /// convex.
  [[nodiscard]] double switches_per_second(double width) const {
    return per_second * normal_tail(width / (2.0 * sigma));
  }
  /// The width for which that is one in `seconds`; 0 if even no hysteresis switches less often.
  [[nodiscard]] double width_for(double seconds) const {
    return 2.0 * sigma * normal_tail_inverse(1.0 / (per_second * seconds));
  }
};

/// Gaussian noise of a limited band, sampled so fast that it counts as continuous: as behind a low-pass filter.
struct BandLimitedNoise {
  double sigma = 0.02;  ///< standard deviation, in the signal's unit: sqrt(R(0)), R being the autocorrelation
  double quickness = 1.0;  ///< sqrt(-R''(0) / R(0)), radians a second: the root mean square of its angular frequency

  /// Noise of even power from 0 to `band` hertz: quickness = 2 pi band / sqrt(3).
  [[nodiscard]] static BandLimitedNoise even(double sigma, double band) {
    return {sigma, 2.0 * std::numbers::pi * band / std::numbers::sqrt3};
  }

  /// Times a second that the noise crosses a level upwards, and as often downwards (Rice 1944, Bell Syst. Tech. J. 23,
  /// eq. 3.3-11): quickness / (2 pi) * exp(-level^2 / (2 sigma^2)).
  [[nodiscard]] double upcrossings_per_second(double level) const {
    return quickness / (2.0 * std::numbers::pi) * std::exp(-0.5 * (level / sigma) * (level / sigma));
  }
  /// Switches a second, both ways counted, of a guard with a hysteresis of `width`, wherever the true signal stands
  /// still: no more than this. Each switch one way takes a crossing of its threshold, the farther of which is at least
  /// width / 2 away, and each switch is followed by one the other way. Exact without hysteresis; of a wide one about
  /// half, since a second crossing of the same threshold finds the guard switched already.
  [[nodiscard]] double switches_per_second(double width) const { return 2.0 * upcrossings_per_second(0.5 * width); }
  /// The width for which that bound is one in `seconds`; 0 if even no hysteresis switches less often.
  [[nodiscard]] double width_for(double seconds) const {
    double const most = 2.0 * upcrossings_per_second(0.0) * seconds;
    return most > 1.0 ? 2.0 * sigma * std::sqrt(2.0 * std::log(most)) : 0.0;
  }
};

/// Thresholds for below(clearance, enter, leave), metres, and what was reckoned.
struct Advice {
  double enter = 0.0;  ///< yes from under this clearance on
  double leave = 0.0;  ///< no from over this clearance on
  double stopping = 0.0;  ///< metres: what a machine at top speed needs to stop, the margin included
  double allowance = 0.0;  ///< metres: added to it because a reading may be too long
  double width = 0.0;  ///< metres: leave - enter
  double between_switches = 0.0;  ///< seconds: mean time between two false switches, at least
  std::string text;  ///< the same in words
};

/// Clearance, in metres, from which a machine at top speed can stop as Pace has it: margin, overrun, v * reaction and
/// v^2 / (2 braking). With more clearance than that Pace does not slow the machine down.
[[nodiscard]] inline double stopping_clearance(Pace const& pace) {
  double const v = static_cast<double>(pace.top_speed);
  return static_cast<double>(pace.margin) + pace.overrun<double>() + v * static_cast<double>(pace.reaction) +
         v * v / (2.0 * static_cast<double>(pace.braking));
}

/// Thresholds for a guard on the clearance. It is entered where the machine can just stop from top speed, earlier by
/// `surety` standard deviations, so that of the readings taken there only Q(surety) come too late. The hysteresis is as
/// wide as the noise needs for a mean time of `seconds` between false switches: noise is IndependentReadings or
/// BandLimitedNoise, in metres. An advice about nuisance, not a safety function.
template <typename Noise>
[[nodiscard]] Advice advise(Noise const& noise, double seconds, Pace const& pace = {}, double surety = 3.0) {
  Advice a;
  a.stopping = stopping_clearance(pace);
  a.allowance = surety * noise.sigma;
  a.width = noise.width_for(seconds);
  a.enter = a.stopping + a.allowance;
  a.leave = a.enter + a.width;
  a.between_switches = 1.0 / noise.switches_per_second(a.width);
  std::array<char, 1024> text{};
  std::snprintf(text.data(), text.size(),
                "below(clearance, %.3fF, %.3fF)\n"
                "From %.2f m/s the machine needs %.3f m to stop: %.3f m in %.2f s of reaction, %.3f m of braking at "
                "%.2f m/s2, %.3f m of overrun and a margin of %.3f m. Readings of standard deviation %.3f m are too "
                "long by more than %.3f m once in %.0f, so the guard is entered that much earlier.\n"
                "With a hysteresis of %.3f m, noise alone switches it once in %.3g s on average, or less often.\n"
                "This is no safety function: it holds for Gaussian noise of the kind given and a clearance that stands "
                "still, and says nothing about readings that fail.\n",
                a.enter, a.leave, static_cast<double>(pace.top_speed), a.stopping,
                static_cast<double>(pace.top_speed) * static_cast<double>(pace.reaction),
                static_cast<double>(pace.reaction),
                static_cast<double>(pace.top_speed) * static_cast<double>(pace.top_speed) /
                    (2.0 * static_cast<double>(pace.braking)),
                static_cast<double>(pace.braking), pace.overrun<double>(), static_cast<double>(pace.margin),
                noise.sigma, a.allowance, 1.0 / normal_tail(surety), a.width, a.between_switches);
  a.text = text.data();
  return a;
}

}  // namespace wend::inline v0::lab
