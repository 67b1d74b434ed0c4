// The control-barrier filter: Ames, Xu, Grizzle and Tabuada (2017), Control barrier function based quadratic programs
// for safety critical systems, IEEE Trans. Automatic Control 62(8):3861-3876 (from memory): the velocity nearest to the
// one that is wanted under n . (u - v) >= -rate h for every disc.
#include <algorithm>
#include <array>
#include <cmath>
#include <concepts>
#include <cstddef>
#include <cstdint>
#include <limits>
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
  // x first on every compiler: the order of a call's arguments is anybody's.
  wend::Vec2<double> in_square(double half) {
    double const x = between(-half, half);
    return {x, between(-half, half)};
  }

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
  scene.goal = random.in_square(3.0);
  for (int i = 0; i < scenes::disc_count; ++i) {
    double const bearing = random.between(-3.2, 3.2);
    double const radius = random.between(0.1, 0.4);
    double const away = 0.25 + radius + random.between(nearest, nearest + 0.6);
    double const v = moving ? 0.3 : 0.0;
    wend::Vec2<double> const velocity = random.in_square(v);
    scene.put(away * std::cos(bearing), away * std::sin(bearing), radius, velocity.x(), velocity.y());
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
      CHECK((found - wish).norm() >= best - 0.01);  // and one is as good, to the grid's width
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

namespace {

// How far the nearest allowed velocity is from the wish, by means of its own: it is the wish, or it lies at the foot of
// the wish on an edge, on the circle of top speed straight towards the wish, or where two of these lines cross.
// Infinite where none is allowed with `spare` metres a second to spare.
double nearest_allowed(std::vector<Constraint> all, wend::Vec2<double> const& wish, double spare) {
  double const top = static_cast<double>(speed);
  std::vector<wend::Vec2<double>> candidates{wish, top * wish.normalized(), {0.0, 0.0}};
  for (Constraint& c : all) {
    c.offset += spare;
  }
  for (std::size_t i = 0; i < all.size(); ++i) {
    wend::Vec2<double> const foot = all[i].offset * all[i].normal;
    wend::Vec2<double> const along{-all[i].normal.y(), all[i].normal.x()};
    double const half = std::sqrt(std::max(top * top - foot.squaredNorm(), 0.0));
    for (double const t : {along.dot(wish), half, -half}) {
      candidates.emplace_back(foot + t * along);
    }
    for (std::size_t j = 0; j < i; ++j) {
      double const slope = all[j].normal.dot(along);
      if (std::abs(slope) > 1.0e-12) {
        candidates.emplace_back(foot + (all[j].offset - all[j].normal.dot(foot)) / slope * along);
      }
    }
  }
  double least = std::numeric_limits<double>::infinity();
  for (wend::Vec2<double> const& u : candidates) {
    bool const allowed = u.norm() <= top + 1.0e-10 && std::all_of(all.begin(), all.end(), [&u](Constraint const& c) {
                           return c.normal.dot(u) >= c.offset - 1.0e-10;
                         });
    least = allowed ? std::min(least, (u - wish).norm()) : least;
  }
  return least;
}

enum class Discs { stand, drift_together, one_moves };

struct Kept {
  int steps = 0;
  int held_back = 0;  // steps on which the wish itself was not allowed
  int no_way_out = 0;  // runs that ended since no velocity was allowed
  int overlooked = 0;  // steps on which one was, and what the policy took was not
  double least = 1.0e9;  // metres: the least h
  double decay = 1.0e9;  // metres: the least h' - (1 - rate dt) h of a step
};

// Drives a policy among discs, and moves machine and discs in double, exactly as a velocity held for dt does. The
// policy sees the scene on S.
template <std::floating_point S, typename Policy>
Kept drive(Policy const& policy, Discs kind, double dt, int steps, std::uint32_t seed) {
  Random random(seed);
  Kept kept;
  while (kept.steps < steps) {
    scenes::Scene<double> scene = random_scene(random, 0.05, false);
    double const turn = random.between(-3.2, 3.2);
    double const fast = random.between(0.0, 0.55);  // slower than the machine
    std::vector<wend::Vec2<double>> velocities(static_cast<std::size_t>(scene.discs.size()), {0.0, 0.0});
    for (std::size_t i = 0; i < velocities.size(); ++i) {
      if (kind == Discs::drift_together || (kind == Discs::one_moves && i == 0)) {
        velocities[i] = {fast * std::cos(turn), fast * std::sin(turn)};
      }
    }
    for (int i = 0; i < 200; ++i) {
      if (i % 20 == 0) {
        scene.goal = scene.pose.position + random.in_square(2.0);
      }
      scenes::Scene<S> seen;
      seen.pose.position = scene.pose.position.template cast<S>();
      seen.goal = scene.goal.template cast<S>();
      seen.robot_radius = static_cast<S>(scene.robot_radius);
      wend::MovingDiscSet<double, scenes::disc_count> here;
      wend::MovingDiscSet<double, scenes::disc_count> moved;
      for (int d = 0; d < scene.discs.size(); ++d) {
        wend::Vec2<double> const& v = velocities[static_cast<std::size_t>(d)];
        wend::Disc<double> const& disc = scene.discs[d];
        seen.discs.add({disc.centre.template cast<S>(), static_cast<S>(disc.radius)}, v.template cast<S>());
        here.add(disc, v);
        moved.add({disc.centre + dt * v, disc.radius}, v);
      }
      scene.discs = here;
      wend::Course<S> const course = scenes::answer(policy, seen);
      wend::Vec2<double> const u =
          velocity({course.direction.template cast<double>(), static_cast<double>(course.confidence),
                    static_cast<double>(course.speed_share)});
      wend::Vec2<double> const wish = (scene.goal - scene.pose.position).normalized() * static_cast<double>(speed);
      auto const all = constraints(scene);
      auto const breaks = [&all](wend::Vec2<double> const& w) {
        return std::any_of(all.begin(), all.end(),
                           [&w](Constraint const& c) { return c.normal.dot(w) < c.offset - 1.0e-5; });
      };
      kept.held_back += breaks(wish) ? 1 : 0;
      if (breaks(u)) {
        bool const allowed = std::isfinite(nearest_allowed(all, {0.0, 0.0}, 1.0e-6));
        kept.overlooked += allowed ? 1 : 0;
        if (!allowed) {
          ++kept.no_way_out;
          break;
        }
      }
      auto const clear = [&scene](int d) {
        return (scene.pose.position - scene.discs[d].centre).norm() - scene.discs[d].radius - scene.robot_radius -
               static_cast<double>(margin);
      };
      std::array<double, scenes::disc_count> before{};
      for (int d = 0; d < scene.discs.size(); ++d) {
        before[static_cast<std::size_t>(d)] = clear(d);
      }
      scene.pose.position += dt * u;
      scene.discs = moved;
      ++kept.steps;
      for (int d = 0; d < scene.discs.size(); ++d) {
        double const h = clear(d);
        kept.least = std::min(kept.least, h);
        kept.decay =
            std::min(kept.decay, h - (1.0 - static_cast<double>(rate) * dt) * before[static_cast<std::size_t>(d)]);
      }
    }
  }
  return kept;
}

}  // namespace

TEST_CASE("the filter solves the quadratic programme exactly, as a search of all candidates does") {
  // Normals every way, and in bundles of nearly one direction, where lines cross far out or not at all.
  Random random(4);
  int bound = 0;
  int infeasible = 0;
  double worst = 0.0;
  double worst_breach = 0.0;
  for (int k = 0; k < 30'000; ++k) {
    scenes::Scene<double> scene = random_scene(random, -0.05, true);
    if (k % 3 > 0) {
      scenes::Scene<double> bundle;
      bundle.robot_radius = scene.robot_radius;
      double const spread = k % 3 == 1 ? 1.0e-4 : 0.0;
      for (int i = 0; i < scene.discs.size(); ++i) {
        double const bearing = 2.1 * (i % 2) + random.between(-spread, spread);
        double const far = scene.discs[i].centre.norm();
        wend::Vec2<double> const& v = scene.discs.velocities()[i];
        bundle.put(far * std::cos(bearing), far * std::sin(bearing), scene.discs[i].radius, v.x(), v.y());
      }
      scene.discs = bundle.discs;
    }
    double const angle = random.between(-3.2, 3.2);
    scenes::told const field{static_cast<float>(std::cos(angle)), static_cast<float>(std::sin(angle)), 0.75F,
                             static_cast<float>(random.between(0.0, 1.0))};
    auto const wanted = scenes::answer(field, scene);
    wend::Vec2<double> const wish = velocity(wanted);
    auto const all = constraints(scene);
    double const expected = nearest_allowed(all, wish, 0.0);
    auto const course = scenes::answer(wend::kept_clear(field, speed, rate, margin), scene);
    wend::Vec2<double> const found = velocity(course);
    if (std::isfinite(expected)) {
      double breach = 0.0;
      for (Constraint const& c : all) {
        breach = std::max(breach, c.offset - c.normal.dot(found));
      }
      worst_breach = std::max(worst_breach, breach);
      worst = std::max(worst, std::abs((found - wish).norm() - expected));
      bound += expected > 1.0e-9 ? 1 : 0;
    } else {
      ++infeasible;
    }
    CHECK((course.confidence == 0.0 || course.confidence == wanted.confidence));  // of the velocity, not of its length
  }
  CHECK(worst < 1.0e-9);  // the candidates are taken for allowed to 1e-10
  CHECK(worst_breach < 1.0e-9);
  CHECK(bound > 5000);
  CHECK(infeasible > 200);
}

TEST_CASE_TEMPLATE("the set is kept for a million steps, among discs that stand and discs that move", S, float,
                   double) {
  // Where all discs have one velocity there is always a velocity that is allowed, namely theirs: here nothing may give
  // up. Where one moves among others there may be none, which is asked by other means than the filter's.
  constexpr int steps = std::is_same_v<S, double> ? 170'000 : 30'000;
  // Metres. Parameters are in single precision. In single precision positions are too: discs that drift get 55 m away,
  // where machine and disc are each off by up to 1.9e-6 (half a unit in the last place) in x and in y.
  double const rounding = std::is_same_v<S, double> ? 1.0e-7 : 6.0e-6;
  int in_all = 0;
  for (Discs const kind : {Discs::stand, Discs::drift_together, Discs::one_moves}) {
    // Ticks up to 1 / rate: where the velocity is held for as long as that, h may fall to 0 in one of them.
    for (double const dt : {0.1, 0.5}) {
      Kept const kept = drive<S>(filtered, kind, dt, steps, 3);
      CAPTURE(static_cast<int>(kind));
      CAPTURE(dt);
      CHECK(kept.least > -rounding);
      CHECK(kept.decay > -rounding);
      CHECK(kept.overlooked == 0);
      CHECK(kept.held_back > kept.steps / 20);
      CHECK((kind == Discs::one_moves || kept.no_way_out == 0));
      in_all += kept.steps;
    }
  }
  CHECK(in_all >= (std::is_same_v<S, double> ? 1'000'000 : 180'000));
}

TEST_CASE("without the filter, and with ticks longer than 1 / rate, the set is left") {
  Kept const unfiltered = drive<double>(wend::toward_goal{}, Discs::stand, 0.1, 20'000, 3);
  CHECK(unfiltered.least < -0.1);
  CHECK(unfiltered.overlooked > 1000);
  // The condition is sharp: straight at a disc 0.1 m off, 1 s at 0.2 m/s, with rate 2 / s.
  scenes::Scene<double> scene;
  scene.goal = {3.0, 0.0};
  scene.put(0.2 + 0.3 + static_cast<double>(margin) + 0.1, 0.0, 0.3);
  wend::Vec2<double> const u = velocity(scenes::answer(filtered, scene));
  CHECK(u.x() == doctest::Approx(0.2).epsilon(1.0e-6));
  CHECK(u.y() == 0.0);
  CHECK(0.1 - 0.5 * u.x() == doctest::Approx(0.0).scale(1.0).epsilon(1.0e-6));
  CHECK(0.1 - 1.0 * u.x() < -0.09);
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
