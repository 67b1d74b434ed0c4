// wend/watch/freshness.hpp - whether what the machine was told is recent enough to act on.
#pragma once

#include "wend/number.hpp"

namespace wend::inline v0 {

/// Limits on time. Give `age` the seconds since the oldest input of this tick was measured: a frozen clock or sensor
/// then grows old, and a clock that runs backwards gives a negative age.
struct Freshness {
  Parameter max_age = 0.3F;  ///< seconds
  Parameter max_dt = 0.5F;   ///< seconds between two ticks

  /// True when dt is not in (0, max_dt], or age not in [0, max_age]; also when one is not a number.
  template <Number S>
  [[nodiscard]] constexpr mask_t<S> stale(S const& dt, S const& age) const noexcept {
    return !(dt > S(0.0F) && dt <= S(max_dt) && age >= S(0.0F) && age <= S(max_age));
  }
};

}  // namespace wend::inline v0
