// The guests: the motion laws, the watch and the whole loop on intervals and on derivatives. Fields are held to the
// same in field_checks.cpp.
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "field_list.hpp"
#include "guests.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"
#include "wend/loop.hpp"

namespace {

using guests::Cloud;
using guests::converted;
using guests::holds;
using guests::near;
using guests::points_a_box;
using guests::Random;
using guests::Row;
using guests::scene_of;
using guests::scramble;
using guests::Tally;
using guests::ticks_a_run;
using wend::lab::Dual;
using wend::lab::FloatInterval;
using wend::lab::Interval;

// Runs with a set memory on boxes beside plain ones on their points. Half of the runs start fresh, the others with
// every memory there is and, on the points, with any.
template <typename I, typename F, typename OnTick>
void run_beside(int runs, std::uint64_t seed, Tally& tally, OnTick const& on_tick) {
  using P = typename I::RoundedAs;
  Random random(seed);
  for (int run = 0; run < runs; ++run) {
    wend::memory_t<F, I> set{};
    std::vector<wend::memory_t<F, P>> ones(points_a_box);
    if (run % 2 == 0) {
      set = wend::lab::any_memory<F, I>();
      for (auto& one : ones) {
        scramble(one, random);
      }
    }
    for (int tick = 0; tick < ticks_a_run; ++tick) {
      Cloud<I> const cloud(random);
      auto const box = scene_of(cloud.box);
      auto const found = on_tick(box, set);
      ++tally.boxes;
      for (std::size_t k = 0; k < ones.size(); ++k) {
        auto const one = on_tick(scene_of(cloud.points[k]), ones[k]);
        tally.courses_out += holds(found, one) ? 0 : 1;
        tally.memories_out += holds(set, ones[k]) ? 0 : 1;
      }
    }
  }
}

// A loop with nothing but a policy of its own.
template <typename Policy>
constexpr wend::Loop<Policy> loop_of(Policy const& policy) {
  return {policy};
}

}  // namespace

TEST_CASE_TEMPLATE("a loop's command and memory on a box enclose those of every point in it", I, Interval,
                   FloatInterval) {
  auto const check = [](auto const& loop, std::uint64_t seed) {
    using Loop = std::remove_cvref_t<decltype(loop)>;
    Tally tally;
    run_beside<I, Loop>(250, seed, tally, [&loop](auto const& scene, auto& memory) {
      using S = std::remove_cvref_t<decltype(scene.dt)>;
      return loop.tick(wend::Situation<S>{scene.pose, scene.goal, scene.dt, S(0.1F)}, scene.discs, memory);
    });
    CHECK(tally.courses_out == 0);  // course, body, wheels and every finding
    CHECK(tally.memories_out == 0);
  };
  check(loop_of(field_list::composed), 101);
  check(loop_of(wend::potential_field{}), 102);
  check(loop_of(wend::priority(field_list::shy{}, wend::past_disc{}, wend::toward_goal{})), 103);
}

TEST_CASE_TEMPLATE("each motion law and watch on a box encloses what it gives for every point in it", I, Interval,
                   FloatInterval) {
  using P = typename I::RoundedAs;
  Random random(7);
  Tally tally;
  auto const count = [&tally](auto const& set, auto const& one) { tally.commands_out += holds(set, one) ? 0 : 1; };
  for (int run = 0; run < 3'000; ++run) {
    Cloud<I> const cloud(random);
    wend::DifferentialDrive const drive;
    wend::Steering const steering;
    wend::Freshness const freshness;
    wend::Pace const pace;
    // Numbers of a scene stand in for velocities, rates and times: any will do.
    auto const laws = [&]<typename S>(Row<S> const& row) {
      auto const scene = scene_of(row);
      wend::Course<S> const course{{row[2], row[3]}, S(1.0F)};
      wend::BodyVelocity<S> const body{row[0], row[1]};
      wend::WheelRates<S> const rates{row[4], row[6]};
      struct Results {
        wend::BodyVelocity<S> steered, limited, moved;
        wend::WheelRates<S> wheels;
        S pace, stoppable, room;
        wend::mask_t<S> stale;
      };
      return Results{steering(course, wend::Vec2<S>(row[4], row[7]), row[0]),
                     drive.within_limits(body),
                     drive.body(rates),
                     drive.wheels(body),
                     pace(scene.percept()),
                     pace.stoppable(row[0]),
                     pace.room(scene.percept()),
                     freshness.stale(row[19], row[1])};
    };
    auto const set = laws(cloud.box);
    for (Row<P> const& point : cloud.points) {
      count(set, laws(point));
    }
  }
  CHECK(tally.commands_out == 0);
}

TEST_CASE("a loop's command has the derivatives of its central differences") {
  constexpr auto loop = loop_of(field_list::composed);
  Random random(77);
  int smooth = 0, off = 0, compared = 0;
  for (int k = 0; k < 400; ++k) {
    Row<double> const row = random.row(false);
    auto const wheels = [&]<typename S>(Row<S> const& at) {
      auto const scene = scene_of(at);
      wend::memory_t<decltype(loop), S> memory;
      auto const command = loop.tick(wend::Situation<S>{scene.pose, scene.goal, scene.dt}, scene.discs, memory);
      return std::array<S, 2>{command.wheels.left, command.wheels.right};
    };
    for (std::size_t i : {0U, 1U, 4U, 5U, 6U, 8U, 18U}) {
      Row<Dual<1>> seeded = converted<Dual<1>>(row);
      seeded[i] = Dual<1>::variable(row[i], 0);
      auto const dual = wheels(seeded);
      auto const difference = [&](double step) {
        Row<double> up = row, down = row;
        up[i] += step, down[i] -= step;
        auto const a = wheels(up);
        auto const b = wheels(down);
        return std::array<double, 2>{(a[0] - b[0]) / (2.0 * step), (a[1] - b[1]) / (2.0 * step)};
      };
      auto const coarse = difference(2e-5);
      auto const fine = difference(1e-5);
      for (std::size_t side = 0; side < 2; ++side) {
        ++compared;
        if (near(coarse[side], fine[side], 1e-6)) {
          ++smooth;
          off += near(dual[side].slope(0), fine[side], 2e-6) ? 0 : 1;
        }
      }
    }
  }
  CHECK(off == 0);
  CHECK(smooth > compared * 8 / 10);
}
