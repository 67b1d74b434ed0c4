// wend/lab/any_memory.hpp - memories as sets: everything a loop could remember, halves of it, and members of it.
#pragma once

#include <type_traits>

#include "wend/field.hpp"
#include "wend/lab/interval.hpp"
#include "wend/members.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

namespace detail {

// Calls f on each number and mask of a memory, at any depth, until it returns true.
template <typename Memory, typename F>
bool visit_leaves(Memory& memory, F const& f) {
  if constexpr (std::is_empty_v<Memory>) {
    return false;
  } else if constexpr (requires { f(memory); }) {
    return f(memory);
  } else {
    bool done = false;
    v0::for_each_member(memory, memory, [&](auto& member, auto&) { done = done || visit_leaves(member, f); });
    return done;
  }
}

template <typename Rounded>
struct Widen {
  bool operator()(Trilean& mask) const { return mask = Trilean::both(), false; }
  bool operator()(BasicInterval<Rounded>& x) const { return x = BasicInterval<Rounded>::whole(), false; }
  bool operator()(Vec2<BasicInterval<Rounded>>& v) const { return (*this)(v.x()) || (*this)(v.y()); }
};

template <typename Rounded>
struct DecideFirst {
  bool answer;
  bool operator()(Trilean& mask) const {
    if (!mask.undecided()) {
      return false;
    }
    mask = answer ? Trilean::yes() : Trilean::no();
    return true;
  }
  bool operator()(BasicInterval<Rounded>&) const { return false; }
  bool operator()(Vec2<BasicInterval<Rounded>>&) const { return false; }
};

// Two memories side by side: the set, and a member to be picked from it.
template <typename Set, typename One>
void pick(Set const& set, One& one, bool answer) {
  if constexpr (std::is_same_v<Set, Trilean>) {
    one = set.surely() || (set.undecided() && answer);
  } else if constexpr (requires { set.middle(); }) {
    one = static_cast<One>(set.middle());
  } else if constexpr (requires { set.x(); }) {
    pick(set.x(), one.x(), answer), pick(set.y(), one.y(), answer);
  } else if constexpr (!std::is_empty_v<Set>) {
    v0::for_each_member(set, one, [answer](auto const& s, auto& o) { pick(s, o, answer); });
  }
}

}  // namespace detail

/// Everything that an F could remember, as a memory on intervals: each mask undecided, each number anything.
template <typename F, typename I>
[[nodiscard]] memory_t<F, I> any_memory() {
  memory_t<F, I> memory;
  detail::visit_leaves(memory, detail::Widen<typename I::RoundedAs>{});
  return memory;
}

/// Answers the first undecided mask of a memory; false when there is none.
template <typename I, typename Memory>
bool decide_first_mask(Memory& memory, bool answer) {
  return detail::visit_leaves(memory, detail::DecideFirst<typename I::RoundedAs>{answer});
}

/// One memory out of a set of them: undecided masks get `answer`; numbers get a member, the middle where there is one,
/// rounded to S.
template <typename F, typename S, typename Set>
[[nodiscard]] memory_t<F, S> one_memory(Set const& set, bool answer) {
  memory_t<F, S> one;
  detail::pick(set, one, answer);
  return one;
}

}  // namespace wend::inline v0::lab
