// wend/fields/roam.hpp - a heading that wanders at random, within bounds, and the same way each time.
#pragma once

#include "wend/field.hpp"

namespace wend::inline v0 {

/// A random number generator that runs on every number: Wichmann and Hill (1982), Applied Statistics 31, algorithm AS
/// 183. Three multiplicative generators with moduli near 30 000, so that every product is a whole number under 2^24,
/// and exact in single precision too. Its period is 6.95e12. As it starts out (all 0) it is not seeded.
template <Number S>
struct WichmannHill {
  S x{S(0.0F)};  ///< a whole number from 1 to 30268, once seeded
  S y{S(0.0F)};  ///< from 1 to 30306
  S z{S(0.0F)};  ///< from 1 to 30322

  /// Seeds it where it is not seeded. `seed` is a whole number from 1 to 30268; 0 counts as 1. Two machines with
  /// different seeds get series that are independent two by two.
  constexpr void start(S const& seed) noexcept {
    x = seeded(x, clamp(seed, S(1.0F), S(30268.0F)));
    y = seeded(y, S(1944.0F));  // any will do; with x they are far from 0 from the start
    z = seeded(z, S(20611.0F));
  }

  /// The next number, evenly drawn from [0, 1).
  [[nodiscard]] constexpr S next() noexcept {
    x = stepped(x, 171.0F, 30269.0F);
    y = stepped(y, 172.0F, 30307.0F);
    z = stepped(z, 170.0F, 30323.0F);
    S sum = x / S(30269.0F) + y / S(30307.0F) + z / S(30323.0F);
    sum = select(sum >= S(2.0F), S(sum - S(2.0F)), sum);
    sum = select(sum >= S(1.0F), S(sum - S(1.0F)), sum);
    return clamp(sum, S(0.0F), S(1.0F));
  }

 private:
  [[nodiscard]] static constexpr S seeded(S const& state, S const& seed) noexcept {
    return select(state >= S(1.0F), state, seed);
  }
  // factor * state modulo `modulus`, without a division: the multiples by powers of two are taken away. The bounds
  // change nothing that the generator gives itself; they keep a memory from elsewhere in range.
  [[nodiscard]] static constexpr S stepped(S const& state, Parameter factor, Parameter modulus) noexcept {
    S const highest = S(modulus - 1.0F);
    S rest = S(factor) * clamp(state, S(1.0F), highest);
    for (Parameter part = 128.0F * modulus; part >= modulus; part = 0.5F * part) {
      rest = select(rest >= S(part), S(rest - S(part)), rest);
    }
    return clamp(rest, S(1.0F), highest);
  }
};

/// The goal's direction, or the nose's, turned by an angle that wanders: an Ornstein-Uhlenbeck process (Uhlenbeck and
/// Ornstein 1930), dX = -theta X dt + sigma dW, with theta = 1 / settling. It is given by its spread, the standard
/// deviation that it settles to, since sigma^2 / (2 theta) = spread^2. Each step keeps that variance exactly, whatever
/// dt: X' = a X + spread sqrt(1 - a^2) n, where n has mean 0 and variance 1. a = 1 / (1 + x + x^2 / 2), x = dt /
/// settling, stands for exp(-x), above it by less than x^3 / 6. n is evenly drawn; added up over the ticks it comes out
/// normal where dt is short beside `settling`.
///
/// X is bounded by four times the spread. The course is turned by 2 atan(X / 2): X itself for small ones (0.5 gives
/// 0.49, 1 gives 0.93), and never all the way round. Starts at 0, straight.
///
/// About the nose the heading drifts without end, as for a machine that searches. About the goal it swings round
/// the straight way, and there is no opinion without a goal. Same seed, same ticks, same way. Machines that run in
/// lanes are told apart by a memory whose `draw.x` is set before the first tick.
struct roam {
  Parameter spread = 0.5F;  ///< radians
  Parameter settling = 2.0F;  ///< seconds
  Parameter seed = 1.0F;  ///< a whole number from 1 to 30268
  bool about_nose = false;  ///< else about the goal's direction

  /// The angle of the moment, and where the draws have got to.
  template <Number S>
  struct Memory {
    S offset{S(0.0F)};  ///< X
    WichmannHill<S> draw{};  ///< the source of the noise; started from the seed on the first tick
  };

  /// The goal's direction or the nose's, turned by the angle, with confidence 1. Draws once.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    memory.draw.start(S(seed));
    S const noise = S(3.4641016F) * (memory.draw.next() - S(0.5F));  // sqrt(12): evenly drawn, of variance 1
    S const x = percept.dt / greatest(S(settling), S(1.0e-3F));
    S const keeps = S(1.0F) / (S(1.0F) + x + S(0.5F) * squared(x));
    S const kick = root(greatest(S(S(1.0F) - squared(keeps)), S(0.0F))) * S(spread) * noise;
    S const bound = S(4.0F) * S(spread);
    memory.offset = clamp(S(keeps * memory.offset + kick), -bound, bound);
    Vec2<S> const ahead = about_nose ? percept.pose.heading : percept.goal_direction;
    S const half = S(0.5F) * memory.offset;  // the tangent of half the turn
    Vec2<S> const turn{S(1.0F) - squared(half), memory.offset};
    return course_along(turned_out_of(polar(ahead).direction, turn), S(1.0F));
  }
};

}  // namespace wend::inline v0
