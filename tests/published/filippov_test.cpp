// Sliding along a switch: Filippov (1988), Differential Equations with Discontinuous Righthand Sides, chapter 2,
// section 4 (from memory): on the surface between f- and f+ the motion is alpha f+ + (1 - alpha) f- with alpha = f-_N /
// (f-_N - f+_N), which is tangent to it.
#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/arbiters/sliding.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/toward_goal.hpp"

namespace {

using scenes::told;

constexpr float threshold = 0.4F;
constexpr auto along = wend::sliding(threshold, 0.1F, wend::away_from_discs{}, wend::toward_goal{});

// A disc of 0.5 m at the origin, a machine of 0.2 m at a bearing from it and with a clearance, a goal far behind the
// disc.
scenes::Scene<double> scene_at(double bearing, double clearance) {
  scenes::Scene<double> scene;
  scene.robot_radius = 0.2;
  scene.put(0.0, 0.0, 0.5);
  double const r = 0.7 + clearance;
  scene.pose.position = {r * std::cos(bearing), r * std::sin(bearing)};
  scene.goal = {50.0, 0.0};
  return scene;
}

wend::Vec2<double> velocity(wend::Course<double> const& course) { return course.direction * course.confidence; }

}  // namespace

TEST_CASE("in the layer the motion is Filippov's, along the disc") {
  double const exact = static_cast<double>(threshold);
  for (double bearing = 1.7; bearing < 3.1; bearing += 0.05) {  // behind the disc: the goal pulls into it
    auto const scene = scene_at(bearing, exact);
    wend::Vec2<double> const normal = scene.pose.position.normalized();
    wend::Vec2<double> const goal = (scene.goal - scene.pose.position).normalized();
    double const low_n = 1.0;  // away_from_discs is along the normal
    double const high_n = normal.dot(goal);
    REQUIRE(high_n < 0.0);
    double const alpha = low_n / (low_n - high_n);
    wend::Vec2<double> const expected = alpha * goal + (1.0 - alpha) * normal;
    wend::Vec2<double> const found = velocity(scenes::answer(along, scene));
    CHECK((found - expected).norm() < 1.0e-12);
    CHECK(std::abs(found.dot(normal)) < 1.0e-12);  // tangent
  }
}

TEST_CASE("a case worked by hand") {
  // Away is north. Below drives north, (0, 1), at half the speed; above (4/5, -3/5), at all of it: alpha = 1 / (1 +
  // 3/5) = 5/8, and the motion 5/8 (4/5, -3/5) + 3/8 (0, 1) = (1/2, 0).
  scenes::Scene<double> const scene = scene_at(1.5707963267948966, static_cast<double>(threshold));
  constexpr auto by_hand = wend::sliding(threshold, 0.1F, told{0.0F, 1.0F, 1.0F, 0.5F}, told{4.0F, -3.0F});
  wend::Course<double> const course = scenes::answer(by_hand, scene);
  CHECK(velocity(course).x() == doctest::Approx(0.5).epsilon(1.0e-12));
  CHECK(std::abs(velocity(course).y()) < 1.0e-12);
  CHECK(course.speed_share == doctest::Approx(3.0 / 8.0 * 0.5 + 5.0 / 8.0).epsilon(1.0e-12));
  // Below is half as sure: alpha = 1/2 / (1/2 + 3/5) = 5/11, and the motion (4/11, 0).
  constexpr auto unsure = wend::sliding(threshold, 0.1F, told{0.0F, 1.0F, 0.5F}, told{4.0F, -3.0F});
  CHECK(velocity(scenes::answer(unsure, scene)).x() == doctest::Approx(4.0 / 11.0).epsilon(1.0e-12));
  CHECK(std::abs(velocity(scenes::answer(unsure, scene)).y()) < 1.0e-12);
  // Above is a third as sure: alpha = 1 / (1 + 1/5) = 5/6, and the motion 5/6 (4/15, -1/5) + 1/6 (0, 1) = (2/9, 0).
  constexpr auto faint = wend::sliding(threshold, 0.1F, told{0.0F, 1.0F}, told{4.0F, -3.0F, 1.0F / 3.0F});
  CHECK(velocity(scenes::answer(faint, scene)).x() == doctest::Approx(2.0 / 9.0).epsilon(1.0e-6));
  CHECK(std::abs(velocity(scenes::answer(faint, scene)).y()) < 1.0e-7);
}

TEST_CASE("off the middle of the layer the motion leans back to it, and out of the layer the side decides") {
  // Below drives north and east, (3/5, 4/5), above south, (0, -1): alpha = 4/5 / (4/5 + 1) = 4/9; or below hardly out,
  // (12/13, 5/13): alpha = 5/18; or above hardly in, (12/13, -5/13): alpha = 13/18. So neither alpha is 0 or 1 where
  // the layer ends.
  struct Pair {
    told below;
    told above;
    double alpha;
  };
  for (Pair const& pair : {Pair{{3.0F, 4.0F}, {0.0F, -1.0F}, 4.0 / 9.0}, Pair{{12.0F, 5.0F}, {0.0F, -1.0F}, 5.0 / 18.0},
                           Pair{{0.0F, 1.0F}, {12.0F, -5.0F}, 13.0 / 18.0}}) {
    auto const policy = wend::sliding(threshold, 0.1F, pair.below, pair.above);
    double const width = static_cast<double>(0.1F);
    for (int tenths = -7; tenths <= 7; ++tenths) {
      if (std::abs(tenths) == 5) {
        continue;  // the very edge of the layer
      }
      CAPTURE(pair.alpha);
      double const off = tenths / 10.0;
      auto const scene = scene_at(1.5707963267948966, static_cast<double>(threshold) + off * width);
      bool const inside = std::abs(tenths) < 5;
      double const alpha = inside ? std::clamp(pair.alpha + off, 0.0, 1.0) : off < 0.0 ? 0.0 : 1.0;
      wend::Vec2<double> const expected = (1.0 - alpha) * velocity(scenes::answer(pair.below, scene)) +
                                          alpha * velocity(scenes::answer(pair.above, scene));
      wend::Vec2<double> const found = velocity(scenes::answer(policy, scene));
      CAPTURE(off);
      CHECK((found - expected).norm() < 1.0e-12);
      CHECK(found.y() * off <= 1.0e-12);  // never farther out
    }
  }
}

TEST_CASE("hard switching ever faster comes to the same motion") {
  constexpr auto hard =
      wend::guarded(wend::below(wend::clearance, threshold, threshold), wend::away_from_discs{}, wend::toward_goal{});
  double const bearing = 2.4;
  auto const mean_velocity = [&](double step) {
    auto scene = scene_at(bearing, static_cast<double>(threshold));
    wend::memory_t<decltype(hard), double> memory;
    int const steps = static_cast<int>(0.01 / step);  // a centimetre's worth of time
    wend::Vec2<double> const from = scene.pose.position;
    for (int i = 0; i < steps; ++i) {
      scene.pose.position += step * velocity(scenes::answer(hard, scene, memory));
    }
    return wend::Vec2<double>((scene.pose.position - from) / (steps * step));
  };
  wend::Vec2<double> const sliding = velocity(scenes::answer(along, scene_at(bearing, static_cast<double>(threshold))));
  double const coarse = (mean_velocity(1.0e-4) - sliding).norm();
  double const fine = (mean_velocity(1.0e-6) - sliding).norm();
  CHECK(coarse < 0.05);
  CHECK(fine < 0.01);
  CHECK(fine < coarse);
}

TEST_CASE("a machine that follows it stays in the layer, and goes round the disc") {
  auto scene = scene_at(2.9, 0.8);
  double least = 1.0e9;
  double most_in_layer = 0.0;
  bool reached = false;
  for (int i = 0; i < 40000 && scene.pose.position.x() < 2.0; ++i) {
    auto const percept = scene.percept();
    if (percept.clearance < 0.44) {
      reached = true;
    }
    if (reached && scene.pose.position.x() < 0.0) {
      least = std::min(least, percept.clearance);
      most_in_layer = std::max(most_in_layer, percept.clearance);
    }
    scene.pose.position += 0.001 * scenes::answer(along, scene).direction;
  }
  CHECK(reached);
  CHECK(scene.pose.position.x() >= 2.0);
  CHECK(least > 0.35 - 0.002);
  CHECK(most_in_layer < 0.45 + 0.002);
}

TEST_CASE("where the two do not drive against each other the side decides") {
  for (double const clearance : {0.36, 0.39, 0.41, 0.44}) {  // beside the goal's side of the disc: both lead out
    auto const scene = scene_at(0.3, clearance);
    wend::Course<double> const course = scenes::answer(along, scene);
    wend::Course<double> const expected = clearance < 0.4 ? scenes::answer(wend::away_from_discs{}, scene)
                                                          : scenes::answer(wend::toward_goal{}, scene);
    CHECK((course.direction - expected.direction).norm() < 1e-15);
  }
  CHECK((scenes::answer(along, scene_at(2.5, 0.2)).direction -
         scenes::answer(wend::away_from_discs{}, scene_at(2.5, 0.2)).direction)
            .norm() < 1e-15);
  CHECK((scenes::answer(along, scene_at(2.5, 0.6)).direction -
         scenes::answer(wend::toward_goal{}, scene_at(2.5, 0.6)).direction)
            .norm() < 1e-15);
}

TEST_CASE("two that are exactly opposed cancel in the layer, and there is no opinion") {
  auto scene = scene_at(0.0, static_cast<double>(threshold));
  scene.goal = {-50.0, 0.0};  // straight through the disc
  CHECK(scenes::answer(along, scene).confidence < 1.0e-12);
  scenes::Scene<double> empty;
  empty.goal = {1.0, 0.0};
  CHECK(scenes::answer(along, empty).direction.x() == 1.0);  // no disc: far over the threshold
  scene.pose.position = {0.0, 0.0};  // at the centre: the goal's field has the say of none
  CHECK(scenes::answer(along, scene).confidence == 0.0);
}
