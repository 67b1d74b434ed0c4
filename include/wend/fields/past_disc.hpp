// wend/fields/past_disc.hpp - beside the nearest disc, on the goal's side.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// Past the nearest disc: the direction to it plus or minus pi/2, on the side nearer the goal. The side is chosen when
/// the field is entered and kept until it is left, also when another disc becomes the nearest; that is what stops the
/// machine from dithering before a disc that stands exactly in its way. A goal exactly behind the disc is passed
/// leaving the disc on the right hand. No opinion where there is no disc, or at the very centre of one.
struct past_disc {
  template <Number S>
  struct Memory {
    mask_t<S> committed{};
    mask_t<S> disc_on_right{};
  };

  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    mask_t<S> const some = sees_a_disc(percept) && dot(percept.away, percept.away) > S(0.0F);
    // With the disc on the right hand the machine goes to the right of `away`, which points from the disc to it.
    mask_t<S> const goal_that_way = cross(percept.away, percept.goal_direction) <= S(0.0F);
    memory.disc_on_right = select(memory.committed, memory.disc_on_right, goal_that_way);
    memory.committed = memory.committed || some;
    Vec2<S> const left = left_of(percept.away);
    Vec2<S> const right = -left;
    return {select(some, select(memory.disc_on_right, right, left), zero2<S>()), select(some, S(1.0F), S(0.0F))};
  }
};

}  // namespace wend::inline v0
