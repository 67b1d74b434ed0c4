// The nearest point in half-planes and a disc, against brute force: a fine grid, and the conditions of Karush (1939),
// Kuhn and Tucker (1951) for a minimum under constraints.
#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/half_planes.hpp"
#include "wend/lab/interval.hpp"

namespace {

using Vec = wend::Vec2<double>;
constexpr int most = 8;
constexpr double radius = 0.5;
template <typename S>
using Planes = wend::HalfPlanes<S, most>;

class Random {
 public:
  explicit Random(std::uint32_t seed) : random_(seed) {}
  double between(double low, double high) {
    return low + (high - low) * (static_cast<double>(random_()) / 4294967296.0);
  }
  int count(int low, int high) { return low + static_cast<int>(random_() % static_cast<unsigned>(high - low + 1)); }

  // Half-planes whose edges cross the disc, all but some; `tight` ones leave little room or none. With a `bundle` over
  // 0 their normals point three ways, but for so many radians.
  Planes<double> planes(bool tight, double bundle = 0.0) {
    Planes<double> all;
    int const n = count(1, most);
    for (int i = 0; i < n; ++i) {
      double const angle = bundle > 0.0 ? 2.1 * count(0, 2) + between(-bundle, bundle)
                                        : between(-std::numbers::pi, std::numbers::pi);
      all.add({{std::cos(angle), std::sin(angle)}, between(tight ? -0.1 : -0.6, tight ? 0.4 : 0.2)});
    }
    return all;
  }
  Vec wish() { return {between(-0.8, 0.8), between(-0.8, 0.8)}; }

 private:
  std::mt19937 random_;
};

// By how much a point is outside the half-plane that it misses by most; not below 0.
double breach_at(Planes<double> const& all, Vec const& v) {
  double worst = 0.0;
  for (int i = 0; i < all.count; ++i) {
    worst = std::max(worst, all[i].offset - wend::dot(all[i].normal, v));
  }
  return worst;
}

// Whether `point` minimises |point - wish|^2: wish - point has to be a sum of multiples >= 0 of the outward normals of
// what holds it back, two at most in the plane.
bool is_nearest(Planes<double> const& all, Vec const& wish, Vec const& point) {
  constexpr double touching = 1.0e-9;
  std::vector<Vec> outward;
  for (int i = 0; i < all.count; ++i) {
    if (std::abs(wend::dot(all[i].normal, point) - all[i].offset) < touching) {
      outward.push_back(-all[i].normal);
    }
  }
  if (std::abs(wend::length(point) - radius) < touching) {
    outward.push_back(point / wend::length(point));
  }
  Vec const pull = wish - point;
  double const size = wend::length(pull);
  if (size < 1.0e-9) {
    return true;
  }
  for (Vec const& a : outward) {
    if (wend::dot(a, pull) > 0.0 && std::abs(wend::cross(a, pull)) < 1.0e-7 * size) {
      return true;
    }
    for (Vec const& b : outward) {
      double const area = wend::cross(a, b);
      if (std::abs(area) > 1.0e-9 && wend::cross(pull, b) / area >= -1.0e-7 && wend::cross(a, pull) / area >= -1.0e-7) {
        return true;
      }
    }
  }
  return false;
}

// Whether no step from `point` lessens the breach there: the inward normals of the half-planes that it misses by most,
// and that of the disc where it is on its rim, do not fit in an open half-plane.
bool breaks_least(Planes<double> const& all, Vec const& point) {
  constexpr double touching = 1.0e-9;
  double const breach = breach_at(all, point);
  if (breach == 0.0) {
    return true;
  }
  std::vector<double> angles;
  for (int i = 0; i < all.count; ++i) {
    if (all[i].offset - wend::dot(all[i].normal, point) > breach - touching) {
      angles.push_back(std::atan2(all[i].normal.y(), all[i].normal.x()));
    }
  }
  if (wend::length(point) > radius - touching) {
    angles.push_back(std::atan2(-point.y(), -point.x()));
  }
  std::sort(angles.begin(), angles.end());
  double widest = angles.front() + 2.0 * std::numbers::pi - angles.back();
  for (std::size_t i = 1; i < angles.size(); ++i) {
    widest = std::max(widest, angles[i] - angles[i - 1]);
  }
  return widest <= std::numbers::pi + 1.0e-7;
}

}  // namespace

TEST_CASE("the nearest point in all half-planes is in them, and no point of a fine grid lies nearer") {
  Random random(2011);
  constexpr int side = 150;
  int found = 0, held_back = 0, outside = 0, beaten = 0, overlooked = 0, not_least = 0;
  for (int k = 0; k < 600; ++k) {
    auto const all = random.planes(k % 3 == 0);
    Vec const wish = random.wish();
    auto const nearest = wend::nearest_in_all(all, radius, wish);
    double best_on_grid = 1.0e9;
    for (int i = -side; i <= side; ++i) {
      for (int j = -side; j <= side; ++j) {
        Vec const v = radius / side * Vec{static_cast<double>(i), static_cast<double>(j)};
        if (wend::length(v) <= radius && breach_at(all, v) == 0.0) {
          best_on_grid = std::min(best_on_grid, wend::length(Vec(v - wish)));
        }
      }
    }
    if (!nearest.found) {
      overlooked += best_on_grid < 1.0e9 ? 1 : 0;
      continue;
    }
    ++found;
    held_back += wend::length(Vec(wish - nearest.point)) > 1.0e-3 ? 1 : 0;
    outside += breach_at(all, nearest.point) > 1.0e-12 || wend::length(nearest.point) > radius + 1.0e-12 ? 1 : 0;
    beaten += best_on_grid < wend::length(Vec(nearest.point - wish)) - 1.0e-12 ? 1 : 0;
    not_least += is_nearest(all, wish, nearest.point) ? 0 : 1;
  }
  CHECK(found > 300);
  CHECK(found < 590);
  CHECK(held_back > 200);
  CHECK(outside == 0);
  CHECK(beaten == 0);
  CHECK(overlooked == 0);
  CHECK(not_least == 0);
}

TEST_CASE("the nearest point meets the conditions of Karush, Kuhn and Tucker") {
  Random random(1951);
  int found = 0, not_least = 0, outside = 0, not_found = 0;
  for (int k = 0; k < 100'000; ++k) {
    auto const all = random.planes(k % 2 == 0);
    Vec const wish = random.wish();
    auto const nearest = wend::nearest_in_all(all, radius, wish);
    if (!nearest.found) {
      ++not_found;
      continue;
    }
    ++found;
    outside += breach_at(all, nearest.point) > 1.0e-9 || wend::length(nearest.point) > radius + 1.0e-12 ? 1 : 0;
    not_least += is_nearest(all, wish, nearest.point) ? 0 : 1;
  }
  CHECK(found > 30'000);
  CHECK(not_found > 20'000);
  CHECK(outside == 0);
  CHECK(not_least == 0);
}

TEST_CASE("no step lessens the least breach, and no point of a grid has less") {
  Random random(1991);
  int not_least = 0, not_there = 0, out = 0, empty = 0, beaten = 0;
  for (int k = 0; k < 50'000; ++k) {
    auto const all = random.planes(true, k % 2 == 0 ? 0.0 : std::pow(10.0, random.between(-5.0, -1.0)));
    auto const least = wend::least_breach(all, radius);
    empty += least.breach > 1.0e-3 ? 1 : 0;
    not_least += breaks_least(all, least.point) ? 0 : 1;
    not_there += std::abs(breach_at(all, least.point) - least.breach) > 1.0e-9 ? 1 : 0;
    out += wend::length(least.point) > radius + 1.0e-12 ? 1 : 0;
    for (int i = -20; k % 50 == 0 && i <= 20; ++i) {
      for (int j = -20; j <= 20; ++j) {
        Vec const v = radius / 20.0 * Vec{static_cast<double>(i), static_cast<double>(j)};
        beaten += wend::length(v) <= radius && breach_at(all, v) < least.breach - 1.0e-12 ? 1 : 0;
      }
    }
  }
  CHECK(empty > 15'000);
  CHECK(not_least == 0);
  CHECK(not_there == 0);
  CHECK(out == 0);
  CHECK(beaten == 0);
}

TEST_CASE("where the nearest point is not found the least breach is over 0, and the other way round") {
  Random random(3);
  int undecided = 0, found = 0, not_found = 0;
  for (int k = 0; k < 20'000; ++k) {
    auto const all = random.planes(true);
    bool const is_found = wend::nearest_in_all(all, radius, random.wish()).found;
    double const breach = wend::least_breach(all, radius).breach;
    (is_found ? found : not_found) += 1;
    undecided += is_found ? (breach > 1.0e-9 ? 1 : 0) : (breach < 1.0e-12 ? 1 : 0);
  }
  CHECK(undecided == 0);
  CHECK(found > 2000);
  CHECK(not_found > 2000);
}

TEST_CASE("in single precision the points are those of double precision, to some roundings") {
  Random random(32);
  int compared = 0, outside = 0, worse = 0, decided_otherwise = 0;
  for (int k = 0; k < 20'000; ++k) {
    auto const all = random.planes(k % 2 == 0);
    Planes<float> single;
    for (int i = 0; i < all.count; ++i) {
      single.add({all[i].normal.cast<float>(), static_cast<float>(all[i].offset)});
    }
    Vec const wish = random.wish();
    auto const nearest = wend::nearest_in_all(all, radius, wish);
    auto const in_single = wend::nearest_in_all(single, 0.5F, wend::Vec2<float>(wish.cast<float>()));
    decided_otherwise += nearest.found == in_single.found ? 0 : 1;
    if (nearest.found && in_single.found) {
      ++compared;
      Vec const point = in_single.point.cast<double>();
      outside += breach_at(all, point) > 3.0e-6 ? 1 : 0;
      // Edges that are nearly parallel make the point uncertain, but not how far it is from the wish.
      worse += wend::length(Vec(point - wish)) > wend::length(Vec(nearest.point - wish)) + 1.0e-3 ? 1 : 0;
    }
    double const breach = wend::least_breach(all, radius).breach;
    auto const least = wend::least_breach(single, 0.5F);
    worse += breach_at(all, Vec(least.point.cast<double>())) > breach + 1.0e-5 ? 1 : 0;
  }
  CHECK(compared > 5000);
  CHECK(decided_otherwise < 5);
  CHECK(outside == 0);
  CHECK(worse == 0);
}

TEST_CASE_TEMPLATE("half-planes by hand", S, WEND_TEST_NUMBERS) {
  using V = wend::Vec2<S>;
  auto const at = [](V const& v, double x, double y) {
    return std::abs(static_cast<double>(numbers::first(v.x())) - x) < 1.0e-6 &&
           std::abs(static_cast<double>(numbers::first(v.y())) - y) < 1.0e-6;
  };
  S const one = S(1.0F);
  Planes<S> all;
  CHECK(at(wend::nearest_in_all(all, one, V{S(0.3F), S(0.4F)}).point, 0.3, 0.4));  // no half-plane: the wish
  CHECK(at(wend::nearest_in_all(all, one, V{S(3.0F), S(4.0F)}).point, 0.6, 0.8));  // held to the disc
  CHECK(at(wend::least_breach(all, one).point, 0.0, 0.0));
  all.add({{S(0.0F), S(1.0F)}, S(0.5F)});  // y >= 0.5
  CHECK(at(wend::nearest_in_all(all, one, V{S(0.3F), S(0.0F)}).point, 0.3, 0.5));
  CHECK(at(wend::nearest_in_all(all, one, V{S(3.0F), S(0.0F)}).point, std::sqrt(0.75), 0.5));  // where edge meets disc
  all.add({{S(-1.0F), S(0.0F)}, S(0.25F)});  // x <= -0.25
  CHECK(at(wend::nearest_in_all(all, one, V{S(0.3F), S(0.0F)}).point, -0.25, 0.5));  // the corner
  all.add({{S(0.0F), S(1.0F)}, S(0.25F)});  // y >= 0.25: nothing new
  all.add({{S(0.0F), S(1.0F)}, S(0.5F)});  // y >= 0.5 once more
  CHECK(at(wend::nearest_in_all(all, one, V{S(0.3F), S(0.0F)}).point, -0.25, 0.5));
  CHECK(numbers::all<S>(wend::nearest_in_all(all, one, V{S(0.3F), S(0.0F)}).found));
  all.add({{S(0.0F), S(-1.0F)}, S(-0.1F)});  // y <= 0.1: no point is left, and y = 0.3 misses both by 0.2
  CHECK(numbers::none<S>(wend::nearest_in_all(all, one, V{S(0.3F), S(0.0F)}).found));
  auto const least = wend::least_breach(all, one);
  CHECK(std::abs(static_cast<double>(numbers::first(least.breach)) - 0.2) < 1.0e-6);
  CHECK(std::abs(static_cast<double>(numbers::first(least.point.y())) - 0.3) < 1.0e-6);

  Planes<S> beyond;
  beyond.add({{S(1.0F), S(0.0F)}, S(1.5F)});  // out of the disc's reach by 0.5
  CHECK(numbers::none<S>(wend::nearest_in_all(beyond, one, V{S(0.0F), S(0.0F)}).found));
  CHECK(at(wend::least_breach(beyond, one).point, 1.0, 0.0));
  CHECK(std::abs(static_cast<double>(numbers::first(wend::least_breach(beyond, one).breach)) - 0.5) < 1.0e-6);
  CHECK(at(wend::least_breach(beyond, S(0.0F)).point, 0.0, 0.0));  // a disc of radius 0
}

TEST_CASE("a box of half-planes encloses the nearest point of each of its members") {
  Random random(8);
  int out = 0, compared = 0;
  for (int k = 0; k < 300; ++k) {
    auto const all = random.planes(k % 2 == 0);
    Vec const wish = random.wish();
    double const width = std::pow(10.0, random.between(-6.0, -1.0));
    wend::HalfPlanes<wend::lab::Interval, most> box;
    auto const around = [width](double x) { return wend::lab::Interval(x - width, x + width); };
    for (int i = 0; i < all.count; ++i) {
      box.add({{around(all[i].normal.x()), around(all[i].normal.y())}, around(all[i].offset)});
    }
    auto const set = wend::nearest_in_all(box, wend::lab::Interval(radius),
                                          wend::Vec2<wend::lab::Interval>{around(wish.x()), around(wish.y())});
    auto const set_least = wend::least_breach(box, wend::lab::Interval(radius));
    for (int member = 0; member < 20; ++member) {
      auto const near = [&random, width](double x) { return x + width * random.between(-0.99, 0.99); };
      Planes<double> one;
      for (int i = 0; i < all.count; ++i) {
        one.add({{near(all[i].normal.x()), near(all[i].normal.y())}, near(all[i].offset)});
      }
      auto const nearest = wend::nearest_in_all(one, radius, Vec{near(wish.x()), near(wish.y())});
      auto const least = wend::least_breach(one, radius);
      ++compared;
      out += set.point.x().contains(nearest.point.x()) && set.point.y().contains(nearest.point.y()) ? 0 : 1;
      out += (nearest.found ? set.found.can_be : set.found.can_be_not) ? 0 : 1;
      out += set_least.point.x().contains(least.point.x()) && set_least.breach.contains(least.breach) ? 0 : 1;
    }
  }
  CHECK(compared == 6000);
  CHECK(out == 0);
}
