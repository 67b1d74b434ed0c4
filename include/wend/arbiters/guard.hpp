// wend/arbiters/guard.hpp - guards: a yes or no with hysteresis, from a signal and thresholds, and their combinations.
#pragma once

#include <type_traits>

#include "wend/field.hpp"
#include "wend/number.hpp"
#include "wend/promise.hpp"

namespace wend::inline v0 {

namespace detail {

template <typename F>
concept SomeSignal = requires(F const& f, Percept<float, 1> const& p) {
  { f(p) } -> std::same_as<float>;
};

template <typename F>
concept SomeGuard = requires(F const& f, Percept<float, 1> const& p, memory_t<F, float>& m) {
  { ask(f, p, m) } -> std::same_as<bool>;
};

template <typename F>
consteval void check_guard() {
  static_assert(SomeGuard<F>,
                "wend: this arbiter needs a guard, and was given something that does not answer yes or no; a signal "
                "becomes a guard by thresholds: below(clearance, 0.30F, 0.50F)");
}

template <typename F>
consteval void check_signal() {
  static_assert(SomeSignal<F>,
                "wend: a signal is a functor that takes a percept by const reference and returns a number, such as "
                "wend::clearance");
}

// Stands where a signal was forgotten, so that only one error is shown.
struct NoSignal {
  template <Number S, int N>
  constexpr S operator()(Percept<S, N> const&) const noexcept {
    return S(0.0F);
  }
};

// Called only by a constant that must not be one.
inline void wend_below_needs_enter_at_most_leave_so_swap_the_thresholds() noexcept {}
inline void wend_above_needs_enter_at_least_leave_so_swap_the_thresholds() noexcept {}
inline void wend_held_needs_a_dwell_of_zero_seconds_or_more() noexcept {}

}  // namespace detail

/// Yes once the signal is under `enter`, until it is over `leave`; both in the signal's unit. The answer cannot change
/// back and forth sooner than the signal can cross from one threshold to the other. A signal that is not a number
/// leaves the answer as it is.
template <typename Signal>
struct below_guard {
  Signal signal;  ///< what is compared
  Parameter enter;  ///< in the signal's unit: yes from under it on
  Parameter leave;  ///< in the signal's unit, at least `enter`: no from over it on

  /// What the guard remembers.
  template <Number S>
  struct Memory {
    mask_t<S> on{};  ///< the last answer; no at first
  };

  /// The answer of this tick.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    S const value = signal(percept);
    memory.on = value < S(enter) || (memory.on && !(value > S(leave)));
    return memory.on;
  }
};

/// Yes once the signal is over `enter`, until it is under `leave`.
template <typename Signal>
struct above_guard {
  Signal signal;  ///< what is compared
  Parameter enter;  ///< in the signal's unit: yes from over it on
  Parameter leave;  ///< in the signal's unit, at most `enter`: no from under it on

  /// What the guard remembers.
  template <Number S>
  struct Memory {
    mask_t<S> on{};  ///< the last answer; no at first
  };

  /// The answer of this tick.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    S const value = signal(percept);
    memory.on = value > S(enter) || (memory.on && !(value < S(leave)));
    return memory.on;
  }
};

/// Keeps an answer of another guard for `dwell` seconds at least, whatever the noise. The first answer is taken at
/// once.
template <typename Guard>
struct held_guard {
  [[no_unique_address]] Guard guard;  ///< whose answers are held
  Parameter dwell;  ///< seconds, 0 or more, for which an answer stands at least

  /// What the two remember.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Guard, S, held_guard, 0> guard;  ///< of the guard that is held
    S since{S(0.0F)};  ///< seconds for which the answer has stood, up to far_away
    mask_t<S> started{};  ///< whether it has answered before
    mask_t<S> on{};  ///< the last answer
  };

  /// The answer of this tick. The guard inside is asked every time, also while its answer cannot count.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    mask_t<S> const wanted = ask(guard, percept, memory.guard);
    mask_t<S> const other = (wanted && !memory.on) || (!wanted && memory.on);
    memory.since = least(S(memory.since + percept.dt), S(far_away));
    mask_t<S> const change = other && (!memory.started || memory.since >= S(dwell));
    memory.on = select(change, wanted, memory.on);
    memory.since = select(change || !memory.started, S(0.0F), memory.since);
    memory.started = memory.since >= S(0.0F);  // from now on
    return memory.on;
  }
};

namespace detail {

struct And {
  template <typename Mask>
  constexpr Mask operator()(Mask const& a, Mask const& b) const noexcept {
    return a && b;
  }
};
struct Or {
  template <typename Mask>
  constexpr Mask operator()(Mask const& a, Mask const& b) const noexcept {
    return a || b;
  }
};

}  // namespace detail

/// Two guards joined. Both are asked on every tick, so that both keep their memory up to date.
template <typename Join, typename A, typename B>
struct joined_guard {
  [[no_unique_address]] A a;  ///< asked first
  [[no_unique_address]] B b;  ///< asked second

  /// What the two guards remember.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<A, S, joined_guard, 0> a;  ///< of the first
    [[no_unique_address]] detail::PlacedMemory<B, S, joined_guard, 1> b;  ///< of the second
  };

  /// The answer of this tick.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    mask_t<S> const of_a = ask(a, percept, memory.a);
    mask_t<S> const of_b = ask(b, percept, memory.b);
    return Join{}(of_a, of_b);
  }
};

/// A guard turned around.
template <typename Guard>
struct negated_guard {
  [[no_unique_address]] Guard guard;  ///< whose answers are turned around

  /// What the guard remembers.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Guard, S, negated_guard, 0> guard;  ///< of the guard inside
  };

  /// Yes when the guard inside says no.
  template <Number S, int N>
  [[nodiscard]] constexpr mask_t<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    return !ask(guard, percept, memory.guard);
  }
};

/// below(clearance, 0.30F, 0.50F): yes under 0.30, until over 0.50. Thresholds in the signal's unit, enter <= leave;
/// equal ones switch hard.
template <typename Signal>
[[nodiscard]] constexpr below_guard<Signal> below(Signal signal, Parameter enter, Parameter leave) noexcept {
  detail::check_signal<Signal>();
  detail::promise(enter <= leave, detail::wend_below_needs_enter_at_most_leave_so_swap_the_thresholds);
  return {signal, enter, leave};
}

/// above(goal_distance, 0.50F, 0.30F): yes over 0.50, until under 0.30; enter >= leave.
template <typename Signal>
[[nodiscard]] constexpr above_guard<Signal> above(Signal signal, Parameter enter, Parameter leave) noexcept {
  detail::check_signal<Signal>();
  detail::promise(enter >= leave, detail::wend_above_needs_enter_at_least_leave_so_swap_the_thresholds);
  return {signal, enter, leave};
}

/// Thresholds alone are no guard; these only say so.
template <typename Nothing = void>
constexpr auto below(Parameter enter, Parameter leave) noexcept {
  static_assert(!std::is_void_v<Nothing>,
                "wend: below needs the signal that is compared: below(clearance, 0.30F, 0.50F)");
  return below_guard<detail::NoSignal>{{}, enter, leave};
}
/// As below: no guard without a signal, so this only says what is missing.
template <typename Nothing = void>
constexpr auto above(Parameter enter, Parameter leave) noexcept {
  static_assert(!std::is_void_v<Nothing>,
                "wend: above needs the signal that is compared: above(goal_distance, 0.50F, 0.30F)");
  return above_guard<detail::NoSignal>{{}, enter, leave};
}

/// held(guard, 0.4F): keeps each answer for 0.4 s at least.
template <typename Guard>
[[nodiscard]] constexpr held_guard<Guard> held(Guard guard, Parameter dwell) noexcept {
  detail::check_guard<Guard>();
  detail::promise(dwell >= 0.0F, detail::wend_held_needs_a_dwell_of_zero_seconds_or_more);
  return {guard, dwell};
}

/// Yes when both say yes.
template <typename A, typename B>
[[nodiscard]] constexpr joined_guard<detail::And, A, B> both(A a, B b) noexcept {
  detail::check_guard<A>();
  detail::check_guard<B>();
  return {a, b};
}

/// Yes when one of them says yes.
template <typename A, typename B>
[[nodiscard]] constexpr joined_guard<detail::Or, A, B> either(A a, B b) noexcept {
  detail::check_guard<A>();
  detail::check_guard<B>();
  return {a, b};
}

/// Yes when the guard says no.
template <typename Guard>
[[nodiscard]] constexpr negated_guard<Guard> negated(Guard guard) noexcept {
  detail::check_guard<Guard>();
  return {guard};
}

}  // namespace wend::inline v0
