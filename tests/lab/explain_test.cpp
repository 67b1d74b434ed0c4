// Explanations, against scenes worked out by hand: the expected lines come from a pocket calculator, not from wend.
#include <cmath>
#include <limits>
#include <numbers>
#include <string>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "wend/lab/account.hpp"
#include "wend/lab/explain.hpp"
#include "wend/lab/explain_tick.hpp"
#include "wend/loop.hpp"
#include "wend/motion/slew.hpp"
#include "wend/sensing/followed.hpp"
#include "wend/sensing/keep_in_mind.hpp"
#include "wend/sensing/ring.hpp"
#include "wend/watch/log.hpp"

namespace {

using wend::above;
using wend::away_from_discs;
using wend::below;
using wend::blend;
using wend::both;
using wend::clearance;
using wend::Course;
using wend::disc_before_goal;
using wend::DiscSet;
using wend::either;
using wend::goal_distance;
using wend::guarded;
using wend::held;
using wend::Loop;
using wend::negated;
using wend::no_opinion;
using wend::past_disc;
using wend::priority;
using wend::ramp;
using wend::share;
using wend::toward_goal;
using wend::Vec2;
using wend::lab::Account;
using wend::lab::Decision;

using Lines = std::vector<std::string>;

// At the origin, nose along x, goal 4 m ahead; a disc of radius 0.2 m whose centre is 0.6 m to the left: with the
// robot's radius of 0.2 m the clearance is 0.6 - 0.2 - 0.2 = 0.2 m.
struct Scene {
  wend::Pose<float> pose;
  Vec2<float> goal{4.0F, 0.0F};
  DiscSet<float, 4> discs;
  float dt = 0.05F;

  Scene() { discs.add({{0.0F, 0.6F}, 0.2F}); }

  template <typename F>
  Account explain(F const& f, wend::memory_t<F, float> const& memory = {}) const {
    auto const percept = wend::look(pose, goal, discs, 0.2F, dt);
    Account account;
    wend::lab::explain(f, percept, memory, account, {});
    return account;
  }
};

template <typename F>
std::string guard_line(F const& guard, bool on, float distance = 0.0F) {
  Scene scene;
  if (distance != 0.0F) {
    scene.goal.x() = distance;
  }
  return scene.explain(guard, {on}).lines.at(0);
}

}  // namespace

TEST_CASE("a whole tick is explained line by line") {
  // A disc 0.6 m straight ahead, of radius 0.2 m, clearance 0.2 m; goal 4 m ahead. past_disc passes it with the disc on
  // the right hand, since the goal lies exactly behind: a course of +90 degrees. Room: 0.4 m to the disc's edge, less
  // radius 0.2, margin 0.05 and overrun 0.8 * 0.25^2 / 2 = 0.025: 0.125 m. Speed: 2 * 0.125 / (0.25 + sqrt(0.0625 +
  // 2 * 0.125 / 0.8)) = 0.25 / 0.86237 = 0.290 m/s. The sine of the error is 1: 3 rad/s, limited to 1.5; cosine 0: in
  // place. Wheels: 1.5 * 0.15 / 0.05 = 4.5 rad/s.
  constexpr auto policy = guarded(below(clearance, 0.30F, 0.50F), past_disc{}, toward_goal{});
  using Policy = std::remove_const_t<decltype(policy)>;
  Loop<Policy> const loop{.policy = policy};
  Decision<Loop<Policy>, DiscSet<float, 8>> decision;
  decision.number = 7;
  decision.now.goal = {4.0F, 0.0F};
  decision.seen.add({{0.6F, 0.0F}, 0.2F});
  Account const account = wend::lab::explain_tick(loop, decision);
  CHECK(account.voices == Lines{"past_disc"});
  Lines const expected{
      "tick 7: ok; wheels left -4.500, right 4.500",
      "  inputs: dt 0.050 s, age 0.000 s",
      "  goal: 4.000 m away, +0.0 deg",
      "  seen: 1 disc, the nearest 0.200 m from the robot's edge, +0.0 deg",
      "  policy: guarded, goes inside -> +90.0 deg, confidence 1.000",
      "    guard: turns on, clearance 0.200 is under 0.300",
      "    inside: past_disc -> +90.0 deg, confidence 1.000; remembers away (-1.000, 0.000), disc_on_right yes",
      "    outside: toward_goal is not asked",
      "  heard: past_disc",
      "  pace: 0.290 m/s allowed, to stop in the 0.125 m of room before a disc",
      "  steering: speed 0.000, turn_rate 1.500 wanted",
      "  body: speed 0.000, turn_rate 1.500",
      "  progress: nearest 4.000, since 0.000",
      "  findings: none",
  };
  REQUIRE(account.lines.size() == expected.size());
  for (std::size_t i = 0; i < expected.size(); ++i) {
    CHECK(account.lines[i] == expected[i]);
  }
}

TEST_CASE("a tick that must not drive says why") {
  using L = Loop<toward_goal>;
  Decision<L, DiscSet<float, 8>> decision;
  decision.now.goal = {0.3F, 0.4F};  // 0.5 m off, atan2(4, 3) = 53.1 degrees to the left
  decision.now.dt = 0.0F;
  Account stale = wend::lab::explain_tick(L{}, decision);
  CHECK(stale.lines == Lines{
                           "tick 0: stale; wheels left 0.000, right 0.000",
                           "  inputs: dt 0.000 s, age 0.000 s",
                           "  goal: 0.500 m away, +53.1 deg",
                           "  seen: 0 discs",
                           "  policy: not heeded, and nothing remembered, as what it was told cannot be trusted",
                           "  pace: 0.600 m/s allowed, the top speed",
                           "  steering: none, the machine is to stand whatever the course",
                           "  body: speed 0.000, turn_rate 0.000",
                           "  progress: nearest 1e+06, since 0.000",
                           "  findings: stale",
                       });
  CHECK(stale.voices.empty());
  // 0.1 m to the goal: 2 * 0.1 / (0.25 + sqrt(0.0625 + 2 * 0.1 / 0.8)) = 0.2 / 0.80902 = 0.247 m/s.
  decision.now.goal = {0.1F, 0.0F};
  decision.now.dt = 0.05F;
  Account const arrived = wend::lab::explain_tick(L{}, decision);
  CHECK(arrived.lines.at(0) == "tick 0: arrived; wheels left 0.000, right 0.000");
  CHECK(arrived.lines.at(4) == "  policy: toward_goal -> +0.0 deg, confidence 1.000");
  CHECK(arrived.lines.at(5) == "  heard: toward_goal");
  CHECK(arrived.lines.at(6) == "  pace: 0.247 m/s allowed, to stop in the 0.100 m to the goal");
  CHECK(arrived.lines.back() == "  findings: arrived");
  // 0.05 m of clearance, less the margin of 0.05 and the overrun of 0.025: 0.025 m too few.
  decision.now.goal = {4.0F, 0.0F};
  decision.seen.add({{0.45F, 0.0F}, 0.2F});
  Account const blocked = wend::lab::explain_tick(L{}, decision);
  CHECK(blocked.lines.at(6) == "  pace: 0.000 m/s allowed, a disc is 0.025 m too near to stop before");
  CHECK(blocked.lines.back() == "  findings: blocked");
}

TEST_CASE("readings are told as echoes and discs, in the robot's own frame") {
  using L = Loop<toward_goal, wend::Ring<8>>;
  L const loop{.policy = {}, .sensing = {wend::even_bearings<8>(0.0, std::numbers::pi / 4.0), 0.05F, 6.0F, 0.01F}};
  Decision<L, wend::Readings<float, 8>> decision;
  decision.now.pose.heading = {0.0F, 1.0F};
  decision.now.goal = {2.0F, 0.0F};  // to the right of the nose
  decision.seen.ranges.fill(std::numeric_limits<float>::infinity());
  decision.seen.ranges[3] = 0.0F;
  Account const account = wend::lab::explain_tick(loop, decision);
  CHECK(account.lines.at(2) == "  goal: 2.000 m away, -90.0 deg");
  CHECK(account.lines.at(3) == "  seen: 0 echoes, 7 of 8 beams alive, 0 discs");
  CHECK(account.lines.at(4) == "  policy: toward_goal -> -90.0 deg, confidence 1.000");
}

TEST_CASE("a loop whose sensing remembers is explained from what it remembered") {
  using Sensing = wend::Followed<wend::Ring<8>, wend::KeepInMind<4>>;
  using L = Loop<toward_goal, Sensing>;
  L const loop{.policy = {},
               .sensing = {{wend::even_bearings<8>(0.0, std::numbers::pi / 4.0), 0.05F, 6.0F, 0.01F}, {}}};
  Decision<L, wend::Readings<float, 8>> decision;
  decision.now.goal = {4.0F, 0.0F};
  decision.seen.ranges.fill(std::numeric_limits<float>::infinity());
  CHECK(wend::lab::explain_tick(loop, decision).lines.at(3) == "  seen: 0 echoes, 8 of 8 beams alive, 0 discs");
  // Out of reach of the ranger, so it is not seen, and kept: 5 m ahead, 0.05 m/s * 0.05 s larger. 5 - 0.2 - 0.2.
  decision.before.sensing.step.discs[0] = {{{5.0F, 0.0F}, 0.2F}, {0.0F, 0.0F}, 0.0F};
  CHECK(wend::lab::explain_tick(loop, decision).lines.at(3) ==
        "  seen: 0 echoes, 8 of 8 beams alive, 1 disc, the nearest 4.598 m from the robot's edge, +0.0 deg");
}

TEST_CASE("a disc that comes nearer is told as what slows the machine") {
  using L = Loop<toward_goal>;
  Decision<L, wend::MovingDiscSet<float, 8>> decision;
  decision.now.goal = {4.0F, 0.0F};
  // 2 m of clearance, and it comes at 2 m/s: standing still is all that helps. Standing, it would leave the top speed.
  decision.seen.add({{2.4F, 0.0F}, 0.2F}, {-2.0F, 0.0F});
  std::string const line = wend::lab::explain_tick(L{}, decision).lines.at(6);
  CHECK(line.find("  pace: 0.") == 0);
  CHECK(line.find(" m/s allowed, because of how the discs move") != std::string::npos);
  decision.seen = {};
  decision.seen.add({{2.4F, 0.0F}, 0.2F});
  CHECK(wend::lab::explain_tick(L{}, decision).lines.at(6) == "  pace: 0.600 m/s allowed, the top speed");
}

TEST_CASE("a slew shows in what the body does of what the steering wanted") {
  using L = Loop<past_disc, wend::no_sensing, wend::DifferentialDrive, wend::Steering, wend::Slew>;
  Decision<L, DiscSet<float, 8>> decision;
  decision.now.goal = {4.0F, 0.0F};
  decision.seen.add({{0.6F, 0.0F}, 0.2F});
  L loop;
  loop.slew.turn_acceleration = 8.0F;  // rad/s^2: from rest 0.4 rad/s in 0.05 s
  auto const lines = wend::lab::explain_tick(loop, decision).lines;
  CHECK(lines.at(7) == "  steering: speed 0.000, turn_rate 1.500 wanted");
  CHECK(lines.at(8) == "  body: speed 0.000, turn_rate 0.400");
}

TEST_CASE("a guard tells its signal, and the threshold that decided") {
  auto const near = below(clearance, 0.30F, 0.50F);  // the clearance is 0.2 m
  CHECK(guard_line(near, false) == "turns on, clearance 0.200 is under 0.300");
  CHECK(guard_line(near, true) == "stays on, clearance 0.200 is under 0.300");
  CHECK(guard_line(below(clearance, 0.1F, 0.5F), false) == "stays off, clearance 0.200 is not under 0.100");
  CHECK(guard_line(below(clearance, 0.1F, 0.5F), true) == "stays on, clearance 0.200 is not yet over 0.500");
  CHECK(guard_line(below(clearance, 0.05F, 0.1F), true) == "turns off, clearance 0.200 is over 0.100");
  auto const far = above(goal_distance, 3.0F, 2.0F);
  CHECK(guard_line(far, false, 4.0F) == "turns on, goal_distance 4.000 is over 3.000");
  CHECK(guard_line(far, false, 2.5F) == "stays off, goal_distance 2.500 is not over 3.000");
  CHECK(guard_line(far, true, 2.5F) == "stays on, goal_distance 2.500 is not yet under 2.000");
  CHECK(guard_line(far, true, 1.0F) == "turns off, goal_distance 1.000 is under 2.000");
  CHECK(guard_line(far, true, std::numeric_limits<float>::quiet_NaN()) == "stays on, goal_distance is not a number");
}

TEST_CASE("guards of guards are told with what they are made of") {
  Scene const scene;
  auto const guard = either(negated(below(clearance, 0.30F, 0.50F)),
                            both(above(goal_distance, 3.0F, 2.0F), above(disc_before_goal, 0.5F, 0.2F)));
  CHECK(scene.explain(guard).lines == Lines{
                                          "either: off",
                                          "  one: negated: off",
                                          "    its guard: turns on, clearance 0.200 is under 0.300",
                                          "  other: both: off",
                                          "    one: turns on, goal_distance 4.000 is over 3.000",
                                          "    other: stays off, disc_before_goal 0.000 is not over 0.500",
                                      });
}

TEST_CASE("a held guard tells whether it waits") {
  Scene const scene;
  auto const guard = held(below(clearance, 0.30F, 0.50F), 0.4F);
  wend::memory_t<decltype(guard), float> memory;
  CHECK(scene.explain(guard, memory).lines.at(0) == "held 0.400 s: first answer, on");
  CHECK(scene.explain(guard, memory).lines.at(1) == "  its guard: turns on, clearance 0.200 is under 0.300");
  memory.started = true;
  memory.since = 0.1F;
  CHECK(scene.explain(guard, memory).lines.at(0) == "held 0.400 s: stays off for now, 0.150 s after its last change");
  memory.since = 0.38F;
  CHECK(scene.explain(guard, memory).lines.at(0) == "held 0.400 s: turns on, having kept its answer long enough");
  memory.on = true;
  CHECK(scene.explain(guard, memory).lines.at(0) == "held 0.400 s: stays on");
}

TEST_CASE("a blend tells its weights, and only those with a weight are heard") {
  Scene scene;
  // (0.2 - 0.1) / (0.5 - 0.1) = 0.25: three quarters of (0, -1), one of (1, 0): atan2(-0.75, 0.25) = -71.6 degrees,
  // sqrt(0.75^2 + 0.25^2) = 0.791.
  auto const policy = blend(ramp(clearance, 0.1F, 0.5F), away_from_discs{}, toward_goal{});
  Account const half = scene.explain(policy);
  CHECK(half.lines == Lines{
                          "blend, clearance 0.200 on a ramp from 0.100 to 0.500 -> -71.6 deg, confidence 0.791",
                          "  weight 0.750: away_from_discs -> -90.0 deg, confidence 1.000",
                          "  weight 0.250: toward_goal -> +0.0 deg, confidence 1.000",
                      });
  CHECK(half.voices == Lines{"away_from_discs", "toward_goal"});
  CHECK(scene.explain(blend(ramp(clearance, 0.3F, 0.5F), away_from_discs{}, toward_goal{})).voices ==
        Lines{"away_from_discs"});
  CHECK(scene.explain(blend(ramp(clearance, 0.0F, 0.1F), away_from_discs{}, toward_goal{})).voices ==
        Lines{"toward_goal"});
  // 1 : 3. The sum is (0.25, -0.75).
  CHECK(scene.explain(blend(share(1.0F, toward_goal{}), share(3.0F, away_from_discs{}))).lines ==
        Lines{
            "blend, fixed shares -> -71.6 deg, confidence 0.791",
            "  weight 0.250: toward_goal -> +0.0 deg, confidence 1.000",
            "  weight 0.750: away_from_discs -> -90.0 deg, confidence 1.000",
        });
}

TEST_CASE("a priority tells who speaks, and who is not asked") {
  Scene const scene;
  CHECK(scene.explain(priority(no_opinion{}, toward_goal{}, away_from_discs{})).lines ==
        Lines{
            "priority, the first is silent -> +0.0 deg, confidence 1.000",
            "  first: no_opinion -> no opinion",
            "  then: priority, the first speaks -> +0.0 deg, confidence 1.000",
            "    first: toward_goal -> +0.0 deg, confidence 1.000",
            "    then: away_from_discs is not asked",
        });
  CHECK(scene.explain(priority(no_opinion{}, toward_goal{}, away_from_discs{})).voices == Lines{"toward_goal"});
}

TEST_CASE("a field that is entered anew is explained from a fresh memory, one that stays from its own") {
  Scene const scene;
  auto const policy = guarded(below(clearance, 0.30F, 0.50F), field_list::shy{}, toward_goal{});
  wend::memory_t<decltype(policy), float> memory;
  memory.inside.least_clearance = 0.05F;  // nearer than now: a memory that is kept is not bettered
  memory.inside.since = 0.1F;
  CHECK(
      scene.explain(policy, memory).lines.at(2) ==
      "  inside: shy -> -90.0 deg, confidence 0.500; remembers member 1 (0.000, -1.000), member 2 0.200, since 0.000, "
      "member 4 no");
  memory.guard.on = true;
  memory.is_inside = true;
  CHECK(scene.explain(policy, memory).lines ==
        Lines{
            "guarded, stays inside -> no opinion",
            "  guard: stays on, clearance 0.200 is under 0.300",
            "  inside: shy -> no opinion; remembers member 1 (0.000, 0.000), member 2 0.050, since 0.150, member 4 no",
            "  outside: toward_goal is not asked",
        });
}

TEST_CASE("the course that is told is the policy's, for every policy of the list") {
  field_list::for_each([](auto const& entry) {
    CAPTURE(entry.name);
    using F = std::remove_cvref_t<decltype(entry.field)>;
    Scene scene;
    wend::memory_t<F, float> memory;
    for (int step = 0; step < 40; ++step) {
      scene.pose.position = {0.1F * static_cast<float>(step), 0.02F * static_cast<float>(step % 7)};
      auto const percept = wend::look(scene.pose, scene.goal, scene.discs, 0.2F, scene.dt);
      Account const account = scene.explain(entry.field, memory);
      Course<float> const course = wend::evaluate(entry.field, percept, memory);
      std::string const told = "-> " + wend::lab::course_text(course, scene.pose.heading);
      CHECK(account.lines.at(0).find(told) != std::string::npos);
      CHECK((account.voices.empty() ? !(course.confidence > 0.0F) : true));
    }
  });
}

TEST_CASE("a name is that of the type, without its namespace and arguments") {
  CHECK(wend::lab::name_of(past_disc{}) == "past_disc");
  CHECK(wend::lab::name_of(clearance) == "clearance");
  CHECK(wend::lab::name_of(field_list::shy{}) == "shy");
  CHECK(wend::lab::name_of(blend(ramp(clearance, 0.1F, 0.5F), away_from_discs{}, toward_goal{})) == "blended_field");
  CHECK(wend::lab::name_of(Scene{}) == "Scene");
}

TEST_CASE("numbers are told with three decimals, large ones with six digits, and never as -0") {
  CHECK(wend::lab::number_text(-0.0F) == "0.000");
  CHECK(wend::lab::number_text(-0.0004F) == "0.000");
  CHECK(wend::lab::number_text(-0.0006F) == "-0.001");
  CHECK(wend::lab::number_text(999.0) == "999.000");
  CHECK(wend::lab::number_text(123456.7) == "123457");
  CHECK(wend::lab::number_text(std::numeric_limits<float>::infinity()) == "not a number");
  CHECK(wend::lab::off_the_nose(Vec2<float>{0.0F, -1.0F}, Vec2<float>{1.0F, 0.0F}) == "-90.0 deg");
  CHECK(wend::lab::off_the_nose(Vec2<float>{1.0F, -1e-5F}, Vec2<float>{1.0F, 0.0F}) == "+0.0 deg");
}
