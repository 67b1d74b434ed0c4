// Loop: every input that is no good has a defined outcome, and good ones drive. The machine outside the library is a
// unicycle (common practice, no source): dx/dt = v cos(theta), dy/dt = v sin(theta), dtheta/dt = omega.
#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <cstring>
#include <limits>
#include <numbers>
#include <span>
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
#include "wend/members.hpp"
#include "wend/sensing/ring.hpp"

using wend::Command;
using wend::Disc;
using wend::DiscSet;
using wend::Loop;
using wend::Ring;
using wend::Situation;
using wend::Status;
using wend::Vec2;

namespace {

constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();
constexpr float infinity = std::numeric_limits<float>::infinity();

constexpr auto policy =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{},
                  wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{}, wend::toward_goal{}));
using Policy = std::remove_const_t<decltype(policy)>;

constexpr Loop<Policy> loop{policy};
constexpr Loop<wend::toward_goal> straight{};
constexpr Loop<wend::away_from_discs> fleeing{};

constexpr Ring<8> ring{wend::even_bearings<8>(0.0, std::numbers::pi / 4.0), 0.02F, 4.0F, 0.01F};
constexpr Loop<Policy, Ring<8>> ranging{policy, ring};

template <typename L, typename S = float>
using MemoryOf = wend::memory_t<std::remove_const_t<L>, S>;

// What firmware has to find room for: of progress two floats; of the policy the direction away from a disc, two floats
// again, and three answers, of which the guard's is set on four bytes before them.
static_assert(sizeof(MemoryOf<decltype(loop)>) == 24);
static_assert(sizeof(MemoryOf<decltype(straight)>) == 2 * sizeof(float));
static_assert(std::is_trivially_copyable_v<Loop<Policy>> && std::is_trivially_destructible_v<Loop<Policy>>);

template <typename S>
Situation<S> at(float x, float y, float heading_x, float heading_y, float goal_x, float goal_y) {
  return {{{S(x), S(y)}, {S(heading_x), S(heading_y)}}, {S(goal_x), S(goal_y)}, S(0.05F), S(0.02F)};
}

template <typename S>
Situation<S> ordinary() {
  return at<S>(0.0F, 0.0F, 1.0F, 0.0F, 5.0F, 1.0F);
}

template <typename S>
bool still(Command<S> const& command) {
  auto const zero = [](S const& x) { return numbers::all<S>(x >= S(0.0F) && x <= S(0.0F)); };
  return zero(command.wheels.left) && zero(command.wheels.right) && zero(command.body.speed) &&
         zero(command.body.turn_rate);
}

bool within_limits(Command<float> const& command, wend::DifferentialDrive const& drive = {}) {
  return std::abs(command.wheels.left) <= drive.max_rate && std::abs(command.wheels.right) <= drive.max_rate &&
         std::isfinite(command.wheels.left) && std::isfinite(command.wheels.right) &&
         std::isfinite(command.body.speed) && std::isfinite(command.body.turn_rate) &&
         std::isfinite(command.course.direction.x()) && std::isfinite(command.course.direction.y()) &&
         command.course.confidence >= 0.0F && command.course.confidence <= 1.0F;
}

template <typename Memory>
using Bytes = std::array<std::byte, sizeof(Memory)>;

template <typename Memory>
Bytes<Memory> bytes_of(Memory const& memory) {
  Bytes<Memory> bytes;
  std::memcpy(bytes.data(), &memory, sizeof(Memory));
  return bytes;
}

// One step of the unicycle, in double, under the body velocity of a command.
struct Unicycle {
  double x = 0.0;
  double y = 0.0;
  double theta = 0.0;

  void move(Command<float> const& command, double dt) {
    theta += dt * static_cast<double>(command.body.turn_rate);
    x += dt * static_cast<double>(command.body.speed) * std::cos(theta);
    y += dt * static_cast<double>(command.body.speed) * std::sin(theta);
  }
  [[nodiscard]] Situation<float> situation(float goal_x, float goal_y) const {
    return at<float>(static_cast<float>(x), static_cast<float>(y), static_cast<float>(std::cos(theta)),
                     static_cast<float>(std::sin(theta)), goal_x, goal_y);
  }
  [[nodiscard]] double gap(Disc<float> const& disc) const {
    return std::hypot(x - static_cast<double>(disc.centre.x()), y - static_cast<double>(disc.centre.y())) -
           static_cast<double>(disc.radius);
  }
};

// xorshift64* (Vigna 2016, An experimental exploration of Marsaglia's xorshift generators, scrambled).
class Random {
 public:
  explicit Random(std::uint64_t seed) : state_(seed) {}
  std::uint32_t bits() {
    state_ ^= state_ >> 12U;
    state_ ^= state_ << 25U;
    state_ ^= state_ >> 27U;
    return static_cast<std::uint32_t>((state_ * 0x2545f4914f6cdd1dU) >> 32U);
  }
  float between(float low, float high) { return low + (high - low) * static_cast<float>(bits() >> 8U) * 0x1p-24F; }
  bool chance(float p) { return between(0.0F, 1.0F) < p; }
  /// Any bit pattern at all with probability `raw`, and then often one of the patterns that hurt; else a plain value.
  float any(float raw, float low, float high) {
    if (!chance(raw)) {
      return between(low, high);
    }
    std::uint32_t const sign = bits() & 0x80000000U;
    switch (bits() % 8U) {
      case 0: return std::bit_cast<float>(sign | 0x7f800000U | (bits() & 0x007fffffU));  // not a number, any payload
      case 1: return std::bit_cast<float>(sign | 0x7f800000U);  // infinity
      case 2: return std::bit_cast<float>(sign | (bits() & 0x007fffffU));  // denormal or zero
      case 3: return std::bit_cast<float>(sign | 0x7f7fffffU);  // the greatest
      default: return std::bit_cast<float>(bits());
    }
  }

 private:
  std::uint64_t state_;
};

// Any bits into every number of a memory; its answers stay true or false.
template <typename T>
void scramble(T& x, Random& random, float raw) {
  if constexpr (std::is_same_v<T, bool>) {
    x = random.chance(0.5F);
  } else if constexpr (std::is_same_v<T, float>) {
    x = random.any(raw, -1.0F, 5.0F);
  } else if constexpr (std::is_same_v<T, Vec2<float>>) {
    scramble(x.x(), random, raw);
    scramble(x.y(), random, raw);
  } else {
    wend::for_each_member(x, x, [&](auto& member, auto&) noexcept { scramble(member, random, raw); });
  }
}

}  // namespace

TEST_CASE_TEMPLATE("a pose, heading or goal that cannot be one makes the loop blind", S, WEND_TEST_NUMBERS) {
  DiscSet<S, 4> discs;
  discs.add({{S(2.0F), S(0.3F)}, S(0.2F)});
  std::vector<Situation<S>> bad;
  for (float x : {not_a_number, infinity, -infinity}) {
    bad.push_back(at<S>(x, 0.0F, 1.0F, 0.0F, 5.0F, 1.0F));
    bad.push_back(at<S>(0.0F, x, 1.0F, 0.0F, 5.0F, 1.0F));
    bad.push_back(at<S>(0.0F, 0.0F, x, 0.0F, 5.0F, 1.0F));
    bad.push_back(at<S>(0.0F, 0.0F, 1.0F, x, 5.0F, 1.0F));
    bad.push_back(at<S>(0.0F, 0.0F, 1.0F, 0.0F, x, 1.0F));
    bad.push_back(at<S>(0.0F, 0.0F, 1.0F, 0.0F, 5.0F, x));
  }
  bad.push_back(at<S>(0.0F, 0.0F, 0.0F, 0.0F, 5.0F, 1.0F));  // no heading
  bad.push_back(at<S>(0.0F, 0.0F, 2.0F, 0.0F, 5.0F, 1.0F));  // no unit vector
  bad.push_back(at<S>(0.0F, 0.0F, 0.5F, 0.5F, 5.0F, 1.0F));
  bad.push_back(at<S>(0.0F, 0.0F, 1.0F, 0.0F, 1.0e7F, 0.0F));  // a goal that is beyond far_away
  bad.push_back(at<S>(3.0e38F, 0.0F, 1.0F, 0.0F, -3.0e38F, 0.0F));
  for (std::size_t k = 0; k < bad.size(); ++k) {
    MemoryOf<decltype(loop), S> memory;
    static_cast<void>(loop.tick(ordinary<S>(), discs, memory));
    auto const before = bytes_of(memory);
    Command<S> const command = loop.tick(bad[k], discs, memory);
    CAPTURE(k);
    CHECK(numbers::all<S>(command.findings.blind));
    CHECK(numbers::none<S>(command.findings.stale));
    CHECK(still(command));
    CHECK(numbers::all<S>(command.course.confidence <= S(0.0F)));
    CHECK(numbers::all<S>(wend::length(command.course.direction) <= S(0.0F)));
    CHECK(bytes_of(memory) == before);
    // and the tick after is as if nothing had been
    Command<S> const after = loop.tick(ordinary<S>(), discs, memory);
    CHECK(numbers::none<S>(command.findings.arrived || after.findings.blind));
    CHECK_FALSE(still(after));
  }
}

TEST_CASE_TEMPLATE("a time step that is none, or readings too old, make the loop stale", S, WEND_TEST_NUMBERS) {
  DiscSet<S, 4> discs;
  discs.add({{S(0.5F), S(0.0F)}, S(0.1F)});  // near enough for the policy to want to remember a side
  auto const check = [&](float dt, float age) {
    MemoryOf<decltype(loop), S> memory;
    static_cast<void>(loop.tick(at<S>(-3.0F, 0.0F, 1.0F, 0.0F, 5.0F, 1.0F), discs, memory));
    auto const before = bytes_of(memory);
    Situation<S> now = ordinary<S>();
    now.dt = S(dt);
    now.age = S(age);
    Command<S> const command = loop.tick(now, discs, memory);
    CAPTURE(dt);
    CAPTURE(age);
    CHECK(numbers::all<S>(command.findings.stale));
    CHECK(numbers::none<S>(command.findings.blind));
    CHECK(still(command));
    CHECK(numbers::all<S>(command.course.confidence <= S(0.0F)));
    CHECK(bytes_of(memory) == before);
  };
  for (float dt : {0.0F, -0.05F, 1.0F, 1.0e30F, not_a_number, infinity, -infinity}) {
    check(dt, 0.02F);
  }
  for (float age : {-0.01F, 1.0F, 1.0e30F, not_a_number, infinity, -infinity}) {
    check(0.05F, age);
  }
  // the same tick in time does change the memory, so the comparison above can fail
  MemoryOf<decltype(loop), S> memory;
  static_cast<void>(loop.tick(at<S>(-3.0F, 0.0F, 1.0F, 0.0F, 5.0F, 1.0F), discs, memory));
  auto const before = bytes_of(memory);
  static_cast<void>(loop.tick(ordinary<S>(), discs, memory));
  CHECK(bytes_of(memory) != before);
}

TEST_CASE("stale is told before blind, and blind before arrived") {
  DiscSet<float, 4> const discs;
  MemoryOf<decltype(loop)> memory;
  Situation<float> now = at<float>(0.0F, 0.0F, 0.0F, 0.0F, 0.0F, 0.0F);
  CHECK(status_of(loop.tick(now, discs, memory)) == Status::blind);  // on the goal, but who knows
  now.dt = 0.0F;
  Command<float> const command = loop.tick(now, discs, memory);
  CHECK(status_of(command) == Status::stale);
  CHECK(command.findings.blind);
  CHECK_FALSE(command.findings.arrived);
}

TEST_CASE_TEMPLATE("a disc that cannot be one makes the loop blind, even in a full set", S, WEND_TEST_NUMBERS) {
  for (Disc<S> const& bad : {Disc<S>{{S(2.0F), S(0.0F)}, S(-0.1F)}, Disc<S>{{S(not_a_number), S(0.0F)}, S(0.1F)},
                             Disc<S>{{S(2.0F), S(infinity)}, S(0.1F)}, Disc<S>{{S(2.0F), S(0.0F)}, S(not_a_number)},
                             Disc<S>{{S(2.0F), S(0.0F)}, S(infinity)}}) {
    for (int others = 0; others < 4; ++others) {
      DiscSet<S, 2> discs;
      for (int k = 0; k < others; ++k) {
        discs.add({{S(3.0F), S(static_cast<float>(k))}, S(0.1F)});
      }
      discs.add(bad);
      MemoryOf<decltype(loop), S> memory;
      auto const before = bytes_of(memory);
      Command<S> const command = loop.tick(ordinary<S>(), discs, memory);
      CHECK(numbers::all<S>(command.findings.blind));
      CHECK(still(command));
      CHECK(bytes_of(memory) == before);
    }
  }
}

TEST_CASE("with more discs than fit the machine drives on by the nearest, and tells") {
  DiscSet<float, 2> discs;
  for (float x : {2.0F, 9.0F, 3.0F, 8.0F}) {
    discs.add({{x, 1.5F}, 0.1F});
  }
  MemoryOf<decltype(straight)> memory;
  Command<float> const command = straight.tick(ordinary<float>(), discs, memory);
  CHECK(status_of(command) == Status::discs_dropped);
  CHECK(command.body.speed > 0.0F);
}

TEST_CASE("a machine on its goal has arrived and stands still, at the radius and on the very point") {
  DiscSet<float, 2> const discs;
  for (float distance : {0.0F, 1.0e-30F, 0.1F, 0.15F}) {
    MemoryOf<decltype(loop)> memory;
    Command<float> const command = loop.tick(at<float>(0.0F, 0.0F, 1.0F, 0.0F, distance, 0.0F), discs, memory);
    CAPTURE(distance);
    CHECK(status_of(command) == Status::arrived);
    CHECK(still(command));
    CHECK(within_limits(command));
  }
  MemoryOf<decltype(loop)> memory;
  CHECK(status_of(loop.tick(at<float>(0.0F, 0.0F, 1.0F, 0.0F, 0.151F, 0.0F), discs, memory)) == Status::ok);
}

TEST_CASE("a policy without an opinion stops the machine") {
  DiscSet<float, 2> const discs;
  MemoryOf<decltype(fleeing)> memory;
  Command<float> const command = fleeing.tick(ordinary<float>(), discs, memory);
  CHECK(status_of(command) == Status::no_course);
  CHECK(still(command));
}

TEST_CASE("a goal inside a disc is driven up to, and the machine stops outside the margin and tells") {
  Disc<float> const disc{{4.0F, 0.3F}, 0.8F};
  DiscSet<float, 2> discs;
  discs.add(disc);
  MemoryOf<decltype(straight)> memory;
  Unicycle machine;
  Command<float> command;
  for (int tick = 0; tick < 1200; ++tick) {
    command = straight.tick(machine.situation(4.0F, 0.3F), discs, memory);
    machine.move(command, 0.05);
    REQUIRE(machine.gap(disc) - static_cast<double>(straight.robot_radius) >=
            static_cast<double>(straight.pace.margin));
  }
  CHECK(machine.gap(disc) < 0.45);
  CHECK(std::abs(command.body.speed) < 1.0e-3F);
  CHECK(command.findings.stuck);  // a minute, of which it has stood longer than Progress has patience

  // nearer than the room to stop: blocked, and it may still turn
  MemoryOf<decltype(straight)> fresh;
  Command<float> const blocked = straight.tick(at<float>(2.98F, 0.3F, 1.0F, 0.0F, 4.0F, 0.5F), discs, fresh);
  CHECK(status_of(blocked) == Status::blocked);
  CHECK(blocked.body.speed == 0.0F);
  CHECK(blocked.body.turn_rate > 0.0F);
}

TEST_CASE("a machine inside a disc drives out of it when its policy leads away, whichever way it looks") {
  Disc<float> const disc{{0.0F, 0.0F}, 0.5F};
  DiscSet<float, 2> discs;
  discs.add(disc);
  for (int start = 0; start < 16; ++start) {
    MemoryOf<decltype(fleeing)> memory;
    Unicycle machine{0.1, 0.05, 0.4 * start};
    for (int tick = 0; tick < 200; ++tick) {
      Command<float> const command = fleeing.tick(machine.situation(9.0F, 9.0F), discs, memory);
      REQUIRE(within_limits(command));
      double const before = machine.gap(disc);
      machine.move(command, 0.05);
      REQUIRE(machine.gap(disc) >= before - 1.0e-6);  // never deeper
    }
    CHECK(machine.gap(disc) > 1.0);
  }
  // at the very centre there is no way that leads away
  MemoryOf<decltype(fleeing)> memory;
  Command<float> const lost = fleeing.tick(at<float>(0.0F, 0.0F, 1.0F, 0.0F, 5.0F, 0.0F), discs, memory);
  CHECK(status_of(lost) == Status::no_course);
  CHECK(still(lost));
}

TEST_CASE("the composed policy passes a disc that stands in its way and arrives") {
  Disc<float> const disc{{2.5F, 0.0F}, 0.3F};
  DiscSet<float, 4> discs;
  discs.add(disc);
  MemoryOf<decltype(loop)> memory;
  Unicycle machine;
  Status status = Status::ok;
  for (int tick = 0; tick < 1200 && status != Status::arrived; ++tick) {
    Command<float> const command = loop.tick(machine.situation(5.0F, 0.2F), discs, memory);
    status = status_of(command);
    machine.move(command, 0.05);
    REQUIRE(machine.gap(disc) > static_cast<double>(loop.robot_radius));
  }
  CHECK(status == Status::arrived);
}

namespace {

// Drives the wrong way, to see what being stuck does.
struct from_goal {
  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return {Vec2<S>(-percept.goal_direction), S(1.0F)};
  }
};

}  // namespace

TEST_CASE("a machine that comes no nearer is stuck after its patience, and drives on") {
  Loop<from_goal> const backwards{.policy = {}, .progress = {.step = 0.1F, .patience = 2.0F}};
  DiscSet<float, 2> const discs;
  MemoryOf<decltype(backwards)> memory;
  Unicycle machine;
  for (int tick = 0; tick < 60; ++tick) {
    Command<float> const command = backwards.tick(machine.situation(3.0F, 0.0F), discs, memory);
    CAPTURE(tick);
    // 41 steps of 0.05 s are the first to be more than 2 s; at 40 the sum's rounding decides
    if (tick != 40) {
      CHECK(status_of(command) == (tick < 40 ? Status::ok : Status::stuck));
    }
    CHECK_FALSE(still(command));
    machine.move(command, 0.05);
  }
}

TEST_CASE("readings of dead beams make the loop blind, and half of them alive is enough") {
  std::array<float, 8> ranges;
  auto const tick = [&](int dead, float reading) {
    for (int k = 0; k < 8; ++k) {
      ranges[static_cast<std::size_t>(k)] = k < dead ? reading : 3.0F;
    }
    MemoryOf<decltype(ranging)> memory;
    auto const before = bytes_of(memory);
    auto const command = ranging.tick(ordinary<float>(), std::span<float const, 8>(ranges), memory);
    CHECK(within_limits(command));
    if (command.findings.blind) {
      CHECK(still(command));
      CHECK(bytes_of(memory) == before);
    }
    return command;
  };
  for (float reading : {not_a_number, -infinity, 0.0F, -0.0F, -1.0F, -std::numeric_limits<float>::max(), 0.001F}) {
    CAPTURE(reading);
    CHECK(status_of(tick(8, reading)) == Status::blind);
    CHECK(status_of(tick(5, reading)) == Status::blind);
    CHECK(status_of(tick(4, reading)) == Status::ok);
    CHECK(status_of(tick(0, reading)) == Status::ok);
  }
  CHECK(status_of(tick(8, infinity)) == Status::ok);  // this ranger's sign that nothing came back
  CHECK(tick(8, infinity).body.speed > 0.0F);
}

TEST_CASE("on the readings' path pose, goal and time are judged as on the other") {
  std::array<float, 8> ranges;
  ranges.fill(3.0F);
  auto const status = [&](Situation<float> const& now) {
    MemoryOf<decltype(ranging)> memory;
    auto const before = bytes_of(memory);
    auto const command = ranging.tick(now, std::span<float const, 8>(ranges), memory);
    CHECK(still(command));
    CHECK((status_of(command) == Status::arrived || bytes_of(memory) == before));
    return status_of(command);
  };
  CHECK(status(at<float>(not_a_number, 0.0F, 1.0F, 0.0F, 5.0F, 1.0F)) == Status::blind);
  CHECK(status(at<float>(0.0F, 0.0F, 0.0F, 0.0F, 5.0F, 1.0F)) == Status::blind);
  CHECK(status(at<float>(0.0F, 0.0F, 3.0F, 0.0F, 5.0F, 1.0F)) == Status::blind);
  CHECK(status(at<float>(0.0F, 0.0F, 1.0F, 0.0F, infinity, 1.0F)) == Status::blind);
  CHECK(status(at<float>(2.0F, 1.0F, 0.6F, 0.8F, 2.0F, 1.1F)) == Status::arrived);
  Situation<float> late = ordinary<float>();
  late.age = 5.0F;
  CHECK(status(late) == Status::stale);
}

TEST_CASE("readings are in the robot's own frame: the same world turned gives the same wheels") {
  std::array<float, 8> ranges{0.9F, 3.0F, 3.0F, 3.0F, 3.0F, 3.0F, 3.0F, 0.7F};
  std::array<float, 2> first{};
  for (int k = 0; k < 4; ++k) {  // quarter turns, which are exact
    float const c = k == 0 ? 1.0F : k == 2 ? -1.0F : 0.0F;
    float const s = k == 1 ? 1.0F : k == 3 ? -1.0F : 0.0F;
    MemoryOf<decltype(ranging)> memory;
    auto const command = ranging.tick(at<float>(0.0F, 0.0F, c, s, c * 4.0F - s * 0.5F, s * 4.0F + c * 0.5F),
                                      std::span<float const, 8>(ranges), memory);
    if (k == 0) {
      first = {command.wheels.left, command.wheels.right};
      CHECK(first[0] != first[1]);
    }
    CHECK(numbers::same(command.wheels.left, first[0]));
    CHECK(numbers::same(command.wheels.right, first[1]));
  }
}

TEST_CASE("whatever bits come in, the wheel rates are finite, within limits, and zero when the loop must stop") {
  Random random(7);
  int trusted = 0;
  int driving = 0;
  int untrusted = 0;
  int bad = 0;
  for (int tick = 0; tick < 200000; ++tick) {
    float const raw = tick % 4 == 0 ? 1.0F : tick % 4 == 1 ? 0.3F : tick % 4 == 2 ? 0.03F : 0.0F;
    float const raw_memory = tick % 3 == 0 ? 1.0F : 0.2F;
    float const angle = random.between(-3.2F, 3.2F);
    Situation<float> now;
    now.pose.position = {random.any(raw, -3.0F, 3.0F), random.any(raw, -3.0F, 3.0F)};
    now.pose.heading = {random.chance(raw) ? random.any(1.0F, 0.0F, 0.0F) : std::cos(angle),
                        random.chance(raw) ? random.any(1.0F, 0.0F, 0.0F) : std::sin(angle)};
    now.goal = {random.any(raw, -3.0F, 3.0F), random.any(raw, -3.0F, 3.0F)};
    now.dt = random.any(raw, 0.01F, 0.1F);
    now.age = random.any(raw, 0.0F, 0.1F);
    DiscSet<float, 3> discs;
    for (std::uint32_t k = random.bits() % 5U; k > 0; --k) {
      discs.add({{random.any(raw, -3.0F, 3.0F), random.any(raw, -3.0F, 3.0F)}, random.any(raw, 0.0F, 0.6F)},
                now.pose.position);
    }
    MemoryOf<decltype(loop)> memory;
    scramble(memory, random, raw_memory);
    auto const before = bytes_of(memory);
    Command<float> const command = loop.tick(now, discs, memory);
    bool const believes = !command.findings.stale && !command.findings.blind;
    bool const stops = !believes || command.findings.no_course || command.findings.arrived;
    bool ok = within_limits(command);
    ok = ok && (!stops || still(command));
    ok = ok && (!command.findings.blocked || command.body.speed == 0.0F || std::abs(command.body.speed) < 1.0e-6F);
    ok = ok && command.body.speed >= -1.0e-6F && command.body.speed <= loop.pace.top_speed + 1.0e-6F;
    ok = ok && (believes || (bytes_of(memory) == before && command.course.confidence == 0.0F));
    bad += ok ? 0 : 1;
    trusted += believes ? 1 : 0;
    untrusted += believes ? 0 : 1;
    driving += command.body.speed > 0.01F ? 1 : 0;
  }
  CHECK(bad == 0);
  CHECK(trusted > 50000);  // so that all the above was met
  CHECK(driving > 20000);
  CHECK(untrusted > 50000);
}

TEST_CASE("whatever bits the beams give, the wheel rates are finite and within limits") {
  Random random(11);
  int bad = 0;
  int blind = 0;
  int driving = 0;
  for (int tick = 0; tick < 200000; ++tick) {
    float const raw = tick % 4 == 0 ? 1.0F : tick % 4 == 1 ? 0.5F : tick % 4 == 2 ? 0.1F : 0.0F;
    std::array<float, 8> ranges;
    for (float& range : ranges) {
      range = random.any(raw, 0.05F, 5.0F);
    }
    MemoryOf<decltype(ranging)> memory;
    scramble(memory, random, raw);
    auto const before = bytes_of(memory);
    Situation<float> now = ordinary<float>();
    now.goal.x() = random.any(raw * 0.2F, -3.0F, 3.0F);
    auto const command = ranging.tick<4>(now, std::span<float const, 8>(ranges), memory);
    bool const believes = !command.findings.stale && !command.findings.blind;
    bool const ok = within_limits(command) && (believes || (still(command) && bytes_of(memory) == before));
    bad += ok ? 0 : 1;
    blind += believes ? 0 : 1;
    driving += command.body.speed > 0.01F ? 1 : 0;
  }
  CHECK(bad == 0);
  CHECK(blind > 20000);
  CHECK(driving > 5000);
}

namespace {

// One machine among discs of its own, which now and then is told nonsense.
struct Run {
  explicit Run(std::uint64_t seed) : random(seed) {
    machine = {0.0, 0.0, static_cast<double>(random.between(-3.0F, 3.0F))};
    for (Disc<float>& disc : discs) {
      disc = {{random.between(1.0F, 5.0F), random.between(-1.5F, 1.5F)}, random.between(0.1F, 0.4F)};
    }
  }
  Situation<float> situation() {
    Situation<float> now = machine.situation(6.0F, 0.5F);
    if (random.chance(0.1F)) {
      now.dt = random.any(1.0F, 0.0F, 0.0F);
    }
    if (random.chance(0.1F)) {
      now.pose.position.x() = random.any(1.0F, 0.0F, 0.0F);
    }
    return now;
  }

  Random random;
  Unicycle machine;
  std::array<Disc<float>, 5> discs{};
};

bool same_command(Command<float> const& a, Command<float> const& b) {
  return numbers::same(a.wheels.left, b.wheels.left) && numbers::same(a.wheels.right, b.wheels.right) &&
         numbers::same(a.body.speed, b.body.speed) && numbers::same(a.body.turn_rate, b.body.turn_rate) &&
         numbers::same(a.course.direction, b.course.direction) &&
         numbers::same(a.course.confidence, b.course.confidence) && a.findings.stale == b.findings.stale &&
         a.findings.blind == b.findings.blind && a.findings.arrived == b.findings.arrived &&
         a.findings.no_course == b.findings.no_course && a.findings.blocked == b.findings.blocked &&
         a.findings.stuck == b.findings.stuck && a.findings.discs_dropped == b.findings.discs_dropped;
}

template <typename S>
Command<float> lane_of(Command<S> const& command, int k) {
  using numbers::holds;
  using numbers::lane;
  return {{lane(command.wheels.left, k), lane(command.wheels.right, k)},
          {lane(command.body.speed, k), lane(command.body.turn_rate, k)},
          {lane(command.course.direction, k), lane(command.course.confidence, k)},
          {holds(command.findings.stale, k), holds(command.findings.blind, k), holds(command.findings.arrived, k),
           holds(command.findings.no_course, k), holds(command.findings.blocked, k), holds(command.findings.stuck, k),
           holds(command.findings.discs_dropped, k)}};
}

}  // namespace

TEST_CASE_TEMPLATE("machines in lanes do what each does alone, bit for bit over 600 ticks", S, wend::lab::Pack<4>,
                   wend::lab::Pack<8>) {
  constexpr int width = numbers::lanes<S>();
  Loop<Policy> const impatient{.policy = policy, .progress = {.step = 0.1F, .patience = 3.0F}};
  std::vector<Run> runs;
  std::vector<MemoryOf<decltype(loop)>> alone(static_cast<std::size_t>(width));
  MemoryOf<decltype(loop), S> together;
  for (int k = 0; k < width; ++k) {
    runs.emplace_back(0x9e3779b97f4a7c15U + static_cast<std::uint64_t>(k));
  }
  auto const of_run = [&](auto const& f) {
    return numbers::make<S>([&](int k) { return f(runs[static_cast<std::size_t>(k)]); });
  };
  int differences = 0;
  std::array<int, 4> met{};
  for (int tick = 0; tick < 600; ++tick) {
    std::vector<Situation<float>> now;
    for (Run& run : runs) {
      now.push_back(run.situation());
    }
    auto const of = [&](auto const& f) {
      return numbers::make<S>([&](int k) { return f(now[static_cast<std::size_t>(k)]); });
    };
    Situation<S> const all{
        {{of([](auto const& s) { return s.pose.position.x(); }), of([](auto const& s) { return s.pose.position.y(); })},
         {of([](auto const& s) { return s.pose.heading.x(); }), of([](auto const& s) { return s.pose.heading.y(); })}},
        {of([](auto const& s) { return s.goal.x(); }), of([](auto const& s) { return s.goal.y(); })},
        of([](auto const& s) { return s.dt; }),
        of([](auto const& s) { return s.age; })};
    DiscSet<S, 4> discs_together;  // one more than fits, so that lanes drop different ones
    for (std::size_t i = 0; i < 5; ++i) {
      discs_together.add({{of_run([i](Run const& run) { return run.discs[i].centre.x(); }),
                           of_run([i](Run const& run) { return run.discs[i].centre.y(); })},
                          of_run([i](Run const& run) { return run.discs[i].radius; })},
                         all.pose.position);
    }
    Command<S> const command_together = impatient.tick(all, discs_together, together);
    for (int k = 0; k < width; ++k) {
      auto const at_k = static_cast<std::size_t>(k);
      DiscSet<float, 4> discs;
      for (Disc<float> const& disc : runs[at_k].discs) {
        discs.add(disc, now[at_k].pose.position);
      }
      Command<float> const command = impatient.tick(now[at_k], discs, alone[at_k]);
      differences += same_command(command, lane_of(command_together, k)) ? 0 : 1;
      differences += numbers::same(alone[at_k].progress.nearest, together.progress.nearest[k]) ? 0 : 1;
      differences += numbers::same(alone[at_k].progress.since, together.progress.since[k]) ? 0 : 1;
      met[0] += command.findings.stale ? 1 : 0;
      met[1] += command.findings.blind ? 1 : 0;
      met[2] += command.findings.stuck || command.findings.arrived ? 1 : 0;
      met[3] += command.body.speed > 0.05F ? 1 : 0;
      runs[at_k].machine.move(command, 0.05);
    }
  }
  CHECK(differences == 0);
  CHECK(met[0] > 100);
  CHECK(met[1] > 100);
  CHECK(met[2] > 50);
  CHECK(met[3] > 200);
}

TEST_CASE("double drives the same way as float") {
  DiscSet<float, 4> discs;
  DiscSet<double, 4> fine;
  for (float x : {1.5F, 3.5F}) {
    discs.add({{x, 0.4F * x - 0.9F}, 0.25F});
    fine.add({{static_cast<double>(x), static_cast<double>(0.4F * x - 0.9F)}, 0.25});
  }
  MemoryOf<decltype(loop)> memory;
  MemoryOf<decltype(loop), double> of_fine;
  Unicycle machine;
  for (int tick = 0; tick < 300; ++tick) {
    Situation<float> const now = machine.situation(6.0F, 0.5F);
    Situation<double> const same{{now.pose.position.cast<double>(), now.pose.heading.cast<double>()},
                                 now.goal.cast<double>(),
                                 static_cast<double>(now.dt),
                                 static_cast<double>(now.age)};
    Command<float> const command = loop.tick(now, discs, memory);
    Command<double> const other = loop.tick(same, fine, of_fine);
    REQUIRE(std::abs(static_cast<double>(command.wheels.left) - other.wheels.left) < 2.0e-3);
    REQUIRE(std::abs(static_cast<double>(command.wheels.right) - other.wheels.right) < 2.0e-3);
    REQUIRE(status_of(command) == status_of(other));
    machine.move(command, 0.05);
  }
}

TEST_CASE("two loops that take turns do what each does alone") {
  auto const drive_together = [](std::vector<Run*> const& runs) {
    std::vector<MemoryOf<decltype(loop)>> memories(runs.size());
    std::vector<std::vector<Command<float>>> commands(runs.size());
    for (int tick = 0; tick < 300; ++tick) {
      for (std::size_t k = 0; k < runs.size(); ++k) {
        DiscSet<float, 8> discs;
        for (Disc<float> const& disc : runs[k]->discs) {
          discs.add(disc);
        }
        commands[k].push_back(loop.tick(runs[k]->situation(), discs, memories[k]));
        runs[k]->machine.move(commands[k].back(), 0.05);
      }
    }
    return commands;
  };
  Run a(1);
  Run b(2);
  Run a_again(1);
  Run b_again(2);
  auto const together = drive_together({&a, &b});
  auto const only_a = drive_together({&a_again});
  auto const only_b = drive_together({&b_again});
  int differences = 0;
  int apart = 0;
  for (std::size_t tick = 0; tick < 300; ++tick) {
    differences += same_command(together[0][tick], only_a[0][tick]) ? 0 : 1;
    differences += same_command(together[1][tick], only_b[0][tick]) ? 0 : 1;
    apart += same_command(together[0][tick], together[1][tick]) ? 0 : 1;
  }
  CHECK(differences == 0);
  CHECK(apart > 200);  // they were two different drives
}
