// The control-barrier filter: Ames, Xu, Grizzle and Tabuada (2017), Control barrier function based quadratic programs
// for safety critical systems, IEEE Trans. Automatic Control 62(8):3861-3876 (from memory): the velocity nearest to the
// one that is wanted under n . (u - v) >= -rate h for every disc.
#include <algorithm>
#include <cmath>
#include <cstdint>
#include <random>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/kept_clear.hpp"
#include "wend/fields/toward_goal.hpp"

namespace {

constexpr float speed = 0.6F;
constexpr float rate = 2.0F;
constexpr float margin = 0.05F;
constexpr auto filtered = wend::kept_clear(wend::toward_goal{}, speed, rate, margin);

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) { return std::uniform_real_distribution<double>(low, high)(random_); }

 private:
  std::mt19937 random_;
};

struct Constraint {
  wend::Vec2<double> normal;
  double offset;
};

std::vector<Constraint> constraints(scenes::Scene<double> const& scene) {
  std::vector<Constraint> all;
  for (int i = 0; i < scene.discs.size(); ++i) {
    wend::Vec2<double> const from = scene.pose.position - scene.discs[i].centre;
    double const h = from.norm() - scene.discs[i].radius - scene.robot_radius - static_cast<double>(margin);
    wend::Vec2<double> const normal = from.normalized();
    all.push_back({normal, normal.dot(scene.discs.velocities()[i]) - static_cast<double>(rate) * h});
  }
  return all;
}

wend::Vec2<double> velocity(wend::Course<double> const& course) {
  return course.confidence > 0.0
             ? wend::Vec2<double>(course.direction * course.speed_share * static_cast<double>(speed))
             : wend::Vec2<double>(0.0, 0.0);
}

scenes::Scene<double> random_scene(Random& random, double nearest, bool moving) {
  scenes::Scene<double> scene;
  scene.robot_radius = 0.2;
  scene.goal = {random.between(-3.0, 3.0), random.between(-3.0, 3.0)};
  for (int i = 0; i < scenes::disc_count; ++i) {
    double const bearing = random.between(-3.2, 3.2);
    double const radius = random.between(0.1, 0.4);
    double const away = 0.25 + radius + random.between(nearest, nearest + 0.6);
    double const v = moving ? 0.3 : 0.0;
    scene.put(away * std::cos(bearing), away * std::sin(bearing), radius, random.between(-v, v), random.between(-v, v));
  }
  return scene;
}

}  // namespace

TEST_CASE("the filter solves the quadratic programme: brute force over a fine grid finds nothing better") {
  Random random(1);
  int bound = 0;
  int infeasible = 0;
  for (int k = 0; k < 300; ++k) {
    auto const scene = random_scene(random, -0.05, true);
    auto const all = constraints(scene);
    wend::Vec2<double> const wish = scene.goal.normalized() * static_cast<double>(speed);
    wend::Vec2<double> const found = velocity(scenes::answer(filtered, scene));
    auto const breach = [&all](wend::Vec2<double> const& u) {
      double most = 0.0;
      for (Constraint const& c : all) {
        most = std::max(most, c.offset - c.normal.dot(u));
      }
      return most;
    };
    // Polar grid over the disc of velocities: 0.005 m/s by half a degree.
    double best = 1.0e9;
    double least_breach = 1.0e9;
    for (int r = 0; r <= 120; ++r) {
      for (int a = 0; a < 720; ++a) {
        double const angle = a * 3.14159265358979 / 360.0;
        wend::Vec2<double> const u{r * 0.005 * std::cos(angle), r * 0.005 * std::sin(angle)};
        double const b = breach(u);
        least_breach = std::min(least_breach, b);
        if (b <= 0.0) {
          best = std::min(best, (u - wish).norm());
        }
      }
    }
    CAPTURE(k);
    CHECK(found.norm() <= static_cast<double>(speed) + 1e-9);
    if (best < 1.0e8) {
      CHECK(breach(found) < 1.0e-7);
      CHECK((found - wish).norm() <= best + 1.0e-7);  // no grid point is better
      CHECK((found - wish).norm() >= best - 0.01);    // and one is as good, to the grid's width
      bound += (found - wish).norm() > 1e-9 ? 1 : 0;
    } else if (least_breach > 0.01) {
      CHECK(breach(found) <= least_breach + 1.0e-7);
      ++infeasible;
    }
  }
  CHECK(bound > 80);
  CHECK(infeasible >= 5);
}

TEST_CASE_TEMPLATE("where nothing binds, the course passes through to the last bit", S, float, double) {
  Random random(2);
  int slack = 0;
  for (int k = 0; k < 2000; ++k) {
    auto const plain = random_scene(random, 0.3, true);
    scenes::Scene<S> scene;
    scene.robot_radius = S(0.2F);
    scene.goal = plain.goal.template cast<S>();
    for (int i = 0; i < plain.discs.size(); ++i) {
      scene.discs.add({plain.discs[i].centre.template cast<S>(), static_cast<S>(plain.discs[i].radius)},
                      plain.discs.velocities()[i].template cast<S>());
    }
    auto const all = constraints(plain);
    wend::Vec2<double> const wish = plain.goal.normalized() * static_cast<double>(speed);
    bool const binds = std::any_of(all.begin(), all.end(),
                                   [&wish](Constraint const& c) { return c.normal.dot(wish) < c.offset + 1.0e-5; });
    if (!binds) {
      ++slack;
      auto const with = scenes::answer(filtered, scene);
      auto const without = scenes::answer(wend::toward_goal{}, scene);
      CHECK(with.direction == without.direction);
      CHECK(with.confidence == without.confidence);
      CHECK(with.speed_share == without.speed_share);
    }
  }
  CHECK(slack > 500);
}

TEST_CASE("the set is kept for a million steps, among discs that stand and discs that move") {
  Random random(3);
  double const dt = 0.1;
  double least = 1.0e9;
  int steps = 0;
  while (steps < 1'000'000) {
    auto scene = random_scene(random, 0.05, false);
    std::vector<wend::Vec2<double>> velocities;
    for (int i = 0; i < scene.discs.size(); ++i) {
      double const v = i == 0 ? 0.4 : 0.0;  // one that moves, slower than the machine: it can always give way
      velocities.emplace_back(random.between(-v, v), random.between(-v, v));
    }
    for (int i = 0; i < 200; ++i, ++steps) {
      if (i % 20 == 0) {
        scene.goal = scene.pose.position + wend::Vec2<double>(random.between(-2, 2), random.between(-2, 2));
      }
      wend::MovingDiscSet<double, scenes::disc_count> seen;
      for (int d = 0; d < scene.discs.size(); ++d) {
        seen.add(scene.discs[d], velocities[static_cast<std::size_t>(d)]);
      }
      scene.discs = seen;
      wend::Vec2<double> const u = velocity(scenes::answer(filtered, scene));
      auto const all = constraints(scene);
      bool const feasible =
          std::none_of(all.begin(), all.end(), [&u](Constraint const& c) { return c.normal.dot(u) < c.offset - 1e-9; });
      if (!feasible) {
        break;  // a pincer that leaves no way out; its own test is above
      }
      scene.pose.position += dt * u;
      wend::MovingDiscSet<double, scenes::disc_count> moved;
      for (int d = 0; d < scene.discs.size(); ++d) {
        wend::Vec2<double> const& v = velocities[static_cast<std::size_t>(d)];
        moved.add({scene.discs[d].centre + dt * v, scene.discs[d].radius}, v);
      }
      scene.discs = moved;
      for (auto const& disc : scene.discs) {
        least = std::min(least, (scene.pose.position - disc.centre).norm() - disc.radius - scene.robot_radius -
                                    static_cast<double>(margin));
      }
    }
  }
  CHECK(steps >= 1'000'000);
  CHECK(least > -1.0e-7);  // the roundings of parameters in single precision
}

TEST_CASE("no opinion wants to stand, and is heard only where standing is not allowed") {
  scenes::Scene<double> scene;  // on the goal
  scene.goal = {0.0, 0.0};
  scene.robot_radius = 0.2;
  scene.put(1.0, 0.0, 0.3, 0.0, 0.0);
  CHECK(scenes::answer(filtered, scene).confidence == 0.0);
  scenes::Scene<double> chased = scene;
  chased.discs = {};
  chased.put(0.56, 0.0, 0.3, -0.3, 0.0);  // 1 cm over the margin, and it comes nearer by 0.3 m/s
  auto const course = scenes::answer(filtered, chased);
  CHECK(course.confidence > 0.0);
  CHECK(course.direction.x() == doctest::Approx(-1.0));
  CHECK(course.speed_share * 0.6 == doctest::Approx(0.3 - 2.0 * 0.01).epsilon(1e-5));
  // At a disc's centre nothing points away from it; all discs at one place count as one.
  scenes::Scene<double> inside = scene;
  inside.pose.position = {1.0, 0.0};
  inside.goal = {3.0, 0.0};
  CHECK(scenes::answer(filtered, inside).direction.x() == 1.0);
}
