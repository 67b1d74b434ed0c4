// wend/lab/explain_arbiters.hpp - why the course of the larger arbiters is what it is: automata, filters, votes, the
// motion along a threshold and in a null space.
#pragma once

#include <cstddef>
#include <string>
#include <type_traits>

#include "wend/arbiters/kept_clear.hpp"
#include "wend/arbiters/modes.hpp"
#include "wend/arbiters/null_space.hpp"
#include "wend/arbiters/sliding.hpp"
#include "wend/arbiters/vote.hpp"
#include "wend/lab/account.hpp"
#include "wend/lab/explain.hpp"

namespace wend::inline v0::lab {

/// A filter that keeps clear of discs.
template <typename Field>
struct Explain<kept_clear_field<Field>> {
  /// What the field wants, what the filter makes of it, and the field.
  template <typename Percept, typename Memory>
  static void tell(kept_clear_field<Field> const& filter, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    Memory of_field = before;
    auto const course = evaluate(filter, percept, after);
    auto const wanted = evaluate(filter.field, percept, of_field);
    bool const as_is = course.direction == wanted.direction && course.speed_share == wanted.speed_share;
    account.line(place.depth, place.part + "kept " + number_text(filter.margin) + " m clear, " +
                                  (as_is ? "passes through" : "turned aside or slowed") + " -> " +
                                  course_text(course, percept.pose.heading));
    explain(filter.field, percept, before, account, place.below("wanted"));
  }
};

/// A switch on clearance that slides.
template <typename Below, typename Above>
struct Explain<sliding_field<Below, Above>> {
  /// Where the clearance is beside the layer, the course, and both fields.
  template <typename Percept, typename Memory>
  static void tell(sliding_field<Below, Above> const& field, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    auto of_below = before.below;
    auto of_above = before.above;
    auto const same = [&course](auto const& other) {
      return course.direction == other.direction && !(course.confidence < other.confidence);
    };
    bool const low = same(evaluate(field.below, percept, of_below));
    bool const high = same(evaluate(field.above, percept, of_above));
    account.line(place.depth, place.part + "sliding, clearance " + number_text(percept.clearance) +
                                  " to a threshold of " + number_text(field.threshold) + " and a layer of " +
                                  number_text(field.width) + " -> " + course_text(course, percept.pose.heading));
    explain(field.below, percept, before.below, account, place.below("below", low || !high));
    explain(field.above, percept, before.above, account, place.below("above", high || !low));
  }
};

/// Priority by projection.
template <typename First, typename Second>
struct Explain<null_space_field<First, Second>> {
  /// The course, the first field, and the second.
  template <typename Percept, typename Memory>
  static void tell(null_space_field<First, Second> const& field, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    account.line(place.depth, place.part + "null space -> " + course_text(course, percept.pose.heading));
    explain(field.first, percept, before.first, account, place.below("first"));
    explain(field.second, percept, before.second, account, place.below("what is left across it"));
  }
};

namespace detail {

template <typename Voters, typename Percept, typename Memory>
void explain_voters(Voters const& voters, Percept const& percept, Memory const& before, Account& account,
                    Place const& place) {
  if constexpr (Voters::count > 0) {
    auto const tell = [&](auto const& memory) {
      explain(voters.field, percept, memory.field, account, place.below("weight " + number_text(voters.weight)));
      explain_voters(voters.rest, percept, memory.rest, account, place);
    };
    if constexpr (std::is_empty_v<Memory>) {
      tell(memory_t<Voters, decltype(percept.dt)>{});
    } else {
      tell(before);
    }
  }
}

}  // namespace detail

/// Arbitration by votes.
template <int Candidates, typename Voters>
struct Explain<vote_field<Candidates, Voters>> {
  /// The winner, and each field with its weight.
  template <typename Percept, typename Memory>
  static void tell(vote_field<Candidates, Voters> const& field, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    account.line(place.depth, place.part + "vote on " + std::to_string(Candidates) + " headings -> " +
                                  course_text(course, percept.pose.heading));
    detail::explain_voters(field.voters, percept, before, account, place);
  }
};

/// A hybrid automaton.
template <typename... Modes>
struct Explain<modes_field<Modes...>> {
  /// The mode, the one it came from, and the field and guards of the mode.
  template <typename Percept, typename Memory>
  static void tell(modes_field<Modes...> const& field, Percept const& percept, Memory const& before, Account& account,
                   Place const& place) {
    using S = std::remove_cvref_t<decltype(percept.dt)>;
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    std::size_t const was = place_of(before);
    std::size_t const is = place_of(after);
    std::string from;
    std::string to;
    v0::detail::for_each_in<S>(field.modes, before.modes, [&](auto const& mode, auto const&, auto at) {
      from = at == was ? mode.name.text : from;
      to = at == is ? mode.name.text : to;
    });
    account.line(place.depth, place.part + "modes, " + (was == is ? "in " : from + " to ") + to + " -> " +
                                  course_text(course, percept.pose.heading));
    v0::detail::for_each_in<S>(field.modes, before.modes, [&](auto const& mode, auto const& remembered, auto at) {
      using Mode = std::remove_cvref_t<decltype(mode)>;
      using Remembered = memory_t<Mode, S>;
      Remembered memory{};
      if constexpr (std::is_same_v<Remembered, std::remove_cvref_t<decltype(remembered)>>) {
        memory = remembered;
      }
      if (at == was) {  // its ways out are asked in order, up to the one that is taken
        bool asked = true;
        v0::detail::for_each_in<S>(mode.ways, memory.ways, [&](auto const& way, auto const& of_guard, auto) {
          if (asked) {
            explain(way.guard, percept, of_guard, account, place.below(std::string("to ") + way.target.text));
            auto next = of_guard;
            asked = !ask(way.guard, percept, next);
          }
        });
      }
      if (at == is) {  // one that is entered anew begins with a fresh memory
        explain(mode.field, percept, was == is ? memory.field : Remembered{}.field, account,
                place.below(std::string("in ") + mode.name.text));
      }
    });
  }

 private:
  template <typename Memory>
  static std::size_t place_of(Memory const& memory) {
    for (std::size_t i = 0; i < memory.is_in.size(); ++i) {
      if (memory.is_in[i]) {
        return i + 1;
      }
    }
    return 0;
  }
};

}  // namespace wend::inline v0::lab
