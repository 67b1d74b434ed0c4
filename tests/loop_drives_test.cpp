// Loop with other drives than two wheels, other steerings, and limits on how fast velocities change. The machines
// outside the library are integrated here from wheels, by their textbook equations: a car, x' = v cos(t), y' = v
// sin(t), t' = v tan(steering) / wheelbase, and a body on omnidirectional wheels.
#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <cstdint>
#include <limits>
#include <random>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/past_disc.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/loop.hpp"
#include "wend/motion/ackermann.hpp"
#include "wend/motion/omni.hpp"
#include "wend/motion/point_ahead.hpp"
#include "wend/motion/slew.hpp"

using wend::Ackermann;
using wend::DifferentialDrive;
using wend::Disc;
using wend::DiscSet;
using wend::Loop;
using wend::MovingDiscSet;
using wend::no_sensing;
using wend::Omni;
using wend::OmniSteering;
using wend::PointAhead;
using wend::Situation;
using wend::Slew;
using wend::SmoothSlew;
using wend::Status;
using wend::Vec2;

namespace {

constexpr auto policy =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{},
                  wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{}, wend::toward_goal{}));
using Policy = std::remove_const_t<decltype(policy)>;

using Car = Loop<Policy, no_sensing, Ackermann>;
using Three = Loop<Policy, no_sensing, Omni<3>>;
using SmoothFour = Loop<Policy, no_sensing, Omni<4>, OmniSteering, SmoothSlew>;
using Ahead = Loop<Policy, no_sensing, DifferentialDrive, PointAhead>;
using Slewed = Loop<Policy, no_sensing, DifferentialDrive, wend::Steering, Slew>;
using SmoothCar = Loop<Policy, no_sensing, Ackermann, wend::ArcSteering, SmoothSlew>;

template <typename L, typename S = float>
using MemoryOf = wend::memory_t<L, S>;

// What nobody asked for takes no byte: 24 are the policy's and the progress's.
static_assert(sizeof(MemoryOf<Car>) == 24 && sizeof(MemoryOf<Ahead>) == 24);
static_assert(sizeof(MemoryOf<Slewed>) == 24 + 2 * sizeof(float));
static_assert(sizeof(MemoryOf<SmoothFour>) == 24 + 6 * sizeof(float));
static_assert(sizeof(Loop<Policy>) ==
              sizeof(Loop<Policy, no_sensing, DifferentialDrive, wend::Steering, wend::no_slew>));
static_assert(std::is_same_v<decltype(Car::steering), wend::ArcSteering>, "the drive's own");

// A machine in double precision, moved from what its wheels are told.
struct Machine {
  double x = 0.0, y = 0.0, theta = 0.0;

  void roll(double forward, double left, double turn, double dt) {
    int const steps = 20;
    for (int i = 0; i < steps; ++i) {
      double const h = dt / steps;
      double const mean = theta + 0.5 * h * turn;
      x += h * (forward * std::cos(mean) - left * std::sin(mean));
      y += h * (forward * std::sin(mean) + left * std::cos(mean));
      theta += h * turn;
    }
  }
  void drive(Ackermann const& car, wend::SteeredWheels<float> const& wheels, double dt) {
    double const angle = static_cast<double>(wend::steering_angle(wheels));
    double const speed = static_cast<double>(wheels.speed);
    roll(speed, 0.0, speed * std::tan(angle) / static_cast<double>(car.wheelbase), dt);
  }
  template <int N>
  void drive(Omni<N> const& drive, wend::OmniRates<float, N> const& wheels, double dt) {
    auto const body = drive.body(wheels);
    roll(static_cast<double>(body.speed), static_cast<double>(body.lateral), static_cast<double>(body.turn_rate), dt);
  }
  void drive(DifferentialDrive const& drive, wend::WheelRates<float> const& wheels, double dt) {
    auto const body = drive.body(wheels);
    roll(static_cast<double>(body.speed), 0.0, static_cast<double>(body.turn_rate), dt);
  }
  [[nodiscard]] Situation<float> situation(float goal_x, float goal_y) const {
    Situation<float> now;
    now.pose = {{static_cast<float>(x), static_cast<float>(y)},
                {static_cast<float>(std::cos(theta)), static_cast<float>(std::sin(theta))}};
    now.goal = {goal_x, goal_y};
    now.age = 0.02F;
    return now;
  }
  [[nodiscard]] double gap(Disc<float> const& disc) const {
    return std::hypot(x - static_cast<double>(disc.centre.x()), y - static_cast<double>(disc.centre.y())) -
           static_cast<double>(disc.radius);
  }
};

struct Trip {
  Status status = Status::ok;
  double least_gap = 1e9;
  double turned = 0.0;  // radians, in all
  int ticks = 0;
};
template <typename L>
Trip drive_past(L const& loop, Disc<float> const& disc, double start) {
  DiscSet<float, 4> discs;
  discs.add(disc);
  MemoryOf<L> memory;
  Machine machine{0.0, 0.0, start};
  Trip trip;
  for (; trip.ticks < 1200 && trip.status != Status::arrived; ++trip.ticks) {
    auto const command = loop.tick(machine.situation(5.0F, 0.2F), discs, memory);
    trip.status = status_of(command);
    double const before = machine.theta;
    machine.drive(loop.drive, command.wheels, 0.05);
    trip.turned += std::abs(machine.theta - before);
    trip.least_gap = std::min(trip.least_gap, machine.gap(disc));
  }
  return trip;
}

}  // namespace

TEST_CASE("every drive takes the composed policy past a disc to the goal") {
  Disc<float> const disc{{2.5F, 0.0F}, 0.3F};
  auto const check = [&](auto const& loop, double start) {
    Trip const trip = drive_past(loop, disc, start);
    CAPTURE(start);
    CHECK(trip.status == Status::arrived);
    CHECK(trip.least_gap > static_cast<double>(loop.robot_radius));
    return trip;
  };
  for (double const start : {0.0, 2.0, -3.0}) {
    check(Car{.policy = policy}, start);
    check(Three{.policy = policy}, start);
    check(SmoothFour{.policy = policy}, start);
    check(Ahead{.policy = policy}, start);
    check(Slewed{.policy = policy, .pace = {.braking = 0.8F}}, start);
    check(SmoothCar{.policy = policy}, start);
  }
  Trip const stiff = check(Three{.policy = policy, .steering = {.gain = 0.0F}}, 1.0);
  CHECK(stiff.turned < 1e-4);  // the nose stayed as it was
}

TEST_CASE("a car told to go where it came from comes round by driving") {
  Loop<wend::toward_goal, no_sensing, Ackermann> const loop{};
  DiscSet<float, 1> const none;
  MemoryOf<std::remove_const_t<decltype(loop)>> memory;
  Machine machine;
  double farthest = 0.0;
  Status status = Status::ok;
  for (int tick = 0; tick < 400 && status != Status::arrived; ++tick) {
    auto const command = loop.tick(machine.situation(-3.0F, 0.0F), none, memory);
    status = status_of(command);
    CHECK((command.body.speed > 0.0F || status == Status::arrived));
    CHECK(std::abs(command.wheels.tangent) <= loop.drive.max_tangent);
    machine.drive(loop.drive, command.wheels, 0.05);
    farthest = std::max(farthest, machine.y);
  }
  CHECK(status == Status::arrived);
  double const radius = 0.3 / std::tan(0.5);
  CHECK(farthest > 1.8 * radius);
  CHECK(farthest < 2.6 * radius);
}

TEST_CASE("a car with its nose at a wall can do nothing, and one that reverses backs off, turns and arrives") {
  // away from what is near, and to the goal: past_disc would lead a car along a wall that it cannot turn beside
  constexpr auto shy =
      wend::blend(wend::ramp(wend::clearance, 0.2F, 0.6F), wend::away_from_discs{}, wend::toward_goal{});
  using ShyCar = Loop<std::remove_const_t<decltype(shy)>, no_sensing, Ackermann>;
  auto const drive = [&](bool reverses) {
    ShyCar const loop{.policy = shy, .steering = {.reverses = reverses}};
    DiscSet<float, 8> discs;
    for (float y : {-0.6F, -0.3F, 0.0F, 0.3F, 0.6F}) {
      discs.add({{0.42F, y}, 0.2F});  // 2 cm before its nose
    }
    MemoryOf<ShyCar> memory;
    Machine machine;
    Status status = Status::ok;
    double back = 0.0;
    double least_gap = 1e9;
    for (int tick = 0; tick < 1600 && status != Status::arrived; ++tick) {
      auto const command = loop.tick(machine.situation(-0.5F, 3.0F), discs, memory);
      status = status_of(command);
      machine.drive(loop.drive, command.wheels, 0.05);
      back -= command.body.speed < 0.0F ? 0.05 * static_cast<double>(command.body.speed) : 0.0;
      for (Disc<float> const& disc : discs) {
        least_gap = std::min(least_gap, machine.gap(disc) - 0.2);
      }
    }
    CHECK(least_gap > 0.0);
    return std::pair(status, back);
  };
  CHECK(drive(false).first != Status::arrived);
  auto const [status, back] = drive(true);
  CHECK(status == Status::arrived);
  CHECK(back > 0.1);
}

TEST_CASE("on omnidirectional wheels the pace heeds the way the body goes, not the way the nose points") {
  Loop<wend::toward_goal, no_sensing, Omni<3>> const loop{.policy = {}, .steering = {.gain = 0.0F}};
  DiscSet<float, 1> discs;
  discs.add({{0.0F, 0.55F}, 0.2F});  // to the left of a nose that points along x
  auto const speed_to = [&](float x, float y) {
    MemoryOf<std::remove_const_t<decltype(loop)>> memory;
    auto const body = loop.tick(Machine{}.situation(x, y), discs, memory).body;
    return std::hypot(body.speed, body.lateral);
  };
  CHECK(speed_to(0.0F, 5.0F) < 0.3F);    // straight at it
  CHECK(speed_to(0.0F, -5.0F) > 0.55F);  // away from it: left behind, though it is abeam of the nose
}

TEST_CASE("discs that move go through the loop to its pace") {
  Loop<wend::toward_goal> const loop{};
  auto const speed = [&](float vx) {
    MovingDiscSet<float, 2> discs;
    discs.add({{1.0F, 0.0F}, 0.2F}, {vx, 0.0F});
    MemoryOf<std::remove_const_t<decltype(loop)>> memory;
    return loop.tick(Machine{}.situation(5.0F, 0.0F), discs, memory).body.speed;
  };
  CHECK(speed(0.0F) > 0.4F);
  CHECK(speed(-0.5F) < 0.7F * speed(0.0F));
  CHECK(speed(0.5F) == speed(0.0F));
}

TEST_CASE("a slewed machine keeps every limit on its way, and the margin before a disc that stands in it") {
  auto const check = [](auto const& loop, float acceleration, float braking) {
    Disc<float> const disc{{4.0F, 0.0F}, 0.5F};
    DiscSet<float, 2> discs;
    discs.add(disc);
    MemoryOf<std::remove_cvref_t<decltype(loop)>> memory;
    Machine machine;
    float last = 0.0F;
    float top = 0.0F;
    double nearest = 1e9;
    for (int tick = 0; tick < 800; ++tick) {
      auto const command = loop.tick(machine.situation(4.0F, 0.0F), discs, memory);
      CHECK(command.body.speed - last <= acceleration * 0.05F + 1e-5F);
      CHECK(last - command.body.speed <= braking * 0.05F + 1e-5F);
      last = command.body.speed;
      top = std::max(top, last);
      machine.drive(loop.drive, command.wheels, 0.05);
      nearest = std::min(nearest, machine.gap(disc) - static_cast<double>(loop.robot_radius));
    }
    MESSAGE("nearest: ", nearest, " m, margin ", loop.pace.margin);
    CHECK(top > 0.55F);
    CHECK(nearest >= static_cast<double>(loop.pace.margin));
    CHECK(nearest < 0.35);
  };
  check(Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, Slew>{}, 1.0F, 1.2F);
  // braking takes time to build up, of which the pace is told: (acceleration + braking) / jerk = (1.0 + 1.2) / 8 s
  check(
      Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, SmoothSlew>{
          .policy = {}, .pace = {.reaction = 0.25F + 0.275F}},
      1.0F, 1.2F);
}

TEST_CASE("a slew that builds up its braking slowly runs into the margin unless the pace is told of it") {
  auto const nearest = [](float reaction) {
    using L = Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, SmoothSlew>;
    L const loop{.policy = {}, .pace = {.reaction = reaction}, .slew = {.jerk = 1.0F}};
    DiscSet<float, 2> discs;
    discs.add({{4.0F, 0.0F}, 0.5F});
    MemoryOf<L> memory;
    Machine machine;
    wend::WheelRates<float> late;  // the wheels obey one tick after they are told
    for (int tick = 0; tick < 1200; ++tick) {
      auto const wheels = loop.tick(machine.situation(4.0F, 0.0F), discs, memory).wheels;
      machine.drive(loop.drive, late, 0.05);
      late = wheels;
    }
    return machine.gap({{4.0F, 0.0F}, 0.5F}) - static_cast<double>(loop.robot_radius);
  };
  CHECK(nearest(0.25F) < 0.05);
  CHECK(nearest(0.25F + (1.0F + 1.2F) / 1.0F) > 0.05);
}

TEST_CASE("a slewed machine that must stop brakes hard, and at once when there is no time step") {
  auto const check = [](auto const& loop) {
    DiscSet<float, 2> const none;
    using Memory = MemoryOf<std::remove_cvref_t<decltype(loop)>>;
    Memory memory;
    Machine machine;
    for (int tick = 0; tick < 60; ++tick) {
      machine.drive(loop.drive, loop.tick(machine.situation(50.0F, 0.0F), none, memory).wheels, 0.05);
    }
    auto const now = machine.situation(50.0F, 0.0F);
    Memory going = memory;
    float const speed = loop.tick(now, none, going).body.speed;
    REQUIRE(static_cast<double>(speed) == doctest::Approx(0.6));

    auto lost = now;
    lost.goal.x() = std::numeric_limits<float>::quiet_NaN();
    Memory blinded = memory;
    std::vector<double> speeds;
    for (int tick = 0; tick < 6; ++tick) {
      auto const command = loop.tick(lost, none, blinded);
      CHECK(status_of(command) == Status::blind);
      speeds.push_back(static_cast<double>(command.body.speed));
    }
    CHECK(speeds[0] == doctest::Approx(0.6 - 2.5 * 0.05));
    CHECK(speeds[3] == doctest::Approx(0.6 - 4.0 * 2.5 * 0.05));
    CHECK(speeds[5] == 0.0);
    // what was lost came back: it starts from where it was
    auto const again = loop.tick(now, none, blinded);
    CHECK(again.body.speed > 0.0F);
    CHECK(again.body.speed <= 0.05F + 1e-6F);

    for (float const dt : {0.0F, -1.0F, std::numeric_limits<float>::quiet_NaN(), 5.0F}) {
      auto late = now;
      late.dt = dt;
      Memory stale = memory;
      auto const command = loop.tick(late, none, stale);
      CHECK(status_of(command) == Status::stale);
      CHECK(command.body.speed == 0.0F);
      CHECK(command.wheels.left == 0.0F);
    }
  };
  check(Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, Slew>{});
  check(Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, SmoothSlew>{});
}

TEST_CASE("a slewed machine before which something turns up brakes hard, and may go on turning") {
  auto const check = [](auto const& loop) {
    DiscSet<float, 2> discs;
    MemoryOf<std::remove_cvref_t<decltype(loop)>> memory;
    for (int tick = 0; tick < 60; ++tick) {
      static_cast<void>(loop.tick(Machine{}.situation(50.0F, 0.0F), discs, memory));
    }
    discs.add({{0.35F, 0.0F}, 0.1F});
    auto const command = loop.tick(Machine{}.situation(5.0F, 1.0F), discs, memory);
    CHECK(status_of(command) == Status::blocked);
    CHECK(static_cast<double>(command.body.speed) == doctest::Approx(0.6 - 2.5 * 0.05));
    CHECK(command.body.turn_rate > 0.0F);
  };
  check(Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, Slew>{});
  check(Loop<wend::toward_goal, no_sensing, DifferentialDrive, wend::Steering, SmoothSlew>{});
}

TEST_CASE("what a slew starts from is what the drive could do, not what it was asked for") {
  SmoothCar const loop{.policy = policy};  // a car from rest: its turn rate could rise sooner than its speed allows
  DiscSet<float, 2> const none;
  MemoryOf<SmoothCar> memory;
  int cut = 0;
  for (int tick = 0; tick < 40; ++tick) {
    auto const command = loop.tick(Machine{}.situation(0.5F, 5.0F), none, memory);
    CHECK(memory.slew.body.speed == command.body.speed);
    CHECK(memory.slew.body.turn_rate == command.body.turn_rate);
    float const sharpest = command.body.speed * loop.drive.max_curvature<float>();
    CHECK(command.body.turn_rate <= sharpest * 1.00001F);
    cut += command.body.turn_rate > 0.0F && command.body.turn_rate >= sharpest * 0.99999F ? 1 : 0;
  }
  CHECK(cut > 2);
}

namespace {

// Any bits at all, often ones that hurt.
class Bits {
 public:
  explicit Bits(std::uint64_t seed) : random_(seed) {}
  float any(double raw, float low, float high) {
    if (std::uniform_real_distribution<double>(0.0, 1.0)(random_) >= raw) {
      return std::uniform_real_distribution<float>(low, high)(random_);
    }
    auto const bits = static_cast<std::uint32_t>(random_());
    switch (bits % 6U) {
      case 0: return std::numeric_limits<float>::quiet_NaN();
      case 1: return std::numeric_limits<float>::infinity();
      case 2: return -std::numeric_limits<float>::max();
      case 3: return std::bit_cast<float>(bits >> 10U);  // denormal
      default: return std::bit_cast<float>(static_cast<std::uint32_t>(random_()));
    }
  }
  int below(int n) { return static_cast<int>(random_() % static_cast<std::uint64_t>(n)); }

  template <typename T>
  void scramble(T& x, double raw) {
    if constexpr (std::is_same_v<T, bool>) {
      x = below(2) == 0;
    } else if constexpr (std::is_same_v<T, float>) {
      x = any(raw, -1.0F, 3.0F);
    } else if constexpr (std::is_same_v<T, Vec2<float>>) {
      scramble(x.x(), raw), scramble(x.y(), raw);
    } else {
      wend::for_each_member(x, x, [&](auto& member, auto&) noexcept { scramble(member, raw); });
    }
  }

 private:
  std::mt19937_64 random_;
};

// Every number in what a drive tells its wheels, in order.
std::vector<float> numbers_of(wend::WheelRates<float> const& w) { return {w.left, w.right}; }
std::vector<float> numbers_of(wend::SteeredWheels<float> const& w) { return {w.speed, w.tangent}; }
template <int N>
std::vector<float> numbers_of(wend::OmniRates<float, N> const& w) {
  return {w.rates.begin(), w.rates.end()};
}
float limit_of(DifferentialDrive const& d, std::size_t) { return d.max_rate; }
float limit_of(Ackermann const& d, std::size_t i) { return i == 0 ? d.max_speed : d.max_tangent; }
template <int N>
float limit_of(Omni<N> const& d, std::size_t) {
  return d.max_rate;
}

}  // namespace

TEST_CASE("whatever bits come in, every drive's wheels are finite, within limits, and still when they must be") {
  auto const check = [](auto const& loop, bool slews) {
    Bits bits(99);
    int bad = 0, moving = 0, stopped = 0;
    for (int k = 0; k < 20000; ++k) {
      double const raw = k % 4 == 0 ? 0.6 : k % 4 == 1 ? 0.1 : k % 4 == 2 ? 0.02 : 0.0;
      float const angle = bits.any(0.0, -3.2F, 3.2F);
      Situation<float> now;
      now.pose.position = {bits.any(raw, -3.0F, 3.0F), bits.any(raw, -3.0F, 3.0F)};
      now.pose.heading = {raw > 0.5 ? bits.any(raw, -1.0F, 1.0F) : std::cos(angle), std::sin(angle)};
      now.goal = {bits.any(raw, -3.0F, 3.0F), bits.any(raw, -3.0F, 3.0F)};
      now.dt = bits.any(raw, 0.01F, 0.1F);
      now.age = bits.any(raw, 0.0F, 0.1F);
      MovingDiscSet<float, 3> discs;
      for (int i = bits.below(5); i > 0; --i) {
        discs.add({{bits.any(raw, -3.0F, 3.0F), bits.any(raw, -3.0F, 3.0F)}, bits.any(raw, 0.0F, 0.6F)},
                  {bits.any(raw, -1.0F, 1.0F), bits.any(raw, -1.0F, 1.0F)});
      }
      MemoryOf<std::remove_cvref_t<decltype(loop)>> memory;
      bits.scramble(memory, raw);
      auto const command = loop.tick(now, discs, memory);
      auto const wheels = numbers_of(command.wheels);
      bool good = true, still = true;
      for (std::size_t i = 0; i < wheels.size(); ++i) {
        good = good && std::abs(wheels[i]) <= limit_of(loop.drive, i);
        still = still && wheels[i] == 0.0F;
      }
      bool const must = slews ? command.findings.stale : must_stop(command.findings);
      bad += good && (!must || still) ? 0 : 1;
      moving += still ? 0 : 1;
      stopped += must ? 1 : 0;
    }
    CHECK(bad == 0);
    CHECK(moving > 4000);
    CHECK(stopped > 2000);
  };
  check(Car{.policy = policy}, false);
  check(Car{.policy = policy, .steering = {.reverses = true}}, false);
  check(Three{.policy = policy}, false);
  check(Ahead{.policy = policy, .steering = {.reverses = true}}, false);
  check(Slewed{.policy = policy}, true);
  check(SmoothCar{.policy = policy}, true);
  check(SmoothFour{.policy = policy}, true);
}

TEST_CASE("in lanes every drive does what it does alone, bit for bit") {
  using Lanes = wend::lab::Pack<4>;
  auto const check = [](auto const& loop) {
    using L = std::remove_cvref_t<decltype(loop)>;
    Bits bits(5);
    std::array<MemoryOf<L>, 4> alone;
    MemoryOf<L, Lanes> together;
    std::array<Machine, 4> machines;
    for (std::size_t k = 0; k < 4; ++k) {
      machines[k] = {0.0, 0.3 * static_cast<double>(k), static_cast<double>(bits.any(0.0, -3.0F, 3.0F))};
    }
    int differences = 0;
    for (int tick = 0; tick < 200; ++tick) {
      std::array<Situation<float>, 4> now;
      for (std::size_t k = 0; k < 4; ++k) {
        now[k] = machines[k].situation(4.0F, 0.3F);
      }
      auto const of = [&](auto const& f) {
        return numbers::make<Lanes>([&](int k) { return f(now[static_cast<std::size_t>(k)]); });
      };
      Situation<Lanes> const all{{{of([](auto const& s) { return s.pose.position.x(); }),
                                   of([](auto const& s) { return s.pose.position.y(); })},
                                  {of([](auto const& s) { return s.pose.heading.x(); }),
                                   of([](auto const& s) { return s.pose.heading.y(); })}},
                                 {Lanes(4.0F), Lanes(0.3F)},
                                 Lanes(now[0].dt),
                                 Lanes(now[0].age)};
      MovingDiscSet<Lanes, 2> wide;
      wide.add({{Lanes(2.0F), Lanes(0.2F)}, Lanes(0.3F)}, {Lanes(0.05F), Lanes(-0.02F)});
      MovingDiscSet<float, 2> narrow;
      narrow.add({{2.0F, 0.2F}, 0.3F}, {0.05F, -0.02F});
      auto const command = loop.tick(all, wide, together);
      for (std::size_t k = 0; k < 4; ++k) {
        auto const one = loop.tick(now[k], narrow, alone[k]);
        wend::for_each_member(command.body, one.body, [&](Lanes const& lanes, float const& x) {
          differences += numbers::same(lanes[static_cast<int>(k)], x) ? 0 : 1;
        });
        machines[k].drive(loop.drive, one.wheels, 0.05);
      }
    }
    CHECK(differences == 0);
  };
  check(Car{.policy = policy});
  check(Three{.policy = policy});
  check(Ahead{.policy = policy});
  check(SmoothFour{.policy = policy});
  check(SmoothCar{.policy = policy});
}

namespace {

// A drive from outside the library: a boat with two screws and no wheels, told thrust in percent.
struct Thrust {
  float port = 0.0F;
  float starboard = 0.0F;
};
struct Boat {
  float top = 1.5F;  // metres a second at 100 %
  [[nodiscard]] constexpr wend::BodyVelocity<float> within_limits(
      wend::BodyVelocity<float> const& body) const noexcept {
    return {wend::clamp(body.speed, -top, top), wend::clamp(body.turn_rate, -1.0F, 1.0F)};
  }
  [[nodiscard]] constexpr Thrust wheels(wend::BodyVelocity<float> const& body) const noexcept {
    return {100.0F * (body.speed - 0.5F * body.turn_rate) / top, 100.0F * (body.speed + 0.5F * body.turn_rate) / top};
  }
  [[nodiscard]] constexpr wend::BodyVelocity<float> body(Thrust const& thrust) const noexcept {
    return {0.005F * top * (thrust.port + thrust.starboard), 0.01F * top * (thrust.starboard - thrust.port)};
  }
};
static_assert(wend::Drive<Boat>);

}  // namespace

TEST_CASE("a drive of one's own needs three functions, and its command is its own type") {
  Loop<wend::toward_goal, no_sensing, Boat> const loop{};
  DiscSet<float, 1> const none;
  MemoryOf<std::remove_const_t<decltype(loop)>> memory;
  auto const command = loop.tick(Machine{}.situation(3.0F, 1.0F), none, memory);
  static_assert(std::is_same_v<std::remove_const_t<decltype(command.wheels)>, Thrust>);
  CHECK(status_of(command) == Status::ok);
  CHECK(command.wheels.starboard > command.wheels.port);
  CHECK(command.wheels.port > 0.0F);
}
