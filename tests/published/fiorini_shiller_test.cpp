// Moving discs: Fiorini and Shiller (1998), Motion planning in dynamic environments using velocity obstacles, Int. J.
// Robotics Research 17(7):760-772 (from memory). Checked against their cone (half-angle asin((r1 + r2) / d), apex at
// the other's velocity), and against what happens when everything just keeps its velocity: marched in small steps, and
// by the school formula for the roots of a quadratic.
#include <algorithm>
#include <cmath>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/velocity_cone.hpp"
#include "wend/fields/velocity_obstacle.hpp"

namespace {

using Vec = wend::Vec2<double>;
using Scene = scenes::Scene<double>;

constexpr double degree = std::numbers::pi / 180.0;
constexpr double never = 1.0e9;
constexpr double far_away = static_cast<double>(wend::far_away);

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) {
    return low + (high - low) * (static_cast<double>(random_()) / 4294967296.0);
  }
  Vec in_square(double half) { return {between(-half, half), between(-half, half)}; }

 private:
  std::mt19937 random_;
};

double angle_of(Vec const& v) { return std::atan2(v.y(), v.x()); }
Vec at_angle(double angle) { return {std::cos(angle), std::sin(angle)}; }

// When two points that keep a relative velocity come within `radius`: from a t^2 + b t + c = 0 in long double. In an
// overlap what closes in by no more than `grace` radians off the tangent is let pass.
double first_contact(Vec const& offset, double radius, Vec const& relative, double grace = 0.0) {
  using Long = long double;
  Long const px{static_cast<Long>(offset.x())}, py{static_cast<Long>(offset.y())};
  Long const vx{static_cast<Long>(relative.x())}, vy{static_cast<Long>(relative.y())};
  Long const r{static_cast<Long>(radius)};
  long double const a = vx * vx + vy * vy;
  long double const b = -2.0L * (px * vx + py * vy);
  long double const c = px * px + py * py - r * r;
  if (c <= 0.0L) {
    return b < -2.0L * static_cast<long double>(grace) * r * std::sqrt(a) ? 0.0 : never;
  }
  long double const d = b * b - 4.0L * a * c;
  if (a == 0.0L || d < 0.0L || b >= 0.0L) {
    return never;
  }
  return static_cast<double>((-b - std::sqrt(d)) / (2.0L * a));
}

// The same by marching: the first tick at which they are that near.
double marched_contact(Vec const& offset, double radius, Vec const& relative, double until, double step) {
  for (int i = 0; i * step <= until; ++i) {
    if (wend::length(Vec(offset - i * step * relative)) <= radius) {
      return i * step;
    }
  }
  return never;
}

Scene random_scene(Random& random) {
  Scene scene;
  scene.goal = random.in_square(4.0);
  for (int i = 0; i < scenes::disc_count; ++i) {
    Vec const at = random.in_square(2.5);
    Vec const moves = random.in_square(0.6);
    scene.put(at.x(), at.y(), random.between(0.05, 0.4), moves.x(), moves.y());
  }
  return scene;
}

// The earliest contact with any disc of a machine that keeps `velocity`; each disc grown to the machine's radius and
// `more`.
double first_of_all(Scene const& scene, Vec const& velocity, double more, double grace = 0.0) {
  double first = never;
  for (int i = 0; i < scene.discs.size(); ++i) {
    first = std::min(first, first_contact(scene.discs[i].centre - scene.pose.position,
                                          scene.discs[i].radius + scene.robot_radius + more,
                                          velocity - scene.discs.velocities()[i], grace));
  }
  return first;
}

}  // namespace

TEST_CASE("the cone of velocities has the half-angle asin((r1 + r2) / d) about the line to the disc") {
  Random random(1998);
  for (int k = 0; k < 2000; ++k) {
    Vec const offset = random.in_square(3.0);
    double const d = wend::length(offset);
    double const r = random.between(0.01, 0.999) * d;
    auto const cone = wend::velocity_cone(offset, r);
    double const half = std::asin(r / d);
    CHECK(std::abs(wend::turn(angle_of(offset), angle_of(cone.left)) - half) < 1.0e-13);
    CHECK(std::abs(wend::turn(angle_of(offset), angle_of(cone.right)) + half) < 1.0e-13);
    CHECK(std::abs(cone.sine - std::sin(half)) < 1.0e-15);
    CHECK(std::abs(cone.cosine - std::cos(half)) < 1.0e-13);
    CHECK(std::abs(wend::length(cone.left) - 1.0) < 1.0e-15);
  }
}

TEST_CASE("a relative velocity leads to a contact exactly when it lies in the cone") {
  Random random(7);
  int inside = 0;
  for (int k = 0; k < 5000; ++k) {
    Vec const offset = random.in_square(3.0);
    double const d = wend::length(offset);
    double const r = random.between(0.05, 0.95) * d;
    Vec const relative = random.in_square(1.0);
    double const off_axis = std::abs(wend::turn(angle_of(offset), angle_of(relative)));
    if (std::abs(off_axis - std::asin(r / d)) < 1.0e-6) {
      continue;
    }
    bool const in_cone = off_axis < std::asin(r / d);
    inside += in_cone ? 1 : 0;
    CHECK(in_cone == (wend::contact_time(offset, r, relative) < far_away));
  }
  CHECK(inside > 500);
}

TEST_CASE("the time of contact is that of the school formula, and of a march in small steps") {
  Random random(11);
  int contacts = 0;
  for (int k = 0; k < 3000; ++k) {
    Vec const offset = random.in_square(2.0);
    double const r = random.between(0.05, 1.0);
    Vec const relative = random.in_square(1.5);
    double const found = wend::contact_time(offset, r, relative);
    double const expected = first_contact(offset, r, relative);
    if (expected == never) {
      CHECK(found == far_away);
    } else {
      ++contacts;
      CHECK(std::abs(found - expected) <= 1.0e-9 * std::max(1.0, expected));
    }
    if (k % 10 == 0 && wend::length(offset) > r) {
      double const marched = marched_contact(offset, r, relative, 10.0, 1.0e-3);
      if (marched < never) {
        CHECK(found <= marched + 1.0e-9);
        CHECK(found > marched - 1.1e-3);
      } else {  // may have grazed between two steps
        CHECK((found > 10.0 || wend::length(Vec(offset - (found + 1.0e-3) * relative)) > r - 1.0e-3));
      }
    }
  }
  CHECK(contacts > 400);
}

TEST_CASE("a disc that stands in the way is passed along the tangent") {
  wend::velocity_obstacle const field{.speed = 0.5F, .horizon = 100.0F, .margin = 0.0F, .reserve = 0.0F};
  for (double const y : {0.1, -0.1}) {
    Scene scene;
    scene.goal = {6.0, 0.0};
    scene.put(2.0, y, 0.3);
    auto const course = scenes::answer(field, scene);
    double const d = std::hypot(2.0, y);
    // The tangent on the other side than the disc: less of a detour.
    double const expected = y > 0.0 ? std::atan2(y, 2.0) - std::asin(0.5 / d) : std::atan2(y, 2.0) + std::asin(0.5 / d);
    CHECK(std::abs(angle_of(course.direction) - expected) < 1.0e-7);  // radii come from single precision
    CHECK(course.confidence == 1.0);
    CHECK(course.speed_share == 1.0);
  }
}

TEST_CASE("a disc that crosses is passed before or behind it, whichever is the smaller detour, at the worked angle") {
  // It moves up at the machine's own speed s. On an edge e of the cone |w + k e| = s with w = (0, s) gives
  // k = -2 s sin(angle of e): the triangle is isosceles, and the velocity's angle is 90 degrees plus twice the edge's.
  wend::velocity_obstacle const field{.speed = 0.5F, .horizon = 100.0F, .margin = 0.0F, .reserve = 0.0F};
  for (double const ahead : {0.8, 1.3}) {  // 0.8: it is early and crosses before the machine, which drops behind
    Scene scene;
    scene.goal = {6.0, 0.0};
    scene.put(1.0, -ahead, 0.3, 0.0, 0.5);
    auto const course = scenes::answer(field, scene);
    double const to_disc = std::atan2(-ahead, 1.0);
    double const half = std::asin(0.5 / std::hypot(1.0, ahead));
    double const edge = ahead < 1.0 ? to_disc - half : to_disc + half;
    CHECK(std::abs(angle_of(course.direction) - (90.0 * degree + 2.0 * edge)) < 1.0e-6);
    CHECK((angle_of(course.direction) < 0.0) == (ahead < 1.0));
  }
}

TEST_CASE("the velocity chosen touches nothing within the horizon, and no nearer direction does as well") {
  Random random(23);
  wend::velocity_obstacle const field{.speed = 0.5F, .margin = 0.05F, .reserve = 0.0F};
  double const speed = 0.5;
  double const margin = static_cast<double>(field.margin);
  int safe = 0, detours = 0, touches = 0, nearer = 0, horizons = 0;
  for (int k = 0; k < 1500; ++k) {
    Scene const scene = random_scene(random);
    auto const course = scenes::answer(field, scene);
    double const until = std::clamp(wend::length(scene.goal) / speed, 0.5, 4.0);
    if (course.speed_share < 1.0) {
      continue;
    }
    ++safe;
    double const to_goal = angle_of(scene.goal);
    double const off = std::abs(wend::turn(to_goal, angle_of(course.direction)));
    detours += off > 1.0e-3 ? 1 : 0;
    double const contact = first_of_all(scene, speed * course.direction, margin - 2.0e-4, 1.0e-3);
    touches += contact < until - 1.0e-3 ? 1 : 0;
    horizons += first_of_all(scene, speed * course.direction, margin + 1.0e-3) < until + 0.02 ? 1 : 0;
    // March the few seconds, machine and discs.
    for (int i = 0; k % 10 == 0 && i * 0.002 < until; ++i) {
      for (int j = 0; j < scenes::disc_count; ++j) {
        Vec const apart = scene.discs[j].centre + i * 0.002 * (scene.discs.velocities()[j] - speed * course.direction);
        Vec const first = scene.discs[j].centre;
        double const keep = scene.discs[j].radius + scene.robot_radius;
        touches += wend::length(apart) < keep && wend::length(first) > keep + margin ? 1 : 0;
      }
    }
    // Directions nearer to the goal's, half a degree apart, on both sides.
    for (double by = 0.0; by < off - 0.01; by += 0.5 * degree) {
      for (double const side : {1.0, -1.0}) {
        nearer += first_of_all(scene, speed * at_angle(to_goal + side * by), margin + 2.0e-4) > until + 1.0e-3 ? 1 : 0;
      }
    }
  }
  CHECK(safe > 700);
  CHECK(detours > 300);
  CHECK(horizons > detours * 8 / 10);  // what was chosen lies on a rim: a millimetre more and it touches
  CHECK(touches == 0);
  CHECK(nearer == 0);
}

TEST_CASE("where no direction is safe, a grid of directions finds none either, and the time to contact is long") {
  Random random(29);
  wend::velocity_obstacle const field{.speed = 0.5F, .margin = 0.05F, .reserve = 0.0F};
  double const margin = static_cast<double>(field.margin);
  int none = 0, overlooked = 0, short_of = 0;
  for (int k = 0; k < 3000 && none < 200; ++k) {
    Scene const scene = random_scene(random);
    auto const course = scenes::answer(field, scene);
    if (course.speed_share == 1.0) {
      continue;
    }
    ++none;
    double const until = std::clamp(wend::length(scene.goal) / 0.5, 0.5, 4.0);
    double longest = 0.0;
    for (double angle = 0.0; angle < 360.0; angle += 0.5) {
      longest = std::max(longest, first_of_all(scene, 0.5 * at_angle(angle * degree), margin + 2.0e-4));
    }
    overlooked += longest > until + 1.0e-3 ? 1 : 0;
    double const own = first_of_all(scene, 0.5 * course.direction, margin - 2.0e-4, 1.0e-3);
    short_of += own < static_cast<double>(course.speed_share) * until - 1.0e-3 ? 1 : 0;
  }
  CHECK(none >= 40);
  CHECK(overlooked == 0);
  CHECK(short_of == 0);
}

TEST_CASE("in single precision too the velocity chosen touches nothing, and hardly any safe one is overlooked") {
  Random random(31);
  wend::velocity_obstacle const field{.speed = 0.5F, .margin = 0.05F, .reserve = 0.0F};
  int safe = 0, touches = 0, overlooked = 0;
  for (int k = 0; k < 4000; ++k) {
    Scene const scene = random_scene(random);
    scenes::Scene<float> single;
    single.goal = scene.goal.cast<float>();
    for (int i = 0; i < scenes::disc_count; ++i) {
      wend::Disc<float> const disc{scene.discs[i].centre.cast<float>(), static_cast<float>(scene.discs[i].radius)};
      single.discs.add(disc, scene.discs.velocities()[i].cast<float>());
    }
    auto const course = scenes::answer(field, single);
    auto const reference = scenes::answer(field, scene);
    overlooked += reference.speed_share == 1.0 && course.speed_share < 1.0F ? 1 : 0;
    if (course.speed_share < 1.0F) {
      continue;
    }
    ++safe;
    double const until = std::clamp(wend::length(scene.goal) / 0.5, 0.5, 4.0);
    Vec const direction = course.direction.cast<double>();
    double const contact = first_of_all(scene, 0.5 * direction, static_cast<double>(field.margin) - 3.0e-4, 1.0e-3);
    touches += contact < until - 2.0e-3 ? 1 : 0;
  }
  CHECK(safe > 2000);
  CHECK(touches == 0);
  CHECK(overlooked < 10);
}
