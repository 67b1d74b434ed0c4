// wend/promise.hpp - what a constant has to keep: broken, it does not compile, and the compiler says what to write.
#pragma once

#include <type_traits>

#include "wend/config.hpp"

namespace wend::inline v0::detail {

// In a constant, a promise that does not hold calls `refuse`, which is no constant expression: the compiler refuses,
// and shows its name, which is a sentence. At run time it is a WEND_ASSERT, which tells nothing unless it is defined.
constexpr void promise(bool holds, void (*refuse)() noexcept) noexcept {
  if (std::is_constant_evaluated() && !holds) {
    refuse();
  }
  WEND_ASSERT(holds);
}

}  // namespace wend::inline v0::detail
