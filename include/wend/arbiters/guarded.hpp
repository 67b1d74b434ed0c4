// wend/arbiters/guarded.hpp - one field inside a guard, another outside: switched hard, or with hysteresis.
#pragma once

#include "wend/arbiters/guard.hpp"
#include "wend/field.hpp"

namespace wend::inline v0 {

namespace detail {

// Asks one of two fields, and gives the one that is entered anew a fresh memory. On a bool mask only one is asked.
template <typename A, typename B, Number S, int N, typename MemoryA, typename MemoryB>
[[nodiscard]] constexpr Course<S> ask_one(mask_t<S> const& first, mask_t<S> const& entered, A const& a, MemoryA& of_a,
                                          B const& b, MemoryB& of_b, Percept<S, N> const& percept) noexcept {
  assign_where(entered, of_a, MemoryA{});
  assign_where(entered, of_b, MemoryB{});
  if constexpr (PlainNumber<S>) {
    return first ? evaluate(a, percept, of_a) : evaluate(b, percept, of_b);
  } else {
    MemoryA next_a = of_a;
    MemoryB next_b = of_b;
    Course<S> course = evaluate(b, percept, next_b);
    assign_where(first, course, evaluate(a, percept, next_a));
    assign_where(first, of_a, next_a);
    assign_where(!first, of_b, next_b);
    return course;
  }
}

}  // namespace detail

/// `inside` while the guard says yes, `outside` while it says no. A field that is entered anew starts with a fresh
/// memory; the guard keeps its own.
template <typename Guard, typename Inside, typename Outside>
struct guarded_field {
  [[no_unique_address]] Guard guard;  ///< which of the two is heard
  [[no_unique_address]] Inside inside;  ///< while it says yes
  [[no_unique_address]] Outside outside;  ///< while it says no

  /// What all three remember.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Guard, S, guarded_field, 0> guard;  ///< of the guard
    [[no_unique_address]] detail::PlacedMemory<Inside, S, guarded_field, 1> inside;  ///< fresh whenever it is entered
    [[no_unique_address]] detail::PlacedMemory<Outside, S, guarded_field, 2> outside;  ///< fresh whenever it is entered
    mask_t<S> is_inside{};  ///< what the guard said last; no at first
  };

  /// The course of the one field that the guard lets be heard.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    mask_t<S> const now = ask(guard, percept, memory.guard);
    mask_t<S> const switched = (now && !memory.is_inside) || (!now && memory.is_inside);
    if constexpr (PlainNumber<S>) {
      assign_where(switched, memory.is_inside, now);  // else it is that already, and nothing is stored
    } else {
      memory.is_inside = now;
    }
    return detail::ask_one(now, switched, inside, memory.inside, outside, memory.outside, percept);
  }
};

/// No opinion, ever: what stands outside of only_when.
struct no_opinion {
  /// Direction (0, 0) and confidence 0, whatever the percept.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const&) const noexcept {
    return {};
  }
};

/// guarded(below(clearance, 0.30F, 0.50F), past_disc{}, toward_goal{}): the first field while the guard says yes, else
/// the second.
template <typename Guard, typename Inside, typename Outside>
[[nodiscard]] constexpr guarded_field<Guard, Inside, Outside> guarded(Guard guard, Inside inside,
                                                                      Outside outside) noexcept {
  detail::check_guard<Guard>();
  detail::check_field<Inside, float>();
  detail::check_field<Outside, float>();
  return {guard, inside, outside};
}

/// only_when(guard, field): the field's course while the guard says yes, else no opinion. For a list of priorities.
template <typename Guard, typename Field>
[[nodiscard]] constexpr guarded_field<Guard, Field, no_opinion> only_when(Guard guard, Field field) noexcept {
  return guarded(guard, field, no_opinion{});
}

}  // namespace wend::inline v0
