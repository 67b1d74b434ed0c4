// wend/number.hpp - what a number must offer so that a policy can run on it, and the few functions all code shares.
//
// A policy is written once over a number type S: float on the robot, double for reference, and on the laptop guests
// such as lanes, intervals and derivatives. Whatever depends on a comparison goes through `select` or `choose`, because
// `a < b` on a guest need not be a bool. Library code never writes `if (a < b)` on a number.
#pragma once

#include <bit>
#include <cmath>
#include <concepts>
#include <cstdint>
#include <type_traits>
#include <utility>

namespace wend::inline v0 {

/// Parameters (gains, thresholds, sizes) are kept in single precision on every number type, so that a proof or a
/// simulation in double runs on the very values that are flashed into the machine.
using Parameter = float;

/// What `a < b` gives on S: bool for float and double, something richer for a guest.
template <typename S>
using mask_t = decltype(std::declval<S const&>() < std::declval<S const&>());

/// The one customisation point: a where the mask holds, b elsewhere. A guest number brings its own overloads, for its
/// mask with its numbers and for its mask with its masks, as friends. Code outside namespace wend writes
/// `using wend::select;` and then calls `select` by its bare name, so that both these and a guest's own are found.
template <typename T>
  requires std::is_arithmetic_v<T>
[[nodiscard]] constexpr T select(bool mask, T const& a, T const& b) noexcept {
  return mask ? a : b;
}

/// True where x is neither infinite nor not-a-number. Looks at the exponent bits, so a reading that lies in memory is
/// judged rightly under -ffast-math too, where the compiler may assume `x == x`. By reference, because clang 19 then
/// assumes of every float passed or returned by value that it is finite.
[[nodiscard]] constexpr bool finite(float const& x) noexcept {
  constexpr std::uint32_t exponent = 0x7f800000U;
  return (std::bit_cast<std::uint32_t>(x) & exponent) != exponent;
}
/// The same in double precision.
[[nodiscard]] constexpr bool finite(double const& x) noexcept {
  constexpr std::uint64_t exponent = 0x7ff0000000000000U;
  return (std::bit_cast<std::uint64_t>(x) & exponent) != exponent;
}

namespace detail {
using std::sqrt;  // visible to the concept below; a guest brings its own by argument-dependent lookup

template <typename S>
concept HasRoot = requires(S const& a) {
  { sqrt(a) } -> std::convertible_to<S>;
};

template <typename S>
[[nodiscard]] constexpr S root(S const& x) noexcept {
  return sqrt(x);
}
}  // namespace detail

/// A number a policy can run on. Needs: construction from a Parameter, + - * / and unary minus, < > <= >= giving one
/// mask type with && || !, `select` for numbers and for masks, `sqrt`, and `finite`.
template <typename S>
concept Number = std::copyable<S> && std::default_initializable<S> && std::constructible_from<S, Parameter> &&
                 detail::HasRoot<S> && requires(S const& a, S const& b, mask_t<S> const& m) {
                   { a + b } -> std::convertible_to<S>;
                   { a - b } -> std::convertible_to<S>;
                   { a* b } -> std::convertible_to<S>;
                   { a / b } -> std::convertible_to<S>;
                   { -a } -> std::convertible_to<S>;
                   { a > b } -> std::same_as<mask_t<S>>;
                   { a <= b } -> std::same_as<mask_t<S>>;
                   { a >= b } -> std::same_as<mask_t<S>>;
                   { m&& m } -> std::convertible_to<mask_t<S>>;
                   { m || m } -> std::convertible_to<mask_t<S>>;
                   { !m } -> std::convertible_to<mask_t<S>>;
                   { select(m, a, b) } -> std::convertible_to<S>;
                   { select(m, m, m) } -> std::convertible_to<mask_t<S>>;
                   { finite(a) } -> std::convertible_to<mask_t<S>>;
                 };

/// A number whose comparisons are plain: float and double.
template <typename S>
concept PlainNumber = Number<S> && std::same_as<mask_t<S>, bool>;

/// Square root; x must not be negative. Compile firmware with -fno-math-errno: without it each root carries a branch
/// into the C library for the negative case.
template <Number S>
[[nodiscard]] constexpr S root(S const& x) noexcept {
  return detail::root(x);
}

/// The smaller of two. When a is not a number the result is b, so that a bound never lets a not-a-number through.
template <Number S>
[[nodiscard]] constexpr S least(S const& a, S const& b) noexcept {
  if constexpr (requires { min(a, b); }) {
    return min(a, b);  // a guest with a tighter minimum than the hull of both
  } else {
    return select(a < b, a, b);
  }
}

/// The larger of two; when a is not a number the result is b.
template <Number S>
[[nodiscard]] constexpr S greatest(S const& a, S const& b) noexcept {
  if constexpr (requires { max(a, b); }) {
    return max(a, b);
  } else {
    return select(a > b, a, b);
  }
}

/// x held in [low, high]; low when x is not a number.
template <Number S>
[[nodiscard]] constexpr S clamp(S const& x, S const& low, S const& high) noexcept {
  return least(greatest(x, low), high);
}

/// |x|.
template <Number S>
[[nodiscard]] constexpr S magnitude(S const& x) noexcept {
  if constexpr (requires { abs(x); } && !std::floating_point<S>) {
    return abs(x);
  } else {
    return select(x < S(0.0F), S(-x), x);
  }
}

/// x * x, apart so that a guest can be tight: an interval's square is never negative.
template <Number S>
[[nodiscard]] constexpr S squared(S const& x) noexcept {
  if constexpr (requires { sqr(x); }) {
    return sqr(x);
  } else {
    return x * x;
  }
}

}  // namespace wend::inline v0
