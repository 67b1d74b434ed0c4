// wend/lab/modes.hpp - which side of each guard a policy is on, read from its memory.
#pragma once

#include <cstdint>
#include <type_traits>

#include "wend/members.hpp"

namespace wend::inline v0::lab {

namespace detail {

// Calls f(on) for each switch in a memory, outermost first.
template <typename Memory, typename F>
void for_each_switch(Memory const& memory, F const& f) {
  if constexpr (std::is_aggregate_v<Memory> && !std::is_empty_v<Memory>) {
    if constexpr (requires { memory.is_inside; }) {
      f(memory.is_inside);
    }
    if constexpr (requires { memory.is_in; }) {
      for (bool const on : memory.is_in) {
        f(on);
      }
    }
    v0::for_each_member(memory, memory, [&f](auto const& member, auto const&) { for_each_switch(member, f); });
  }
}

}  // namespace detail

/// One bit for each `guarded` in a policy, outermost first: 1 inside; and one for each mode but the first of `modes`.
/// Two ticks with different bits have a switch between them.
template <typename Memory>
[[nodiscard]] std::uint32_t modes_of(Memory const& memory) {
  std::uint32_t modes = 0;
  detail::for_each_switch(memory, [&modes](bool on) { modes = (modes << 1U) | (on ? 1U : 0U); });
  return modes;
}

/// How many bits that has: the switches in a policy's memory.
template <typename Memory>
[[nodiscard]] int mode_count(Memory const& memory) {
  int count = 0;
  detail::for_each_switch(memory, [&count](bool) { ++count; });
  return count;
}

}  // namespace wend::inline v0::lab
