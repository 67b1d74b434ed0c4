// bench/dual.cpp - what derivatives cost: one decision on lab::Dual<N> over the same on double.
//
// Prints a table and, from the medians of the same interleaved repetitions, ratios. N derivatives by differences would
// cost 1 + N runs at the least, so that is what a ratio should stay below.
//
// dual              the table and the ratios; takes Google Benchmark's own options too
#include <array>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <string>
#include <utility>
#include <vector>

#include <benchmark/benchmark.h>

#include "../examples/policies.hpp"
#include "medians.hpp"
#include "wend/lab/dual.hpp"
#include "wend/lab/random.hpp"
#include "wend/wend.hpp"

namespace {

using wend::lab::Dual;

constexpr int scene_count = 1024;
constexpr int disc_count = 3;

template <typename S>
struct Scene {
  wend::Pose<S> pose;
  wend::Vec2<S> goal{S(0.0F), S(0.0F)};
  wend::DiscSet<S, disc_count> discs;
};

// A number, and on a Dual<N> independent variable k modulo N, so that no slope is zero throughout.
template <typename S>
struct Maker {
  static S make(double x, int) { return S(x); }
};
template <int N>
struct Maker<Dual<N>> {
  static Dual<N> make(double x, int k) { return Dual<N>::variable(x, k % N); }
};

// A room of 5 m x 4 m, with three discs.
template <typename S>
std::vector<Scene<S>> random_scenes() {
  wend::lab::Draws const draws(7, 0);
  std::vector<Scene<S>> scenes;
  for (std::uint32_t k = 0; k < scene_count; ++k) {
    auto const between = [&draws, k](double low, double high, std::uint32_t item) {
      return Maker<S>::make(draws.between(low, high, {1, k, item}), static_cast<int>(item));
    };
    double const angle = draws.between(-3.1, 3.1, {2, k});
    Scene<S> scene;
    scene.pose = {{between(0.0, 5.0, 0), between(0.0, 4.0, 1)}, {S(std::cos(angle)), S(std::sin(angle))}};
    scene.goal = {between(0.0, 5.0, 2), between(0.0, 4.0, 3)};
    for (std::uint32_t i = 0; i < disc_count; ++i) {
      scene.discs.add({{between(0.0, 5.0, 4 + i), between(0.0, 4.0, 7 + i)}, between(0.1, 0.4, 10 + i)});
    }
    scenes.push_back(scene);
  }
  return scenes;
}

template <typename S, typename Policy>
[[gnu::noinline, gnu::flatten]] wend::Course<S> decide(Policy const& policy, Scene<S> const& scene,
                                                       wend::memory_t<Policy, S>& memory) noexcept {
  auto const percept = wend::look(scene.pose, scene.goal, scene.discs, S(0.20F), S(0.05F));
  return wend::evaluate(policy, percept, memory);
}

template <typename F>
void for_each_policy(F const& f) {
  f("hard switch", policies::hard_switch);
  f("blend", policies::blended);
  f("composed", policies::composed);
}

template <typename S>
void add_all(std::string const& number_name) {
  static std::vector<Scene<S>> const scenes = random_scenes<S>();
  for_each_policy([&number_name](char const* name, auto const& policy) {
    benchmark::RegisterBenchmark((number_name + "/" + name).c_str(), [&policy](benchmark::State& state) {
      std::vector<wend::memory_t<std::remove_cvref_t<decltype(policy)>, S>> memories(scenes.size());
      for (auto _ : state) {
        for (std::size_t k = 0; k < scenes.size(); ++k) {
          auto course = decide(policy, scenes[k], memories[k]);
          benchmark::DoNotOptimize(&course);
        }
      }
      state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(scenes.size()));
    })->Unit(benchmark::kMicrosecond);
  });
}

}  // namespace

int main(int argc, char** argv) {
  add_all<double>("double");
  add_all<Dual<2>>("dual 2");
  add_all<Dual<4>>("dual 4");
  add_all<Dual<8>>("dual 8");

  Medians medians;
  if (!medians.run(argc, argv)) {
    return 1;
  }

  std::printf("\n%-14s %12s %12s %12s %12s\n", "", "double, ns", "N = 2", "N = 4", "N = 8");
  for_each_policy([&medians](char const* name, auto const&) {
    double const plain = medians.of(std::string("double/") + name);
    if (plain > 0.0) {
      std::printf("%-14s %12.1f", name, plain * 1000.0 / scene_count);  // medians are in microseconds
      for (char const* dual : {"dual 2/", "dual 4/", "dual 8/"}) {
        std::printf(" %11.2fx", medians.of(std::string(dual) + name) / plain);
      }
      std::printf("\n");
    }
  });
  return 0;
}
