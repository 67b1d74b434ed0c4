// wend/field.hpp - what a heading field is, and how one is asked.
#pragma once

#include <concepts>
#include <type_traits>

#include "wend/members.hpp"
#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0 {

/// Where a field wants to go, in the frame of the percept.
template <Number S>
struct Course {
  Vec2<S> direction{S(0.0F), S(0.0F)};  ///< unit, or (0, 0) when there is no opinion
  S confidence{S(0.0F)};                ///< in [0, 1]; 0 means no opinion
  S speed_share{S(1.0F)};               ///< in [0, 1]: how much of the speed that is allowed the field wants to use
};

/// A course from a vector taken apart, and a confidence over 0. No opinion where the vector has no direction, which is
/// then (0, 0): so direction (0, 0) and confidence 0 always come together.
template <Number S>
[[nodiscard]] Course<S> course_along(Polar<S> const& way, S const& confidence,
                                     S const& speed_share = S(1.0F)) noexcept {
  return {way.direction, select(way.length > S(no_length), confidence, S(0.0F)), speed_share};
}

/// A course from a vector that need not be a unit one.
template <Number S>
[[nodiscard]] Course<S> course_along(Vec2<S> const& vector, S const& confidence,
                                     S const& speed_share = S(1.0F)) noexcept {
  return course_along(polar(vector), confidence, speed_share);
}

namespace detail {

// A memory that takes no byte. Tagged by its place, since two members of one empty type may not share an address.
template <typename Owner, int Place = 0>
struct NoMemory {};

template <typename F, typename S>
struct MemoryOf {
  using type = NoMemory<F>;
};
template <typename F, typename S>
  requires requires { typename F::template Memory<S>; }
struct MemoryOf<F, S> {
  using type = typename F::template Memory<S>;
};

template <typename F, typename S, typename Owner, int Place>
using PlacedMemory = std::conditional_t<std::is_empty_v<typename MemoryOf<F, S>::type>, NoMemory<Owner, Place>,
                                        typename MemoryOf<F, S>::type>;

template <typename F, typename S>
concept RemembersOn = requires(F const& f, Percept<S, 1> const& p, typename MemoryOf<F, S>::type& m) { f(p, m); };

template <typename F, typename S>
concept ForgetsOn = requires(F const& f, Percept<S, 1> const& p) { f(p); };

template <typename F, typename S, bool Remembers>
struct Answer {
  using type = std::invoke_result_t<F const&, Percept<S, 1> const&, typename MemoryOf<F, S>::type&>;
};
template <typename F, typename S>
struct Answer<F, S, false> {
  using type = std::invoke_result_t<F const&, Percept<S, 1> const&>;
};

}  // namespace detail

/// All that a field, guard, arbiter or loop remembers between ticks, as a plain struct: copy it, log it, compare it.
/// `memory_t<Policy, float> memory;` starts fresh. Empty where nothing is remembered.
template <typename F, Number S>
using memory_t = typename detail::MemoryOf<F, S>::type;

/// A heading field over S: an immutable functor from what is known to a course. Either
/// `Course<S> operator()(Percept<S, N> const&) const`, or, when it remembers, a member template `Memory<S>` and
/// `Course<S> operator()(Percept<S, N> const&, Memory<S>&) const`.
template <typename F, typename S = float>
concept HeadingField = Number<S> && std::copy_constructible<F> &&
                       (detail::RemembersOn<F, S> || detail::ForgetsOn<F, S>) &&
                       std::same_as<typename detail::Answer<F, S, detail::RemembersOn<F, S>>::type, Course<S>>;

namespace detail {

// One sentence for each way in which a would-be field can miss the mark; the first that applies is the one shown.
template <typename F, typename S>
consteval void check_field() {
  static_assert(
      std::is_trivially_copyable_v<F>,
      "wend: this heading field owns something, or copies itself in a way of its own, so its policy can be no "
      "constant in flash; keep plain numbers and std::array in it, and what changes in a Memory<S>");
  static_assert(
      !requires(F& f, Percept<S, 1> const& p) { f(p); } || ForgetsOn<F, S> || RemembersOn<F, S>,
      "wend: this heading field forgets const; write: auto operator()(auto const& percept) const");
  static_assert(ForgetsOn<F, S> || RemembersOn<F, S>,
                "wend: this is not a heading field: it cannot be called as field(percept), nor as field(percept, "
                "memory) with a member template Memory<S>; write: template <wend::Number S, int N> wend::Course<S> "
                "operator()(wend::Percept<S, N> const& percept) const");
  if constexpr (ForgetsOn<F, S> || RemembersOn<F, S>) {
    static_assert(std::same_as<typename Answer<F, S, RemembersOn<F, S>>::type, Course<S>>,
                  "wend: this heading field returns something else than a wend::Course<S>; an angle, for example, has "
                  "to become a unit direction with a confidence: return {direction, S(1.0F)}");
  }
}

}  // namespace detail

/// Asks a field or guard. What it remembers is changed in `memory`. One that remembers nothing ignores it, and a
/// composition of such ones is given an empty memory of its own kind.
template <typename F, Number S, int N, typename Memory>
[[nodiscard]] constexpr auto ask(F const& f, Percept<S, N> const& percept, [[maybe_unused]] Memory& memory) noexcept {
  if constexpr (!requires(memory_t<F, S>& m) { f(percept, m); }) {
    return f(percept);
  } else if constexpr (std::is_empty_v<Memory>) {
    static_assert(std::is_empty_v<memory_t<F, S>>,
                  "wend: this policy remembers, and was given the memory of one that does not, so it would forget on "
                  "every tick; write: wend::memory_t<decltype(policy), float> memory;");
    memory_t<F, S> none;
    return f(percept, none);
  } else {
    return f(percept, memory);
  }
}

/// The course of a policy, this tick. The memory is that of `memory_t<Policy, S>`, one for each machine.
template <typename F, Number S, int N, typename Memory>
[[nodiscard]] constexpr Course<S> evaluate(F const& field, Percept<S, N> const& percept, Memory& memory) noexcept {
  detail::check_field<F, S>();
  return ask(field, percept, memory);
}

/// The same for a field that remembers nothing.
template <typename F, Number S, int N>
  requires std::is_empty_v<memory_t<F, S>>
[[nodiscard]] constexpr Course<S> evaluate(F const& field, Percept<S, N> const& percept) noexcept {
  memory_t<F, S> none;
  return evaluate(field, percept, none);
}

}  // namespace wend::inline v0
