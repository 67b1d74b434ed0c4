// Drives, steerings, slews and the pace among movers on intervals, which have to enclose what each gives for every
// point of a box, and on derivatives, which have to be those of central differences.
#include <array>
#include <cmath>
#include <cstddef>
#include <type_traits>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../guests.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"
#include "wend/loop.hpp"
#include "wend/motion/ackermann.hpp"
#include "wend/motion/omni.hpp"
#include "wend/motion/point_ahead.hpp"
#include "wend/motion/slew.hpp"

namespace {

using guests::Cloud;
using guests::holds;
using guests::Random;
using guests::Row;
using wend::lab::Dual;
using wend::lab::FloatInterval;
using wend::lab::Interval;

// What every law here gives, with numbers of a scene standing in for velocities and times: any will do.
template <typename S>
struct Results {
  std::array<wend::BodyVelocity<S>, 2> arcs;
  wend::BodyVelocity<S> car_can, car_moves, ahead, backs, slewed, smoothed;
  std::array<wend::PlanarVelocity<S>, 3> planar;  // members are eight at most; an array counts as one
};
template <typename S>
struct Wheels {
  wend::SteeredWheels<S> car;
  wend::FrontWheels<S> front;
  wend::OmniRates<S, 3> three;
  wend::OmniRates<S, 4> four;
  wend::Vec2<S> way;
  S pace, along;
};

template <typename S>
auto laws(Row<S> const& row) {
  wend::Ackermann const car{};
  wend::Omni<3> const three{};
  wend::Omni<4> const four{};
  wend::Course<S> const course{{row[2], row[3]}, S(1.0F)};
  wend::Vec2<S> const heading{row[4], row[7]};
  wend::BodyVelocity<S> const body{row[0], row[1]};
  wend::PlanarVelocity<S> const planar{row[0], row[1], row[5]};
  wend::SteeredWheels<S> const steered{row[4], row[24] * S(0.5F)};
  wend::Slew::Memory<wend::BodyVelocity<S>> const kept{{row[9], row[10]}};
  wend::SmoothSlew::Memory<wend::BodyVelocity<S>> smooth{{row[9], row[10]}, {row[12], row[13]}};
  wend::SlewMoment<S> const moment{row[19], {}, {}};
  auto const percept = guests::scene_of(row);
  wend::Pace const pace{};
  return std::pair(Results<S>{{wend::ArcSteering{}(course, heading, row[8], car),
                               wend::ArcSteering{.reverses = true}(course, heading, row[8], car)},
                              car.within_limits(body),
                              car.body(steered),
                              wend::PointAhead{}(course, heading, row[8]),
                              wend::PointAhead{.reverses = true}(course, heading, row[8]),
                              wend::Slew{}(body, moment, kept),
                              wend::SmoothSlew{}(body, moment, smooth),
                              {wend::OmniSteering{}(course, heading, row[8]), three.within_limits(planar),
                               four.body(wend::OmniRates<S, 4>{{row[0], row[1], row[4], row[5]}})}},
                   Wheels<S>{car.wheels(body), car.front(steered), three.wheels(planar), four.wheels(planar),
                             wend::PointAhead{.reverses = true}.way(course, heading), pace(percept.percept()),
                             pace.among_movers(percept.percept(), wend::Vec2<S>(row[2], row[3]))});
}

}  // namespace

TEST_CASE_TEMPLATE("each drive, steering and slew on a box encloses what it gives for every point in it", I, Interval,
                   FloatInterval) {
  using P = typename I::RoundedAs;
  Random random(17);
  int out = 0, tight = 0;
  for (int run = 0; run < 2'000; ++run) {
    Cloud<I> const cloud(random);
    auto const set = laws(cloud.box);
    for (Row<P> const& point : cloud.points) {
      auto const one = laws(point);
      out += holds(set.first, one.first) && holds(set.second, one.second) ? 0 : 1;
    }
    tight += set.second.pace.high() - set.second.pace.low() < 0.3 ? 1 : 0;
  }
  CHECK(out == 0);
  CHECK(tight > 200);  // an interval of everything would hold everything
}

TEST_CASE_TEMPLATE("a loop with another drive and limits encloses every point's command on a box", I, Interval,
                   FloatInterval) {
  using P = typename I::RoundedAs;
  auto const check = [](auto const& loop) {
    using Loop = std::remove_cvref_t<decltype(loop)>;
    Random random(18);
    int out = 0;
    for (int run = 0; run < 60; ++run) {
      wend::memory_t<Loop, I> set{};
      std::array<wend::memory_t<Loop, P>, guests::points_a_box> ones{};
      if (run % 2 == 0) {
        set = wend::lab::any_memory<Loop, I>();
        for (auto& one : ones) {
          guests::scramble(one, random);
        }
      }
      for (int tick = 0; tick < 4; ++tick) {
        Cloud<I> const cloud(random);
        auto const decide = [&loop]<typename S>(auto const& scene, S const& dt, auto& memory) {
          return loop.tick(wend::Situation<S>{scene.pose, scene.goal, dt, S(0.1F)}, scene.discs, memory);
        };
        auto const box = guests::scene_of(cloud.box);
        auto const found = decide(box, box.dt, set);
        for (std::size_t k = 0; k < ones.size(); ++k) {
          auto const scene = guests::scene_of(cloud.points[k]);
          auto const one = decide(scene, scene.dt, ones[k]);
          out += holds(found.body, one.body) && holds(found.wheels, one.wheels) && holds(set, ones[k]) ? 0 : 1;
        }
      }
    }
    CHECK(out == 0);
  };
  using Policy = std::remove_cvref_t<decltype(field_list::composed)>;
  check(wend::Loop<Policy, wend::no_sensing, wend::Ackermann>{.policy = field_list::composed});
  check(wend::Loop<Policy, wend::no_sensing, wend::Omni<4>, wend::OmniSteering, wend::SmoothSlew>{
      .policy = field_list::composed});
  check(wend::Loop<Policy, wend::no_sensing, wend::DifferentialDrive, wend::PointAhead, wend::Slew>{
      .policy = field_list::composed});
}

TEST_CASE("each law has the derivatives of its central differences") {
  Random random(19);
  int smooth = 0, off = 0, compared = 0;
  auto const flat = []<typename S>(Row<S> const& row) {
    auto const [results, wheels] = laws(row);
    return std::array<S, 20>{results.arcs[0].speed,
                             results.arcs[1].turn_rate,
                             results.car_can.turn_rate,
                             results.car_moves.turn_rate,
                             results.ahead.speed,
                             results.ahead.turn_rate,
                             results.backs.speed,
                             results.backs.turn_rate,
                             results.slewed.speed,
                             results.smoothed.speed,
                             results.smoothed.turn_rate,
                             results.planar[0].lateral,
                             results.planar[1].lateral,
                             results.planar[2].turn_rate,
                             wheels.car.tangent,
                             wheels.front.left,
                             wheels.three.rates[1],
                             wheels.four.rates[2],
                             wheels.pace,
                             wheels.along};
  };
  for (int k = 0; k < 200; ++k) {
    Row<double> const row = random.row(false);
    for (std::size_t i = 0; i < guests::inputs; ++i) {
      Row<Dual<1>> seeded = guests::converted<Dual<1>>(row);
      seeded[i] = Dual<1>::variable(row[i], 0);
      auto const dual = flat(seeded);
      auto const difference = [&](double step) {
        Row<double> up = row, down = row;
        up[i] += step, down[i] -= step;
        auto const a = flat(up);
        auto const b = flat(down);
        std::array<double, 20> slopes;
        for (std::size_t n = 0; n < 20; ++n) {
          slopes[n] = (a[n] - b[n]) / (2.0 * step);
        }
        return slopes;
      };
      auto const coarse = difference(2e-5);
      auto const fine = difference(1e-5);
      for (std::size_t n = 0; n < 20; ++n) {
        ++compared;
        if (guests::near(coarse[n], fine[n], 1e-6)) {
          ++smooth;
          off += guests::near(dual[n].slope(0), fine[n], 2e-5) ? 0 : 1;
        }
      }
    }
  }
  CHECK(off == 0);
  CHECK(smooth > compared * 9 / 10);
}
