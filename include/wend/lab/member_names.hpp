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

// The same for the parts, thresholds and gains of a policy.
template <typename Whole, typename Member>
std::string name_of_part(Whole const& whole, Member const& member, std::size_t place) {
  WEND_TRY_NAME(a)
  WEND_TRY_NAME(about_nose)
  WEND_TRY_NAME(above)
  WEND_TRY_NAME(attraction)
  WEND_TRY_NAME(b)
  WEND_TRY_NAME(below)
  WEND_TRY_NAME(bend)
  WEND_TRY_NAME(centre_x)
  WEND_TRY_NAME(centre_y)
  WEND_TRY_NAME(close)
  WEND_TRY_NAME(closest)
  WEND_TRY_NAME(conic_beyond)
  WEND_TRY_NAME(curvature)
  WEND_TRY_NAME(dense)
  WEND_TRY_NAME(distance)
  WEND_TRY_NAME(dock)
  WEND_TRY_NAME(dwell)
  WEND_TRY_NAME(enter)
  WEND_TRY_NAME(fade)
  WEND_TRY_NAME(field)
  WEND_TRY_NAME(first)
  WEND_TRY_NAME(gain)
  WEND_TRY_NAME(goal_power)
  WEND_TRY_NAME(guard)
  WEND_TRY_NAME(high)
  WEND_TRY_NAME(horizon)
  WEND_TRY_NAME(influence)
  WEND_TRY_NAME(inside)
  WEND_TRY_NAME(k)
  WEND_TRY_NAME(keeping)
  WEND_TRY_NAME(lead)
  WEND_TRY_NAME(lean)
  WEND_TRY_NAME(leave)
  WEND_TRY_NAME(longest)
  WEND_TRY_NAME(look_ahead)
  WEND_TRY_NAME(low)
  WEND_TRY_NAME(margin)
  WEND_TRY_NAME(modes)
  WEND_TRY_NAME(on_right)
  WEND_TRY_NAME(outside)
  WEND_TRY_NAME(own_share)
  WEND_TRY_NAME(path)
  WEND_TRY_NAME(radius)
  WEND_TRY_NAME(rate)
  WEND_TRY_NAME(reach)
  WEND_TRY_NAME(recovery)
  WEND_TRY_NAME(repulsion)
  WEND_TRY_NAME(reserve)
  WEND_TRY_NAME(rest)
  WEND_TRY_NAME(second)
  WEND_TRY_NAME(seed)
  WEND_TRY_NAME(settling)
  WEND_TRY_NAME(share)
  WEND_TRY_NAME(shortest)
  WEND_TRY_NAME(signal)
  WEND_TRY_NAME(slow_within)
  WEND_TRY_NAME(slowest)
  WEND_TRY_NAME(smoothing)
  WEND_TRY_NAME(speed)
  WEND_TRY_NAME(spread)
  WEND_TRY_NAME(steepest)
  WEND_TRY_NAME(still)
  WEND_TRY_NAME(threshold)
  WEND_TRY_NAME(voters)
  WEND_TRY_NAME(ways)
  WEND_TRY_NAME(weight)
  WEND_TRY_NAME(wide)
  WEND_TRY_NAME(width)
  WEND_TRY_NAME(x)
  WEND_TRY_NAME(y)
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
