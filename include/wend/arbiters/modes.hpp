// wend/arbiters/modes.hpp - a hybrid automaton: named modes with a field each, and guarded transitions between them.
#pragma once

#include <array>
#include <cstddef>
#include <type_traits>
#include <utility>

#include "wend/arbiters/guard.hpp"
#include "wend/field.hpp"

namespace wend::inline v0 {

/// A name that can be a template argument: mode<"going">.
template <std::size_t Size>
struct ModeName {
  char text[Size];  ///< with the zero at its end
  /// From a string literal.
  consteval ModeName(char const (&literal)[Size]) noexcept : text{} {
    for (std::size_t i = 0; i < Size; ++i) {
      text[i] = literal[i];
    }
  }
};

/// Whether two names are the same.
template <std::size_t A, std::size_t B>
[[nodiscard]] consteval bool same_name(ModeName<A> const& a, ModeName<B> const& b) noexcept {
  if (A != B) {
    return false;
  }
  for (std::size_t i = 0; i < A && i < B; ++i) {
    if (a.text[i] != b.text[i]) {
      return false;
    }
  }
  return true;
}

/// A way out of a mode: to the mode called Target, once the guard says yes.
template <ModeName Target, typename Guard>
struct transition {
  [[no_unique_address]] Guard guard;  ///< asked on each tick in the mode it leads out of
  static constexpr auto target = Target;  ///< the name of the mode it leads to

  /// What the guard remembers.
  template <Number S>
  using Memory = memory_t<Guard, S>;
};

/// to<"passing">(below(clearance, 0.30F, 0.50F)): into the mode "passing" under 30 cm of clearance.
template <ModeName Target, typename Guard>
[[nodiscard]] constexpr transition<Target, Guard> to(Guard guard) noexcept {
  detail::check_guard<Guard>();
  return {guard};
}

namespace detail {

// Things in a row, with their memories; std::tuple is no plain struct.
template <typename... Things>
struct Row;
template <>
struct Row<> {
  static constexpr std::size_t size = 0;
};
template <typename First, typename... Rest>
struct Row<First, Rest...> {
  [[no_unique_address]] First first;
  [[no_unique_address]] Row<Rest...> rest;

  template <Number S>
  struct Memory {
    [[no_unique_address]] PlacedMemory<First, S, Row, 0> first;
    [[no_unique_address]] PlacedMemory<Row<Rest...>, S, Row, 1> rest;
  };
  static constexpr std::size_t size = 1 + sizeof...(Rest);
};

[[nodiscard]] constexpr Row<> row() noexcept { return {}; }
template <typename First, typename... Rest>
[[nodiscard]] constexpr Row<First, Rest...> row(First first, Rest... rest) noexcept {
  return {first, row(rest...)};
}

// Calls f(thing, its memory, its place) for each thing in a row. Things that remember nothing get an empty memory.
template <Number S, std::size_t Place = 0, typename R, typename M, typename F>
constexpr void for_each_in(R const& things, [[maybe_unused]] M& memory, F const& f) noexcept {
  if constexpr (R::size > 0) {
    constexpr auto place = std::integral_constant<std::size_t, Place>{};
    if constexpr (std::is_empty_v<M>) {
      NoMemory<R> none;
      f(things.first, none, place);
      for_each_in<S, Place + 1>(things.rest, none, f);
    } else {
      f(things.first, memory.first, place);
      for_each_in<S, Place + 1>(things.rest, memory.rest, f);
    }
  }
}

}  // namespace detail

/// A mode: a name, the field that is heard in it, and the ways out of it.
template <ModeName Name, typename Field, typename Ways>
struct mode_of {
  [[no_unique_address]] Field field;  ///< heard while the mode is on
  [[no_unique_address]] Ways ways;  ///< in order of rank
  static constexpr auto name = Name;  ///< unique among the modes of an automaton

  /// What field and guards remember while the mode is on.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Field, S, mode_of, 0> field;  ///< of the field
    [[no_unique_address]] detail::PlacedMemory<Ways, S, mode_of, 1> ways;    ///< of the guards
  };
};

/// mode<"going">(toward_goal{}, to<"passing">(guard), ...): the field, and the ways out in order of rank.
template <ModeName Name, typename Field, typename... Ways>
[[nodiscard]] constexpr auto mode(Field field, Ways... ways) noexcept {
  detail::check_field<Field, float>();
  return mode_of<Name, Field, detail::Row<Ways...>>{field, detail::row(ways...)};
}

namespace detail {

template <ModeName Name, typename... Modes>
[[nodiscard]] consteval int times_named() noexcept {
  return (0 + ... + (same_name(Name, Modes::name) ? 1 : 0));
}

template <ModeName Name, typename... Modes>
[[nodiscard]] consteval std::size_t place_of() noexcept {
  std::size_t place = 0;
  static_cast<void>(((same_name(Name, Modes::name) || (++place, false)) || ...));
  return place;
}

// Whether each way out of a mode leads to one of the modes.
template <typename... Modes, ModeName Name, typename Field, typename... Ways>
[[nodiscard]] consteval bool targets_exist(mode_of<Name, Field, Row<Ways...>> const*) noexcept {
  return (true && ... && (times_named<Ways::target, Modes...>() > 0));
}

template <typename... Modes>
consteval void check_modes() {
  static_assert(sizeof...(Modes) > 1, "wend: modes needs two modes at least; one alone is its field");
  static_assert((true && ... && (times_named<Modes::name, Modes...>() == 1)),
                "wend: two modes of one name; a transition could not tell them apart, so name them differently");
  static_assert(
      (true && ... && targets_exist<Modes...>(static_cast<Modes const*>(nullptr))),
      "wend: a transition leads to a mode that is not there; the name in to<...> has to be that of a mode<...>");
}

}  // namespace detail

/// A hybrid automaton (Henzinger 1996, "The theory of hybrid automata"): in each mode one field is heard, and its
/// guards are asked in their order; the first that says yes leads to another mode, whose field is heard in the same
/// tick. One transition a tick at most. A mode that is entered, also from itself, starts with a fresh memory of its
/// field and its guards. The first mode is where it starts. Memory: one mask for each mode but the first, and what the
/// modes remember; of several masks that are set, as no run of it leaves them, the first counts.
template <typename... Modes>
struct modes_field {
  [[no_unique_address]] detail::Row<Modes...> modes;  ///< the first is where it starts

  /// What the modes remember, and which of them is on.
  template <Number S>
  struct Memory {
    [[no_unique_address]] memory_t<detail::Row<Modes...>, S> modes;  ///< of each mode
    std::array<mask_t<S>, sizeof...(Modes) - 1> is_in{};  ///< whether mode 1, 2, ... is on; the first, where none is
  };

  /// The course of the mode that is on after this tick's transition.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    constexpr std::size_t count = sizeof...(Modes);
    std::array<mask_t<S>, count> now{};
    mask_t<S> none_yet = !mask_t<S>{};
    for (std::size_t i = 1; i < count; ++i) {
      now[i] = memory.is_in[i - 1] && none_yet;
      none_yet = none_yet && !memory.is_in[i - 1];
    }
    now[0] = none_yet;

    std::array<mask_t<S>, count> next{};
    std::array<mask_t<S>, count> entered{};
    detail::for_each_in<S>(modes, memory.modes, [&](auto const& mode, auto& remembered, auto place) noexcept {
      mask_t<S> staying = now[place];
      with_ways<S>(mode, remembered, [&](auto const& way, auto& of_guard, auto) noexcept {
        constexpr std::size_t target = detail::place_of<std::remove_cvref_t<decltype(way)>::target, Modes...>();
        mask_t<S> const fires = asked_where<S>(now[place], way.guard, percept, of_guard) && staying;
        entered[target] = entered[target] || fires;
        staying = staying && !fires;
      });
      next[place] = next[place] || staying;
    });

    Course<S> course;
    detail::for_each_in<S>(modes, memory.modes, [&](auto const& mode, auto& remembered, auto place) noexcept {
      using Remembered = std::remove_reference_t<decltype(remembered)>;
      assign_where(entered[place], remembered, Remembered{});
      mask_t<S> const on = next[place] || entered[place];
      hear<S>(on, mode, percept, remembered, course);
      if constexpr (place > 0) {
        memory.is_in[place - 1] = on;
      }
    });
    return course;
  }

 private:
  template <Number S, typename Mode, typename M, typename F>
  static constexpr void with_ways(Mode const& mode, [[maybe_unused]] M& remembered, F const& f) noexcept {
    if constexpr (std::is_empty_v<M>) {
      detail::NoMemory<Mode> none;
      detail::for_each_in<S>(mode.ways, none, f);
    } else {
      detail::for_each_in<S>(mode.ways, remembered.ways, f);
    }
  }

  // What a guard says where its mode is on; elsewhere it is not asked, and remembers nothing of this tick.
  template <Number S, typename Guard, int N, typename M>
  [[nodiscard]] static constexpr mask_t<S> asked_where(mask_t<S> const& on, Guard const& guard,
                                                       Percept<S, N> const& percept, M& memory) noexcept {
    if constexpr (PlainNumber<S>) {
      return on && ask(guard, percept, memory);
    } else {
      M next = memory;
      mask_t<S> const says = ask(guard, percept, next);
      assign_where(on, memory, next);
      return on && says;
    }
  }

  template <Number S, typename Mode, int N, typename M>
  static constexpr void hear(mask_t<S> const& on, Mode const& mode, Percept<S, N> const& percept,
                             [[maybe_unused]] M& remembered, Course<S>& course) noexcept {
    auto const with = [&](auto& of_field) noexcept {
      if constexpr (PlainNumber<S>) {
        if (on) {
          course = evaluate(mode.field, percept, of_field);
        }
      } else {
        auto next = of_field;
        assign_where(on, course, evaluate(mode.field, percept, next));
        assign_where(on, of_field, next);
      }
    };
    if constexpr (std::is_empty_v<M>) {
      detail::NoMemory<Mode> none;
      with(none);
    } else {
      with(remembered.field);
    }
  }
};

/// An automaton of these modes, which starts in the first:
///
///     modes(mode<"going">(toward_goal{}, to<"passing">(below(clearance, 0.30F, 0.30F))),
///           mode<"passing">(past_disc{}, to<"going">(above(clearance, 0.50F, 0.50F))))
template <typename... Modes>
[[nodiscard]] constexpr modes_field<Modes...> modes(Modes... all) noexcept {
  detail::check_modes<Modes...>();
  return {detail::row(all...)};
}

}  // namespace wend::inline v0
