// wend/arbiters/blend.hpp - convex combinations of fields: by a signal, or in fixed shares.
#pragma once

#include "wend/arbiters/guard.hpp"
#include "wend/field.hpp"
#include "wend/promise.hpp"

namespace wend::inline v0 {

namespace detail {

// Called only by a constant that must not be one.
inline void wend_ramp_needs_low_under_high() noexcept {}
inline void wend_share_needs_a_weight_of_zero_or_more() noexcept {}

}  // namespace detail

/// A weight that rises from 0 where the signal is at `low` to 1 where it is at `high`, straight in between. Unit of the
/// signal, low < high. 0 for a signal that is not a number.
template <typename Signal>
struct ramp_weight {
  [[no_unique_address]] Signal signal;  ///< what is looked at
  Parameter low;  ///< in its unit: the weight is 0 from here down
  Parameter high;  ///< in its unit, over `low`: the weight is 1 from here up

  /// The weight, in [0, 1].
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const& percept) const noexcept {
    S const per_unit = S(1.0F) / (S(high) - S(low));  // on S: as a Parameter its rounding would show in double
    return clamp(S((signal(percept) - S(low)) * per_unit), S(0.0F), S(1.0F));
  }
};

/// ramp(clearance, 0.5F, 1.2F): 0 at 0.5 m of clearance and below, 1 at 1.2 m and above.
template <typename Signal>
[[nodiscard]] constexpr ramp_weight<Signal> ramp(Signal signal, Parameter low, Parameter high) noexcept {
  detail::check_signal<Signal>();
  detail::promise(low < high, detail::wend_ramp_needs_low_under_high);
  return {signal, low, high};
}

/// A constant weight.
struct fixed_weight {
  Parameter share;  ///< the weight, in [0, 1]

  /// The same weight whatever the percept.
  template <Number S, int N>
  [[nodiscard]] constexpr S operator()(Percept<S, N> const&) const noexcept {
    return S(share);
  }
};

/// (1 - w) low + w high, each course counted as its direction times its confidence. The direction is that of the sum.
/// The confidence is its length: with two sure fields the mean resultant length of what is blended (Mardia and Jupp
/// 2000, eq. 2.2.4), 1 where they agree and 0 where they cancel, and then there is no opinion. A field without an
/// opinion gives up its share of the confidence and leaves the direction to the other. The speed share is blended as it
/// is, whatever the confidences.
template <typename Weight, typename Low, typename High>
struct blended_field {
  [[no_unique_address]] Weight weight;  ///< of `high`: a functor from a percept to [0, 1]
  [[no_unique_address]] Low low;  ///< heard alone where the weight is 0
  [[no_unique_address]] High high;  ///< heard alone where the weight is 1

  /// What the two fields remember. Both are asked on every tick.
  template <Number S>
  struct Memory {
    [[no_unique_address]] detail::PlacedMemory<Low, S, blended_field, 0> low;  ///< of the low one
    [[no_unique_address]] detail::PlacedMemory<High, S, blended_field, 1> high;  ///< of the high one
  };

  /// The blend's course.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    S const w = weight(percept);
    Course<S> const at_low = evaluate(low, percept, memory.low);
    Course<S> const at_high = evaluate(high, percept, memory.high);
    Vec2<S> const sum = scaled(at_low.direction, S((S(1.0F) - w) * at_low.confidence)) +
                        scaled(at_high.direction, S(w * at_high.confidence));
    if constexpr (std::floating_point<S>) {  // a derivative differs where values are the same
      // What is the same in both needs no arithmetic, and most often the compiler sees that it is.
      bool const alike = at_high.speed_share == at_low.speed_share;
      S const mixed = alike ? at_low.speed_share
                            : S(at_low.speed_share + w * (at_high.speed_share - at_low.speed_share));
      S const speed_share = clamp(mixed, S(0.0F), S(1.0F));
      S const size = length(sum);  // asked once whether there is a direction, where course_along would ask again
      return choose(
          size > S(no_length),
          [&]() noexcept { return Course<S>{scaled(sum, S(S(1.0F) / size)), least(size, S(1.0F)), speed_share}; },
          [&]() noexcept { return Course<S>{zero2<S>(), S(0.0F), speed_share}; });
    } else {
      Polar<S> const way = polar(sum);
      S const more = w * (at_high.speed_share - at_low.speed_share);  // 0 where they agree, so that 1 and 1 make 1
      return course_along(way, least(way.length, S(1.0F)), clamp(S(at_low.speed_share + more), S(0.0F), S(1.0F)));
    }
  }
};

/// A field with its share of a blend.
template <typename Field>
struct Share {
  Parameter weight;  ///< 0 or more, relative to the other shares
  [[no_unique_address]] Field field;  ///< whose courses get that weight
};

/// share(2.0F, toward_goal{}): weights count relative to each other; none may be negative, and not all zero.
template <typename Field>
[[nodiscard]] constexpr Share<Field> share(Parameter weight, Field field) noexcept {
  detail::check_field<Field, float>();
  detail::promise(weight >= 0.0F, detail::wend_share_needs_a_weight_of_zero_or_more);
  return {weight, field};
}

/// blend(ramp(clearance, 0.5F, 1.2F), away_from_discs{}, toward_goal{}): the first field where the ramp is 0, the
/// second where it is 1.
template <typename Signal, typename Low, typename High>
[[nodiscard]] constexpr blended_field<ramp_weight<Signal>, Low, High> blend(ramp_weight<Signal> weight, Low low,
                                                                            High high) noexcept {
  detail::check_field<Low, float>();
  detail::check_field<High, float>();
  return {weight, low, high};
}

/// blend(share(1.0F, a), share(2.0F, b), ...): fixed shares of as many fields as you like.
template <typename A>
[[nodiscard]] constexpr A blend(Share<A> a) noexcept {
  return a.field;
}
/// From two shares on: pairs nested to the right. Fields whose weights are all zero count half each.
template <typename A, typename... Rest>
[[nodiscard]] constexpr auto blend(Share<A> a, Share<Rest>... rest) noexcept {
  Parameter const others = (rest.weight + ...);
  Parameter const all = a.weight + others;
  return blended_field<fixed_weight, A, decltype(blend(rest...))>{
      {all > 0.0F ? others / all : 0.5F}, a.field, blend(rest...)};
}

}  // namespace wend::inline v0
