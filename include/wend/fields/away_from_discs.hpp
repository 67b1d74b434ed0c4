// wend/fields/away_from_discs.hpp - straight away from the nearest disc.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Away from the nearest disc: the direction to it plus pi, with confidence 1. No opinion where there is no disc, or at
/// the very centre of one.
struct away_from_discs {
  /// Percept::away, with its confidence.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    return {percept.away, percept.away_confidence};
  }
};

}  // namespace wend::inline v0
