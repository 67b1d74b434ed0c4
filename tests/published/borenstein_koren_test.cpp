// The vector field histogram: Borenstein and Koren (1991), The vector field histogram - fast obstacle avoidance for
// mobile robots, IEEE Trans. Robotics and Automation 7(3):278-288 (from memory). Checked: the density m = c^2 (a - b d)
// with a - b d_max = 0, the sectors that a disc fills (by angles), the weights of the smoothing, and the choice of the
// steering sector (valleys under a threshold; the one nearest to the target; the middle between the valley's near
// border and s_max sectors further, or its far border where that is nearer), searched here in the way of the source,
// with lists of sectors.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/angle.hpp"
#include "wend/fields/sector_histogram.hpp"

namespace {

using Vec = wend::Vec2<double>;
using Scene = scenes::Scene<double, 8>;
constexpr int sectors = 36;
using Field = wend::sector_histogram<sectors>;
constexpr double alpha = 2.0 * std::numbers::pi / sectors;

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
  double const nose = random.between(-3.0, 3.0);
  scene.pose = {{random.between(-1.0, 1.0), random.between(-1.0, 1.0)}, {std::cos(nose), std::sin(nose)}};
  scene.goal = {random.between(-4.0, 4.0), random.between(-4.0, 4.0)};
  for (int i = 0; i < 8; ++i) {
    scene.put(random.between(-2.5, 2.5), random.between(-2.5, 2.5), random.between(0.05, 0.4));
  }
  return scene;
}

double angle_of(Vec const& v) { return std::atan2(v.y(), v.x()); }

// The bearing of a direction from the nose, in sectors: a whole number in the middle of one.
double in_sectors(Scene const& scene, Vec const& direction) {
  return wend::turn(angle_of(scene.pose.heading), angle_of(direction)) / alpha;
}
double sectors_between(double a, double b) { return std::abs(std::remainder(a - b, static_cast<double>(sectors))); }

}  // namespace

TEST_CASE("the density of a disc falls from 1 at contact to 0 at the reach, and a disc fills what its angle covers") {
  Random random(1991);
  Field const field{.smoothing = 0};
  int filled = 0, wrong = 0;
  for (int k = 0; k < 3000; ++k) {
    Scene scene = random_scene(random);
    scene.discs = {};
    Vec const at{random.between(-2.0, 2.0), random.between(-2.0, 2.0)};
    double const radius = random.between(0.02, 0.5);
    scene.put(at.x(), at.y(), radius);
    Vec const offset = at - scene.pose.position;
    double const d = wend::length(offset);
    double const contact = radius + scene.robot_radius;
    double const expected = std::clamp(1.0 - (d - contact) / 1.5, 0.0, 1.0);  // c = 1, a = 1, b = 1 / 1.5 m
    double const covered = d > contact + 0.05 ? std::asin((contact + 0.05) / d) : std::numbers::pi / 2.0;
    auto const density = field.densities(scene.percept());
    for (int i = 0; i < sectors; ++i) {
      double const off = alpha * sectors_between(i, in_sectors(scene, offset));
      double const beyond = off - (covered + 0.5 * alpha);
      if (std::abs(beyond) < 1.0e-6) {
        continue;
      }
      double const here = density[static_cast<std::size_t>(i)];
      filled += here > 0.0 ? 1 : 0;
      wrong += std::abs(here - (beyond < 0.0 ? expected : 0.0)) > 1.0e-7 ? 1 : 0;
    }
  }
  CHECK(filled > 5000);
  CHECK(wrong == 0);
}

TEST_CASE("densities of discs add up, and are smoothed by weights that rise by one to the middle") {
  Random random(5);
  for (int const l : {1, 2, 5}) {
    Field const raw{.smoothing = 0};
    Field const smooth{.smoothing = l};
    double worst = 0.0;
    double sum_off = 0.0;
    for (int k = 0; k < 200; ++k) {
      Scene const scene = random_scene(random);
      auto const h = raw.densities(scene.percept());
      auto const s = smooth.densities(scene.percept());
      std::array<double, sectors> alone{};
      for (int i = 0; i < scene.discs.size(); ++i) {
        Scene one = scene;
        one.discs = {};
        one.discs.add(scene.discs[i]);
        auto const of_one = raw.densities(one.percept());
        for (std::size_t j = 0; j < sectors; ++j) {
          alone[j] += of_one[j];
        }
      }
      for (int i = 0; i < sectors; ++i) {
        // h_{k-l} + 2 h_{k-l+1} + ... + (l+1) h_k + ... + h_{k+l}, over the sum of the weights.
        double expected = 0.0;
        for (int j = 0; j <= 2 * l; ++j) {
          int const place = (i - l + j + 2 * sectors) % sectors;
          expected += (j <= l ? j + 1 : 2 * l + 1 - j) * h[static_cast<std::size_t>(place)];
        }
        expected /= (l + 1) * (l + 1);
        worst = std::max(worst, std::abs(expected - s[static_cast<std::size_t>(i)]));
        sum_off = std::max(sum_off, std::abs(alone[static_cast<std::size_t>(i)] - h[static_cast<std::size_t>(i)]));
      }
    }
    CHECK(worst < 1.0e-7);
    CHECK(sum_off < 1.0e-12);
  }
}

TEST_CASE("the course is the one that a search through lists of valleys finds") {
  Random random(77);
  Field const field;
  double const half = 4.0;  // s_max is 9: borders are kept 4 sectors away
  int to_goal = 0, wide = 0, narrow = 0, none = 0, wrong = 0, free = 0;
  for (int k = 0; k < 6000; ++k) {
    Scene const scene = random_scene(random);
    auto const percept = scene.percept();
    auto const density = field.densities(percept);
    auto const course = scenes::answer(field, scene);
    double const goal = in_sectors(scene, scene.goal - scene.pose.position);
    std::array<bool, sectors> open{};
    for (std::size_t i = 0; i < sectors; ++i) {
      open[i] = density[i] < static_cast<double>(field.threshold);
    }
    if (std::all_of(open.begin(), open.end(), [](bool o) { return o; })) {
      ++free;
      wrong += sectors_between(in_sectors(scene, course.direction), goal) < 1.0e-9 ? 0 : 1;
      continue;
    }
    // The candidates of each valley, from its right border to its left one.
    std::vector<double> candidates;
    std::vector<double> narrow_ones;
    for (int first = 0; first < sectors; ++first) {
      if (!open[static_cast<std::size_t>(first)] || open[static_cast<std::size_t>((first + sectors - 1) % sectors)]) {
        continue;
      }
      int last = first;
      while (open[static_cast<std::size_t>((last + 1) % sectors)]) {
        ++last;
      }
      if (last - first >= 2 * half) {
        for (double at = first + half; at <= last - half; at += 1.0) {
          candidates.push_back(at);
        }
      } else {
        narrow_ones.push_back(0.5 * (first + last));
      }
    }
    // A valley with an even number of sectors has its middle between two; the field takes the one nearer to the goal.
    for (double const middle : narrow_ones) {
      candidates.push_back(std::floor(middle));
      candidates.push_back(std::ceil(middle));
    }
    if (candidates.empty()) {
      ++none;
      wrong += course.confidence == 0.0 ? 0 : 1;
      continue;
    }
    double const nearest = *std::min_element(candidates.begin(), candidates.end(), [goal](double a, double b) {
      return sectors_between(a, goal) < sectors_between(b, goal);
    });
    double const got = in_sectors(scene, course.direction);
    bool const in_goal_sector = sectors_between(nearest, goal) <= 0.5;
    bool const ok = in_goal_sector ? sectors_between(got, goal) < 1.0e-6
                                   : std::abs(sectors_between(got, goal) - sectors_between(nearest, goal)) < 1.0e-5;
    wrong += ok && course.confidence == 1.0 ? 0 : 1;
    bool const is_narrow =
        std::any_of(narrow_ones.begin(), narrow_ones.end(), [&](double m) { return std::abs(m - nearest) < 0.6; });
    (in_goal_sector ? to_goal : is_narrow ? narrow : wide) += 1;
  }
  MESSAGE("goal ", to_goal, ", wide ", wide, ", narrow ", narrow, ", none ", none, ", all open ", free);
  CHECK(wrong == 0);
  CHECK(to_goal > 300);
  CHECK(wide > 300);
  CHECK(narrow > 100);
  CHECK(none > 20);
}

TEST_CASE("the speed falls with the density ahead as 1 - h / h_m") {
  Field const field{.slowest = 0.1F};
  for (double const d : {0.5, 0.8, 1.1, 1.4, 1.69, 1.8, 3.0}) {
    Scene scene;
    scene.goal = {0.0, 3.0};
    scene.put(d, 0.0, 0.2);  // wide enough to fill the sectors that are smoothed over
    double const expected = std::clamp(1.0 - std::clamp(1.0 - (d - 0.4) / 1.5, 0.0, 1.0), 0.1, 1.0);
    CHECK(scenes::answer(field, scene).speed_share == doctest::Approx(expected).epsilon(1e-6));
  }
}
