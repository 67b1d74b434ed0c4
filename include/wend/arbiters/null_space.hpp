// wend/arbiters/null_space.hpp - priority by projection: the second field only moves where the first does not care.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// The null-space combination (Antonelli, Arrichiello and Chiaverini 2008, Intelligent Service Robotics 1:27-39):
/// v = v1 + (I - J^+ J) v2. The first field's task is motion along its own direction, so that J is that unit direction
/// p, and v = c p + (v2 - (v2 . p) p): of the second field's course (direction times confidence) only the part across p
/// is left, and the rate along p is the first's alone, whatever the second wants. Where the first has no opinion the
/// second is heard as it is. Confidence is the length of v, 1 at most. The speed share is the first's where it has an
/// opinion. Two fields that are exactly opposed give the first's course.
///
/// A course carries all of v as long as v is no longer than 1. Where v is longer, as with two sure fields across each
/// other, the course keeps v's direction, and the rate along p is c / |v|: 0.71 of the first's at the worst. A machine
/// that drives at a speed of its own, whatever the confidence, has only v's direction anyway.
template <typename First, typename Second>
struct null_space_field {
  [[no_unique_address]] First first;  ///< heard whole
  [[no_unique_address]] Second second;  ///< heard across the first, or whole where the first has no opinion

  /// What the two remember.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<First, S, null_space_field, 0> first;  ///< of the first
    [[no_unique_address]] detail::PlacedMemory<Second, S, null_space_field, 1> second;  ///< of the second
  };

  /// The combination.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    Course<S> const a = evaluate(first, percept, memory.first);
    Course<S> const b = evaluate(second, percept, memory.second);
    Vec2<S> const wish = scaled(b.direction, b.confidence);
    // a's direction is (0, 0) without an opinion, and then nothing is taken away.
    Vec2<S> const across = left_of(a.direction);
    Vec2<S> const rest = select(a.confidence > S(0.0F), scaled(across, dot(across, wish)), wish);
    Polar<S> const way = polar(Vec2<S>(scaled(a.direction, a.confidence) + rest));
    return course_along(way, least(way.length, S(1.0F)),
                        S(select(a.confidence > S(0.0F), a.speed_share, b.speed_share)));
  }
};

/// null_space(a, b, c): a's motion; across it, b's; and across both there is nothing left in the plane, unless a or b
/// has no opinion: then c's.
template <typename Field>
[[nodiscard]] constexpr Field null_space(Field field) noexcept {
  detail::check_field<Field, float>();
  return field;
}
/// From two fields on, nested to the right.
template <typename First, typename... Rest>
[[nodiscard]] constexpr auto null_space(First first, Rest... rest) noexcept {
  detail::check_field<First, float>();
  return null_space_field<First, decltype(null_space(rest...))>{first, null_space(rest...)};
}

}  // namespace wend::inline v0
