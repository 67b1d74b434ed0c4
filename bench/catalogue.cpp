// bench/catalogue.cpp - what each method of the catalogue costs a tick, and what it keeps: beside eight discs, from
// what is known to a course, in one run. `sh cmake/costs.sh` counts instructions instead, and keeps bench/COSTS.md.
//
// catalogue              times and ratios; takes Google Benchmark's own options too
// catalogue --once NAME  one pass of that method over the scenes and nothing else: for counting instructions
// catalogue --sizes      a line a method: bytes of memory, bytes of parameters, name
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <string>
#include <string_view>
#include <tuple>
#include <type_traits>
#include <vector>

#include <benchmark/benchmark.h>

#include "../examples/catalogue.hpp"
#include "medians.hpp"
#include "random.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

constexpr int discs_seen = 8;
constexpr int scene_count = 256;
using Discs = MovingDiscSet<float, discs_seen>;

struct Scene {
  Pose<float> pose;
  Vec2<float> goal;
  Discs discs;
};

// Around a machine on its way from (0, 0) to (8, 0): what it may meet there.
std::vector<Scene> scenes() {
  std::vector<Scene> all(scene_count);
  bench::Random random;
  for (Scene& scene : all) {
    float const angle = random.between(-1.0F, 1.0F);
    scene.pose = {{random.between(0.0F, 8.0F), random.between(-1.0F, 1.0F)}, {std::cos(angle), std::sin(angle)}};
    scene.goal = {8.0F, 0.0F};
    for (int i = 0; i < discs_seen; ++i) {
      float const bearing = random.between(-3.2F, 3.2F);
      float const distance = random.between(0.5F, 4.0F);
      scene.discs.add({{scene.pose.position.x() + distance * std::cos(bearing),
                        scene.pose.position.y() + distance * std::sin(bearing)},
                       random.between(0.05F, 0.3F)},
                      {random.between(-0.3F, 0.3F), random.between(-0.3F, 0.3F)}, scene.pose.position);
    }
  }
  return all;
}

// Out of line and flat, so that each method pays for one call, and what is inlined depends on nothing else here.
template <typename Policy>
[[gnu::noinline, gnu::flatten]] Course<float> decide(Policy const& policy, Scene const& scene,
                                                     memory_t<Policy, float>& memory) noexcept {
  return evaluate(policy, look(scene.pose, scene.goal, scene.discs, 0.2F, 0.05F), memory);
}

template <typename Policy>
void pass(Policy const& policy, std::vector<Scene> const& scenes, memory_t<Policy, float>& memory) {
  for (Scene const& scene : scenes) {
    benchmark::DoNotOptimize(decide(policy, scene, memory));
  }
}

template <typename F>
void for_each_method(F const& f) {
  std::apply([&f](auto const&... method) { (f(method), ...); }, catalogue::all);
}

template <typename Policy>
constexpr std::size_t memory_bytes = std::is_empty_v<memory_t<Policy, float>> ? 0 : sizeof(memory_t<Policy, float>);
template <typename Policy>
constexpr std::size_t parameter_bytes = std::is_empty_v<Policy> ? 0 : sizeof(Policy);

void print(Medians const& medians) {
  char const* const yardstick = std::get<0>(catalogue::all).name;
  std::printf("\n%-30s %s\n", "method", (std::string("time, of ") + yardstick).c_str());
  for_each_method([&](auto const& method) {
    std::printf("%-30s %.1f\n", method.name, medians.of(method.name) / medians.of(yardstick));
  });
}

}  // namespace

int main(int argc, char** argv) {
  static std::vector<Scene> const all = scenes();
  if (argc == 2 && std::string_view(argv[1]) == "--sizes") {
    for_each_method([]<typename Policy>(catalogue::Named<Policy> const& method) {
      std::printf("%zu %zu %s\n", memory_bytes<Policy>, parameter_bytes<Policy>, method.name);
    });
    return 0;
  }
  if (argc == 3 && std::string_view(argv[1]) == "--once") {
    bool found = false;
    for_each_method([&]<typename Policy>(catalogue::Named<Policy> const& method) {
      if (std::string_view(argv[2]) == method.name) {
        memory_t<Policy, float> memory{};
        pass(method.policy, all, memory);
        found = true;
      }
    });
    return found ? 0 : 2;
  }
  for_each_method([]<typename Policy>(catalogue::Named<Policy> const& method) {
    benchmark::RegisterBenchmark(method.name, [&method](benchmark::State& state) {
      memory_t<Policy, float> memory{};
      for (auto _ : state) {
        pass(method.policy, all, memory);
      }
      state.SetItemsProcessed(state.iterations() * scene_count);
    });
  });
  Medians medians;
  if (!medians.run(argc, argv)) {
    return 2;
  }
  print(medians);
  return 0;
}
