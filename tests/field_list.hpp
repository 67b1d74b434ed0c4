// tests/field_list.hpp - the core's fields, and compositions of them, under test; the catalogue's have lists of their
// own.
//
// A new one is tested by one line here: tests/field_test.cpp and tests/guests_test.cpp run each line on every number.
#pragma once

#include <tuple>

#include "numbers.hpp"
#include "scenes.hpp"
#include "subjects.hpp"
#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/priority.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/field.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/past_disc.hpp"
#include "wend/fields/potential_field.hpp"
#include "wend/fields/toward_goal.hpp"

namespace field_list {

using subjects::entry;

/// A field as a user may write it, without a memory: straight ahead.
struct ahead {
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return wend::course_along(percept.pose.heading, S(0.75F));
  }
};

/// A field as a user may write it, with a memory of all that a memory may hold: away from where it was tightest so far,
/// until that is `patience` seconds ago.
struct shy {
  wend::Parameter patience = 0.5F;

  template <wend::Number S>
  struct Memory {
    wend::Vec2<S> from_tightest{S(0.0F), S(0.0F)};
    S least_clearance{S(wend::far_away)};
    S since{S(0.0F)};
    wend::mask_t<S> shaken{};
  };

  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept,
                                                     Memory<S>& memory) const noexcept {
    using wend::select;  // as with std::swap: for plain numbers this one, for others the one they bring along
    wend::mask_t<S> const tighter = percept.away_confidence > S(0.0F) && percept.clearance < memory.least_clearance;
    memory.from_tightest = select(tighter, percept.away, memory.from_tightest);
    memory.least_clearance = select(tighter, percept.clearance, memory.least_clearance);
    memory.since = select(tighter, S(0.0F), S(memory.since + percept.dt));
    memory.shaken = memory.shaken || percept.clearance < S(0.0F);
    wend::mask_t<S> const still = memory.since < S(patience);
    wend::Vec2<S> const way = select(still, memory.from_tightest, wend::zero2<S>());
    return wend::course_along(way, S(select(memory.shaken, S(1.0F), S(0.5F))));
  }
};

/// A signal as a user may write it: how far the robot stands to the left of the line through the goal along its nose.
struct to_the_left {
  template <wend::Number S, int N>
  [[nodiscard]] constexpr S operator()(wend::Percept<S, N> const& percept) const noexcept {
    return wend::cross(percept.pose.heading, percept.goal_direction) * percept.goal_distance;
  }
};

inline constexpr auto near_a_disc = wend::below(wend::clearance, 0.30F, 0.50F);
inline constexpr auto far_from_goal = wend::above(wend::goal_distance, 1.2F, 0.8F);

/// Hysteresis inside, a blend outside: what most machines will run.
inline constexpr auto composed =
    wend::guarded(near_a_disc, wend::past_disc{},
                  wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{}, wend::toward_goal{}));

/// The list. Being a constant it shows that each entry can live in flash.
inline constexpr std::tuple all{
    // Fields.
    entry("toward_goal", wend::toward_goal{}),
    entry("away_from_discs", wend::away_from_discs{}),
    entry("past_disc", wend::past_disc{}),
    entry("potential_field", wend::potential_field{}),
    entry("potential_field, other gains", wend::potential_field{1.5F, 0.0625F, 0.7F, 0.05F}),
    entry("no_opinion", wend::no_opinion{}),
    entry("own field", ahead{}),
    entry("own field with memory", shy{}),
    // Every guard.
    entry("guarded, hard", wend::guarded(wend::below(wend::clearance, 0.4F, 0.4F), wend::past_disc{}, ahead{})),
    entry("guarded, below", wend::guarded(near_a_disc, shy{}, wend::past_disc{})),
    entry("guarded, above", wend::guarded(far_from_goal, wend::past_disc{}, shy{})),
    entry("guarded, held", wend::guarded(wend::held(near_a_disc, 0.4F), wend::past_disc{}, wend::toward_goal{})),
    entry("guarded, both",
          wend::guarded(wend::both(near_a_disc, far_from_goal), wend::past_disc{}, wend::away_from_discs{})),
    entry("guarded, either", wend::guarded(wend::either(near_a_disc, wend::above(wend::heading_error, 1.2F, 0.9F)),
                                           wend::past_disc{}, shy{})),
    entry("guarded, negated", wend::guarded(wend::negated(near_a_disc), wend::toward_goal{}, wend::past_disc{})),
    entry("guarded, nested guards", wend::guarded(wend::held(wend::both(wend::negated(wend::held(far_from_goal, 0.2F)),
                                                                        wend::either(near_a_disc, near_a_disc)),
                                                             0.3F),
                                                  wend::past_disc{}, wend::past_disc{})),
    entry("guarded, disc_before_goal",
          wend::guarded(wend::above(wend::disc_before_goal, 0.5F, 0.2F), wend::past_disc{}, wend::toward_goal{})),
    entry("guarded, own signal", wend::guarded(wend::above(to_the_left{}, 0.3F, -0.3F), wend::past_disc{}, ahead{})),
    entry("only_when", wend::only_when(near_a_disc, wend::past_disc{})),
    // Priorities.
    entry("priority", wend::priority(wend::only_when(near_a_disc, wend::past_disc{}), wend::toward_goal{})),
    entry("priority, memories", wend::priority(shy{}, wend::only_when(far_from_goal, wend::past_disc{}), ahead{})),
    entry("priority, same one twice", wend::priority(wend::past_disc{}, wend::past_disc{}, wend::toward_goal{})),
    // Blends.
    entry("blend", wend::blend(wend::ramp(wend::clearance, 0.0F, 0.8F), wend::away_from_discs{}, wend::toward_goal{})),
    entry("blend, memories", wend::blend(wend::ramp(wend::goal_distance, 0.5F, 2.0F), shy{}, wend::past_disc{})),
    entry("blend, shares", wend::blend(wend::share(1.0F, wend::toward_goal{}), wend::share(2.0F, wend::past_disc{}),
                                       wend::share(0.5F, ahead{}))),
    entry("blend, same one twice", wend::blend(wend::share(1.0F, shy{}), wend::share(3.0F, shy{}))),
    // Compositions of compositions.
    entry("composed", composed),
    entry("guarded in guarded", wend::guarded(far_from_goal, composed, wend::guarded(near_a_disc, shy{}, composed))),
    entry("priority of guarded and blend",
          wend::priority(wend::only_when(wend::held(near_a_disc, 0.3F), shy{}),
                         wend::guarded(far_from_goal, wend::past_disc{},
                                       wend::blend(wend::share(1.0F, wend::past_disc{}),
                                                   wend::share(1.0F, wend::potential_field{}))),
                         composed)),
    entry("blend of priorities", wend::blend(wend::ramp(wend::clearance, 0.1F, 0.9F),
                                             wend::priority(wend::only_when(far_from_goal, shy{}), wend::past_disc{}),
                                             wend::guarded(near_a_disc, wend::past_disc{}, composed))),
};

/// Calls f(entry) for each line of the list.
template <typename F>
void for_each(F const& f) {
  std::apply([&f](auto const&... entries) { (f(entries), ...); }, all);
}

}  // namespace field_list
