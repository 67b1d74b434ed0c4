// wend/lab/explain.hpp - why a policy's course is what it is: each guard with its thresholds, each weight, each voice.
//
// The answers and courses told are those of the policy's own parts, asked once more; the thresholds are compared here
// only to find the words. An arbiter or guard of your own is told by its name and outcome; to tell more of it,
// specialise Explain for it.
#pragma once

#include <string>
#include <type_traits>

#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/priority.hpp"
#include "wend/field.hpp"
#include "wend/lab/account.hpp"
#include "wend/lab/member_names.hpp"

namespace wend::inline v0::lab {

/// Where an explanation has got to: how deep, as what part of what is above, and whether what is told has a say.
struct Place {
  int depth = 0;  ///< levels, 0 for the whole policy
  std::string part;  ///< "first: ", say; empty for the whole policy
  bool heard = true;  ///< whether what is told there can get into the outcome

  /// One level deeper, as the part `name`; a part of what has no say has none either.
  [[nodiscard]] Place below(std::string const& name, bool has_a_say = true) const {
    return {depth + 1, name + ": ", heard && has_a_say};
  }
};

namespace detail {

template <typename Memory>
std::string memory_text(Memory const& memory) {
  if constexpr (std::is_same_v<Memory, bool>) {
    return memory ? "yes" : "no";
  } else if constexpr (PlainNumber<Memory>) {
    return number_text(memory);
  } else if constexpr (requires { memory.x(), memory.y(); }) {
    return "(" + number_text(memory.x()) + ", " + number_text(memory.y()) + ")";
  } else if constexpr (requires { memory.begin(), memory.end(); }) {
    std::string text;
    for (auto const& one : memory) {
      text += (text.empty() ? "[" : ", ") + memory_text(one);
    }
    return text + "]";
  } else if constexpr (std::is_aggregate_v<Memory>) {
    std::string text;
    for_each_named_member(memory, memory, [&text](std::string const& name, auto const& member, auto const&) {
      if constexpr (!std::is_empty_v<std::remove_cvref_t<decltype(member)>>) {
        text += (text.empty() ? "" : ", ") + name + " " + memory_text(member);
      }
    });
    return text;
  } else {
    return "something";
  }
}

inline std::string on_or_off(bool on) { return on ? "on" : "off"; }

// "turns on", "stays on", "turns off", "stays off".
inline std::string change(bool before, bool after) {
  return (before == after ? "stays " : "turns ") + on_or_off(after);
}

// `enters` and `leaves`: which side of a threshold the signal has to get to.
template <typename Guard, typename Percept, typename Memory>
void explain_thresholds(Guard const& guard, char const* enters, char const* leaves, Percept const& percept,
                        Memory const& before, Account& account, Place const& place) {
  Memory after = before;
  bool const on = ask(guard, percept, after);
  auto const value = guard.signal(percept);
  Memory off{};
  bool const beyond_enter = ask(guard, percept, off);  // what one that is off would say
  std::string why = " " + number_text(value);
  if (!finite(value)) {
    why = " is not a number";
  } else if (on) {
    why += beyond_enter ? std::string(" is ") + enters + " " + number_text(guard.enter)
                        : std::string(" is not yet ") + leaves + " " + number_text(guard.leave);
  } else {
    why += before.on ? std::string(" is ") + leaves + " " + number_text(guard.leave)
                     : std::string(" is not ") + enters + " " + number_text(guard.enter);
  }
  account.line(place.depth, place.part + change(before.on, on) + ", " + name_of(guard.signal) + why);
}

}  // namespace detail

/// Adds to an account why F answers what it does, with the memory it had before. This one is for fields and guards of
/// which nothing more is known than what they answer and remember.
template <typename F>
struct Explain {
  /// One line; a field that answers with confidence where it has a say is one of the voices.
  template <typename Percept, typename Memory>
  static void tell(F const& f, Percept const& percept, Memory const& before, Account& account, Place const& place) {
    Memory after = before;
    auto const answer = ask(f, percept, after);
    if constexpr (std::is_same_v<std::remove_cv_t<decltype(answer)>, bool>) {
      account.line(place.depth, place.part + name_of(f) + ": " + detail::on_or_off(answer));
    } else {
      std::string text = place.part + name_of(f) + " -> " + course_text(answer, percept.pose.heading);
      if constexpr (!std::is_empty_v<Memory>) {
        text += "; remembers " + detail::memory_text(after);
      }
      account.line(place.depth, text);
      if (place.heard && answer.confidence > 0.0F) {
        account.voices.push_back(name_of(f));
      }
    }
  }
};

/// The same as a function. As with `ask`, a composition that remembers nothing may be given any empty memory.
template <typename F, typename Percept, typename Memory>
void explain(F const& f, Percept const& percept, Memory const& before, Account& account, Place const& place = {}) {
  if constexpr (std::is_empty_v<Memory>) {
    Explain<F>::tell(f, percept, memory_t<F, decltype(percept.dt)>{}, account, place);
  } else {
    Explain<F>::tell(f, percept, before, account, place);
  }
}

/// A guard by thresholds.
template <typename Signal>
struct Explain<below_guard<Signal>> {
  /// The answer, the signal, and the threshold that decided.
  template <typename Percept, typename Memory>
  static void tell(below_guard<Signal> const& guard, Percept const& percept, Memory const& before, Account& account,
                   Place const& place) {
    detail::explain_thresholds(guard, "under", "over", percept, before, account, place);
  }
};

/// A guard by thresholds.
template <typename Signal>
struct Explain<above_guard<Signal>> {
  /// The answer, the signal, and the threshold that decided.
  template <typename Percept, typename Memory>
  static void tell(above_guard<Signal> const& guard, Percept const& percept, Memory const& before, Account& account,
                   Place const& place) {
    detail::explain_thresholds(guard, "over", "under", percept, before, account, place);
  }
};

/// A guard whose answers are held.
template <typename Guard>
struct Explain<held_guard<Guard>> {
  /// The answer, why it changes or stands, and the guard inside.
  template <typename Percept, typename Memory>
  static void tell(held_guard<Guard> const& held, Percept const& percept, Memory const& before, Account& account,
                   Place const& place) {
    Memory after = before;
    bool const on = held(percept, after);
    auto inner = before.guard;
    bool const wanted = ask(held.guard, percept, inner);
    std::string text = place.part + "held " + number_text(held.dwell) + " s: ";
    if (!before.started) {
      text += "first answer, " + detail::on_or_off(on);
    } else if (on != before.on) {
      text += detail::change(before.on, on) + ", having kept its answer long enough";
    } else if (wanted != on) {
      text += detail::change(before.on, on) + " for now, " + number_text(after.since) + " s after its last change";
    } else {
      text += detail::change(before.on, on);
    }
    account.line(place.depth, text);
    explain(held.guard, percept, before.guard, account, place.below("its guard"));
  }
};

/// Two guards joined.
template <typename Join, typename A, typename B>
struct Explain<joined_guard<Join, A, B>> {
  /// The answer, and both guards.
  template <typename Percept, typename Memory>
  static void tell(joined_guard<Join, A, B> const& guard, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    bool const all = std::is_same_v<Join, v0::detail::And>;
    account.line(place.depth,
                 place.part + (all ? "both: " : "either: ") + detail::on_or_off(ask(guard, percept, after)));
    explain(guard.a, percept, before.a, account, place.below("one"));
    explain(guard.b, percept, before.b, account, place.below("other"));
  }
};

/// A guard turned around.
template <typename Guard>
struct Explain<negated_guard<Guard>> {
  /// The answer, and the guard inside.
  template <typename Percept, typename Memory>
  static void tell(negated_guard<Guard> const& guard, Percept const& percept, Memory const& before, Account& account,
                   Place const& place) {
    Memory after = before;
    account.line(place.depth, place.part + "negated: " + detail::on_or_off(ask(guard, percept, after)));
    explain(guard.guard, percept, before.guard, account, place.below("its guard"));
  }
};

/// A field inside a guard, another outside.
template <typename Guard, typename Inside, typename Outside>
struct Explain<guarded_field<Guard, Inside, Outside>> {
  /// Which of the two is heard, the guard, and that field.
  template <typename Percept, typename Memory>
  static void tell(guarded_field<Guard, Inside, Outside> const& field, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    bool const switched = after.is_inside != before.is_inside;
    account.line(place.depth, place.part + "guarded, " + (switched ? "goes " : "stays ") +
                                  (after.is_inside ? "inside" : "outside") + " -> " +
                                  course_text(course, percept.pose.heading));
    explain(field.guard, percept, before.guard, account, place.below("guard"));
    auto const one = [&](bool spoken, char const* part, auto const& f, auto const& remembered) {
      if (spoken) {  // one that is entered anew begins with a fresh memory
        explain(f, percept, switched ? std::remove_cvref_t<decltype(remembered)>{} : remembered, account,
                place.below(part));
      } else {
        account.line(place.depth + 1, part + (": " + name_of(f)) + " is not asked");
      }
    };
    one(after.is_inside, "inside", field.inside, before.inside);
    one(!after.is_inside, "outside", field.outside, before.outside);
  }
};

/// The first field that has an opinion.
template <typename First, typename Rest>
struct Explain<priority_field<First, Rest>> {
  /// Which one is heard, and those asked.
  template <typename Percept, typename Memory>
  static void tell(priority_field<First, Rest> const& field, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    auto of_first = before.first;
    bool const heard = evaluate(field.first, percept, of_first).confidence > 0.0F;
    account.line(place.depth, place.part + (heard ? "priority, the first speaks" : "priority, the first is silent") +
                                  " -> " + course_text(course, percept.pose.heading));
    explain(field.first, percept, before.first, account, place.below("first"));
    if (heard) {
      account.line(place.depth + 1, "then: " + name_of(field.rest) + " is not asked");
    } else {
      explain(field.rest, percept, before.rest, account, place.below("then"));
    }
  }
};

/// A blend of two fields.
template <typename Weight, typename Low, typename High>
struct Explain<blended_field<Weight, Low, High>> {
  /// The weight, the course, and both fields.
  template <typename Percept, typename Memory>
  static void tell(blended_field<Weight, Low, High> const& field, Percept const& percept, Memory const& before,
                   Account& account, Place const& place) {
    Memory after = before;
    auto const course = evaluate(field, percept, after);
    auto const weight = field.weight(percept);
    auto const other = 1.0F - weight;
    std::string of_what = "fixed shares";
    if constexpr (requires { field.weight.signal(percept); }) {
      of_what = name_of(field.weight.signal) + " " + number_text(field.weight.signal(percept)) + " on a ramp from " +
                number_text(field.weight.low) + " to " + number_text(field.weight.high);
    }
    account.line(place.depth, place.part + "blend, " + of_what + " -> " + course_text(course, percept.pose.heading));
    explain(field.low, percept, before.low, account, place.below("weight " + number_text(other), other > 0.0F));
    explain(field.high, percept, before.high, account, place.below("weight " + number_text(weight), weight > 0.0F));
  }
};

}  // namespace wend::inline v0::lab
