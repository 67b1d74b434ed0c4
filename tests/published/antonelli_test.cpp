// Null-space priority: Antonelli, Arrichiello and Chiaverini (2008), The null-space-based behavioral control for
// autonomous robotic systems, Intelligent Service Robotics 1:27-39 (from memory): v = v1 + (I - J^+ J) v2, in
// matrices.
#include <algorithm>
#include <cmath>
#include <random>

#include <doctest/doctest.h>
#include <Eigen/Core>

#include "../scenes.hpp"
#include "wend/arbiters/null_space.hpp"

namespace {

using scenes::told;

wend::Vec2<double> velocity(wend::Course<double> const& course) { return course.direction * course.confidence; }

}  // namespace

TEST_CASE("null_space is v1 + (I - J^+ J) v2, as far as a confidence goes") {
  std::mt19937 random(5);
  std::uniform_real_distribution<float> any(-1.0F, 1.0F);
  std::uniform_real_distribution<float> sure(0.05F, 0.65F);  // lengths of two that are across stay under 1
  scenes::Scene<double> const scene;
  for (int k = 0; k < 1000; ++k) {
    told const first{any(random), any(random), sure(random)};
    told const second{any(random), any(random), sure(random)};
    wend::Vec2<double> const v1 = velocity(scenes::answer(first, scene));
    wend::Vec2<double> const v2 = velocity(scenes::answer(second, scene));
    Eigen::Matrix<double, 1, 2> const jacobian = v1.normalized().transpose();
    // The right pseudo-inverse of a full row: J^T (J J^T)^-1.
    Eigen::Vector2d const inverse = jacobian.transpose() / jacobian.squaredNorm();
    Eigen::Matrix2d const null = Eigen::Matrix2d::Identity() - inverse * jacobian;
    wend::Vec2<double> const expected = v1 + null * v2;
    wend::Vec2<double> const found = velocity(scenes::answer(wend::null_space(first, second), scene));
    CHECK((found - expected).norm() < 1.0e-12);
    // The primary task is done at the same rate, whatever the second wants.
    CHECK(found.dot(v1.normalized()) == doctest::Approx(v1.norm()).epsilon(1.0e-12));
  }
}

TEST_CASE("of a combination longer than 1 the course keeps the direction, and the first's rate by its length") {
  scenes::Scene<double> const scene;
  // Both sure and across: 45 degrees between them.
  auto const between = scenes::answer(wend::null_space(told{1.0F, 0.0F, 1.0F}, told{0.0F, 1.0F, 1.0F}), scene);
  CHECK(between.confidence == 1.0);
  CHECK(between.direction.x() == doctest::Approx(std::sqrt(0.5)).epsilon(1.0e-12));
  CHECK(between.direction.y() == doctest::Approx(std::sqrt(0.5)).epsilon(1.0e-12));
  std::mt19937 random(6);
  std::uniform_real_distribution<float> any(-1.0F, 1.0F);
  std::uniform_real_distribution<float> sure(0.5F, 1.0F);
  int longer = 0;
  for (int k = 0; k < 1000; ++k) {
    told const first{any(random), any(random), sure(random), 0.25F};
    told const second{any(random), any(random), sure(random), 0.75F};
    wend::Vec2<double> const v1 = velocity(scenes::answer(first, scene));
    wend::Vec2<double> const v2 = velocity(scenes::answer(second, scene));
    wend::Vec2<double> const p = v1.normalized();
    wend::Vec2<double> const v = v1 + v2 - v2.dot(p) * p;
    auto const course = scenes::answer(wend::null_space(first, second), scene);
    longer += v.norm() > 1.0 ? 1 : 0;
    CHECK((course.direction - v.normalized()).norm() < 1.0e-12);
    CHECK(course.confidence == doctest::Approx(std::min(v.norm(), 1.0)).epsilon(1.0e-12));
    CHECK(velocity(course).dot(p) == doctest::Approx(v1.norm() / std::max(v.norm(), 1.0)).epsilon(1.0e-12));
    CHECK(course.speed_share == 0.25);
  }
  CHECK(longer > 200);
  CHECK(longer < 800);
}

TEST_CASE("the second is heard alone where the first has no opinion, and not at all where it is exactly opposed") {
  scenes::Scene<double> const scene;
  told const none{0.0F, 0.0F, 1.0F};
  told const east{1.0F, 0.0F, 0.75F};
  told const west{-1.0F, 0.0F, 0.5F};
  CHECK(velocity(scenes::answer(wend::null_space(none, west), scene)).x() == -0.5);
  CHECK(velocity(scenes::answer(wend::null_space(east, west), scene)).x() == 0.75);
  CHECK(velocity(scenes::answer(wend::null_space(east, east), scene)).x() == 0.75);
  CHECK(scenes::answer(wend::null_space(none, none), scene).confidence == 0.0);
  told const slow{0.0F, 1.0F, 1.0F, 0.5F};
  CHECK(scenes::answer(wend::null_space(none, slow), scene).speed_share == 0.5);
  CHECK(scenes::answer(wend::null_space(slow, east), scene).speed_share == 0.5);
  // Of three, the third has only what the two leave: in the plane nothing, where both have opinions that differ.
  told const north{0.0F, 1.0F, 0.5F};
  wend::Vec2<double> const two = velocity(scenes::answer(wend::null_space(east, north), scene));
  wend::Vec2<double> const three =
      velocity(scenes::answer(wend::null_space(east, north, told{-1.0F, -1.0F, 0.5F}), scene));
  CHECK((two - three).norm() < 1e-12);
}
