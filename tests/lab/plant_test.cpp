// The plant on lanes against exact arcs in double precision, its lanes against each other, and its bounds against paths
// that are sampled finely.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <stdexcept>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/lab/arc.hpp"
#include "wend/lab/plant.hpp"
#include "wend/lab/surroundings.hpp"

namespace {

using namespace wend;
using lab::Vehicle;

Pose<double> facing(double x, double y, double angle) { return {{x, y}, {std::cos(angle), std::sin(angle)}}; }

// What is asked of the wheels at each tick: something else every half second, forwards, backwards and in place.
WheelRates<double> wanted(std::uint64_t run, std::uint32_t tick) {
  lab::Draws const draws(99, run);
  return {draws.between(-22.0, 22.0, {1, tick / 10, 0}), draws.between(-22.0, 22.0, {1, tick / 10, 1})};
}

template <typename S>
S spread_out(double value) {
  return S(static_cast<float>(value));
}

// A run of a plant, of which the first lane is looked at.
template <typename S>
void drive_plant(lab::Plant<S>& plant, std::uint64_t run, std::uint32_t ticks) {
  for (std::uint32_t tick = 0; tick < ticks; ++tick) {
    WheelRates<double> const rates = wanted(run, tick);
    plant.order({spread_out<S>(rates.left), spread_out<S>(rates.right)});
    plant.move();
  }
}

}  // namespace

// The half turn against sines: up to most_turned, where a step may end.
TEST_CASE("a step of the plant is an exact arc to 2e-8, on double, up to the most it may turn") {
  double worst_direction = 0.0;
  double worst_chord = 0.0;
  for (double turned = -lab::most_turned; turned <= lab::most_turned; turned += 1e-4) {
    // On double, with the series' coefficients in single precision as they are used: that is part of the claim.
    auto const half = lab::detail::half_turn<double>({1.0, turned}, 1.0);
    worst_direction = std::max({worst_direction, std::abs(half.direction.x() - std::cos(0.5 * turned)),
                                std::abs(half.direction.y() - std::sin(0.5 * turned))});
    worst_chord = std::max(worst_chord, std::abs(half.chord - lab::sinc(0.5 * turned)));
  }
  MESSAGE("worst direction ", worst_direction, ", worst chord ", worst_chord);
  CHECK(worst_direction < 2e-8);
  CHECK(worst_chord < 2e-8);
}

// The same machine in double precision along exact arcs, wheels as `simulate` has them.
TEST_CASE("over a minute the plant stays within a millimetre of exact arcs in double precision") {
  for (double const latency : {0.0, 0.05, 0.13}) {
    CAPTURE(latency);
    Vehicle vehicle;
    vehicle.latency = latency;
    constexpr double finest = 0.005;
    double worst_place = 0.0;
    double worst_heading = 0.0;
    for (std::uint64_t run = 0; run < 5; ++run) {
      lab::Plant<float> plant(vehicle, finest, 1);
      Pose<double> pose = facing(3.0, -2.0, 0.4);
      plant.start(0, run, 1, pose);
      lab::detail::Wheels wheels(vehicle);
      double time = 0.0;
      double way = 0.0;
      for (std::uint32_t tick = 0; tick < 1200; ++tick) {
        WheelRates<double> const rates = wanted(run, tick);
        plant.order({static_cast<float>(rates.left), static_cast<float>(rates.right)});
        plant.move();
        wheels.ask(time, rates);
        double const step = vehicle.period / 10.0;
        for (int i = 0; i < 10; ++i) {
          BodyVelocity<double> const body = vehicle.drive.body(wheels.turn(time + i * step, step));
          pose = lab::along_arc(pose, body, step);
          way += std::abs(body.speed) * step;
        }
        time += vehicle.period;
        Pose<float> const here = plant.pose();
        worst_place = std::max(worst_place, (here.position.cast<double>() - pose.position).norm());
        worst_heading =
            std::max(worst_heading, std::abs(cross(Vec2<double>(here.heading.cast<double>()), pose.heading)));
      }
      CHECK(static_cast<double>(plant.time()) == doctest::Approx(60.0).epsilon(1e-6));
      CHECK(static_cast<double>(plant.way()) == doctest::Approx(way).epsilon(1e-5));
      CHECK(static_cast<double>(plant.pose().heading.norm()) == doctest::Approx(1.0).epsilon(1e-6));
    }
    MESSAGE("latency ", latency, " s: worst ", worst_place, " m, ", worst_heading, " rad");
    CHECK(worst_place < 1e-3);
    CHECK(worst_heading < 2e-4);
  }
}

TEST_CASE("coarser steps stay within millimetres of fine ones") {
  Vehicle const vehicle;
  for (std::uint64_t run = 0; run < 5; ++run) {
    lab::Plant<float> fine(vehicle, 0.001, 1);
    lab::Plant<float> coarse(vehicle, 0.01, 1);
    fine.start(0, run, 1, facing(0.0, 0.0, 0.0));
    coarse.start(0, run, 1, facing(0.0, 0.0, 0.0));
    drive_plant(fine, run, 200);
    drive_plant(coarse, run, 200);
    CHECK((fine.pose().position - coarse.pose().position).norm() < 0.02F);
  }
}

TEST_CASE_TEMPLATE("each lane of a plant does what one machine does alone, to the bit", S, lab::Pack<4>, lab::Pack<8>,
                   lab::Pack<16>) {
  Vehicle vehicle;
  vehicle.latency = 0.12;
  vehicle.jitter = 0.2;
  vehicle.position_noise = 0.02;
  vehicle.heading_noise = 0.02;
  vehicle.slip = 0.1;
  vehicle.wheel_spread = 0.05;
  vehicle.track_spread = 0.05;
  vehicle.watchdog = 0.07;
  std::uint64_t const far_run = 0x123456789AULL;  // runs beyond 32 bits too
  lab::Plant<S> lanes(vehicle, 0.01, 7);
  std::vector<lab::Plant<float>> alone;
  for (int k = 0; k < S::width(); ++k) {
    std::uint64_t const run = far_run + static_cast<std::uint64_t>(k);
    lanes.start(k, run, 7, facing(0.3 * k, -0.2 * k, 0.5 * k));
    alone.emplace_back(vehicle, 0.01, 7);
    alone.back().start(0, run, 7, facing(0.3 * k, -0.2 * k, 0.5 * k));
  }
  int wrong = 0;
  for (std::uint32_t tick = 0; tick < 300; ++tick) {
    Pose<S> const together = lanes.believed();
    lanes.order({S([&](int k) { return static_cast<float>(wanted(static_cast<std::uint64_t>(k), tick).left); }),
                 S([&](int k) { return static_cast<float>(wanted(static_cast<std::uint64_t>(k), tick).right); })});
    lanes.move();
    for (int k = 0; k < S::width(); ++k) {
      lab::Plant<float>& one = alone[static_cast<std::size_t>(k)];
      Pose<float> const believed = one.believed();
      WheelRates<double> const rates = wanted(static_cast<std::uint64_t>(k), tick);
      one.order({static_cast<float>(rates.left), static_cast<float>(rates.right)});
      one.move();
      Pose<float> const pose = one.pose();
      Pose<S> const pose_together = lanes.pose();
      bool const good = numbers::same(together.position.x()[k], believed.position.x()) &&
                        numbers::same(together.heading.y()[k], believed.heading.y()) &&
                        numbers::same(pose_together.position.x()[k], pose.position.x()) &&
                        numbers::same(pose_together.position.y()[k], pose.position.y()) &&
                        numbers::same(pose_together.heading.x()[k], pose.heading.x()) &&
                        numbers::same(lanes.time()[k], one.time()) && numbers::same(lanes.way()[k], one.way());
      wrong += good ? 0 : 1;
    }
  }
  CHECK(wrong == 0);
}

// What latency means: nothing moves before it, and something does one step after it.
TEST_CASE("wheels answer after the latency, never early and late by less than a step") {
  for (double const latency : {0.0, 0.02, 0.05, 0.085, 0.3}) {
    CAPTURE(latency);
    Vehicle vehicle;
    vehicle.latency = latency;
    vehicle.acceleration = 2.0;
    lab::Plant<float> plant(vehicle, 0.005, 1);
    plant.start(0, 0, 1, facing(0.0, 0.0, 0.0));
    // Full ahead from the first tick: by the law of motion at constant acceleration the way gives the time under power.
    double time = 0.0;
    for (int tick = 0; tick < 9; ++tick) {
      plant.order({10.0F, 10.0F});
      plant.move();
      time += vehicle.period;
      double const way = static_cast<double>(plant.way());
      double const powered = std::sqrt(2.0 * way / vehicle.acceleration);  // 0.5 m/s is reached after 0.25 s
      if (time <= latency) {
        CHECK(way == 0.0);
      } else if (time < latency + 0.24) {
        CHECK(powered <= time - latency + 1e-4);
        CHECK(powered >= time - latency - 0.0051);
      }
    }
  }
}

TEST_CASE("a watchdog stops wheels that are told nothing new") {
  Vehicle vehicle;
  vehicle.latency = 0.0;
  vehicle.period = 0.5;
  vehicle.watchdog = 0.2;
  vehicle.acceleration = 1e6;
  lab::Plant<float> plant(vehicle, 0.01, 1);
  plant.start(0, 0, 1, facing(0.0, 0.0, 0.0));
  plant.order({10.0F, 10.0F});
  plant.move();
  CHECK(static_cast<double>(plant.way()) == doctest::Approx(0.5 * 0.2).epsilon(0.06));  // 0.5 m/s for 0.2 s
}

// Slip takes away half of its most on average; the spread of a wheel's radius makes it turn.
TEST_CASE("slip and spread do to the way what their definitions say") {
  Vehicle vehicle;
  vehicle.latency = 0.0;
  vehicle.acceleration = 1e6;
  vehicle.slip = 0.2;
  double way = 0.0;
  for (std::uint64_t run = 0; run < 20; ++run) {
    lab::Plant<float> plant(vehicle, 0.01, 3);
    plant.start(0, run, 3, facing(0.0, 0.0, 0.0));
    for (int tick = 0; tick < 100; ++tick) {
      plant.order({10.0F, 10.0F});
      plant.move();
    }
    way += static_cast<double>(plant.way()) / 20.0;
  }
  CHECK(way == doctest::Approx(2.5 * 0.9).epsilon(0.005));
  vehicle.slip = 0.0;
  vehicle.wheel_spread = 0.1;
  lab::Draws const once(3, 5);
  double const left = 1.0 + 0.1 * once.between(-1.0, 1.0, {lab::detail::of_spread, 0, 0});
  double const right = 1.0 + 0.1 * once.between(-1.0, 1.0, {lab::detail::of_spread, 0, 1});
  lab::Plant<float> plant(vehicle, 0.01, 3);
  plant.start(0, 5, 3, facing(0.0, 0.0, 0.0));
  plant.order({10.0F, 10.0F});
  plant.move();  // at speed from here on
  double const before = static_cast<double>(plant.pose().heading.y());
  plant.order({10.0F, 10.0F});
  plant.move();
  double const turned = std::asin(static_cast<double>(plant.pose().heading.y())) - std::asin(before);
  CHECK(turned == doctest::Approx(0.05 * 10.0 * 0.05 * (right - left) / 0.30).epsilon(1e-4));  // over the track
}

TEST_CASE("a vehicle that cannot be is refused") {
  auto const refused = [](Vehicle const& v) {
    try {
      lab::Plant<float> const plant(v, 0.01, 1);
      return false;
    } catch (std::invalid_argument const&) {
      return true;
    }
  };
  Vehicle v;
  CHECK_FALSE(refused(v));
  v.period = 0.0;
  CHECK(refused(v));
  v = {};
  v.jitter = 1.0;
  CHECK(refused(v));
  v = {};
  v.latency = 1.0;
  CHECK(refused(v));
}

// Slow motion far from the origin: 1 cm/s in steps of 0.1 mm, a kilometre out, where single precision has 0.06 mm.
TEST_CASE("slow motion far from the origin is not lost in rounding") {
  Vehicle vehicle;
  vehicle.latency = 0.0;
  vehicle.acceleration = 1e6;
  lab::Plant<float> plant(vehicle, 0.01, 1);
  plant.start(0, 0, 1, facing(1000.0, 1000.0, 0.0));
  for (int tick = 0; tick < 200; ++tick) {
    plant.order({0.2F, 0.2F});
    plant.move();
  }
  CHECK(std::abs(static_cast<double>(plant.pose().position.x()) - 1000.1) < 1.3e-4);
}

// A path of two arcs between two ticks, sampled finely in double precision: the clearance must not be more than the
// least over the samples, and not less by more than the bound says.
TEST_CASE("the clearance over a tick is never more than that of the path, and hardly less") {
  lab::Draws const draws(12, 0);
  double most_over = -1.0;
  double most_under = 0.0;
  int worse_than_bound = 0;
  for (std::uint32_t i = 0; i < 20000; ++i) {
    auto const between = [&draws, i](double low, double high, std::uint32_t item) {
      return draws.between(low, high, {5, i, item});
    };
    lab::World world;
    for (std::uint32_t k = 0; k < 3; ++k) {
      world.add(between(8.0, 12.0, 10 + 3 * k), between(-2.0, 2.0, 11 + 3 * k), between(0.05, 0.6, 12 + 3 * k));
    }
    lab::Ground const ground(world);
    Vehicle vehicle;
    Pose<double> pose = facing(10.0 + between(-0.5, 0.5, 1), between(-0.5, 0.5, 2), between(-3.0, 3.0, 3));
    // Starts where single precision can be. By volatile: g++ 12 leaves out a rounding there and back of two numbers.
    volatile float const x = static_cast<float>(pose.position.x());
    volatile float const y = static_cast<float>(pose.position.y());
    pose.position = {static_cast<double>(x), static_cast<double>(y)};
    Vec2<double> const start = pose.position;
    lab::Surroundings<float, 4> around(vehicle, 3);
    double const at_start = around.start(0, ground, pose.position);
    Vec2<float> const from = pose.position.cast<float>();
    double truth = at_start;
    double driven = 0.0;
    for (std::uint32_t part = 0; part < 2; ++part) {
      BodyVelocity<double> const body{between(-1.0, 1.0, 4 + part), between(-3.0, 3.0, 6 + part)};
      constexpr int samples = 40;
      for (int s = 0; s < samples; ++s) {
        pose = lab::along_arc(pose, body, 0.05 / samples);
        truth = std::min(truth, ground.gap(pose.position) - vehicle.radius);
        driven += std::abs(body.speed) * 0.05 / samples;
      }
    }
    Vec2<float> const to = pose.position.cast<float>();
    around.pass(from, to, {static_cast<float>(driven), Vec2<float>((pose.position - start).cast<float>())});
    double const over = static_cast<double>(around.least_clearance()) - truth;
    most_over = std::max(most_over, over);
    most_under = std::max(most_under, -over);
    double const chord = (to - from).cast<double>().norm();
    double const bound = std::sqrt(std::max(driven * driven - chord * chord, 0.0)) + 5e-4 * driven + 2e-5 + 2e-4;
    worse_than_bound += -over > bound ? 1 : 0;
  }
  MESSAGE("at most ", most_under, " m under, ", most_over, " m over");
  CHECK(most_over <= 0.0);
  CHECK(worse_than_bound == 0);
}
