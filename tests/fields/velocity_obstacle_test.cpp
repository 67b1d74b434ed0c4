#include <algorithm>
#include <cmath>
#include <random>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/fields/velocity_cone.hpp"
#include "wend/fields/velocity_obstacle.hpp"

namespace {

constexpr wend::velocity_obstacle field{.speed = 0.5F, .margin = 0.05F, .reserve = 0.0F};

template <wend::Number S>
double confidence(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.confidence));
}
template <wend::Number S>
wend::Vec2<double> direction(wend::Course<S> const& course) {
  return {static_cast<double>(numbers::first(course.direction.x())),
          static_cast<double>(numbers::first(course.direction.y()))};
}

// The goal 2 m straight ahead.
template <wend::Number S, int N = scenes::disc_count>
scenes::Scene<S, N> bound_ahead() {
  scenes::Scene<S, N> scene;
  scene.goal = {S(2.0F), S(0.0F)};
  return scene;
}

}  // namespace

TEST_CASE_TEMPLATE("velocity_obstacle goes straight to the goal when nothing is in the way", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(4.0F)};
  CHECK(direction(scenes::answer(field, scene)).x() == doctest::Approx(0.6).epsilon(1e-6));
  CHECK(confidence(scenes::answer(field, scene)) == 1.0);
  scene.put(S(-0.5F), S(-0.5F), S(0.2F));                    // behind
  scene.put(S(-1.0F), S(3.0F), S(0.2F), S(-0.5F), S(0.0F));  // goes away
  CHECK(direction(scenes::answer(field, scene)).x() == doctest::Approx(0.6).epsilon(1e-6));
  CHECK(confidence(scenes::answer(field, scene)) == 1.0);

  scenes::Scene<S> behind_goal;  // the goal is reached after 2 s, the disc would be after 3
  behind_goal.goal = {S(0.6F), S(0.8F)};
  behind_goal.put(S(1.2F), S(1.6F), S(0.2F));
  CHECK(direction(scenes::answer(field, behind_goal)).x() == doctest::Approx(0.6).epsilon(1e-6));
  behind_goal.goal = {S(1.2F), S(1.6F)};  // on the disc
  CHECK(direction(scenes::answer(field, behind_goal)).x() != doctest::Approx(0.6).epsilon(1e-2));
}

TEST_CASE_TEMPLATE("velocity_obstacle has no opinion on the goal", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = scene.pose.position;
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);
  scene.put(S(0.6F), S(0.0F), S(0.3F), S(-0.5F), S(0.0F));
  CHECK(confidence(scenes::answer(field, scene)) == 0.0);
  CHECK(wend::length(direction(scenes::answer(field, scene))) == 0.0);
}

TEST_CASE_TEMPLATE("velocity_obstacle gets out of an overlap, but not out of a disc's very centre", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> inside = bound_ahead<S>();
  inside.put(S(0.1F), S(0.05F), S(0.3F));
  auto const course = scenes::answer(field, inside);
  CHECK(confidence(course) == 1.0);
  // Any direction that does not go deeper, and of these the nearest to the goal's: along the disc's edge.
  CHECK(std::abs(wend::dot(direction(course), wend::Vec2<double>{0.1, 0.05})) < 1.0e-6);
  CHECK(direction(course).x() > 0.0);

  scenes::Scene<S> centre = bound_ahead<S>();  // where every way is a way out
  centre.put(S(0.0F), S(0.0F), S(0.3F));
  CHECK(direction(scenes::answer(field, centre)).x() == 1.0);
}

TEST_CASE_TEMPLATE("velocity_obstacle is not shaken by many discs at one place", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> one = bound_ahead<S>();
  one.put(S(1.0F), S(0.1F), S(0.3F));
  scenes::Scene<S> four = bound_ahead<S>();
  for (int i = 0; i < scenes::disc_count; ++i) {
    four.put(S(1.0F), S(0.1F), S(0.3F));
  }
  CHECK(wend::length(wend::Vec2<double>(direction(scenes::answer(field, one)) -
                                        direction(scenes::answer(field, four)))) < 1.0e-6);
  CHECK(direction(scenes::answer(field, one)).y() < 0.0);
}

TEST_CASE_TEMPLATE("velocity_obstacle at a speed of zero sees no way into a disc, and no way out", S,
                   WEND_TEST_NUMBERS) {
  constexpr wend::velocity_obstacle standing{.speed = 0.0F, .margin = 0.05F, .reserve = 0.0F};
  scenes::Scene<S> scene = bound_ahead<S>();
  scene.put(S(1.0F), S(0.0F), S(0.3F));
  CHECK(confidence(scenes::answer(standing, scene)) == 1.0);  // nobody moves, so nobody touches
  CHECK(direction(scenes::answer(standing, scene)).x() == 1.0);
  scenes::Scene<S> rammed = bound_ahead<S>();
  rammed.put(S(1.0F), S(0.0F), S(0.3F), S(-0.5F), S(0.0F));
  auto const course = scenes::answer(standing, rammed);  // contact after (1 - 0.55) / 0.5 = 0.9 s of 4
  CHECK(confidence(course) == doctest::Approx(0.9 / 4.0).epsilon(1e-3));
  CHECK(numbers::first(course.speed_share) == numbers::first(course.confidence));
}

TEST_CASE_TEMPLATE("velocity_obstacle takes the longest time when discs close in from all sides", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S, 12> ring = bound_ahead<S, 12>();
  for (int i = 0; i < 12; ++i) {
    float const angle = 0.5235988F * static_cast<float>(i);
    float const far = i == 5 ? 1.2F : 1.0F;
    ring.put(S(far * std::cos(angle)), S(far * std::sin(angle)), S(0.3F), S(-0.3F * std::cos(angle)),
             S(-0.3F * std::sin(angle)));
  }
  auto const course = scenes::answer(field, ring);
  CHECK(confidence(course) < 0.5);
  CHECK(confidence(course) > 0.0);
  CHECK(wend::dot(direction(course), wend::Vec2<double>{-0.866, 0.5}) > 0.9);  // towards the one farthest off
}

TEST_CASE_TEMPLATE("velocity_obstacle runs from a disc that is too large and too fast to be dodged", S,
                   WEND_TEST_NUMBERS) {
  constexpr wend::velocity_obstacle slow{.speed = 0.3F, .margin = 0.0F, .reserve = 0.0F};
  scenes::Scene<S> scene = bound_ahead<S>();
  scene.put(S(2.0F), S(0.0F), S(1.0F), S(-1.0F), S(0.0F));
  auto const course = scenes::answer(slow, scene);
  CHECK(direction(course).x() == -1.0);
  CHECK(confidence(course) == doctest::Approx(0.8 / 0.7 / 4.0).epsilon(1e-3));  // 0.8 m at 0.7 m/s, of 4 s
}

TEST_CASE("velocity_obstacle takes a disc that moves larger by its way in the reserve") {
  scenes::Scene<double> moving;
  moving.goal = {6.0, 0.0};
  moving.put(2.0, 0.5, 0.3, 0.0, -0.25);
  scenes::Scene<double> larger = moving;
  larger.discs = {};
  larger.put(2.0, 0.5, 0.3 + 0.25 * 0.4, 0.0, -0.25);
  wend::velocity_obstacle const with{.speed = 0.5F, .margin = 0.05F, .reserve = 0.4F};
  auto const a = scenes::answer(with, moving).direction;
  auto const b = scenes::answer(field, larger).direction;
  CHECK(wend::length(wend::Vec2<double>(a - b)) < 1.0e-6);
  CHECK(wend::length(wend::Vec2<double>(a - scenes::answer(field, moving).direction)) > 0.01);
}

TEST_CASE("a machine that keeps its set speed crosses among carts that do not give way, without a contact") {
  std::mt19937 random(5);
  auto const between = [&random](double low, double high) {
    return low + (high - low) * (static_cast<double>(random()) / 4294967296.0);
  };
  int arrived = 0, touched = 0, straight_touched = 0;
  for (int run = 0; run < 200; ++run) {
    scenes::Scene<double, 5> start;
    start.goal = {8.0, 0.0};
    start.robot_radius = 0.2;
    for (int i = 0; i < 5; ++i) {
      double const side = i % 2 == 0 ? 1.0 : -1.0;
      double const x = between(1.5, 7.0);
      double const y = side * between(1.5, 4.0);
      start.put(x, y, 0.25, between(-0.15, 0.15), -side * between(0.15, 0.4));
    }
    for (bool const dodges : {true, false}) {
      scenes::Scene<double, 5> now = start;
      double least = 1.0e9;
      for (double t = 0.0; t < 40.0 && wend::length(wend::Vec2<double>(now.goal - now.pose.position)) > 0.1;
           t += 0.05) {
        auto const course = dodges ? scenes::answer(field, now) : scenes::answer(wend::toward_goal{}, now);
        now.pose.position += 0.05 * 0.5 * course.speed_share * course.direction;
        now.discs = {};
        for (int i = 0; i < 5; ++i) {
          wend::Vec2<double> const velocity = start.discs.velocities()[i];
          now.discs.add({start.discs[i].centre + (t + 0.05) * velocity, 0.25}, velocity);
        }
        least = std::min(least, now.percept().clearance);
      }
      if (dodges) {
        arrived += wend::length(wend::Vec2<double>(now.goal - now.pose.position)) < 0.11 ? 1 : 0;
        touched += least < 0.0 ? 1 : 0;
      } else {
        straight_touched += least < 0.0 ? 1 : 0;
      }
    }
  }
  MESSAGE("of 200: ", touched, " touched, straight on ", straight_touched);
  CHECK(arrived == 200);
  CHECK(touched == 0);
  CHECK(straight_touched > 80);
}

TEST_CASE("times of contact at their degenerate points") {
  using Vec = wend::Vec2<float>;
  auto const when = [](Vec const& offset, float radius, Vec const& relative) {
    return wend::contact_time(offset, radius, relative);
  };
  CHECK(when({2.0F, 0.0F}, 0.5F, {0.5F, 0.0F}) == 3.0F);
  CHECK(when({2.0F, 0.0F}, 0.5F, {0.0F, 0.0F}) == wend::far_away);   // nobody moves
  CHECK(when({2.0F, 0.0F}, 0.5F, {-0.5F, 0.0F}) == wend::far_away);  // away
  CHECK(when({0.3F, 0.0F}, 0.5F, {0.5F, 0.0F}) == 0.0F);             // overlapping, closing in
  CHECK(when({0.3F, 0.0F}, 0.5F, {-0.5F, 0.0F}) == wend::far_away);  // overlapping, parting
  CHECK(when({0.5F, 0.0F}, 0.5F, {0.0F, 1.0F}) == wend::far_away);   // touching, along the tangent
  CHECK(when({0.0F, 0.0F}, 0.5F, {1.0F, 0.0F}) == wend::far_away);   // every way leads out of the centre
  CHECK(when({2.0F, 0.0F}, 0.0F, {0.5F, 0.0F}) == 4.0F);             // two points
  CHECK(when({2.0F, scenes::nan}, 0.5F, {0.5F, 0.0F}) == 0.0F);
  CHECK(when({2.0F, 0.0F}, scenes::nan, {0.5F, 0.0F}) == 0.0F);
  auto const edge = wend::velocity_cone(Vec{0.2F, 0.0F}, 0.5F);  // overlapping: a half-plane
  CHECK(edge.left == Vec(0.0F, 1.0F));
  CHECK(edge.right == Vec(0.0F, -1.0F));
  CHECK(edge.cosine == 0.0F);
}
