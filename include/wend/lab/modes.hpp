// wend/lab/modes.hpp - which side of each guard a policy is on, read from its memory.
#pragma once

#include <cstdint>
#include <type_traits>

#include "wend/members.hpp"

namespace wend::inline v0::lab {

namespace detail {

template <typename Memory>
void gather_modes(Memory const& memory, std::uint32_t& modes) {
  if constexpr (std::is_aggregate_v<Memory> && !std::is_empty_v<Memory>) {
    if constexpr (requires { memory.is_inside; }) {
      modes = (modes << 1U) | (memory.is_inside ? 1U : 0U);
    }
    if constexpr (requires { memory.is_in; }) {
      for (bool const on : memory.is_in) {
        modes = (modes << 1U) | (on ? 1U : 0U);
      }
    }
    v0::for_each_member(memory, memory, [&modes](auto const& member, auto const&) { gather_modes(member, modes); });
  }
}

}  // namespace detail

/// One bit for each `guarded` in a policy, outermost first: 1 inside; and one for each mode but the first of `modes`.
/// Two ticks with different bits have a switch between them.
template <typename Memory>
[[nodiscard]] std::uint32_t modes_of(Memory const& memory) {
  std::uint32_t modes = 0;
  detail::gather_modes(memory, modes);
  return modes;
}

}  // namespace wend::inline v0::lab
