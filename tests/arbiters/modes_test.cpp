// The hybrid automaton, and with it `guarded` and `held`, against plain table-driven models over all short inputs.
#include <array>
#include <cstddef>
#include <tuple>
#include <vector>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/modes.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/toward_goal.hpp"

namespace {

// Which field is heard is read off the course: field k points to (cos, sin) of its own, and remembers for how many
// ticks it has been heard, which it shows as its confidence: 1/2, 1/4, 1/8, ...
template <int K>
struct marked {
  template <wend::Number S>
  struct Memory {
    S heard{S(0.0F)};
  };
  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const&, Memory<S>& memory) const noexcept {
    memory.heard = memory.heard + S(1.0F);
    S share = S(1.0F);
    for (int i = 0; i < 20; ++i) {
      share = wend::select(S(static_cast<float>(i)) < memory.heard, S(share * S(0.5F)), share);
    }
    std::array<std::array<float, 2>, 3> const ways{{{1.0F, 0.0F}, {0.0F, 1.0F}, {-1.0F, 0.0F}}};
    return {{S(ways[K][0]), S(ways[K][1])}, share};
  }
};

struct Heard {
  int field;
  int for_ticks;
  friend bool operator==(Heard const&, Heard const&) = default;
};

// Which field was heard, and for which time in a row.
Heard read(wend::Course<float> const& course) {
  Heard heard{course.direction.x() > 0.5F ? 0 : course.direction.y() > 0.5F ? 1 : 2, 0};
  for (float share = course.confidence; share < 0.75F; share *= 2.0F) {
    ++heard.for_ticks;
  }
  return heard;
}

// The input of a tick is one number, given as the distance to the goal: a signal that a test can set at will.
template <typename Policy>
Heard tick(Policy const& policy, int input, wend::memory_t<Policy, float>& memory, float dt = 0.1F) {
  scenes::Scene<float> scene;
  scene.goal = {1.0F + static_cast<float>(input), 0.0F};
  scene.dt = dt;
  return read(scenes::answer(policy, scene, memory));
}

// Yes while the input is exactly k: between k + 0.5 and k + 1.5 metres.
template <int K>
constexpr auto input_is = wend::both(wend::above(wend::goal_distance, K + 0.5F, K + 0.5F),
                                     wend::below(wend::goal_distance, K + 1.5F, K + 1.5F));

// The same without a memory; and a field without one, which shows its number and no time.
template <int K>
struct input_is_now {
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::mask_t<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return percept.goal_distance > S(K + 0.5F) && percept.goal_distance < S(K + 1.5F);
  }
};
template <int K>
struct plain {
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const&) const noexcept {
    return {{S(K == 0 ? 1.0F : K == 1 ? 0.0F : -1.0F), S(K == 1 ? 1.0F : 0.0F)}, S(1.0F)};
  }
};

// Calls f(inputs) for each sequence of `length` inputs from 0 to kinds - 1.
template <typename F>
void for_all_inputs(int kinds, int length, F const& f) {
  std::vector<int> inputs(static_cast<std::size_t>(length), 0);
  while (true) {
    f(inputs);
    std::size_t i = 0;
    while (i < inputs.size() && ++inputs[i] == kinds) {
      inputs[i++] = 0;
    }
    if (i == inputs.size()) {
      return;
    }
  }
}

}  // namespace

TEST_CASE("modes do what a table says, over every sequence of eight inputs") {
  // From A: input 1 to B, input 2 to C. From B: 0 to A, 2 to B itself; 2 to C too, but that stands second. From C: 2 to
  // A. First come, first served.
  constexpr auto policy = wend::modes(
      wend::mode<"A">(marked<0>{}, wend::to<"B">(input_is<1>), wend::to<"C">(input_is<2>)),
      wend::mode<"B">(marked<1>{}, wend::to<"A">(input_is<0>), wend::to<"B">(input_is<2>), wend::to<"C">(input_is<2>)),
      wend::mode<"C">(marked<2>{}, wend::to<"A">(input_is<2>)));
  constexpr int stays = -1;
  constexpr std::array<std::array<int, 3>, 3> next{{{stays, 1, 2}, {0, stays, 1}, {stays, stays, 0}}};
  int wrong = 0;
  int compared = 0;
  for_all_inputs(3, 8, [&](std::vector<int> const& inputs) {
    wend::memory_t<decltype(policy), float> memory;
    Heard model{0, 0};
    for (int const input : inputs) {
      int const to = next[static_cast<std::size_t>(model.field)][static_cast<std::size_t>(input)];
      model = to == stays ? Heard{model.field, model.for_ticks + 1} : Heard{to, 1};
      ++compared;
      wrong += tick(policy, input, memory) == model ? 0 : 1;
    }
  });
  CHECK(compared == 8 * 6561);
  CHECK(wrong == 0);
}

TEST_CASE("modes in which nothing remembers, but which of them is on, do what a table says too") {
  constexpr auto policy =
      wend::modes(wend::mode<"A">(plain<0>{}, wend::to<"B">(input_is_now<1>{}), wend::to<"C">(input_is_now<2>{})),
                  wend::mode<"B">(plain<1>{}, wend::to<"A">(input_is_now<0>{}), wend::to<"C">(input_is_now<2>{})),
                  wend::mode<"C">(plain<2>{}, wend::to<"B">(input_is_now<0>{}), wend::to<"A">(input_is_now<1>{})));
  static_assert(sizeof(wend::memory_t<decltype(policy), float>) == 2);
  constexpr std::array<std::array<int, 3>, 3> next{{{0, 1, 2}, {0, 1, 2}, {1, 0, 2}}};
  int wrong = 0;
  for_all_inputs(3, 8, [&](std::vector<int> const& inputs) {
    wend::memory_t<decltype(policy), float> memory;
    int model = 0;
    for (int const input : inputs) {
      model = next[static_cast<std::size_t>(model)][static_cast<std::size_t>(input)];
      wrong += tick(policy, input, memory).field == model ? 0 : 1;
    }
  });
  CHECK(wrong == 0);
}

TEST_CASE("modes whose guards remember do what a table with clocks and latches says, over every sequence of nine") {
  // Inputs 0, 1, 2 are 1, 2 and 3 m. Ticks of 0.1 s, so that 0.25 s are three ticks and 0.15 s are two.
  constexpr auto policy = wend::modes(
      wend::mode<"A">(marked<0>{}, wend::to<"B">(wend::held(wend::below(wend::goal_distance, 1.5F, 2.5F), 0.25F)),
                      wend::to<"C">(wend::held(wend::above(wend::goal_distance, 2.5F, 2.5F), 0.15F))),
      wend::mode<"B">(marked<1>{}, wend::to<"A">(wend::held(wend::above(wend::goal_distance, 2.5F, 1.5F), 0.15F))),
      wend::mode<"C">(marked<2>{}, wend::to<"C">(wend::held(input_is<1>, 0.15F)), wend::to<"A">(input_is<0>)));
  // A way out in the model: the inputs that set its latch, those that release it, and for how many ticks an answer
  // stands.
  struct Way {
    int target;
    std::array<bool, 3> sets;
    std::array<bool, 3> releases;
    int dwell;
  };
  constexpr Way nowhere{-1, {}, {}, 0};
  constexpr std::array<std::array<Way, 2>, 3> table{{
      {{{1, {true, false, false}, {false, false, true}, 3}, {2, {false, false, true}, {true, true, false}, 2}}},
      {{{0, {false, false, true}, {true, false, false}, 2}, nowhere}},
      {{{2, {false, true, false}, {true, false, true}, 2}, {0, {true, false, false}, {false, true, true}, 0}}},
  }};
  struct Clock {
    bool latch = false;
    bool says = false;
    int since = -1;  // ticks since it said so; -1 before it was asked
  };
  int wrong = 0;
  std::array<std::array<int, 3>, 3> went{};
  for_all_inputs(3, 9, [&](std::vector<int> const& inputs) {
    wend::memory_t<decltype(policy), float> memory;
    Heard model{0, 0};
    std::array<Clock, 2> clocks{};
    for (int const input : inputs) {
      auto const at = static_cast<std::size_t>(input);
      auto const from = static_cast<std::size_t>(model.field);
      int to = -1;
      for (std::size_t w = 0; w < 2; ++w) {
        Way const& way = table[from][w];
        Clock& clock = clocks[w];
        clock.latch = way.sets[at] || (clock.latch && !way.releases[at]);
        bool const asked = clock.since >= 0;
        ++clock.since;
        if (!asked || (clock.latch != clock.says && clock.since >= way.dwell)) {
          clock.says = clock.latch;
          clock.since = 0;
        }
        to = to < 0 && way.target >= 0 && clock.says ? way.target : to;
      }
      if (to >= 0) {
        ++went[from][static_cast<std::size_t>(to)];
        clocks = {};  // entered anew
        model = {to, 0};
      }
      ++model.for_ticks;
      wrong += tick(policy, input, memory) == model ? 0 : 1;
    }
  });
  CHECK(wrong == 0);
  CHECK(went[0][1] > 1000);  // each way out is gone
  CHECK(went[0][2] > 1000);
  CHECK(went[1][0] > 1000);
  CHECK(went[2][2] > 1000);
  CHECK(went[2][0] > 1000);
}

TEST_CASE("the first mode is where an automaton starts, and a tick takes one transition at most") {
  constexpr auto chain = wend::modes(wend::mode<"A">(marked<0>{}, wend::to<"B">(input_is<1>)),
                                     wend::mode<"B">(marked<1>{}, wend::to<"C">(input_is<1>)),
                                     wend::mode<"C">(marked<2>{}));
  wend::memory_t<decltype(chain), float> memory;
  CHECK(tick(chain, 0, memory) == Heard{0, 1});
  CHECK(tick(chain, 1, memory) == Heard{1, 1});  // the guard of B says yes too, but is asked on the next tick
  CHECK(tick(chain, 1, memory) == Heard{2, 1});
  CHECK(tick(chain, 1, memory) == Heard{2, 2});  // no way out
}

TEST_CASE("names are the same letter by letter") {
  static_assert(wend::same_name(wend::ModeName{"going"}, wend::ModeName{"going"}));
  static_assert(!wend::same_name(wend::ModeName{"going"}, wend::ModeName{"goinG"}));
  static_assert(!wend::same_name(wend::ModeName{"going"}, wend::ModeName{"Going"}));
  static_assert(!wend::same_name(wend::ModeName{"go"}, wend::ModeName{"going"}));
  static_assert(!wend::same_name(wend::ModeName{"going"}, wend::ModeName{"go"}));
  static_assert(wend::same_name(wend::ModeName{""}, wend::ModeName{""}));
  // Two modes may begin alike.
  constexpr auto policy = wend::modes(wend::mode<"turn">(marked<0>{}, wend::to<"turning">(input_is<1>)),
                                      wend::mode<"turning">(marked<1>{}, wend::to<"turn">(input_is<0>)));
  wend::memory_t<decltype(policy), float> memory;
  CHECK(tick(policy, 1, memory).field == 1);
  CHECK(tick(policy, 0, memory).field == 0);
}

TEST_CASE("a mode's guards start fresh whenever it is entered") {
  // Held for 0.25 s: the guard of A, asked anew after A was left and entered, may not answer with what it knew before.
  constexpr auto policy = wend::modes(wend::mode<"A">(marked<0>{}, wend::to<"B">(wend::held(input_is<1>, 0.25F))),
                                      wend::mode<"B">(marked<1>{}, wend::to<"A">(input_is<2>)));
  wend::memory_t<decltype(policy), float> memory;
  CHECK(tick(policy, 1, memory).field == 1);  // the first answer is not held back
  CHECK(tick(policy, 2, memory).field == 0);
  CHECK(tick(policy, 0, memory).field == 0);  // first asked after that: no, and that is held for three ticks
  CHECK(tick(policy, 1, memory).field == 0);
  CHECK(tick(policy, 1, memory).field == 0);
  CHECK(tick(policy, 1, memory).field == 1);
}

TEST_CASE("of masks that no run leaves, the first counts, and the next tick is in order again") {
  constexpr auto policy = wend::modes(wend::mode<"A">(marked<0>{}, wend::to<"B">(input_is<1>)),
                                      wend::mode<"B">(marked<1>{}, wend::to<"A">(input_is<1>)),
                                      wend::mode<"C">(marked<2>{}, wend::to<"A">(input_is<1>)));
  wend::memory_t<decltype(policy), float> memory;
  memory.is_in = {true, true};
  CHECK(tick(policy, 0, memory).field == 1);
  CHECK(memory.is_in[0]);
  CHECK_FALSE(memory.is_in[1]);
}

TEST_CASE("modes without memories take a byte a mode but the first, and nest") {
  constexpr auto policy = wend::modes(wend::mode<"A">(wend::toward_goal{}), wend::mode<"B">(wend::toward_goal{}),
                                      wend::mode<"C">(wend::toward_goal{}));
  static_assert(sizeof(wend::memory_t<decltype(policy), float>) == 2);
  constexpr auto nested = wend::modes(wend::mode<"in">(policy, wend::to<"out">(input_is<1>)),
                                      wend::mode<"out">(marked<2>{}, wend::to<"in">(input_is<0>)));
  wend::memory_t<decltype(nested), float> memory;
  CHECK(tick(nested, 1, memory).field == 2);
  CHECK(tick(nested, 0, memory).field == 0);
}

// --- guarded and held, the same way
// ------------------------------------------------------------------------------------

TEST_CASE("guarded does what a table says, over every sequence of nine inputs") {
  // Inputs 0, 1, 2 stand for a signal under both thresholds, between them, over both.
  constexpr auto policy = wend::guarded(wend::below(wend::goal_distance, 1.5F, 2.5F), marked<0>{}, marked<1>{});
  int wrong = 0;
  for_all_inputs(3, 9, [&](std::vector<int> const& inputs) {
    wend::memory_t<decltype(policy), float> memory;
    bool inside = false;
    int for_ticks = 0;
    for (int const input : inputs) {
      bool const now = input == 0 || (inside && input == 1);
      for_ticks = now == inside ? for_ticks + 1 : 1;
      inside = now;
      wrong += tick(policy, input, memory) == Heard{inside ? 0 : 1, for_ticks} ? 0 : 1;
    }
  });
  CHECK(wrong == 0);
}

TEST_CASE("held keeps each answer for its time, over every sequence of twelve inputs") {
  // Ticks of 0.1 s and a dwell of 0.25 s: an answer stands for three ticks at least, but the first, which was not
  // given.
  constexpr auto policy =
      wend::guarded(wend::held(wend::below(wend::goal_distance, 1.5F, 1.5F), 0.25F), marked<0>{}, marked<1>{});
  int wrong = 0;
  for_all_inputs(2, 12, [&](std::vector<int> const& inputs) {
    wend::memory_t<decltype(policy), float> memory;
    bool answer = false;
    int since = 0;  // ticks since the answer was given
    int for_ticks = 0;
    bool first = true;
    for (int const input : inputs) {
      bool const wanted = input == 0;
      ++since;
      bool const before = answer;
      if (first || (wanted != answer && since >= 3)) {
        since = 0;
        answer = wanted;
      }
      for_ticks = answer == before ? for_ticks + 1 : 1;
      first = false;
      wrong += tick(policy, input, memory) == Heard{answer ? 0 : 1, for_ticks} ? 0 : 1;
    }
  });
  CHECK(wrong == 0);
}
