// tests/numbers.hpp - the numbers that every policy is tested on, and what a test needs to look into them.
#pragma once

#include <bit>
#include <concepts>
#include <cstdint>

#include "wend/lab/pack.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

/// The typed list: `TEST_CASE_TEMPLATE("a sentence", S, WEND_TEST_NUMBERS) { ... }`.
#define WEND_TEST_NUMBERS float, double, wend::lab::Pack<8>

namespace numbers {

/// How many machines a number carries: 1 for a plain number, else its lanes.
template <typename S>
[[nodiscard]] constexpr int lanes() noexcept {
  if constexpr (requires { S::width(); }) {
    return S::width();
  } else {
    return 1;
  }
}

/// One lane as a plain number; a plain number has only itself.
template <typename S>
[[nodiscard]] auto lane(S const& x, [[maybe_unused]] int k) noexcept {
  if constexpr (lanes<S>() > 1) {
    return x[k];
  } else {
    return x;
  }
}

/// The type of one lane: float for a pack of floats, S itself for a plain S.
template <typename S>
using plain_t = decltype(lane(S(0.0F), 0));

/// The plain number in the first lane.
template <typename S>
[[nodiscard]] plain_t<S> first(S const& x) noexcept {
  return lane(x, 0);
}

/// The answer of a mask in one lane.
[[nodiscard]] inline bool holds(bool mask, int /*lane*/ = 0) noexcept { return mask; }
template <typename Mask>
  requires(!std::same_as<Mask, bool>)
[[nodiscard]] bool holds(Mask const& mask, int k = 0) noexcept {
  return mask[k];
}

/// True when the mask holds in every lane of S. Write `all<S>(a < b)`.
template <wend::Number S>
[[nodiscard]] bool all(wend::mask_t<S> const& mask) noexcept {
  for (int k = 0; k < lanes<S>(); ++k) {
    if (!holds(mask, k)) {
      return false;
    }
  }
  return true;
}

/// True when the mask holds in no lane of S.
template <wend::Number S>
[[nodiscard]] bool none(wend::mask_t<S> const& mask) noexcept {
  return all<S>(!mask);
}

/// An S from one float a lane: lane k is f(k); a plain S is f(0).
template <typename S, std::invocable<int> F>
[[nodiscard]] S make(F const& f) noexcept {
  if constexpr (lanes<S>() > 1) {
    return S([&f](int k) noexcept { return static_cast<float>(f(k)); });
  } else {
    return static_cast<S>(f(0));
  }
}

/// A mask of S from one bool a lane.
template <typename S, std::invocable<int> F>
[[nodiscard]] wend::mask_t<S> make_mask(F const& f) noexcept {
  return make<S>([&f](int k) { return f(k) ? 1.0F : 0.0F; }) > S(0.5F);
}

/// One lane of a vector.
template <wend::Number S>
[[nodiscard]] wend::Vec2<plain_t<S>> lane(wend::Vec2<S> const& v, int k) noexcept {
  return {lane(v.x(), k), lane(v.y(), k)};
}

/// True of every not-a-number; looks at the bits, so that it holds under -ffast-math too.
[[nodiscard]] constexpr bool not_a_number(float x) noexcept {
  return (std::bit_cast<std::uint32_t>(x) & 0x7fffffffU) > 0x7f800000U;
}
[[nodiscard]] constexpr bool not_a_number(double x) noexcept {
  return (std::bit_cast<std::uint64_t>(x) & 0x7fffffffffffffffU) > 0x7ff0000000000000U;
}

/// Equal to the last bit; any two not-a-numbers count as equal, since their payload has no meaning here.
[[nodiscard]] constexpr bool same(float a, float b) noexcept {
  return std::bit_cast<std::uint32_t>(a) == std::bit_cast<std::uint32_t>(b) || (not_a_number(a) && not_a_number(b));
}
[[nodiscard]] constexpr bool same(double a, double b) noexcept {
  return std::bit_cast<std::uint64_t>(a) == std::bit_cast<std::uint64_t>(b) || (not_a_number(a) && not_a_number(b));
}
template <std::floating_point T>
[[nodiscard]] bool same(wend::Vec2<T> const& a, wend::Vec2<T> const& b) noexcept {
  return same(a.x(), b.x()) && same(a.y(), b.y());
}

}  // namespace numbers
