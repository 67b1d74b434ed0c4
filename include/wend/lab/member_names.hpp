// wend/lab/member_names.hpp - what the members of memories and commands are called, for those who read about them.
#pragma once

#include <cstddef>
#include <string>
#include <type_traits>

#include "wend/members.hpp"

namespace wend::inline v0::lab {

namespace detail {

template <typename T, typename Member>
bool is_same_place(T const& there, Member const& member) {
  if constexpr (std::is_same_v<T, Member>) {
    return &there == &member;
  } else {
    return false;
  }
}

// The language cannot list names, so the ones the library uses are tried in turn.
#define WEND_TRY_NAME(name)                  \
  if constexpr (requires { whole.name; }) {  \
    if (is_same_place(whole.name, member)) { \
      return #name;                          \
    }                                        \
  }

template <typename Whole, typename Member>
std::string name_of_member(Whole const& whole, Member const& member, std::size_t place) {
  // A command's, a situation's.
  WEND_TRY_NAME(wheels)
  WEND_TRY_NAME(body)
  WEND_TRY_NAME(course)
  WEND_TRY_NAME(findings)
  WEND_TRY_NAME(speed)
  WEND_TRY_NAME(turn_rate)
  WEND_TRY_NAME(left)
  WEND_TRY_NAME(right)
  WEND_TRY_NAME(steering)
  WEND_TRY_NAME(drive)
  WEND_TRY_NAME(lateral)
  WEND_TRY_NAME(rates)
  WEND_TRY_NAME(tangent)
  WEND_TRY_NAME(direction)
  WEND_TRY_NAME(confidence)
  WEND_TRY_NAME(speed_share)
  WEND_TRY_NAME(stale)
  WEND_TRY_NAME(blind)
  WEND_TRY_NAME(arrived)
  WEND_TRY_NAME(no_course)
  WEND_TRY_NAME(blocked)
  WEND_TRY_NAME(stuck)
  WEND_TRY_NAME(discs_dropped)
  WEND_TRY_NAME(pose)
  WEND_TRY_NAME(position)
  WEND_TRY_NAME(heading)
  WEND_TRY_NAME(goal)
  WEND_TRY_NAME(dt)
  WEND_TRY_NAME(age)
  // A memory's.
  WEND_TRY_NAME(policy)
  WEND_TRY_NAME(progress)
  WEND_TRY_NAME(sensing)
  WEND_TRY_NAME(slew)
  WEND_TRY_NAME(modes)
  WEND_TRY_NAME(ways)
  WEND_TRY_NAME(is_in)
  WEND_TRY_NAME(below)
  WEND_TRY_NAME(above)
  WEND_TRY_NAME(second)
  WEND_TRY_NAME(step)
  WEND_TRY_NAME(tracks)
  WEND_TRY_NAME(discs)
  WEND_TRY_NAME(nearest)
  WEND_TRY_NAME(since)
  WEND_TRY_NAME(guard)
  WEND_TRY_NAME(inside)
  WEND_TRY_NAME(outside)
  WEND_TRY_NAME(is_inside)
  WEND_TRY_NAME(on)
  WEND_TRY_NAME(started)
  WEND_TRY_NAME(a)
  WEND_TRY_NAME(b)
  WEND_TRY_NAME(low)
  WEND_TRY_NAME(high)
  WEND_TRY_NAME(first)
  WEND_TRY_NAME(rest)
  WEND_TRY_NAME(away)
  WEND_TRY_NAME(disc_on_right)
  WEND_TRY_NAME(mode)
  WEND_TRY_NAME(field)
  return "member " + std::to_string(place);
}

#undef WEND_TRY_NAME

}  // namespace detail

/// Calls f(name, member of a, member of b) for each pair of members of two structs of one type. The name is that of the
/// source where it is one the library itself uses, else "member 2", counted from 1.
template <typename T, typename F>
void for_each_named_member(T const& a, T const& b, F const& f) {
  std::size_t place = 0;
  v0::for_each_member(a, b, [&](auto const& of_a, auto const& of_b) {
    ++place;
    f(detail::name_of_member(a, of_a, place), of_a, of_b);
  });
}

}  // namespace wend::inline v0::lab
