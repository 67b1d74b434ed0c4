#include <algorithm>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/through_gap.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Vec = wend::Vec2<double>;
using Scene = scenes::Scene<double, 8>;

constexpr wend::through_gap field{};
constexpr double margin = static_cast<double>(field.margin);
constexpr double reach = static_cast<double>(field.reach);
constexpr double inset = 0.2;  // radians, the default

double angle_of(Vec const& v) { return std::atan2(v.y(), v.x()); }
Vec at_angle(double angle) { return {std::cos(angle), std::sin(angle)}; }

// Whether the machine, driving straight on along a direction, keeps the margin from every disc that counts.
bool open(Scene const& scene, double angle, double slack = 0.0) {
  Vec const goal = scene.goal - scene.pose.position;
  for (wend::Disc<double> const& disc : scene.discs) {
    Vec const offset = disc.centre - scene.pose.position;
    double const edge = wend::length(offset) - disc.radius;
    if (edge - scene.robot_radius >= reach || edge >= wend::length(goal)) {
      continue;
    }
    double const grown = disc.radius + scene.robot_radius + margin + slack;
    double const ahead = wend::dot(at_angle(angle), offset);
    if (ahead > 0.0 && std::abs(wend::cross(at_angle(angle), offset)) < grown) {
      return false;
    }
  }
  return true;
}

struct Gap {
  double from, width;  // radians, counter-clockwise
};

// The gaps, by looking along 8000 directions.
std::vector<Gap> gaps_of(Scene const& scene) {
  constexpr int marks = 8000;
  auto const at = [](int k) { return 2.0 * pi * k / marks; };
  std::vector<Gap> gaps;
  for (int k = 0; k < marks; ++k) {
    if (!open(scene, at(k - 1)) && open(scene, at(k))) {
      int width = 1;
      while (open(scene, at(k + width))) {
        ++width;
      }
      gaps.push_back({at(k) - pi / marks, at(width)});
    }
  }
  return gaps;
}

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) {
    return low + (high - low) * (static_cast<double>(random_()) / 4294967296.0);
  }

 private:
  std::mt19937 random_;
};

Scene random_scene(Random& random) {
  Scene scene;
  scene.robot_radius = random.between(0.1, 0.3);
  bool const crowded = random.between(0.0, 1.0) < 0.3;
  int const count = crowded ? 8 : static_cast<int>(random.between(1.0, 8.99));
  for (int i = 0; i < count; ++i) {
    double const radius = random.between(0.05, 0.4);
    double const away = radius + scene.robot_radius + margin + random.between(0.02, crowded ? 0.4 : 2.0);
    Vec const centre = away * at_angle(random.between(-pi, pi));
    scene.put(centre.x(), centre.y(), radius);
  }
  scene.goal = random.between(0.5, 4.0) * at_angle(random.between(-pi, pi));
  scene.pose.heading = at_angle(random.between(-pi, pi));
  return scene;
}

}  // namespace

TEST_CASE("through_gap takes the gap of the largest score, its middle or off its end, as found by looking all round") {
  Random random(1);
  int free_way = 0, through = 0, wide = 0, narrow = 0, ambiguous = 0, closed = 0;
  for (int i = 0; i < 1500; ++i) {
    Scene const scene = random_scene(random);
    wend::Course<double> const course = scenes::answer(field, scene);
    double const to_goal = angle_of(scene.goal);
    if (open(scene, to_goal) != open(scene, to_goal, 1.0e-4)) {
      continue;
    }
    if (open(scene, to_goal)) {
      ++free_way;
      CHECK(std::abs(wend::turn(angle_of(course.direction), to_goal)) < 1.0e-12);
      continue;
    }
    double best = -1.0e9;
    double second = -1.0e9;
    double expected = 0.0;
    bool of_wide = false;
    for (Gap const& gap : gaps_of(scene)) {
      for (bool const first : {true, false}) {
        bool const is_wide = gap.width > 2.0 * inset;
        double const in = is_wide ? inset : 0.5 * gap.width;
        double const angle = first ? gap.from + in : gap.from + gap.width - in;
        // Widths in the score go by an angle that is not stretched evenly; what hangs on that is left out below.
        double const score = std::cos(angle - to_goal) + 0.4 * std::cos(angle - angle_of(scene.pose.heading)) +
                             0.3 * gap.width / pi;
        if (score > best) {
          second = !is_wide && !first ? second : best;
          best = score;
          expected = angle;
          of_wide = is_wide;
        } else if (is_wide || first) {
          second = std::max(second, score);
        }
      }
    }
    if (best < -1.0e8) {
      ++closed;
      // A gap of less than a mark it may find all the same.
      CHECK((course.confidence == 0.0 || open(scene, angle_of(course.direction), -1.0e-3)));
      continue;
    }
    if (best - second < 0.1) {
      ++ambiguous;
      continue;
    }
    ++through;
    (of_wide ? wide : narrow) += 1;
    CAPTURE(i);
    CHECK(course.confidence == 1.0);
    CHECK(std::abs(wend::turn(angle_of(course.direction), expected)) < 2.0e-3);  // to two marks
    CHECK(open(scene, angle_of(course.direction)));
  }
  CHECK(free_way > 300);
  CHECK(through > 400);
  CHECK(wide > 300);
  CHECK(narrow > 10);
  CHECK(closed > 10);
  CHECK(ambiguous < 400);
}

TEST_CASE("through_gap drives through a gap that is just wide enough, at its middle, and not through one that is not") {
  for (double const spare : {0.02, -0.02}) {
    // Two discs abreast across the way, and others that close the rest on both sides.
    Scene scene;
    double const half = 0.3 + scene.robot_radius + margin + 0.5 * spare;
    scene.put(1.0, half, 0.3);
    scene.put(1.0, -half, 0.3);
    scene.put(0.1, 0.9, 0.4);
    scene.put(0.1, -0.9, 0.4);
    scene.put(0.8, 1.1, 0.4);
    scene.put(0.8, -1.1, 0.4);
    scene.goal = {3.0, 0.4};
    wend::Course<double> const course = scenes::answer(field, scene);
    if (spare > 0.0) {
      CHECK(std::abs(course.direction.y()) < 1.0e-6);
      CHECK(course.direction.x() == doctest::Approx(1.0));
    } else {
      CHECK(course.direction.x() < 0.0);
    }
  }
}

TEST_CASE("through_gap passes a single narrow disc off its edge, though the gap goes nearly all round") {
  Scene scene;
  scene.robot_radius = 0.1;
  scene.put(1.4, 0.0, 0.05);
  scene.goal = {3.0, 0.1};
  wend::Course<double> const course = scenes::answer(field, scene);
  // Off its left tangent, on the goal's side.
  CHECK(angle_of(course.direction) == doctest::Approx(std::asin((0.05 + 0.1 + margin) / 1.4) + inset));
}

TEST_CASE("through_gap: of two gaps that are as good it keeps the one that its nose points to") {
  for (double const nose : {0.5, -0.5}) {
    Scene scene;
    scene.put(0.9, 0.0, 0.3);
    scene.goal = {3.0, 0.0};
    scene.pose.heading = at_angle(nose);
    for (int i = 0; i < 5; ++i) {
      wend::Course<double> const course = scenes::answer(field, scene);
      CHECK(course.direction.y() * nose > 0.0);
      scene.pose.heading = at_angle(0.7 * angle_of(scene.pose.heading));  // turned back half way
    }
  }
}

TEST_CASE("through_gap brings a machine through random discs to the goal, or stops, without touching one") {
  Random random(8);
  int arrived = 0;
  int worlds = 0;
  for (int world = 0; world < 200; ++world) {
    scenes::Scene<double, 12> scene;
    for (int i = 0; i < 12; ++i) {
      scene.put(random.between(0.5, 3.5), random.between(-1.5, 1.5), random.between(0.05, 0.2));
    }
    scene.goal = {4.5, random.between(-1.0, 1.0)};
    scene.pose.position = {-0.5, random.between(-1.0, 1.0)};
    ++worlds;
    double least = 9.0;
    for (int tick = 0; tick < 1500; ++tick) {
      auto const percept = scene.percept();
      wend::Course<double> const course = wend::evaluate(field, percept);
      least = std::min(least, percept.clearance);
      if (percept.goal_distance < 0.05) {
        ++arrived;
        break;
      }
      scene.pose = {scene.pose.position + 0.01 * course.direction, course.direction};
    }
    CHECK(least > 0.0);
  }
  CHECK(arrived > worlds * 8 / 10);
}

TEST_CASE_TEMPLATE("through_gap goes straight to the goal without discs, and where they are out of reach or behind it",
                   S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.goal = {S(0.0F), S(2.0F)};
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) == 1);
  scene.put(S(0.0F), S(2.5F), S(0.3F));  // behind the goal
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) == 1);
  scene.goal = {S(0.0F), S(9.0F)};  // before it, but 2 m away
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) == 1);
  scene.put(S(0.0F), S(1.5F), S(0.3F));
  CHECK(numbers::first(scenes::answer(field, scene).direction.y()) < 1);
}

TEST_CASE_TEMPLATE("through_gap has no opinion when shut in, at a disc's centre, on the goal, and without one", S,
                   WEND_TEST_NUMBERS) {
  scenes::Scene<S> ring;
  for (int i = 0; i < scenes::disc_count; ++i) {
    float const angle = 1.5708F * static_cast<float>(i) + 0.4F;
    ring.put(S(std::cos(angle)), S(std::sin(angle)), S(0.6F));
  }
  ring.goal = {S(4.0F), S(0.0F)};
  CHECK(numbers::first(scenes::answer(field, ring).confidence) == 0);
  scenes::Scene<S> centre;
  centre.put(S(0.0F), S(0.0F), S(0.1F));
  centre.goal = {S(4.0F), S(0.0F)};
  CHECK(numbers::first(scenes::answer(field, centre).confidence) == 0);
  scenes::Scene<S> on_goal;
  on_goal.goal = {S(2.0F), S(0.0F)};
  CHECK(numbers::first(scenes::answer(field, on_goal).confidence) == 1);
  on_goal.goal = on_goal.pose.position;
  CHECK(numbers::first(scenes::answer(field, on_goal).confidence) == 0);
  on_goal.goal = {S(scenes::nan), S(0.0F)};
  CHECK(numbers::first(scenes::answer(field, on_goal).confidence) == 0);
}

TEST_CASE_TEMPLATE("through_gap leaves a disc that it touches by the half-plane that is free", S, WEND_TEST_NUMBERS) {
  scenes::Scene<S> scene;
  scene.put(S(0.3F), S(0.0F), S(0.2F));  // overlaps the machine by 0.1
  scene.goal = {S(3.0F), S(0.1F)};
  wend::Course<S> const course = scenes::answer(field, scene);
  CHECK(numbers::first(course.confidence) == 1);
  CHECK(numbers::first(course.direction.x()) == doctest::Approx(-std::sin(0.2)));
  scene.dt = S(0.0F);
  CHECK(numbers::first(scenes::answer(field, scene).direction.x()) == numbers::first(course.direction.x()));
}

TEST_CASE("through_gap takes discs that are all at one place for one") {
  for (int i = 0; i < 100; ++i) {
    Scene alone;
    alone.goal = 3.0 * at_angle(0.06 * i);
    alone.put(0.9, 0.2, 0.3);
    Scene many = alone;
    for (int k = 1; k < 8; ++k) {
      many.put(0.9, 0.2, 0.3);
    }
    CHECK(numbers::same(scenes::answer(field, alone).direction, scenes::answer(field, many).direction));
    CHECK(scenes::answer(field, many).confidence == 1.0);
  }
}
