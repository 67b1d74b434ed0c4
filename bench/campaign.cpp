// bench/campaign.cpp - what a simulated robot-tick costs: sensing, decision, wheels, motion and clearance together.
//
// Prints robot-ticks a second on one core, alone and on as many lanes as fit this build's registers; lanes over alone;
// two threads over one (by the clock, which means something on a machine with two idle cores only; and what a tick
// costs of the processors' time with one thread over two, which does anywhere); and the time of a tick against the
// number of discs told and the number in the world. Every figure is the median of rounds in which all are taken in
// turn, so that what disturbs one disturbs all. Built for wider registers (-march=native) more lanes fit.
//
//   bench_campaign [ROUNDS]    default 9
#include <algorithm>
#include <chrono>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <functional>
#include <string>
#include <utility>
#include <vector>

#include "../examples/policies.hpp"
#include "wend/lab/campaign.hpp"

namespace {

using namespace wend;

constexpr Loop<decltype(policies::composed)> loop{.policy = policies::composed};

// Discs thrown over a square, eight to 100 square metres, so that some thirty are in sight.
lab::World scattered(std::uint32_t count, double side) {
  lab::World world;
  lab::Draws const draws(3, 0);
  for (std::uint32_t i = 0; i < count; ++i) {
    world.add(draws.between(0.0, side, {1, i}), draws.between(0.0, side, {2, i}), 0.15);
  }
  return world;
}

lab::Scenes in(lab::World world, double side) {
  lab::Region const middle{{0.5 * side - 15.0, 0.5 * side - 15.0}, {0.5 * side + 15.0, 0.5 * side + 15.0}};
  return {{std::move(world)},
          [middle](lab::Ground const& ground, lab::Draws const& draws) {
            return lab::drawn_trip(ground, {middle, 0.4, 10.0, 60.0}, draws);
          },
          {}};
}

// Eight discs, all in sight and all told.
lab::Scenes among_eight() {
  lab::World world;
  for (int i = 0; i < 8; ++i) {
    world.add(2.0 + 2.5 * (i % 4), 2.0 + 2.8 * (i / 4), 0.35);
  }
  return {{world},
          [](lab::Ground const& ground, lab::Draws const& draws) {
            return lab::drawn_trip(ground, {{{0.0, 0.0}, {12.0, 7.0}}, 0.4, 6.0, 60.0}, draws);
          },
          {}};
}

lab::Vehicle noisy() {
  lab::Vehicle v;
  v.sight = 12.0;
  v.jitter = 0.1;
  v.position_noise = 0.01;
  v.heading_noise = 0.01;
  return v;
}

lab::Vehicle noisy_discs() {
  lab::Vehicle v = noisy();
  v.disc_noise = 0.02;
  v.radius_noise = 0.01;
  v.disc_dropout = 0.01;
  v.slip = 0.03;
  return v;
}

double processor_seconds() { return static_cast<double>(std::clock()) / CLOCKS_PER_SEC; }
double clock_seconds() {
  return std::chrono::duration<double>(std::chrono::steady_clock::now().time_since_epoch()).count();
}

// One thing to be timed: gives the ticks it drove.
struct Figure {
  std::string name;
  std::function<double()> drive;
  double (*clock)();
  std::vector<double> ticks_a_second{};

  [[nodiscard]] double median() const {
    std::vector<double> sorted = ticks_a_second;
    std::sort(sorted.begin(), sorted.end());
    return sorted[sorted.size() / 2];
  }
};

template <int Lanes, int Told>
Figure figure(std::string name, lab::Vehicle const& vehicle, lab::Scenes const& scenes, std::uint64_t runs,
              int threads = 1) {
  return {std::move(name),
          [=] {
            lab::CampaignOptions options;
            options.threads = threads;
            double ticks = 0.0;
            for (lab::RunRow const& row : lab::campaign<Lanes, Told>(loop, vehicle, scenes, runs, 1, options).rows) {
              ticks += row.time / vehicle.period;
            }
            return ticks;
          },
          threads > 1 ? clock_seconds : processor_seconds};
}

}  // namespace

int main(int argc, char** argv) {
  int const rounds = argc > 1 ? std::max(1, std::atoi(argv[1])) : 9;
  constexpr int lanes = lab::native_lanes;
  lab::Scenes const eight = among_eight();
  lab::Scenes const dense = in(scattered(800, 100.0), 100.0);
  lab::Scenes const vast = in(scattered(100000, 1118.0), 1118.0);
  std::vector<Figure> figures{
      figure<1, 8>("8 discs, alone", noisy(), eight, 400),
      figure<lanes, 8>("8 discs, lanes", noisy(), eight, 1600),
      figure<1, 8>("8 noisy discs, alone", noisy_discs(), eight, 400),
      figure<lanes, 8>("8 noisy discs, lanes", noisy_discs(), eight, 1600),
      figure<lanes, 4>("4 told of 800", noisy(), dense, 800),
      figure<lanes, 8>("8 told of 800", noisy(), dense, 800),
      figure<lanes, 16>("16 told of 800", noisy(), dense, 800),
      figure<lanes, 32>("32 told of 800", noisy(), dense, 800),
      figure<lanes, 8>("8 told of 100000", noisy(), vast, 800),
  };
  Figure one = figure<lanes, 8>("8 discs, lanes, one thread", noisy(), eight, 6400);
  one.clock = clock_seconds;
  figures.push_back(one);
  figures.push_back(figure<lanes, 8>("8 discs, lanes, two threads", noisy(), eight, 6400, 2));
  Figure both = figures.back();
  both.name = "the same, processors' time";
  both.clock = processor_seconds;
  figures.push_back(both);

  for (int round = 0; round < rounds; ++round) {
    for (Figure& f : figures) {
      double const start = f.clock();
      double const ticks = f.drive();
      f.ticks_a_second.push_back(ticks / (f.clock() - start));
    }
  }
  std::printf("%d lanes, median of %d rounds\n", lanes, rounds);
  std::printf("%-30s %14s %12s\n", "", "ticks a second", "ns a tick");
  for (Figure const& f : figures) {
    std::printf("%-30s %14.3e %12.1f\n", f.name.c_str(), f.median(), 1e9 / f.median());
  }
  auto const ratio = [&figures](std::size_t a, std::size_t b) { return figures[a].median() / figures[b].median(); };
  std::printf("%-30s %.2f\n", "lanes over alone", ratio(1, 0));
  std::printf("%-30s %.2f\n", "the same, noisy discs", ratio(3, 2));
  std::printf("%-30s %.2f\n", "two threads over one", ratio(10, 9));
  std::printf("%-30s %.2f\n", "processors' time, one over two", ratio(11, 1));
  // Linear in discs: what each further disc costs between 4 and 8, 8 and 16, 16 and 32.
  auto const each = [&figures](std::size_t a, std::size_t b, double discs) {
    return (1e9 / figures[b].median() - 1e9 / figures[a].median()) / discs;
  };
  std::printf("%-30s %.2f, %.2f, %.2f\n", "ns a further disc told", each(4, 5, 4.0), each(5, 6, 8.0), each(6, 7, 16.0));
  std::printf("%-30s %.2f\n", "800 discs over 100000", ratio(5, 8));
  return 0;
}
