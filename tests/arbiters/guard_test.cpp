#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <random>
#include <type_traits>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/signal.hpp"

namespace {

// A percept of which only the signals and the time step matter.
template <wend::Number S>
class Stage {
 public:
  [[nodiscard]] wend::Percept<S, 1> with(S const& clearance, S const& goal_distance, S const& dt = S(0.05F)) const {
    return {.pose = {},
            .goal = wend::zero2<S>(),
            .discs = none_,
            .robot_radius = S(0.2F),
            .dt = dt,
            .goal_direction = wend::zero2<S>(),
            .goal_confidence = S(0.0F),
            .goal_distance = goal_distance,
            .nearest = {},
            .clearance = clearance,
            .away = wend::zero2<S>(),
            .away_confidence = S(0.0F)};
  }

 private:
  wend::DiscSet<S, 1> none_;
};

// The definition of hysteresis, step by step, apart from the library.
struct Model {
  bool on = false;
  bool below(double x, double enter, double leave) {
    if (!on) {
      on = x < enter;
    } else if (x > leave) {
      on = false;
    }
    return on;
  }
  bool above(double x, double enter, double leave) {
    if (!on) {
      on = x > enter;
    } else if (x < leave) {
      on = false;
    }
    return on;
  }
};

constexpr std::array<float, 6> levels{0.2F, 0.3F, 0.4F, 0.5F, 0.6F, scenes::nan};  // the thresholds themselves as well
constexpr auto near_by = wend::below(wend::clearance, 0.3F, 0.5F);
constexpr auto far_off = wend::above(wend::goal_distance, 0.5F, 0.3F);

// Counts answers of a guard that differ from a model's, over every sequence of levels up to a length: a tree in which
// both carry their memory along. `levels_of(i)` gives clearance and goal distance of branch i.
template <typename Guard, typename ModelState, typename Ask, typename LevelsOf>
int differences(Guard const& guard, wend::memory_t<Guard, float> const& memory, ModelState const& model, Ask const& ask,
                int branches, LevelsOf const& levels_of, int length) {
  if (length == 0) {
    return 0;
  }
  static Stage<float> const stage;
  int count = 0;
  for (int i = 0; i < branches; ++i) {
    std::array<float, 2> const now = levels_of(i);
    wend::memory_t<Guard, float> next = memory;
    ModelState next_model = model;
    bool const got = wend::ask(guard, stage.with(now[0], now[1]), next);
    bool const expected = ask(next_model, static_cast<double>(now[0]), static_cast<double>(now[1]));
    count += got == expected ? 0 : 1;
    count += differences(guard, next, next_model, ask, branches, levels_of, length - 1);
  }
  return count;
}

// One signal level for both, over all sequences up to 8 of 5 levels; and two independent ones, up to 5 of 16 pairs.
template <typename Guard, typename Ask>
int all_differences(Guard const& guard, Ask const& ask) {
  using Models = std::array<Model, 2>;
  auto const same = [](int i) -> std::array<float, 2> {
    constexpr std::array<std::size_t, 5> of{0, 2, 3, 4, 5};
    float const level = levels[of[static_cast<std::size_t>(i)]];
    return {level, level};
  };
  auto const pair = [](int i) -> std::array<float, 2> {
    constexpr std::array<std::size_t, 4> of{0, 2, 4, 5};
    return {levels[of[static_cast<std::size_t>(i / 4)]], levels[of[static_cast<std::size_t>(i % 4)]]};
  };
  return differences(guard, {}, Models{}, ask, 5, same, 8) + differences(guard, {}, Models{}, ask, 16, pair, 5);
}

using Models = std::array<Model, 2>;
constexpr double low = static_cast<double>(0.3F);
constexpr double high = static_cast<double>(0.5F);

// What is a guard to the concept, and what is not.
static_assert(wend::detail::SomeGuard<std::remove_const_t<decltype(near_by)>>);
static_assert(!wend::detail::SomeGuard<wend::signals::clearance>);
static_assert(!wend::detail::SomeGuard<wend::toward_goal>);
static_assert(wend::detail::SomeSignal<wend::signals::clearance>);
static_assert(!wend::detail::SomeSignal<wend::toward_goal>);

}  // namespace

TEST_CASE("below and above follow the definition of hysteresis over every sequence") {
  CHECK(all_differences(near_by, [](Models& m, double c, double) { return m[0].below(c, low, high); }) == 0);
  CHECK(all_differences(far_off, [](Models& m, double, double g) { return m[1].above(g, high, low); }) == 0);
  // The comparison can fail: another threshold is told apart.
  CHECK(all_differences(near_by, [](Models& m, double c, double) { return m[0].below(c, low, 0.7); }) > 0);
}

TEST_CASE("both, either and negated are and, or and not, with all memories advancing on every tick") {
  CHECK(all_differences(wend::both(near_by, far_off), [](Models& m, double c, double g) {
          bool const a = m[0].below(c, low, high);
          bool const b = m[1].above(g, high, low);
          return a && b;
        }) == 0);
  CHECK(all_differences(wend::either(near_by, far_off), [](Models& m, double c, double g) {
          bool const a = m[0].below(c, low, high);
          bool const b = m[1].above(g, high, low);
          return a || b;
        }) == 0);
  CHECK(all_differences(wend::negated(near_by),
                        [](Models& m, double c, double) { return !m[0].below(c, low, high); }) == 0);
  CHECK(all_differences(wend::negated(wend::both(wend::negated(near_by), far_off)), [](Models& m, double c, double g) {
          bool const a = !m[0].below(c, low, high);
          bool const b = m[1].above(g, high, low);
          return !(a && b);
        }) == 0);
  // A model that does not ask the second guard when the first has settled the answer (as && would) is told apart.
  CHECK(all_differences(wend::both(near_by, far_off), [](Models& m, double c, double g) {
          return m[0].below(c, low, high) && m[1].above(g, high, low);
        }) > 0);
}

TEST_CASE_TEMPLATE("a signal that is not a number leaves the answer", S, WEND_TEST_NUMBERS) {
  Stage<S> const stage;
  S const nan = S(scenes::nan);
  wend::memory_t<decltype(near_by), S> near_memory;
  wend::memory_t<decltype(far_off), S> far_memory;
  CHECK(numbers::none<S>(wend::ask(near_by, stage.with(nan, nan), near_memory)));
  CHECK(numbers::none<S>(wend::ask(far_off, stage.with(nan, nan), far_memory)));
  (void)wend::ask(near_by, stage.with(S(0.1F), nan), near_memory);
  (void)wend::ask(far_off, stage.with(nan, S(0.9F)), far_memory);
  CHECK(numbers::all<S>(wend::ask(near_by, stage.with(nan, nan), near_memory)));
  CHECK(numbers::all<S>(wend::ask(far_off, stage.with(nan, nan), far_memory)));
}

TEST_CASE("held keeps each answer for its dwell, whatever the noise") {
  constexpr auto guard = wend::held(wend::below(wend::clearance, 0.5F, 0.5F), 0.4F);
  Stage<float> const stage;
  std::mt19937 random(11);
  double least_time = 1.0e9;
  int changes = 0;
  for (int run = 0; run < 50; ++run) {
    wend::memory_t<decltype(guard), float> memory;
    double now = 0.0;
    double changed_at = 0.0;
    bool answer = false;
    for (int tick = 0; tick < 2000; ++tick) {
      // A coin on every tick, and time steps from nothing to more than the dwell; some of them are no times at all.
      bool const coin = (random() & 1U) != 0;
      float dt = static_cast<float>(random() % 100) * 0.001F;
      dt = random() % 50 == 0 ? 0.5F : dt;
      now += static_cast<double>(dt);
      bool const got = wend::ask(guard, stage.with(coin ? 0.1F : 0.9F, 1.0F, dt), memory);
      if (tick == 0) {
        CHECK(got == coin);  // the first answer is taken at once
        changed_at = now;
      } else if (got != answer) {
        least_time = std::min(least_time, now - changed_at);
        ++changes;
        changed_at = now;
      } else {
        CHECK((got == coin || now - changed_at < 0.4 + 1.0e-5));  // and no longer than that
      }
      answer = got;
    }
  }
  MESSAGE("least time between answers ", least_time, " s of 0.4 s, in ", changes, " changes");
  CHECK(changes > 5000);
  CHECK(least_time > 0.4 - 1.0e-5);  // single precision sums of up to 0.4 s
}

TEST_CASE_TEMPLATE("held takes the first answer at once, on each lane for itself", S, WEND_TEST_NUMBERS) {
  constexpr auto guard = wend::held(near_by, 1.0F);
  Stage<S> const stage;
  wend::memory_t<decltype(guard), S> memory;
  S const first = numbers::make<S>([](int k) { return k % 2 == 0 ? 0.1F : 0.9F; });
  S const second = numbers::make<S>([](int k) { return k % 2 == 0 ? 0.9F : 0.1F; });
  auto const is_first = [](auto const& mask) {
    bool agrees = true;
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      agrees = agrees && numbers::holds(mask, k) == (k % 2 == 0);
    }
    return agrees;
  };
  CHECK(is_first(wend::ask(guard, stage.with(first, S(1.0F), S(0.25F)), memory)));
  for (int tick = 0; tick < 3; ++tick) {
    CHECK(is_first(wend::ask(guard, stage.with(second, S(1.0F), S(0.25F)), memory)));
  }
  CHECK(is_first(!wend::ask(guard, stage.with(second, S(1.0F), S(0.25F)), memory)));
}

TEST_CASE("held without a dwell is the guard itself") {
  constexpr auto guard = wend::held(near_by, 0.0F);
  CHECK(all_differences(guard, [](Models& m, double c, double) { return m[0].below(c, low, high); }) == 0);
}

TEST_CASE("a hard switch chatters under noise where hysteresis wider than the noise does not") {
  // The signal creeps once from 1 m to 0 m with noise of +-0.04 m on it.
  Stage<float> const stage;
  auto const changes = [&stage](auto const& guard) {
    std::mt19937 random(3);
    wend::memory_t<std::remove_cvref_t<decltype(guard)>, float> memory;
    bool answer = false;
    int count = 0;
    for (int tick = 0; tick < 4000; ++tick) {
      float const noise = 0.08F * (static_cast<float>(random() >> 8U) * 0x1p-24F - 0.5F);
      float const clearance = 1.0F - static_cast<float>(tick) / 4000.0F;
      bool const got = wend::ask(guard, stage.with(clearance + noise, 1.0F), memory);
      count += got != answer ? 1 : 0;
      answer = got;
    }
    return count;
  };
  int const hard = changes(wend::below(wend::clearance, 0.5F, 0.5F));
  int const banded = changes(wend::below(wend::clearance, 0.5F, 0.59F));
  MESSAGE("changes of the answer on one approach: ", hard, " hard, ", banded, " with a band of 0.09 m");
  CHECK(hard > 20);
  CHECK(banded == 1);
  CHECK(changes(wend::above(wend::clearance, 0.5F, 0.41F)) == 2);  // on at once, off once
  CHECK(changes(wend::above(wend::clearance, 0.5F, 0.5F)) > 20);
}
