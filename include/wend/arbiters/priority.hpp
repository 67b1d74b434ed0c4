// wend/arbiters/priority.hpp - the first field that has an opinion.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Two fields: the second is heard where the first has no opinion. A field that is heard again starts with a fresh
/// memory. Longer lists nest to the right.
template <typename First, typename Rest>
struct priority_field {
  [[no_unique_address]] First first;  ///< heard where it has an opinion
  [[no_unique_address]] Rest rest;  ///< heard elsewhere: a field, or the list from the second on

  /// What the two remember.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<First, S, priority_field, 0> first;  ///< of the first
    /// Of the rest; fresh while the first is heard.
    [[no_unique_address]] detail::PlacedMemory<Rest, S, priority_field, 1> rest;
  };

  /// The first field's course where its confidence is over 0, else that of the rest.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    using RestMemory = decltype(memory.rest);
    Course<S> const course = evaluate(first, percept, memory.first);
    mask_t<S> const heard = course.confidence > S(0.0F);
    assign_where(heard, memory.rest, RestMemory{});
    return choose(
        heard, [&]() noexcept { return course; },
        [&]() noexcept {
          if constexpr (PlainNumber<S>) {
            return evaluate(rest, percept, memory.rest);
          } else {
            RestMemory next = memory.rest;
            Course<S> const other = evaluate(rest, percept, next);
            assign_where(!heard, memory.rest, next);
            return other;
          }
        });
  }
};

/// priority(a, b, c): the course of the first that has any confidence.
template <typename Field>
[[nodiscard]] constexpr Field priority(Field field) noexcept {
  detail::check_field<Field, float>();
  return field;
}
/// From two fields on, nested to the right.
template <typename First, typename... Rest>
[[nodiscard]] constexpr auto priority(First first, Rest... rest) noexcept {
  detail::check_field<First, float>();
  return priority_field<First, decltype(priority(rest...))>{first, priority(rest...)};
}

}  // namespace wend::inline v0
