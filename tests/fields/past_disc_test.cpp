#include <cmath>
#include <cstdint>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/angle.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/fields/past_disc.hpp"

namespace {

template <wend::Number S>
using Memory = wend::memory_t<wend::past_disc, S>;

// The machine at the origin, one disc straight ahead at (1, 0), the goal at a bearing in radians.
template <wend::Number S>
scenes::Scene<S> before_a_disc(float goal_bearing) {
  scenes::Scene<S> scene;
  scene.put(S(1.0F), S(0.0F), S(0.3F));
  scene.goal = {S(3.0F * std::cos(goal_bearing)), S(3.0F * std::sin(goal_bearing))};
  return scene;
}

template <wend::Number S>
wend::Course<S> ask(scenes::Scene<S> const& scene, Memory<S>& memory) {
  return scenes::answer(wend::past_disc{}, scene, memory);
}

// +1 when the course leaves the disc at (1, 0) on its right hand (goes left), -1 on its left, 0 otherwise.
template <wend::Number S>
int side(wend::Course<S> const& course) {
  auto const y = numbers::first(course.direction.y());
  return y > 0 ? 1 : y < 0 ? -1 : 0;
}

}  // namespace

TEST_CASE("past_disc is the direction to the nearest disc plus or minus pi/2, whichever is nearer the goal") {
  // By angles (common practice, no source): of the two candidates the one with the smaller turn to the goal.
  std::mt19937 random(5);
  auto const uniform = [&random] { return -3.0 + 6.0 * (static_cast<double>(random()) / 4294967296.0); };
  for (int i = 0; i < 500; ++i) {
    scenes::Scene<double> scene;
    scene.pose.position = {uniform(), uniform()};
    scene.goal = {uniform(), uniform()};
    scene.put(uniform(), uniform(), 0.2);
    wend::Percept<double, scenes::disc_count> const percept = scene.percept();
    Memory<double> memory;
    wend::Course<double> const course = wend::evaluate(wend::past_disc{}, percept, memory);
    wend::Vec2<double> const disc = scene.discs[0].centre - scene.pose.position;
    wend::Vec2<double> const goal = scene.goal - scene.pose.position;
    double const to_disc = std::atan2(disc.y(), disc.x());
    double const to_goal = std::atan2(goal.y(), goal.x());
    double const left = wend::wrap(to_disc + std::numbers::pi / 2.0);
    double const right = wend::wrap(to_disc - std::numbers::pi / 2.0);
    double const expected = std::abs(wend::turn(left, to_goal)) < std::abs(wend::turn(right, to_goal)) ? left : right;
    double const got = std::atan2(course.direction.y(), course.direction.x());
    CHECK(std::abs(wend::turn(expected, got)) < 1.0e-14);
    CHECK(course.confidence == 1.0);
  }
}

TEST_CASE_TEMPLATE("past_disc is at right angles to the direction of the nearest disc", S, WEND_TEST_NUMBERS) {
  for (int i = 0; i < 40; ++i) {
    scenes::Scene<S> scene = before_a_disc<S>(0.15F * static_cast<float>(i));
    scene.pose.position = {S(0.07F * static_cast<float>(i)), S(-0.4F)};
    Memory<S> memory;
    auto const percept = scene.percept();
    S const along = wend::dot(wend::evaluate(wend::past_disc{}, percept, memory).direction, percept.away);
    CHECK(numbers::first(along) == 0);  // a b - b a, exactly
  }
}

TEST_CASE_TEMPLATE("past_disc keeps its side while the goal's side changes", S, WEND_TEST_NUMBERS) {
  for (float const bearing : {0.4F, -0.4F}) {
    Memory<S> memory;
    int const entry = side(ask(before_a_disc<S>(bearing), memory));
    CHECK(entry == (bearing > 0.0F ? 1 : -1));
    for (int i = 0; i < 50; ++i) {
      CHECK(side(ask(before_a_disc<S>(i % 3 == 0 ? bearing : -bearing), memory)) == entry);
    }
    Memory<S> fresh;
    CHECK(side(ask(before_a_disc<S>(-bearing), fresh)) == -entry);
  }
}

TEST_CASE_TEMPLATE("past_disc breaks a tie by leaving the disc on the right hand", S, WEND_TEST_NUMBERS) {
  Memory<S> memory;
  CHECK(side(ask(before_a_disc<S>(0.0F), memory)) == 1);
  Memory<S> turned_round;  // the goal exactly opposite to the disc: a tie as well
  scenes::Scene<S> scene = before_a_disc<S>(0.0F);
  scene.goal = {S(-3.0F), S(0.0F)};
  CHECK(side(ask(scene, turned_round)) == 1);
}

TEST_CASE_TEMPLATE("past_disc keeps its side when another disc in much the same direction becomes the nearest", S,
                   WEND_TEST_NUMBERS) {
  Memory<S> memory;
  CHECK(side(ask(before_a_disc<S>(0.4F), memory)) == 1);
  scenes::Scene<S> scene = before_a_disc<S>(-0.4F);
  scene.pose.heading = {S(0.0F), S(-1.0F)};                // the nose would have the other side
  scene.put(S(0.5F), S(-0.6F), S(0.3F));         // 50 degrees to the right, and nearer
  wend::Course<S> const course = ask(scene, memory);
  CHECK(numbers::first(scene.percept().nearest.centre.y()) < 0);
  CHECK(numbers::first(wend::cross(course.direction, wend::Vec2<S>(scene.discs[1].centre))) < 0);  // on the right hand
}

TEST_CASE_TEMPLATE("past_disc takes the side of its nose when the nearest disc jumps to another flank", S,
                   WEND_TEST_NUMBERS) {
  for (float const nose : {1.0F, -1.0F}) {
    Memory<S> memory;
    CHECK(side(ask(before_a_disc<S>(0.4F), memory)) == 1);
    scenes::Scene<S> scene = before_a_disc<S>(0.4F);
    scene.put(S(0.2F), S(0.8F), S(0.3F));  // 76 degrees to the left, and nearer
    scene.pose.heading = {S(nose), S(0.0F)};
    wend::Course<S> const course = ask(scene, memory);
    CHECK(numbers::first(course.direction.x()) * numbers::first(S(nose)) > 0);
    // And kept in its turn, whatever nose and goal do.
    scene.pose.heading = {S(-nose), S(0.0F)};
    scene.goal = {S(0.0F), S(-3.0F)};
    CHECK(numbers::first(ask(scene, memory).direction.x()) == numbers::first(course.direction.x()));
  }
}

TEST_CASE("past_disc goes round a whole disc with it on the same hand") {
  // Follow the course at constant distance, corrected: the direction to the disc turns all the way round, slowly.
  scenes::Scene<double> scene;
  scene.put(1.0, 0.0, 0.3);
  scene.goal = {3.0, 0.5};
  Memory<double> memory;
  double turned = 0.0;
  for (int i = 0; i < 400; ++i) {
    auto const percept = scene.percept();
    wend::Course<double> const course = wend::evaluate(wend::past_disc{}, percept, memory);
    CHECK(wend::cross(course.direction, wend::Vec2<double>(-percept.away)) < -0.999);  // the disc on the right
    wend::Vec2<double> const next = scene.pose.position + 0.02 * course.direction;
    wend::Vec2<double> const from_disc = next - scene.discs[0].centre;
    turned += std::asin(wend::cross(percept.away, wend::Vec2<double>(from_disc / wend::length(from_disc))));
    scene.pose = {scene.discs[0].centre + from_disc / wend::length(from_disc), course.direction};
  }
  CHECK(std::abs(turned) > 2.0 * std::numbers::pi);
}

TEST_CASE_TEMPLATE("past_disc chooses anew after its guard has left and come back", S, WEND_TEST_NUMBERS) {
  constexpr auto policy =
      wend::guarded(wend::below(wend::clearance, 0.6F, 0.8F), wend::past_disc{}, wend::toward_goal{});
  wend::memory_t<decltype(policy), S> memory;
  scenes::Scene<S> scene = before_a_disc<S>(0.4F);
  CHECK(side(scenes::answer(policy, scene, memory)) == 1);
  scene = before_a_disc<S>(-0.4F);
  CHECK(side(scenes::answer(policy, scene, memory)) == 1);  // still the first side
  scene.pose.position = {S(-1.0F), S(0.0F)};
  (void)scenes::answer(policy, scene, memory);  // out
  scene.pose.position = {S(0.0F), S(0.0F)};
  CHECK(side(scenes::answer(policy, scene, memory)) == -1);
}

TEST_CASE_TEMPLATE("past_disc does not commit itself before it sees a disc", S, WEND_TEST_NUMBERS) {
  Memory<S> memory;
  scenes::Scene<S> nothing;
  nothing.goal = {S(0.0F), S(3.0F)};
  CHECK(numbers::first(ask(nothing, memory).confidence) == 0);
  scenes::Scene<S> centre;  // at the centre of a disc
  centre.put(S(0.0F), S(0.0F), S(0.3F));
  CHECK(numbers::first(ask(centre, memory).confidence) == 0);
  CHECK(side(ask(before_a_disc<S>(-0.4F), memory)) == -1);
  CHECK(side(ask(before_a_disc<S>(0.4F), memory)) == -1);
}
