#include <array>
#include <cmath>
#include <complex>
#include <cstddef>
#include <span>
#include <type_traits>

#include <doctest/doctest.h>

#include "../field_list.hpp"
#include "../numbers.hpp"
#include "wend/angle.hpp"
#include "wend/arbiters/blend.hpp"

namespace {

// Goal and nose: what these tests blend, since their angles can be set at will. The nose has confidence 0.75 here.
constexpr auto halves = wend::blend(wend::share(1.0F, wend::toward_goal{}), wend::share(1.0F, field_list::ahead{}));

// Straight along the nose, and sure of it.
struct along_nose {
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return wend::course_along(percept.pose.heading, S(1.0F));
  }
};

// Goal and nose at given angles (radians); one disc, at `clearance` metres straight along +x.
template <wend::Number S>
scenes::Scene<S> scene_with(double goal, double nose, float clearance = 10.0F) {
  scenes::Scene<S> scene;
  scene.goal = {S(static_cast<float>(std::cos(goal))), S(static_cast<float>(std::sin(goal)))};
  scene.pose.heading = {S(static_cast<float>(std::cos(nose))), S(static_cast<float>(std::sin(nose)))};
  scene.robot_radius = S(0.25F);
  scene.put(S(clearance + 0.75F), S(0.0F), S(0.5F));
  return scene;
}

std::complex<double> unit(double angle) { return std::polar(1.0, angle); }

template <wend::Number S>
std::complex<double> direction_of(wend::Course<S> const& course) {
  return {static_cast<double>(numbers::first(course.direction.x())),
          static_cast<double>(numbers::first(course.direction.y()))};
}
template <wend::Number S>
double confidence_of(wend::Course<S> const& course) {
  return static_cast<double>(numbers::first(course.confidence));
}

}  // namespace

TEST_CASE_TEMPLATE("a blend at the ends of its ramp is one field alone", S, WEND_TEST_NUMBERS) {
  constexpr auto policy = wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), along_nose{}, wend::toward_goal{});
  for (int i = 0; i < 30; ++i) {
    double const goal = 0.2 * i;
    double const nose = 1.3 - 0.37 * i;
    for (float const low : {-0.2F, 0.0F, 0.5F}) {
      auto const course = scenes::answer(policy, scene_with<S>(goal, nose, low));
      CHECK(std::abs(direction_of(course) - unit(nose)) < 3.0e-7);
      CHECK(confidence_of(course) > 1.0 - 3.0e-7);
    }
    for (float const high : {1.2F, 1.3F, 50.0F}) {
      auto const course = scenes::answer(policy, scene_with<S>(goal, nose, high));
      CHECK(std::abs(direction_of(course) - unit(goal)) < 1.0e-6);
      CHECK(confidence_of(course) > 1.0 - 1.0e-6);
    }
  }
}

TEST_CASE_TEMPLATE("in between it is the weighted sum of the two directions", S, WEND_TEST_NUMBERS) {
  constexpr auto policy = wend::blend(wend::ramp(wend::clearance, 0.5F, 1.5F), along_nose{}, wend::toward_goal{});
  for (int i = 0; i < 20; ++i) {
    for (int j = 1; j < 16; ++j) {
      double const goal = 0.31 * i;
      double const nose = 1.0 - 0.17 * i;
      float const clearance = 0.5F + 0.0625F * static_cast<float>(j);
      double const w = j / 16.0;
      std::complex<double> const sum = (1.0 - w) * unit(nose) + w * unit(goal);
      auto const course = scenes::answer(policy, scene_with<S>(goal, nose, clearance));
      CHECK(std::abs(confidence_of(course) - std::abs(sum)) < 1.0e-6);
      CHECK(std::abs(direction_of(course) * std::abs(sum) - sum) < 1.0e-6);
    }
  }
}

TEST_CASE_TEMPLATE("the confidence of two equal shares is the mean resultant length", S, WEND_TEST_NUMBERS) {
  // Mardia and Jupp (2000), Directional Statistics, eq. 2.2.4: the length of the mean of the unit vectors. For two
  // angles it is |cos(difference / 2)|; also against this project's circular_mean, which is checked elsewhere.
  constexpr auto policy = wend::blend(wend::share(1.0F, along_nose{}), wend::share(1.0F, wend::toward_goal{}));
  for (int i = 0; i < 63; ++i) {
    double const nose = 0.4;
    double const goal = 0.4 + 0.1 * i;
    auto const course = scenes::answer(policy, scene_with<S>(goal, nose));
    CHECK(std::abs(confidence_of(course) - std::abs(std::cos((goal - nose) / 2.0))) < 3.0e-7);
    std::array<double, 2> const angles{nose, goal};
    wend::CircularMean<double> const mean = wend::circular_mean(std::span<double const>(angles));
    CHECK(std::abs(confidence_of(course) - mean.resultant_length) < 3.0e-7);
    CHECK(std::abs(direction_of(course) - unit(mean.direction)) * mean.resultant_length < 3.0e-7);
  }
}

TEST_CASE_TEMPLATE("fields that cancel leave no opinion", S, WEND_TEST_NUMBERS) {
  // The goal straight behind the disc: away and toward are opposite, to the last bit.
  constexpr auto policy =
      wend::blend(wend::share(1.0F, wend::away_from_discs{}), wend::share(1.0F, wend::toward_goal{}));
  auto const course = scenes::answer(policy, scene_with<S>(0.0, 0.0, 1.0F));
  CHECK(confidence_of(course) == 0.0);
  CHECK(direction_of(course) == 0.0);
  constexpr auto ramped =
      wend::blend(wend::ramp(wend::clearance, 0.5F, 1.5F), wend::away_from_discs{}, wend::toward_goal{});
  CHECK(confidence_of(scenes::answer(ramped, scene_with<S>(0.0, 0.0, 1.0F))) == 0.0);
  CHECK(direction_of(scenes::answer(ramped, scene_with<S>(0.0, 0.0, 0.75F))) == -1.0);
  CHECK(confidence_of(scenes::answer(ramped, scene_with<S>(0.0, 0.0, 0.75F))) == 0.5);
}

TEST_CASE_TEMPLATE("a field without an opinion leaves the direction to the other and its share to nobody", S,
                   WEND_TEST_NUMBERS) {
  constexpr auto policy = wend::blend(wend::share(3.0F, wend::no_opinion{}), wend::share(1.0F, wend::toward_goal{}));
  auto const course = scenes::answer(policy, scene_with<S>(0.0, 2.0));
  CHECK(direction_of(course) == 1.0);
  CHECK(confidence_of(course) == 0.25);
}

TEST_CASE_TEMPLATE("three shares are the weighted mean of three vectors, whatever the scale of the weights", S,
                   WEND_TEST_NUMBERS) {
  // Away from the disc is -x with confidence 1; ahead has confidence 0.75.
  for (float const scale : {1.0F, 0.01F, 1.0e6F}) {
    auto const policy = wend::blend(wend::share(1.0F * scale, wend::toward_goal{}),
                                    wend::share(2.0F * scale, field_list::ahead{}),
                                    wend::share(0.5F * scale, wend::away_from_discs{}));
    auto const reordered = wend::blend(wend::share(0.5F * scale, wend::away_from_discs{}),
                                       wend::share(1.0F * scale, wend::toward_goal{}),
                                       wend::share(2.0F * scale, field_list::ahead{}));
    for (int i = 0; i < 40; ++i) {
      double const goal = 0.3 * i;
      double const nose = 2.0 - 0.13 * i;
      std::complex<double> const mean = (1.0 * unit(goal) + 2.0 * 0.75 * unit(nose) - 0.5) / 3.5;
      for (auto const& course :
           {scenes::answer(policy, scene_with<S>(goal, nose)), scenes::answer(reordered, scene_with<S>(goal, nose))}) {
        CHECK(std::abs(confidence_of(course) - std::abs(mean)) < 5.0e-7);
        CHECK(std::abs(direction_of(course) * std::abs(mean) - mean) < 1.0e-6);
      }
    }
  }
}

TEST_CASE("weights of zero leave a field out, and a single share is the field itself") {
  auto const scene = scene_with<double>(0.5, 2.0);
  auto const without = wend::blend(wend::share(0.0F, field_list::ahead{}), wend::share(1.0F, wend::toward_goal{}));
  CHECK(std::abs(direction_of(scenes::answer(without, scene)) - unit(0.5)) < 1.0e-7);
  static_assert(std::is_same_v<decltype(wend::blend(wend::share(2.0F, along_nose{}))), along_nose>);
  CHECK(confidence_of(scenes::answer(halves, scene_with<double>(2.0, 2.0))) == doctest::Approx(0.875));
}

TEST_CASE_TEMPLATE("a ramp is 0 at its low end, 1 at its high end, straight in between, 0 when broken", S,
                   WEND_TEST_NUMBERS) {
  constexpr auto weight = wend::ramp(wend::goal_distance, 0.5F, 1.2F);
  auto const at = [&weight](float distance) {
    scenes::Scene<S> scene;
    scene.goal = {S(distance), S(0.0F)};
    return static_cast<double>(numbers::first(weight(scene.percept())));
  };
  CHECK(at(0.0F) == 0.0);
  CHECK(at(0.5F) == 0.0);
  CHECK(std::abs(at(1.2F) - 1.0) < 1.2e-7);
  CHECK(at(1.3F) == 1.0);
  for (float const x : {0.6F, 0.85F, 1.1F}) {
    CHECK(std::abs(at(x) - (static_cast<double>(x) - 0.5) / 0.7) < 2.0e-7);
  }
  CHECK(at(scenes::nan) == 0.0);
  CHECK(at(scenes::infinity) == 1.0);
}

TEST_CASE("a ramp in double has the precision of double, although its ends are single") {
  constexpr auto weight = wend::ramp(wend::goal_distance, 0.5F, 1.2F);
  double const low = static_cast<double>(0.5F);
  double const high = static_cast<double>(1.2F);
  for (double const w : {0.1, 0.4, 0.7, 1.0}) {
    scenes::Scene<double> scene;
    scene.goal = {low + w * (high - low), 0.0};
    CHECK(std::abs(weight(scene.percept()) - w) < 1.0e-15);
  }
}

TEST_CASE_TEMPLATE("a blend of broken directions has no opinion", S, WEND_TEST_NUMBERS) {
  auto scene = scene_with<S>(0.0, 0.0);
  scene.pose.position = {S(scenes::nan), S(0.0F)};
  auto const course = scenes::answer(halves, scene);
  CHECK(confidence_of(course) == 0.375);  // half a share of the nose, which is still known
  scene.pose.heading = {S(scenes::nan), S(0.0F)};
  CHECK(confidence_of(scenes::answer(halves, scene)) == 0.0);
  CHECK(direction_of(scenes::answer(halves, scene)) == 0.0);
}

namespace {

// Along the nose with a share of the speed.
struct slowly {
  wend::Parameter share;
  template <wend::Number S, int N>
  [[nodiscard]] constexpr wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return wend::course_along(percept.pose.heading, S(1.0F), S(share));
  }
};

}  // namespace

TEST_CASE_TEMPLATE("a blend weighs the speeds its fields want as it weighs their directions", S, WEND_TEST_NUMBERS) {
  auto const share = [](auto const& policy, float clearance) {
    return static_cast<double>(numbers::first(scenes::answer(policy, scene_with<S>(0.3, 0.3, clearance)).speed_share));
  };
  constexpr auto ramped = wend::blend(wend::ramp(wend::clearance, 0.5F, 1.5F), slowly{0.25F}, slowly{0.75F});
  CHECK(share(ramped, 0.4F) == 0.25);
  CHECK(share(ramped, 1.0F) == doctest::Approx(0.5).epsilon(1e-6));
  CHECK(share(ramped, 2.0F) == 0.75);
  constexpr auto in_shares = wend::blend(wend::share(1.0F, slowly{0.0F}), wend::share(3.0F, slowly{1.0F}));
  CHECK(share(in_shares, 1.0F) == 0.75);
  constexpr auto full = wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), along_nose{}, wend::toward_goal{});
  for (int i = 0; i < 50; ++i) {
    CHECK(share(full, 0.03F * static_cast<float>(i)) == 1.0);  // exactly: firmware counts on the same bits
  }
}
