#include <cmath>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/sector_histogram.hpp"

namespace {

constexpr wend::sector_histogram<36> field;

template <wend::Number S>
double confidence(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.confidence));
}
template <wend::Number S>
double angle(wend::Course<S> const& course) {  // degrees
  return std::atan2(static_cast<double>(numbers::first(course.direction.y())),
                    static_cast<double>(numbers::first(course.direction.x()))) *
         57.29577951308232;
}
template <wend::Number S>
scenes::Scene<S> bound_ahead() {
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(0.0F)};
  return scene;
}

}  // namespace

TEST_CASE_TEMPLATE("sector_histogram goes to the goal, not to a sector, where nothing is in the way", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(3.0F), S(0.2F)};
  CHECK(angle(scenes::answer(field, scene)) == doctest::Approx(3.81407).epsilon(1e-5));  // atan(0.2 / 3)
  CHECK(confidence(scenes::answer(field, scene)) == 1.0);
  CHECK(numbers::all<S>(scenes::answer(field, scene).speed_share >= S(1.0F)));
}

TEST_CASE_TEMPLATE("sector_histogram goes round a disc in the way, half a wide valley off its edge", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene = bound_ahead<S>();
  scene.put(S(0.7F), S(0.0F), S(0.1F));
  // By hand: grown to 0.35 m at 0.7 m the disc covers 30 degrees to each side, so sectors -3 to 3 (their edges reach to
  // 25 degrees) and, by half a sector more, no further than 35 degrees: sector 4 begins right there. Its density is
  // 1 - 0.4 / 1.5 = 0.73; smoothed over one neighbour sector 4 has a quarter of it, 0.18: open. Four sectors off the
  // border at 4 is sector 8, 80 degrees; on either side, and the tie goes to the left, which is asked first.
  CHECK(angle(scenes::answer(field, scene)) == doctest::Approx(80.0).epsilon(1e-5));
  scene.goal = {S(3.0F), S(-0.1F)};
  CHECK(angle(scenes::answer(field, scene)) == doctest::Approx(-80.0).epsilon(1e-5));
}

TEST_CASE_TEMPLATE("sector_histogram takes the middle of a narrow valley", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene = bound_ahead<S>();
  scene.goal = {S(2.0F), S(0.3F)};
  scene.put(S(0.8F), S(0.6F), S(0.05F));
  scene.put(S(0.8F), S(-0.6F), S(0.05F));
  CHECK(angle(scenes::answer(field, scene)) == doctest::Approx(0.0).epsilon(1e-5));
}

TEST_CASE_TEMPLATE("sector_histogram turns with the machine: its sectors begin at the nose", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene = bound_ahead<S>();
  scene.pose.heading = {S(std::cos(0.03F)), S(std::sin(0.03F))};
  scene.put(S(0.7F), S(0.0F), S(0.1F));
  double const off = (angle(scenes::answer(field, scene)) - 0.03 * 57.29577951308232) / 10.0;
  CHECK(std::abs(off - std::round(off)) < 1.0e-4);
  CHECK(std::abs(off) > 5.0);
}

TEST_CASE_TEMPLATE("sector_histogram has no opinion on the goal, at a disc's centre, nor shut in all round", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> on_goal;
  on_goal.goal = on_goal.pose.position;
  CHECK(confidence(scenes::answer(field, on_goal)) == 0.0);

  scenes::Scene<S> centre = bound_ahead<S>();
  centre.put(S(0.0F), S(0.0F), S(0.3F));
  CHECK(confidence(scenes::answer(field, centre)) == 0.0);

  scenes::Scene<S> shut = bound_ahead<S>();
  for (int i = 0; i < 4; ++i) {
    shut.put(S(i % 2 == 0 ? 0.6F : -0.6F), S(i < 2 ? 0.6F : -0.6F), S(0.5F));
  }
  CHECK(confidence(scenes::answer(field, shut)) == 0.0);
}

TEST_CASE_TEMPLATE("sector_histogram inside a disc sees the way back as open", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> inside = bound_ahead<S>();
  inside.put(S(0.3F), S(0.0F), S(0.3F));
  auto const course = scenes::answer(field, inside);
  CHECK(confidence(course) == 1.0);
  CHECK(std::abs(angle(course)) > 90.0);
  CHECK(numbers::all<S>(course.speed_share <= S(0.2F)));
}

TEST_CASE_TEMPLATE("sector_histogram counts discs at one place together", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene = bound_ahead<S>();
  scene.put(S(1.4F), S(0.0F), S(0.1F));  // density 0.27 on its own
  auto const one = field.densities(scene.percept());
  for (int i = 1; i < scenes::disc_count; ++i) {
    scene.put(S(1.4F), S(0.0F), S(0.1F));
  }
  auto const four = field.densities(scene.percept());
  CHECK(numbers::first(one[0]) == doctest::Approx(0.266667).epsilon(1e-5));
  CHECK(numbers::first(four[0]) == doctest::Approx(4.0 * 0.266667).epsilon(1e-5));
}

TEST_CASE("sectors may be few or many") {
  scenes::Scene<double> scene = bound_ahead<double>();
  scene.put(0.7, 0.05, 0.1);
  // 45 degrees wide they are all but shut: the disc reaches into three, and no smoothing is wanted.
  auto const few = scenes::answer(wend::sector_histogram<8>{.smoothing = 0}, scene);
  CHECK(few.confidence == 1.0);
  CHECK(std::abs(angle(few)) == doctest::Approx(135.0));
  // 5 degrees wide: the disc's right edge is at -26 degrees, and its border with smoothing at -30 or a sector on; half
  // a wide valley is 9 sectors.
  CHECK(std::abs(angle(scenes::answer(wend::sector_histogram<72>{}, scene)) - -75.0) < 5.1);
}
