// tests/scenes.hpp - the scenes that fields are tested in, on whatever number, and how a field is asked there.
#pragma once

#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <random>
#include <type_traits>
#include <vector>

#include "numbers.hpp"
#include "wend/field.hpp"
#include "wend/members.hpp"
#include "wend/moving_discs.hpp"
#include "wend/percept.hpp"

namespace scenes {

inline constexpr int disc_count = 4;
inline constexpr float nan = std::numeric_limits<float>::quiet_NaN();
inline constexpr float infinity = std::numeric_limits<float>::infinity();

/// A field that is told what to want.
struct told {
  wend::Parameter x;
  wend::Parameter y;
  wend::Parameter confidence = 1.0F;
  wend::Parameter speed_share = 1.0F;
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const&) const noexcept {
    return wend::course_along(wend::Vec2<S>(S(x), S(y)), S(confidence), S(speed_share));
  }
};

/// One machine's scene as plain numbers, before it is put on the number under test.
struct Plain {
  std::array<float, 2> position{0.0F, 0.0F};
  std::array<float, 2> heading{1.0F, 0.0F};
  std::array<float, 2> goal{2.0F, 0.0F};
  std::array<std::array<float, 3>, disc_count> discs{};       ///< x, y, radius
  std::array<std::array<float, 2>, disc_count> velocities{};  ///< of the discs
  float robot_radius = 0.2F;
  float dt = 0.05F;
};

/// A scene on the number under test. The percept refers to it.
template <wend::Number S, int N = disc_count>
struct Scene {
  wend::Pose<S> pose;
  wend::Vec2<S> goal{S(0.0F), S(0.0F)};
  wend::MovingDiscSet<S, N> discs{};
  S robot_radius{S(0.2F)};
  S dt{S(0.05F)};

  /// Adds a disc. This and what follows is never inlined: g++ 12 breaks off (connect_traces, dwarf2cfi.cc:3074) where
  /// an over-aligned argument is passed by value from a function that also catches exceptions, as doctest checks do.
  [[gnu::noinline]] void put(S const& x, S const& y, S const& radius) noexcept { discs.add({{x, y}, radius}); }
  [[gnu::noinline]] void put(S const& x, S const& y, S const& radius, S const& vx, S const& vy) noexcept {
    discs.add({{x, y}, radius}, {vx, vy});
  }

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
              number([i](Plain const& p) { return p.discs[i][2]; }),
              number([i](Plain const& p) { return p.velocities[i][0]; }),
              number([i](Plain const& p) { return p.velocities[i][1]; }));
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
    for (auto& velocity : now_.velocities) {
      velocity = {uniform(-0.5F, 0.5F), uniform(-0.5F, 0.5F)};
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
