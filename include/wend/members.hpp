// wend/members.hpp - walks the members of a plain struct, so that memories and courses need no boilerplate.
//
// A memory is a plain struct of numbers, masks and further plain structs. On a bool mask it is copied whole; on a
// guest's mask each member has to be selected by itself. The language (C++20) cannot list members; structured bindings
// can take up to eight of them apart, which is enough for a struct that firmware has to hold. A std::array among them,
// of tracks for example, is walked element by element and may be of any length.
#pragma once

#include <array>
#include <cstddef>
#include <type_traits>
#include <utility>

#include "wend/plane.hpp"  // its select for vectors has to be known here

namespace wend::inline v0 {

namespace detail {

struct ConvertsToAnything {
  template <typename T>
  constexpr operator T() const noexcept;  // never defined: only its type is asked for
};

template <typename T, typename... Members>
consteval int member_count() {
  if constexpr (sizeof...(Members) > 8) {
    return 9;
  } else if constexpr (requires { T{Members{}..., ConvertsToAnything{}}; }) {
    return member_count<T, Members..., ConvertsToAnything>();
  } else {
    return static_cast<int>(sizeof...(Members));
  }
}

template <typename T>
struct IsArray : std::false_type {};
template <typename T, std::size_t Size>
struct IsArray<std::array<T, Size>> : std::true_type {};

}  // namespace detail

/// Calls f(member of a, member of b) for each pair of members of two plain structs, in order: of one type, or of one
/// template over two numbers. The elements of a std::array are its members.
template <typename T, typename U, typename F>
  requires detail::IsArray<std::remove_const_t<T>>::value
constexpr void for_each_member(T& a, U& b, F&& f) noexcept {
  static_assert(detail::IsArray<std::remove_const_t<U>>::value, "wend: an array beside something that is none");
  static_assert(std::tuple_size_v<std::remove_const_t<T>> == std::tuple_size_v<std::remove_const_t<U>>,
                "wend: two arrays of different lengths");
  for (std::size_t i = 0; i < a.size(); ++i) {
    f(a[i], b[i]);
  }
}
/// Of plain structs, with up to eight members each.
template <typename T, typename U, typename F>
constexpr void for_each_member(T& a, U& b, F&& f) noexcept {
  constexpr int count = detail::member_count<std::remove_const_t<T>>();
  static_assert(count == detail::member_count<std::remove_const_t<U>>(),
                "wend: two structs that differ in their members");
  static_assert(count <= 8, "wend: a memory may have up to eight members; group some of them in a struct of their own");
  if constexpr (std::is_empty_v<T> || count == 0) {
    return;
  } else if constexpr (count == 1) {
    auto& [a1] = a;
    auto& [b1] = b;
    f(a1, b1);
  } else if constexpr (count == 2) {
    auto& [a1, a2] = a;
    auto& [b1, b2] = b;
    f(a1, b1), f(a2, b2);
  } else if constexpr (count == 3) {
    auto& [a1, a2, a3] = a;
    auto& [b1, b2, b3] = b;
    f(a1, b1), f(a2, b2), f(a3, b3);
  } else if constexpr (count == 4) {
    auto& [a1, a2, a3, a4] = a;
    auto& [b1, b2, b3, b4] = b;
    f(a1, b1), f(a2, b2), f(a3, b3), f(a4, b4);
  } else if constexpr (count == 5) {
    auto& [a1, a2, a3, a4, a5] = a;
    auto& [b1, b2, b3, b4, b5] = b;
    f(a1, b1), f(a2, b2), f(a3, b3), f(a4, b4), f(a5, b5);
  } else if constexpr (count == 6) {
    auto& [a1, a2, a3, a4, a5, a6] = a;
    auto& [b1, b2, b3, b4, b5, b6] = b;
    f(a1, b1), f(a2, b2), f(a3, b3), f(a4, b4), f(a5, b5), f(a6, b6);
  } else if constexpr (count == 7) {
    auto& [a1, a2, a3, a4, a5, a6, a7] = a;
    auto& [b1, b2, b3, b4, b5, b6, b7] = b;
    f(a1, b1), f(a2, b2), f(a3, b3), f(a4, b4), f(a5, b5), f(a6, b6), f(a7, b7);
  } else {
    auto& [a1, a2, a3, a4, a5, a6, a7, a8] = a;
    auto& [b1, b2, b3, b4, b5, b6, b7, b8] = b;
    f(a1, b1), f(a2, b2), f(a3, b3), f(a4, b4), f(a5, b5), f(a6, b6), f(a7, b7), f(a8, b8);
  }
}

/// `to` becomes `from` where the mask holds: member by member on a guest's mask, a plain copy on a bool.
template <typename Mask, typename T>
constexpr void assign_where(Mask const& mask, T& to, T const& from) noexcept {
  if constexpr (std::is_same_v<Mask, bool>) {
    if (mask) {
      to = from;
    }
  } else if constexpr (requires { select(mask, from, to); }) {
    to = select(mask, from, to);
  } else {
    for_each_member(to, from, [&mask](auto& t, auto const& f) noexcept { assign_where(mask, t, f); });
  }
}

/// The only branch on a number. With a bool mask it calls one of the two functions; with any other mask it calls both
/// and selects, member by member where the result is a struct.
template <typename Mask, typename F, typename G>
[[nodiscard]] constexpr auto choose(Mask const& mask, F&& f, G&& g) noexcept {
  if constexpr (std::is_same_v<Mask, bool>) {
    return mask ? std::forward<F>(f)() : std::forward<G>(g)();
  } else {
    auto result = std::forward<G>(g)();
    assign_where(mask, result, std::forward<F>(f)());
    return result;
  }
}

}  // namespace wend::inline v0
