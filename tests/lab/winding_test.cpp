// Winding numbers of fields of known index, boundaries of known shape, and the paths of a policy over a box.
#include <cmath>
#include <cstddef>
#include <numbers>
#include <set>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/lab/paths.hpp"
#include "wend/lab/winding.hpp"

namespace {

using namespace wend;
using lab::CourseMap;
using lab::Interval;
using lab::PathInterval;
using lab::StillWorld;
using lab::Stretch;

static_assert(PlainNumber<PathInterval>);
constexpr double pi = std::numbers::pi;

// (z - c)^n for n > 0, its conjugate for n < 0: index n at c.
struct power {
  int n;
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    S const x = percept.pose.position.x() - S(0.1F);
    S const y = percept.pose.position.y() - S(0.2F);
    Vec2<S> z{S(1.0F), S(0.0F)};
    for (int k = 0; k < (n < 0 ? -n : n); ++k) {
      z = Vec2<S>{z.x() * x - z.y() * y, z.x() * y + z.y() * x};
    }
    return course_along(Vec2<S>{z.x(), n < 0 ? S(-z.y()) : z.y()}, S(1.0F));
  }
};

double length_of(std::vector<Stretch> const& way) {
  double sum = 0.0;
  for (Stretch const& s : way) {
    sum += s.radius > 0.0 ? s.radius * std::abs(s.to - s.from) : (s.end - s.start).norm();
  }
  return sum;
}

// The area to the left of a closed way, by Green's theorem, from many short chords.
double area_of(std::vector<Stretch> const& way) {
  double sum = 0.0;
  for (Stretch const& s : way) {
    constexpr int pieces = 2000;
    for (int i = 0; i < pieces; ++i) {
      sum += 0.5 * cross(s.at(i / 2000.0), s.at((i + 1) / 2000.0));
    }
  }
  return sum;
}

}  // namespace

TEST_CASE("the winding number of z^n is n round 0, and 0 beside it") {
  lab::World const empty;
  StillWorld<1> const world("test", empty, {5.0, 5.0}, 0.2F, {1.0, 0.0});
  for (int n = -5; n <= 5; ++n) {
    power const field{n};
    CourseMap const map(field, world);
    CHECK(winding_number(map, lab::boundary({-1.0, -2.0}, {1.5, 1.0}, {}), 1e-6) == n);
    CHECK(winding_number(map, lab::boundary({0.5, -2.0}, {1.5, 1.0}, {}), 1e-6) == 0);
    Disc<double> const circle{{0.3, 0.1}, 0.7};
    CHECK(winding_number(map, {Stretch::round(circle, 0.0, 2.0 * pi)}, 1e-6) == n);
    CHECK(winding_number(map, {Stretch::round(circle, 2.0 * pi, 0.0)}, 1e-6) == -n);
    CHECK(winding_number(map, lab::boundary({-1.0, -2.0}, {1.5, 1.0}, {circle}), 1e-6) == 0);
  }
}

TEST_CASE("a course that hardly turns stays in a half plane, and one that turns right round does not") {
  // Vectors a hair to either side of each other must not count as opposed, nor opposed ones as a hair apart.
  lab::detail::Cone thin;
  for (double const y : {0.0, 1e-17, -1e-17, 3e-16, -1e-15, 1e-3}) {
    CHECK(thin.add(Vec2<double>{1.0, y}));
  }
  CHECK_FALSE(thin.add(Vec2<double>{-1.0, 0.0}));
  lab::detail::Cone wide;
  CHECK(wide.add(Vec2<double>{1.0, 0.0}));
  CHECK(wide.add(Vec2<double>{-0.5, 1.0}));
  CHECK(wide.add(Vec2<double>{0.0, 1.0}));
  CHECK_FALSE(wide.add(Vec2<double>{0.25, -1.0}));
  lab::detail::Cone opposed;
  CHECK(opposed.add(Vec2<double>{0.3, 0.4}));
  CHECK_FALSE(opposed.add(Vec2<double>{-0.3, -0.4}));
  lab::detail::Cone around_zero;
  CHECK_FALSE(around_zero.add(Vec2<Interval>{Interval(0.0, 1.0), Interval(-1.0, 1.0)}));
  lab::detail::Cone beside_zero;
  CHECK(beside_zero.add(Vec2<Interval>{Interval(1e-9, 1.0), Interval(-1.0, 1.0)}));
}

TEST_CASE("there is no winding number through a zero") {
  lab::World const empty;
  StillWorld<1> const world("test", empty, {5.0, 5.0}, 0.2F, {1.0, 0.0});
  power const field{1};
  CourseMap const map(field, world);
  double const y = static_cast<double>(0.2F);
  CHECK_FALSE(winding_number(map, lab::boundary({-1.0, y}, {1.5, 1.0}, {}), 1e-6).has_value());
}

TEST_CASE("a course that jumps by less than half a turn is taken the short way") {
  lab::World world_of_one;
  world_of_one.add(0.0, 0.0, 0.5);
  StillWorld<1> const world("test", world_of_one, {3.0, 0.0}, 0.2F, {1.0, 0.0});
  auto const hard = guarded(below(clearance, 0.4F, 0.4F), away_from_discs{}, toward_goal{});
  CourseMap const map(hard, world);
  CHECK(winding_number(map, lab::boundary({-3.0, -2.0}, {2.0, 2.0}, {}), 1e-6) == 0);       // far out: toward the goal
  CHECK(winding_number(map, {Stretch::round({{0.0, 0.0}, 0.9}, 0.0, 2.0 * pi)}, 1e-6) == 1);  // far in: away
  CHECK(winding_number(map, lab::boundary({-1.3, -0.2}, {-0.9, 0.2}, {}), 1e-6) == -1);     // round where they oppose
  CHECK(winding_number(map, lab::boundary({0.9, -0.2}, {1.3, 0.2}, {}), 1e-6) == 0);
}

TEST_CASE("the boundary of a rectangle less discs has the length and the area of what is left") {
  using Discs = std::vector<Disc<double>>;
  Vec2<double> const low{-2.0, -1.0};
  Vec2<double> const high{2.0, 1.5};
  auto const way = [&](Discs const& holes) { return lab::boundary(low, high, holes); };
  double const area = 4.0 * 2.5;
  CHECK(length_of(way({})) == doctest::Approx(13.0));
  CHECK(area_of(way({})) == doctest::Approx(area));
  Disc<double> const inside{{0.0, 0.25}, 0.5};
  CHECK(length_of(way({inside})) == doctest::Approx(13.0 + pi));
  CHECK(area_of(way({inside})) == doctest::Approx(area - 0.25 * pi));
  CHECK(area_of(way({inside, inside})) == doctest::Approx(area - 0.25 * pi));              // twice the same
  CHECK(area_of(way({inside, {{0.1, 0.25}, 0.2}})) == doctest::Approx(area - 0.25 * pi));  // one within the other
  // Half out of a side, and a quarter in a corner.
  CHECK(area_of(way({{{-2.0, 0.25}, 0.5}})) == doctest::Approx(area - 0.125 * pi));
  CHECK(area_of(way({{{2.0, 1.5}, 0.8}})) == doctest::Approx(area - 0.16 * pi));
  CHECK(length_of(way({{{2.0, 1.5}, 0.8}})) == doctest::Approx(13.0 - 1.6 + 0.4 * pi));
  // Two circles of radius r whose centres are r apart share (2 pi / 3 - sqrt(3) / 2) r^2.
  double const both = 2.0 * 0.25 * pi - 0.25 * (2.0 * pi / 3.0 - 0.5 * std::sqrt(3.0));
  CHECK(area_of(way({inside, {{0.5, 0.25}, 0.5}})) == doctest::Approx(area - both));
  CHECK(area_of(way({{{9.0, 9.0}, 0.5}})) == doctest::Approx(area));
}

TEST_CASE("a stretch lies within its boxes") {
  Stretch const arc = Stretch::round({{1.0e3, -2.0}, 0.7}, 5.0, 0.5);
  Stretch const line = Stretch::straight({-1.0, 2.0}, {3.0, 7.0});
  for (Stretch const& s : {arc, line}) {
    for (int i = 0; i < 50; ++i) {
      double const a = i / 50.0;
      double const b = (i + 1 + i % 3) / 53.0 > a ? (i + 1 + i % 3) / 53.0 : a + 0.01;
      Vec2<Interval> const box = s.box(a, b);
      for (int k = 0; k <= 20; ++k) {
        Vec2<double> const p = s.at(a + (b - a) * k / 20.0);
        CHECK((box.x().contains(p.x()) && box.y().contains(p.y())));
      }
      CHECK(box.x().width() < 3.0 * (b - a) * 5.0 + 1e-9);
    }
  }
}

TEST_CASE("for_each_path takes every path once") {
  PathInterval const x(Interval(-1.0, 1.0));
  std::multiset<int> seen;
  CHECK(lab::for_each_path(10, [&]() {
    int way = x < PathInterval(0.5) ? 1 : 2;
    way = 10 * way + (way == 1 && x > PathInterval(-0.5) ? 1 : 2);  // asked on one of the paths only
    way = 10 * way + (x < PathInterval(2.0) ? 1 : 2);               // decided
    seen.insert(way);
    return true;
  }));
  CHECK(seen == std::multiset<int>{111, 121, 221});
  int calls = 0;
  CHECK_FALSE(lab::for_each_path(2, [&]() {
    ++calls;
    return x < PathInterval(0.5) || x > PathInterval(-0.5) || true;  // three paths
  }));
  CHECK(calls == 2);
  CHECK_FALSE(lab::for_each_path(9, [&]() { return x < PathInterval(0.5); }));  // one said no
}
