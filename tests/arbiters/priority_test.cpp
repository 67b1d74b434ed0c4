#include <array>
#include <cmath>
#include <cstddef>
#include <type_traits>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/arbiters/priority.hpp"

namespace {

// Points along one of three directions when a level (carried in the clearance) has its bit set, else has no opinion.
template <int Bit>
struct speaks_on_bit {
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    wend::Vec2<S> const way{S(Bit == 0 ? 1.0F : 0.0F), S(Bit == 1 ? 1.0F : Bit == 2 ? -1.0F : 0.0F)};
    return wend::course_along(wend::scaled(way, bit(percept.clearance)), S(0.5F));
  }
  template <wend::Number S>
  [[nodiscard]] static constexpr S bit(S level) noexcept {
    using wend::select;
    for (int i = 2; i > Bit; --i) {
      S const weight = S(static_cast<float>(1 << i));
      level = select(level >= weight, S(level - weight), level);
    }
    return select(level >= S(static_cast<float>(1 << Bit)), S(0.5F), S(0.0F));
  }
};

// As above, for bit 1, with a confidence of 1 over the number of ticks since it was heard anew.
struct counts_on_bit_1 {
  template <wend::Number S>
  struct Memory {
    S asked{S(0.0F)};
  };
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept,
                                                     Memory<S>& memory) const noexcept {
    memory.asked = memory.asked + S(1.0F);
    wend::Course<S> const course = speaks_on_bit<1>{}(percept);
    return wend::course_along(course.direction, S(course.confidence / memory.asked));
  }
};

template <wend::Number S>
class Stage {
 public:
  [[nodiscard]] wend::Percept<S, 1> with(S const& level) const {
    return {.pose = {},
            .goal = wend::zero2<S>(),
            .discs = none_,
            .robot_radius = S(0.2F),
            .dt = S(0.05F),
            .goal_direction = wend::zero2<S>(),
            .goal_confidence = S(0.0F),
            .goal_distance = S(0.0F),
            .nearest = {},
            .clearance = level,
            .away = wend::zero2<S>(),
            .away_confidence = S(0.0F)};
  }

 private:
  wend::DiscSet<S, 1> none_;
};

}  // namespace

TEST_CASE_TEMPLATE("priority takes the first field with an opinion, and has none when no one has", S,
                   WEND_TEST_NUMBERS) {
  constexpr auto policy = wend::priority(speaks_on_bit<0>{}, speaks_on_bit<1>{}, speaks_on_bit<2>{});
  Stage<S> const stage;
  wend::memory_t<decltype(policy), S> memory;
  for (int bits = 0; bits < 8; ++bits) {
    S const level = numbers::make<S>([bits](int k) { return static_cast<float>((bits + k) % 8); });
    wend::Course<S> const course = wend::evaluate(policy, stage.with(level), memory);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      int const here = (bits + k) % 8;
      float const x = (here & 1) != 0 ? 1.0F : 0.0F;
      float const y = (here & 1) != 0 ? 0.0F : (here & 2) != 0 ? 1.0F : (here & 4) != 0 ? -1.0F : 0.0F;
      CHECK(static_cast<float>(numbers::lane(course.direction.x(), k)) == x);
      CHECK(static_cast<float>(numbers::lane(course.direction.y(), k)) == y);
      CHECK(static_cast<float>(numbers::lane(course.confidence, k)) == (here == 0 ? 0.0F : 0.5F));
    }
  }
}

TEST_CASE_TEMPLATE("a field that priority hears again has forgotten", S, WEND_TEST_NUMBERS) {
  constexpr auto policy = wend::priority(speaks_on_bit<0>{}, counts_on_bit_1{}, speaks_on_bit<2>{});
  Stage<S> const stage;
  wend::memory_t<decltype(policy), S> memory;
  std::array<int, 8> asked{};
  for (int tick = 0; tick < 60; ++tick) {
    auto const first_speaks = [tick](int k) { return tick / (k + 2) % 2 == 1; };
    S const level = numbers::make<S>([&](int k) { return first_speaks(k) ? 3.0F : 2.0F; });
    wend::Course<S> const course = wend::evaluate(policy, stage.with(level), memory);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      auto const i = static_cast<std::size_t>(k);
      asked[i] = first_speaks(k) ? 0 : asked[i] + 1;
      double const expected = first_speaks(k) ? 0.5 : 0.5 / asked[i];
      CHECK(std::abs(static_cast<double>(numbers::lane(course.confidence, k)) - expected) < 1.0e-7);
    }
  }
}

TEST_CASE("priority of one field is that field") {
  static_assert(std::is_same_v<decltype(wend::priority(wend::toward_goal{})), wend::toward_goal>);
  scenes::Scene<float> scene;
  scene.goal = {3.0F, 4.0F};
  CHECK(scenes::answer(wend::priority(wend::toward_goal{}), scene).direction.x() == 3.0F * 0.2F);
}
