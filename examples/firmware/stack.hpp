// How deep the stack gets: it is painted below the caller's, and whatever has lost its paint afterwards was used.
#pragma once

#include <cstdint>

#include "machines/machine.hpp"

/// Bytes of stack that f and all that it calls take; 0 where the stack is not ours to paint. Up to 4 KiB.
template <typename F>
[[gnu::noinline]] std::uint32_t stack_of(F const& f) noexcept {
  constexpr std::uint32_t paint = 0xC5A5'5A5CU;
  constexpr int words = 1024;
  std::uint32_t volatile* const top = machine::stack_pointer();
  if (top == nullptr) {
    f();
    return 0;
  }
  for (int i = 1; i <= words; ++i) {
    *(top - i) = paint;
  }
  f();
  int used = words;
  while (used > 0 && *(top - used) == paint) {
    --used;
  }
  return static_cast<std::uint32_t>(used) * sizeof(std::uint32_t);
}
