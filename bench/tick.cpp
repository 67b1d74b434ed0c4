// bench/tick.cpp - what one decision costs: composed of wend's parts, written by hand, and in the textbooks' form.
//
// All three decide the same scenes from the same memories, and before anything is timed they have to agree on them.
// Prints a table and, from the medians of the same interleaved repetitions, two ratios.
//
// tick              the table and the ratios; takes Google Benchmark's own options too
// tick --once       one pass of each over the scenes and nothing else: for counting instructions under callgrind
#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <string>
#include <string_view>
#include <vector>

#include <benchmark/benchmark.h>

#include "medians.hpp"
#include "random.hpp"
#include "textbook.h"  // takes in by_hand.h
#include "wend/wend.hpp"

namespace {

constexpr auto policy =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{},
                  wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{}, wend::toward_goal{}));
constexpr wend::Loop<decltype(policy)> loop{policy};

using Memory = wend::memory_t<decltype(policy), float>;
using LoopMemory = wend::memory_t<decltype(loop), float>;

constexpr int scene_count = 1024;
constexpr float robot_radius = 0.20F;
constexpr float dt = 0.05F;

struct Scene {
  wend::Situation<float> now;
  wend::DiscSet<float, HAND_DISCS> discs;
};

struct Table {
  std::vector<Scene> scenes;
  std::vector<hand_scene> by_hand;
  std::vector<float> headings;  // radians, which the textbook form wants
  std::vector<Memory> memories;
  std::vector<hand_memory> hand_memories;
  std::vector<textbook_memory> textbook_memories;
};

// Each out of line, so that it pays for one call and nothing is moved out of the loop over the scenes; and flat, so
// that what is inlined does not depend on how often this file uses a function.
[[gnu::noinline, gnu::flatten]] wend::Course<float> decide_composed(Scene const& scene, Memory& memory) noexcept {
  auto const percept = wend::look(scene.now.pose, scene.now.goal, scene.discs, robot_radius, dt);
  return wend::evaluate(policy, percept, memory);
}
[[gnu::noinline, gnu::flatten]] hand_course decide_by_hand(hand_scene const& scene, hand_memory& memory) noexcept {
  return hand_decide(&scene, &memory);
}
[[gnu::noinline, gnu::flatten]] textbook_course decide_textbook(hand_scene const& scene, float heading,
                                                                textbook_memory& memory) noexcept {
  return textbook_decide(&scene, heading, &memory);
}
[[gnu::noinline, gnu::flatten]] wend::Percept<float, HAND_DISCS> look_only(Scene const& scene) noexcept {
  return wend::look(scene.now.pose, scene.now.goal, scene.discs, robot_radius, dt);
}
[[gnu::noinline, gnu::flatten]] wend::Command<float> whole_tick(Scene const& scene, LoopMemory& memory) noexcept {
  return loop.tick(scene.now, scene.discs, memory);
}

// Drives of 64 ticks each through squares of 7 m with eight discs: what a loop sees, one tick much like the one before,
// and every branch of the policy met. Each scene comes with the memories that the tick before has left behind.
Table driven_table() {
  bench::Random random;
  Table table;
  Scene scene;
  hand_scene hand{};
  Memory memory;
  hand_memory of_hand{};
  textbook_memory of_textbook{};
  hand.robot_radius = robot_radius;
  hand.disc_count = HAND_DISCS;
  for (int k = 0; k < scene_count; ++k) {
    if (k % 64 == 0) {
      scene = Scene{};
      for (hand_disc& disc : hand.discs) {
        disc = {random.between(0.0F, 7.0F), random.between(0.0F, 7.0F), random.between(0.1F, 0.5F)};
        scene.discs.add({{disc.x, disc.y}, disc.radius});
      }
      scene.now.pose.position = {random.between(0.0F, 7.0F), random.between(0.0F, 7.0F)};
      scene.now.goal = {random.between(0.0F, 7.0F), random.between(0.0F, 7.0F)};
      scene.now.dt = dt;
      hand.goal_x = scene.now.goal.x();
      hand.goal_y = scene.now.goal.y();
      memory = {};
      of_hand = {};
      of_textbook = {};
    }
    wend::Pose<float>& pose = scene.now.pose;
    hand.x = pose.position.x();
    hand.y = pose.position.y();
    hand.heading_x = pose.heading.x();
    hand.heading_y = pose.heading.y();
    float const angle = std::atan2(pose.heading.y(), pose.heading.x());
    table.scenes.push_back(scene);
    table.by_hand.push_back(hand);
    table.headings.push_back(angle);
    table.memories.push_back(memory);
    table.hand_memories.push_back(of_hand);
    table.textbook_memories.push_back(of_textbook);
    wend::Course<float> const course = decide_composed(scene, memory);
    static_cast<void>(decide_by_hand(hand, of_hand));
    static_cast<void>(decide_textbook(hand, angle, of_textbook));
    if (course.confidence > 0.0F) {
      pose.heading = course.direction;
      pose.position += 0.6F * dt * course.direction;
    }
  }
  return table;
}

bool same_bits(float a, float b) noexcept { return std::bit_cast<std::uint32_t>(a) == std::bit_cast<std::uint32_t>(b); }

// How often the three disagree over two passes, the second from the memories that the first left behind. By hand: in
// any bit. Textbook: by more than rounding, which grows as the blended directions cancel.
int disagreements(Table table, std::array<int, 3>& met) {
  int wrong = 0;
  met = {};
  for (int pass = 0; pass < 2; ++pass) {
    for (std::size_t k = 0; k < table.scenes.size(); ++k) {
      wend::Course<float> const course = decide_composed(table.scenes[k], table.memories[k]);
      hand_course const hand = decide_by_hand(table.by_hand[k], table.hand_memories[k]);
      textbook_course const textbook = decide_textbook(table.by_hand[k], table.headings[k], table.textbook_memories[k]);
      bool const as_by_hand = same_bits(course.direction.x(), hand.x) && same_bits(course.direction.y(), hand.y) &&
                              same_bits(course.confidence, hand.confidence);
      float const tolerance = 1.0e-5F / std::max(course.confidence, 1.0e-3F);
      bool const as_textbook = std::abs(std::cos(textbook.angle) - course.direction.x()) < tolerance &&
                               std::abs(std::sin(textbook.angle) - course.direction.y()) < tolerance &&
                               std::abs(textbook.confidence - course.confidence) < 1.0e-5F;
      wrong += (as_by_hand ? 0 : 1) + (as_textbook ? 0 : 1);
      ++met[table.hand_memories[k].passing ? 0U : course.confidence < 0.9999F ? 1U : 2U];
    }
  }
  return wrong;
}

template <typename Scenes, typename Memories, typename F>
void time_over(benchmark::State& state, Scenes const& scenes, Memories memories, F const& decide) {
  for (auto _ : state) {
    for (std::size_t k = 0; k < scenes.size(); ++k) {
      auto result = decide(k, scenes[k], memories[k]);
      benchmark::DoNotOptimize(&result);
    }
  }
  state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(scenes.size()));
}

int run_once(Table table) {
  std::vector<LoopMemory> loop_memories(table.scenes.size());
  for (std::size_t k = 0; k < table.scenes.size(); ++k) {
    auto composed = decide_composed(table.scenes[k], table.memories[k]);
    auto hand = decide_by_hand(table.by_hand[k], table.hand_memories[k]);
    auto textbook = decide_textbook(table.by_hand[k], table.headings[k], table.textbook_memories[k]);
    auto percept = look_only(table.scenes[k]);
    auto command = whole_tick(table.scenes[k], loop_memories[k]);
    benchmark::DoNotOptimize(&composed);
    benchmark::DoNotOptimize(&hand);
    benchmark::DoNotOptimize(&textbook);
    benchmark::DoNotOptimize(&percept);
    benchmark::DoNotOptimize(&command);
  }
  std::printf("%d calls of each\n", scene_count);
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  Table const table = driven_table();
  if (argc == 2 && std::string_view(argv[1]) == "--once") {
    return run_once(table);
  }

  std::array<int, 3> met{};
  if (int const wrong = disagreements(table, met); wrong != 0) {
    std::fprintf(stderr, "the three forms disagree on %d decisions: no timing\n", wrong);
    return 1;
  }
  std::printf("agreed on %d decisions: %d beside a disc, %d blended, %d straight to the goal or away\n",
              2 * scene_count, met[0], met[1], met[2]);

  std::vector<LoopMemory> const loop_memories(table.scenes.size());
  auto const add = [](char const* name, auto const& scenes, auto const& memories, auto decide) {
    benchmark::RegisterBenchmark(name, [&scenes, &memories, decide](benchmark::State& state) {
      time_over(state, scenes, memories, decide);
    })->Unit(benchmark::kMicrosecond);
  };
  add("composed", table.scenes, table.memories,
      [](std::size_t, Scene const& scene, Memory& memory) { return decide_composed(scene, memory); });
  add("by_hand", table.by_hand, table.hand_memories,
      [](std::size_t, hand_scene const& scene, hand_memory& memory) { return decide_by_hand(scene, memory); });
  add("textbook", table.by_hand, table.textbook_memories,
      [&table](std::size_t k, hand_scene const& scene, textbook_memory& memory) {
        return decide_textbook(scene, table.headings[k], memory);
      });
  add("look", table.scenes, loop_memories,
      [](std::size_t, Scene const& scene, LoopMemory const&) { return look_only(scene); });
  add("whole_tick", table.scenes, loop_memories,
      [](std::size_t, Scene const& scene, LoopMemory& memory) { return whole_tick(scene, memory); });

  Medians medians;
  if (!medians.run(argc, argv)) {
    return 1;
  }
  std::printf("\none decision, median:\n");
  for (auto const& [name, time] : medians.all()) {
    std::printf("%-22s %.2f ns\n", name.c_str(), time * 1000.0 / scene_count);  // medians are in microseconds
  }
  std::printf("%-22s %.3f\n", "composed / by hand", medians.of("composed") / medians.of("by_hand"));
  std::printf("%-22s %.3f\n", "textbook / composed", medians.of("textbook") / medians.of("composed"));
  return 0;
}
