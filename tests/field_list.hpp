// tests/field_list.hpp - every field and every composition of fields under test, and the scenes they are put in.
//
// A new field or arbiter is tested by one line in `field_list::all`: tests/field_test.cpp runs each line on every
// number of tests/numbers.hpp.
#pragma once

#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <random>
#include <tuple>
#include <type_traits>
#include <vector>

#include "numbers.hpp"
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

/// A policy with the name it is reported under.
template <typename Field>
struct Entry {
  char const* name;
  Field field;
};
template <typename Field>
[[nodiscard]] constexpr Entry<Field> entry(char const* name, Field field) noexcept {
  return {name, field};
}

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

namespace scenes {

inline constexpr int disc_count = 4;
inline constexpr float nan = std::numeric_limits<float>::quiet_NaN();
inline constexpr float infinity = std::numeric_limits<float>::infinity();

/// One machine's scene as plain numbers, before it is put on the number under test.
struct Plain {
  std::array<float, 2> position{0.0F, 0.0F};
  std::array<float, 2> heading{1.0F, 0.0F};
  std::array<float, 2> goal{2.0F, 0.0F};
  std::array<std::array<float, 3>, disc_count> discs{};  ///< x, y, radius
  float robot_radius = 0.2F;
  float dt = 0.05F;
};

/// A scene on the number under test. The percept refers to it.
template <wend::Number S, int N = disc_count>
struct Scene {
  wend::Pose<S> pose;
  wend::Vec2<S> goal{S(0.0F), S(0.0F)};
  wend::DiscSet<S, N> discs{};
  S robot_radius{S(0.2F)};
  S dt{S(0.05F)};

  /// Adds a disc. This and what follows is never inlined: g++ 12 breaks off (connect_traces, dwarf2cfi.cc:3074) where
  /// an over-aligned argument is passed by value from a function that also catches exceptions, as doctest checks do.
  [[gnu::noinline]] void put(S const& x, S const& y, S const& radius) noexcept { discs.add({{x, y}, radius}); }

  [[nodiscard, gnu::noinline]] wend::Percept<S, N> percept() const noexcept {
    return wend::look(pose, goal, discs, robot_radius, dt);
  }
};

/// What a field makes of a scene, on one tick.
template <typename Field, wend::Number S, int N>
[[nodiscard, gnu::noinline]] wend::Course<S> answer(Field const& field, Scene<S, N> const& scene,
                                                    wend::memory_t<Field, S>& memory) noexcept {
  return wend::evaluate(field, scene.percept(), memory);
}
template <typename Field, wend::Number S, int N>
[[nodiscard]] wend::Course<S> answer(Field const& field, Scene<S, N> const& scene) noexcept {
  wend::memory_t<Field, S> memory;
  return answer(field, scene, memory);
}

/// A scene of as many machines as S carries; plain(k) is the one in lane k.
template <wend::Number S, typename F>
[[nodiscard]] Scene<S> gather(F const& plain) {
  auto const number = [&plain](auto const& of) { return numbers::make<S>([&](int k) { return of(plain(k)); }); };
  auto const vector = [&number](auto member) -> wend::Vec2<S> {
    return {number([member](Plain const& p) { return (p.*member)[0]; }),
            number([member](Plain const& p) { return (p.*member)[1]; })};
  };
  Scene<S> scene;
  scene.pose = {vector(&Plain::position), vector(&Plain::heading)};
  scene.goal = vector(&Plain::goal);
  for (std::size_t i = 0; i < disc_count; ++i) {
    scene.put(number([i](Plain const& p) { return p.discs[i][0]; }),
              number([i](Plain const& p) { return p.discs[i][1]; }),
              number([i](Plain const& p) { return p.discs[i][2]; }));
  }
  scene.robot_radius = number([](Plain const& p) { return p.robot_radius; });
  scene.dt = number([](Plain const& p) { return p.dt; });
  return scene;
}

/// A machine that wanders among discs, with a life of its own for each seed: smooth stretches, now and then a new goal,
/// new discs or a leap, and, if it is to be odd, ticks on the goal, at a disc's centre, without discs and with broken
/// numbers.
class Wanderer {
 public:
  explicit Wanderer(std::uint32_t seed, bool odd) : random_(seed), odd_(odd) {
    place_discs();
    leap();
  }

  [[nodiscard]] Plain step() {
    if (one_in(90)) {
      place_discs();
    }
    if (one_in(60)) {
      leap();
    }
    std::array<float, 2> const turn{uniform(0.9F, 1.0F), uniform(-0.35F, 0.35F)};
    std::array<float, 2> const h = now_.heading;
    std::array<float, 2> next{h[0] * turn[0] - h[1] * turn[1], h[1] * turn[0] + h[0] * turn[1]};
    for (std::size_t i = 0; i < 2; ++i) {  // back into the room
      next[i] -= now_.position[i] > 1.5F ? 0.4F : now_.position[i] < -1.5F ? -0.4F : 0.0F;
    }
    float const size = std::sqrt(next[0] * next[0] + next[1] * next[1]);
    now_.heading = {next[0] / size, next[1] / size};
    now_.dt = uniform(0.03F, 0.07F);
    for (std::size_t i = 0; i < 2; ++i) {
      now_.position[i] += 1.2F * now_.dt * now_.heading[i];
    }
    return odd_ && one_in(12) ? oddity(now_) : now_;
  }

 private:
  [[nodiscard]] float uniform(float low, float high) {
    return low + (high - low) * (static_cast<float>(random_() >> 8U) * 0x1p-24F);
  }
  [[nodiscard]] bool one_in(std::uint32_t n) { return random_() % n == 0; }

  void place_discs() {
    for (auto& disc : now_.discs) {
      disc = {uniform(-1.6F, 1.6F), uniform(-1.6F, 1.6F), uniform(0.1F, 0.4F)};
    }
  }
  void leap() {
    now_.position = {uniform(-1.8F, 1.8F), uniform(-1.8F, 1.8F)};
    now_.goal = {uniform(-1.8F, 1.8F), uniform(-1.8F, 1.8F)};
  }

  [[nodiscard]] Plain oddity(Plain p) {
    float const broken = one_in(2) ? nan : infinity;
    switch (random_() % 10) {
      case 0: p.position = p.goal; break;
      case 1: p.position = {p.discs[0][0], p.discs[0][1]}; break;
      case 2: p.discs.fill({wend::far_away, 0.0F, 0.0F}); break;
      case 3: p.discs.fill(p.discs[1]); break;
      case 4: p.position[random_() % 2] = broken; break;
      case 5: p.goal[random_() % 2] = broken; break;
      case 6: p.heading[random_() % 2] = nan; break;
      case 7: p.discs[2][random_() % 3] = broken; break;
      case 8: p.dt = one_in(2) ? broken : -1.0F; break;
      default: p.robot_radius = broken; break;
    }
    return p;
  }

  std::mt19937 random_;
  bool odd_;
  Plain now_;
};

/// Calls f(leaf) for each number and mask that a memory holds, in order.
template <wend::Number S, typename T, typename F>
void for_each_leaf(T const& memory, F const& f) {
  if constexpr (std::is_same_v<T, S> || std::is_same_v<T, wend::mask_t<S>>) {
    f(memory);
  } else if constexpr (std::is_same_v<T, wend::Vec2<S>>) {
    f(memory.x());
    f(memory.y());
  } else {
    wend::for_each_member(memory, memory, [&f](auto const& m, auto const&) noexcept { for_each_leaf<S>(m, f); });
  }
}

/// All that a memory holds in one lane, as bits; every not-a-number alike.
template <wend::Number S, typename T>
[[nodiscard]] std::vector<std::uint64_t> bits_of(T const& memory, int k) {
  std::vector<std::uint64_t> bits;
  for_each_leaf<S>(memory, [&bits, k](auto const& leaf) {
    if constexpr (std::is_same_v<std::remove_cvref_t<decltype(leaf)>, wend::mask_t<S>>) {
      bits.push_back(numbers::holds(leaf, k) ? 1U : 0U);
    } else {
      numbers::plain_t<S> const x = numbers::lane(leaf, k);
      bits.push_back(x == x ? std::bit_cast<std::uint64_t>(static_cast<double>(x)) : ~std::uint64_t{0});
    }
  });
  return bits;
}

}  // namespace scenes
