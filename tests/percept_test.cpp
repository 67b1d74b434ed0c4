// look: what the machine knows, against brute force in double precision.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <limits>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/disc.hpp"
#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace {

using wend::Disc;
using wend::Vec2;

constexpr int capacity = 12;
template <typename S>
using Discs = wend::DiscSet<S, capacity>;

// A percept refers to its discs, so look takes none that is about to go.
template <typename S, typename Set>
concept CanLookAt =
    requires(wend::Pose<S> pose, Vec2<S> goal, Set set, S x) { wend::look(pose, goal, static_cast<Set>(set), x, x); };
static_assert(CanLookAt<float, Discs<float>&> && CanLookAt<float, Discs<float> const&>);
static_assert(!CanLookAt<float, Discs<float>&&>, "a temporary set would be gone before the percept is read");
static_assert(!CanLookAt<float, Discs<float> const&&>, "and so would one that a function returns as const");
static_assert(!CanLookAt<wend::lab::Pack<4>, Discs<wend::lab::Pack<4>>&&>);

class Source {
 public:
  explicit Source(unsigned seed) : random_(seed) {}
  float even(float low, float high) { return low + (high - low) * static_cast<float>(random_() >> 8) * 0x1p-24F; }
  template <typename S>
  S number(float low, float high) {
    return numbers::make<S>([&](int) { return even(low, high); });
  }
  template <typename S>
  Vec2<S> vector(float reach) {
    S const x = number<S>(-reach, reach);
    return {x, number<S>(-reach, reach)};
  }
  template <typename S>
  Vec2<S> unit() {
    std::array<double, 16> angle{};
    for (double& a : angle) {
      a = static_cast<double>(even(-4.0F, 4.0F));
    }
    S const x = numbers::make<S>([&](int k) { return std::cos(angle[static_cast<std::size_t>(k)]); });
    S const y = numbers::make<S>([&](int k) { return std::sin(angle[static_cast<std::size_t>(k)]); });
    return {x, y};
  }

 private:
  std::mt19937 random_;
};

// A machine somewhere among up to `capacity` discs, another scene in each lane.
template <typename S>
struct Scene {
  wend::Pose<S> pose;
  Vec2<S> goal;
  Discs<S> discs;
  S radius{S(0.2F)};
  S dt{S(0.05F)};

  explicit Scene(unsigned seed) {
    Source source(seed);
    pose = {source.vector<S>(5.0F), source.unit<S>()};
    goal = source.vector<S>(8.0F);
    for (unsigned i = 0; i < seed % (capacity + 1); ++i) {
      Vec2<S> const centre = source.vector<S>(6.0F);
      discs.add({centre, source.number<S>(0.0F, 1.0F)});
    }
    radius = source.number<S>(0.05F, 0.4F);
  }
  auto look() const { return wend::look(pose, goal, discs, radius, dt); }
};

struct Plain {
  double x, y;
};
template <wend::Number S>
Plain plain(Vec2<S> const& v, int k) {
  return {static_cast<double>(numbers::lane(v.x(), k)), static_cast<double>(numbers::lane(v.y(), k))};
}
template <wend::Number S>
double plain(S const& x, int k = 0) {
  return static_cast<double>(numbers::lane(x, k));
}
double between(Plain a, Plain b) { return std::hypot(a.x - b.x, a.y - b.y); }

// Metres up to 20 after a few sums and a root: half a unit of 16 each.
template <typename S>
constexpr double tolerance = 100.0 * static_cast<double>(std::numeric_limits<numbers::plain_t<S>>::epsilon());

// The worst deviation of a percept from what std::min_element and std::hypot say of the same scene.
template <typename S>
double off(Scene<S> const& scene, int k) {
  auto const got = scene.look();
  Plain const at = plain(scene.pose.position, k);
  Plain const goal = plain(scene.goal, k);
  double const distance = between(at, goal);
  double worst =
      std::max(std::abs(plain(got.goal_distance, k) - distance),
               between(plain(got.goal_direction, k), {(goal.x - at.x) / distance, (goal.y - at.y) / distance}) *
                   std::min(distance, 1.0));
  auto const gap = [&](Disc<S> const& d) { return between(plain(d.centre, k), at) - plain(d.radius, k); };
  auto const nearest = std::min_element(scene.discs.begin(), scene.discs.end(),
                                        [&](auto const& a, auto const& b) { return gap(a) < gap(b); });
  double const clearance = nearest == scene.discs.end() ? plain(S(wend::far_away)) : gap(*nearest);
  // Without a disc the clearance is some 1e6 m, and a unit of that is 0.06 m in single precision.
  double const scale = nearest == scene.discs.end() ? 1.0e5 : 1.0;
  worst = std::max(worst, std::abs(plain(got.clearance, k) - (clearance - plain(scene.radius, k))) / scale);
  if (nearest != scene.discs.end()) {
    // Two discs may be as near as rounding can tell, so what `look` chose must be one of the nearest, not that one.
    worst = std::max(worst, std::abs(gap(got.nearest) - clearance));
    Plain const centre = plain(got.nearest.centre, k);
    double const from = between(centre, at);
    worst = std::max(
        worst, between(plain(got.away, k), {(at.x - centre.x) / from, (at.y - centre.y) / from}) * std::min(from, 1.0));
  }
  return worst;
}

template <wend::Number S>
bool same_in_lane(wend::Percept<S, capacity> const& all, wend::Percept<numbers::plain_t<S>, capacity> const& one,
                  int k) {
  using numbers::same;
  return same(numbers::lane(all.goal_direction, k), one.goal_direction) &&
         same(numbers::lane(all.goal_distance, k), one.goal_distance) &&
         same(numbers::lane(all.nearest.centre, k), one.nearest.centre) &&
         same(numbers::lane(all.nearest.radius, k), one.nearest.radius) &&
         same(numbers::lane(all.clearance, k), one.clearance) && same(numbers::lane(all.away, k), one.away) &&
         same(numbers::lane(all.dt, k), one.dt) && same(numbers::lane(all.robot_radius, k), one.robot_radius) &&
         same(numbers::lane(all.goal, k), one.goal) && same(numbers::lane(all.pose.position, k), one.pose.position) &&
         same(numbers::lane(all.pose.heading, k), one.pose.heading);
}

}  // namespace

TEST_CASE_TEMPLATE("look agrees with brute force on random scenes", S, WEND_TEST_NUMBERS) {
  double worst = 0.0;
  for (unsigned seed = 0; seed < 1000; ++seed) {
    Scene<S> const scene(seed);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      worst = std::max(worst, off(scene, k));
    }
  }
  CHECK(worst < tolerance<S>);
}

TEST_CASE_TEMPLATE("look on lanes gives the bits that each machine alone would see", S, wend::lab::Pack<4>,
                   wend::lab::Pack<8>) {
  int wrong = 0;
  for (unsigned seed = 0; seed < 300; ++seed) {
    Scene<S> scene(seed);
    if (seed % 5 == 0) {  // some lanes lost, some on the goal, some at the centre of a disc
      float const nan = std::numeric_limits<float>::quiet_NaN();
      scene.goal.x() = numbers::make<S>([&](int k) { return k == 1 ? scene.pose.position.x()[k] : scene.goal.x()[k]; });
      scene.goal.y() = numbers::make<S>([&](int k) { return k == 1 ? scene.pose.position.y()[k] : scene.goal.y()[k]; });
      scene.pose.position.x() = numbers::make<S>([&](int k) { return k == 2 ? nan : scene.pose.position.x()[k]; });
      scene.dt = numbers::make<S>([&](int k) { return k == 0 ? nan : k == 3 ? -1.0F : 0.1F; });
      scene.discs.add({scene.pose.position, S(0.3F)});
    }
    auto const all = scene.look();
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      Discs<float> discs;
      for (Disc<S> const& d : scene.discs) {
        discs.add({numbers::lane(d.centre, k), numbers::lane(d.radius, k)});
      }
      wend::Pose<float> const pose{numbers::lane(scene.pose.position, k), numbers::lane(scene.pose.heading, k)};
      auto const one = wend::look(pose, numbers::lane(scene.goal, k), discs, scene.radius[k], scene.dt[k]);
      wrong += same_in_lane(all, one, k) ? 0 : 1;
    }
  }
  CHECK(wrong == 0);
}

TEST_CASE_TEMPLATE("turning and shifting the whole scene turns what look sees the same way", S, WEND_TEST_NUMBERS) {
  double worst = 0.0;
  for (unsigned seed = 0; seed < 300; ++seed) {
    Scene<S> const scene(seed);
    auto const before = scene.look();
    Source source(seed + 1000);
    wend::Pose<S> const frame{source.vector<S>(5.0F), source.unit<S>()};
    Discs<S> moved;
    for (Disc<S> const& d : scene.discs) {
      moved.add({wend::out_of_frame(frame, d.centre), d.radius});
    }
    wend::Pose<S> const pose{wend::out_of_frame(frame, scene.pose.position),
                             wend::turned_out_of(frame.heading, scene.pose.heading)};
    auto const after = wend::look(pose, wend::out_of_frame(frame, scene.goal), moved, scene.radius, scene.dt);
    Vec2<S> const direction = wend::turned_out_of(frame.heading, before.goal_direction);
    Vec2<S> const away = wend::turned_out_of(frame.heading, before.away);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      worst = std::max(worst, std::abs(plain(after.goal_distance, k) - plain(before.goal_distance, k)));
      worst = std::max(worst, between(plain(after.goal_direction, k), plain(direction, k)) *
                                  std::min(1.0, plain(before.goal_distance, k)));
      if (scene.discs.size() > 0) {
        double const from = plain(wend::length(Vec2<S>(before.pose.position - before.nearest.centre)), k);
        worst = std::max(worst, std::abs(plain(after.clearance, k) - plain(before.clearance, k)));
        worst = std::max(worst, between(plain(after.away, k), plain(away, k)) * std::min(1.0, from));
      }
    }
  }
  CHECK(worst < tolerance<S>);
}

TEST_CASE_TEMPLATE("look without a disc sees none, and a clearance without end", S, WEND_TEST_NUMBERS) {
  Discs<S> const none;
  auto const got = wend::look(wend::Pose<S>{}, Vec2<S>(S(3.0F), S(4.0F)), none, S(0.25F), S(0.1F));
  CHECK(numbers::none<S>(got.away_confidence > S(0.0F)));
  CHECK(plain(got.clearance) == 1.0e6 - 0.25);
  CHECK(between(plain(got.away, 0), {0.0, 0.0}) == 0.0);
  CHECK(plain(got.goal_distance) == 5.0);
  CHECK(between(plain(got.goal_direction, 0), {0.6, 0.8}) < 1.0e-7);
  CHECK(plain(got.robot_radius) == 0.25);
}

TEST_CASE_TEMPLATE("on the goal there is no direction to it, and at a disc's centre none away from it", S,
                   WEND_TEST_NUMBERS) {
  wend::Pose<S> const pose{{S(1.5F), S(-2.0F)}, {S(0.0F), S(1.0F)}};
  Discs<S> discs;
  discs.add({pose.position, S(0.75F)});
  auto const got = wend::look(pose, pose.position, discs, S(0.25F), S(0.1F));
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    CHECK(between(plain(got.goal_direction, k), {0.0, 0.0}) == 0.0);
    CHECK(plain(got.goal_distance, k) == 0.0);
    CHECK(between(plain(got.away, k), {0.0, 0.0}) == 0.0);
    CHECK(plain(got.clearance, k) == -1.0);
    CHECK_FALSE(
        numbers::holds(got.away_confidence > S(0.0F), k));  // a disc without a direction is the clearance's business
  }
  wend::Pose<S> beside = pose;
  beside.position.x() = S(1.75F);
  CHECK(numbers::all<S>(wend::look(beside, pose.position, discs, S(0.25F), S(0.1F)).away_confidence > S(0.0F)));
}

TEST_CASE_TEMPLATE("of two discs equally near the first counts, and the nearer edge beats the nearer centre", S,
                   WEND_TEST_NUMBERS) {
  Discs<S> twins;
  twins.add({{S(0.0F), S(2.0F)}, S(0.5F)});
  twins.add({{S(0.0F), S(-2.0F)}, S(0.5F)});
  wend::Pose<S> const pose;
  CHECK(plain(wend::look(pose, wend::zero2<S>(), twins, S(0.2F), S(0.1F)).nearest.centre.y()) == 2.0);
  twins.add({{S(4.0F), S(0.0F)}, S(3.0F)});
  auto const got = wend::look(pose, wend::zero2<S>(), twins, S(0.25F), S(0.1F));
  CHECK(plain(got.nearest.centre.x()) == 4.0);
  CHECK(plain(got.clearance) == 0.75);
  CHECK(between(plain(got.away, 0), {-1.0, 0.0}) == 0.0);
}

TEST_CASE_TEMPLATE("a pose or goal that is no number gives no direction, and a distance no one can take for one", S,
                   WEND_TEST_NUMBERS) {
  float const nan = std::numeric_limits<float>::quiet_NaN();
  Discs<S> discs;
  discs.add({{S(1.0F), S(0.0F)}, S(0.5F)});
  wend::Pose<S> lost;
  lost.position = {S(nan), S(1.0F)};
  auto const no_pose = wend::look(lost, Vec2<S>(S(3.0F), S(0.0F)), discs, S(0.2F), S(0.1F));
  auto const no_goal = wend::look(wend::Pose<S>{}, Vec2<S>(S(3.0F), S(nan)), discs, S(0.2F), S(0.1F));
  CHECK(numbers::none<S>(wend::sound(lost)));
  for (auto const* got : {&no_pose, &no_goal}) {
    CHECK(between(plain(got->goal_direction, 0), {0.0, 0.0}) == 0.0);
    CHECK(numbers::none<S>(got->goal_distance < S(wend::far_away)));
  }
  // Nothing can be said of discs from nowhere: the pose has to be asked with `sound`, as a loop does.
  CHECK(numbers::none<S>(no_pose.away_confidence > S(0.0F)));
  CHECK(between(plain(no_pose.away, 0), {0.0, 0.0}) == 0.0);
  CHECK(plain(no_goal.clearance) == doctest::Approx(0.3));
}

TEST_CASE_TEMPLATE("dt is never negative, never more than far_away, and 0 when it is no number", S, WEND_TEST_NUMBERS) {
  Discs<S> const none;
  auto const dt = [&none](float given) {
    return plain(wend::look(wend::Pose<S>{}, wend::zero2<S>(), none, S(0.2F), S(given)).dt);
  };
  float const inf = std::numeric_limits<float>::infinity();
  CHECK(dt(0.0625F) == 0.0625);
  CHECK(dt(0.0F) == 0.0);
  CHECK(dt(-0.05F) == 0.0);
  CHECK(dt(-inf) == 0.0);
  CHECK(dt(std::numeric_limits<float>::quiet_NaN()) == 0.0);
  CHECK(dt(3.0e38F) == 1.0e6);
  CHECK(dt(inf) == 1.0e6);
}
