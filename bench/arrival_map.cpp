// bench/arrival_map.cpp - what a map of arrivals costs, and how much of the free area it proves.
//
// Three discs in 5 m x 4 m, cells of 5 mm and larger ones, on one core and on two; a policy whose sign is wrong, of
// which nothing can be proved and so every cell is tried at every size; and a loop over cells of position and heading.
// Counters: proved (share of what is not blocked), evaluations (boxes whose step was worked out, and each second).
#include <cstdint>

#include <benchmark/benchmark.h>

#include "wend/lab/arrival_map.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

struct off_goal {
  template <Number S, int N>
  Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    return course_along(Vec2<S>(-percept.goal_direction), S(1.0F));
  }
};

constexpr auto policy = blend(ramp(clearance, 0.10F, 0.60F), away_from_discs{}, toward_goal{});
constexpr auto wrong_sign = blend(ramp(clearance, 0.10F, 0.60F), away_from_discs{}, off_goal{});

lab::World three_discs() {
  lab::World world;
  world.add(1.4, 1.0, 0.3);
  world.add(2.6, 2.9, 0.4);
  world.add(3.7, 1.1, 0.35);
  return world;
}

template <typename Policy>
void map_once(benchmark::State& state, Policy const& p, lab::World const& world, Vec2<double> const& goal,
              lab::Region const& region, lab::ArrivalOptions const& options) {
  double proved = 0.0;
  std::int64_t evaluations = 0;
  for (auto _ : state) {
    lab::ArrivalMap const map = lab::arrival_map<4>(p, world, goal, region, options);
    proved = map.share(lab::Arrival::proved);
    evaluations += map.evaluations;
  }
  state.counters["proved"] = proved;
  state.counters["evaluations"] =
      benchmark::Counter(static_cast<double>(evaluations), benchmark::Counter::kAvgIterations);
  state.counters["each_second"] = benchmark::Counter(static_cast<double>(evaluations), benchmark::Counter::kIsRate);
}

// Arguments: millimetres of the finest cell, and threads.
void point_machine(benchmark::State& state) {
  lab::ArrivalOptions options;
  options.finest = 0.001 * static_cast<double>(state.range(0));
  options.threads = static_cast<int>(state.range(1));
  map_once(state, policy, three_discs(), {4.7, 2.0}, {{0.0, 0.0}, {5.0, 4.0}}, options);
}

void point_machine_wrong_sign(benchmark::State& state) {
  map_once(state, wrong_sign, three_discs(), {4.7, 2.0}, {{0.0, 0.0}, {5.0, 4.0}}, {});
}

void whole_machine(benchmark::State& state) {
  constexpr Loop<decltype(blend(ramp(clearance, 0.10F, 0.40F), away_from_discs{}, toward_goal{}))> loop{
      .policy = blend(ramp(clearance, 0.10F, 0.40F), away_from_discs{}, toward_goal{}),
      .robot_radius = 0.15F,
      .arrive_within = 0.20F};
  lab::World world;
  world.add(0.95, 0.75, 0.15);
  lab::ArrivalOptions options;
  options.finest = 0.02;
  options.headings = 96;
  options.pieces = 1;
  options.period = 0.4;
  map_once(state, loop, world, {1.6, 0.8}, {{0.0, 0.0}, {2.0, 1.6}}, options);
}

BENCHMARK(point_machine)
    ->ArgNames({"mm", "threads"})
    ->Args({40, 1})
    ->Args({20, 1})
    ->Args({10, 1})
    ->Args({5, 1})
    ->Args({5, 2})
    ->Unit(benchmark::kMillisecond)
    ->MeasureProcessCPUTime()
    ->UseRealTime();
BENCHMARK(point_machine_wrong_sign)->Unit(benchmark::kMillisecond);
BENCHMARK(whole_machine)->Unit(benchmark::kMillisecond);

}  // namespace
