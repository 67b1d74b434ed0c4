// Koditschek and Rimon (1990), Robot navigation functions on manifolds with boundary, Advances in Applied Mathematics
// 11:412-442; from memory: phi = (gamma^k / (gamma^k + beta))^(1/k) on a sphere world is, for k large enough, a Morse
// function with values in [0, 1], 1 on the boundary, its only low on the goal, and one saddle for each obstacle.
#include <algorithm>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <random>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/fields/navigation_function.hpp"
#include "wend/lab/dual.hpp"

namespace {

using V = wend::Vec2<double>;
using Field = wend::navigation_function;
using Discs = std::vector<wend::Disc<double>>;

constexpr double robot_radius = 0.25;
constexpr double grown_by = robot_radius + 0.125;  // and the margin; exact in binary

// An outer disc around (0.5, -0.25), and what stands in it.
struct World {
  int k;
  double radius;
  V goal;
  Discs discs;

  [[nodiscard]] Field field() const {
    return {.centre_x = 0.5F, .centre_y = -0.25F, .radius = static_cast<float>(radius), .k = k, .margin = 0.125F};
  }
  [[nodiscard]] V centre() const { return {0.5, -0.25}; }

  template <wend::Number S>
  [[nodiscard]] scenes::Scene<S, 8> scene(wend::Vec2<S> const& place) const {
    scenes::Scene<S, 8> scene;
    scene.robot_radius = S(0.25F);
    scene.pose.position = place;
    scene.goal = {S(goal.x()), S(goal.y())};
    for (auto const& disc : discs) {
      scene.put(S(disc.centre.x()), S(disc.centre.y()), S(disc.radius));
    }
    return scene;
  }
  [[nodiscard]] bool is_free(V const& place, double by = 0.0) const {
    return (place - centre()).norm() < radius - by &&
           std::none_of(
               discs.begin(), discs.end(),
               [&](auto const& disc) { return (place - disc.centre).norm() <= disc.radius + grown_by + by; });
  }
  // phi as the paper has it, of the field's gamma and beta.
  [[nodiscard]] double phi(V const& place) const {
    auto const at = scene<double>(place);
    auto const [gamma, beta] = field().parts(at.percept());
    return std::pow(std::pow(gamma, k) / (std::pow(gamma, k) + beta), 1.0 / k);
  }
  // log(phi^k / (1 - phi^k)), which grows with phi, so that its slopes and saddles are the same, and does not flatten
  // out where phi is near 1.
  [[nodiscard]] double height(V const& place) const {
    auto const at = scene<double>(place);
    auto const [gamma, beta] = field().parts(at.percept());
    return k * std::log(gamma) - std::log(beta);
  }
  [[nodiscard]] wend::Course<double> course(V const& place) const {
    return scenes::answer(field(), scene<double>(place));
  }
};

// One of 4 discs, at places of no symmetry.
World four_discs(int k) {
  return {k, 5.0, {3.25, 1.5}, {{{1.5, 1.0}, 0.25}, {{-1.5, 0.5}, 0.5}, {{0.5, -2.25}, 0.375}, {{-0.5, 2.75}, 0.25}}};
}

// A goal near the outer edge, and in front of it a screen with its hollow side away from it.
World screen(int k) {
  return {k, 5.0, {4.75, -0.25}, {{{0.5, 1.5}, 0.375}, {{1.25, -0.25}, 0.375}, {{0.5, -2.0}, 0.375}}};
}

// The slopes and the second derivatives of the height, by central differences.
struct Shape {
  V slope;
  double determinant;
  double trace;
};
Shape shape(World const& world, V const& q) {
  double const h = 1e-4;
  auto const at = [&](int i, int j) { return world.height(q + h * V{i, j}); };
  double const xx = (at(1, 0) - 2.0 * at(0, 0) + at(-1, 0)) / (h * h);
  double const yy = (at(0, 1) - 2.0 * at(0, 0) + at(0, -1)) / (h * h);
  double const xy = (at(1, 1) - at(1, -1) - at(-1, 1) + at(-1, -1)) / (4.0 * h * h);
  return {{(at(1, 0) - at(-1, 0)) / (2.0 * h), (at(0, 1) - at(0, -1)) / (2.0 * h)}, xx * yy - xy * xy, xx + yy};
}

// Where the course times its confidence is 0, but for the goal, in free space: by Newton's method from each place of a
// grid, the derivatives being those of lab::Dual.
std::vector<V> level_places(World const& world, int across) {
  using D = wend::lab::Dual<2>;
  std::vector<V> found;
  for (int i = 0; i < across * across; ++i) {
    V q = world.centre() +
          world.radius * V{2.0 * (i % across + 0.5) / across - 1.0, 2.0 * (i / across + 0.5) / across - 1.0};
    double step = 1.0;
    for (int n = 0; n < 40 && step > 1e-13 && world.is_free(q); ++n) {
      auto const course = scenes::answer(world.field(), world.scene<D>({D::variable(q.x(), 0), D::variable(q.y(), 1)}));
      D const x = course.direction.x() * course.confidence;
      D const y = course.direction.y() * course.confidence;
      double const determinant = x.slope(0) * y.slope(1) - x.slope(1) * y.slope(0);
      V const move{(x.value() * y.slope(1) - y.value() * x.slope(1)) / determinant,
                   (y.value() * x.slope(0) - x.value() * y.slope(0)) / determinant};
      step = move.norm();
      q -= move;
    }
    bool const arrived = step <= 1e-9 && world.is_free(q) && (q - world.goal).norm() > 1e-3;
    if (arrived && std::none_of(found.begin(), found.end(), [&](V const& f) { return (f - q).norm() < 1e-6; })) {
      found.push_back(q);
    }
  }
  return found;
}

// Where steps along the course end, each of them downhill: longer after one that is, shorter after one that is not.
V descend(World const& world, V q) {
  double step = 0.04;
  for (int n = 0; n < 5'000 && step > 1e-9; ++n) {
    V const next = q + step * world.course(q).direction;
    bool const down = world.is_free(next) && world.height(next) < world.height(q);
    q = down ? next : q;
    step = down ? std::min(1.5 * step, 0.04) : 0.5 * step;
  }
  return q;
}

struct Ends {
  int starts = 0;
  std::vector<V> elsewhere;
};
Ends descend_from_all_over(World const& world) {
  Ends ends;
  for (int i = 0; i < 400; ++i) {
    V const start = world.centre() + world.radius * V{(i % 20 + 0.5) / 10.0 - 1.0, (i / 20 + 0.5) / 10.0 - 1.0};
    if (!world.is_free(start, 0.01)) {
      continue;
    }
    ++ends.starts;
    V const end = descend(world, start);
    if ((end - world.goal).norm() > 0.01) {
      ends.elsewhere.push_back(end);
    }
  }
  return ends;
}

}  // namespace

TEST_CASE("phi lies in [0, 1], is 1 on every edge, and 0 on the goal only") {
  for (int k : {1, 2, 4, 8}) {
    World const world = four_discs(k);
    CHECK(world.phi(world.goal) == 0.0);
    std::mt19937_64 random(11);
    std::uniform_real_distribution<double> draw(-5.0, 5.0);
    int inside = 0, out_of_range = 0, zero = 0;
    for (int i = 0; i < 10'000; ++i) {
      V const q = world.centre() + V{draw(random), draw(random)};
      if (world.is_free(q)) {
        ++inside;
        double const phi = world.phi(q);
        out_of_range += phi >= 0.0 && phi <= 1.0 ? 0 : 1;
        zero += phi > 0.0 ? 0 : 1;
      }
    }
    CAPTURE(k);
    CHECK(inside > 6'000);
    CHECK(out_of_range == 0);
    CHECK(zero == 0);
    double worst = 0.0;
    for (int i = 0; i < 1'000; ++i) {
      double const angle = 2.0 * std::numbers::pi * i / 1'000.0;
      V const out{std::cos(angle), std::sin(angle)};
      worst = std::max(worst, std::abs(world.phi(world.centre() + world.radius * out) - 1.0));
      for (auto const& disc : world.discs) {
        worst = std::max(worst, std::abs(world.phi(disc.centre + (disc.radius + grown_by) * out) - 1.0));
      }
    }
    CHECK(worst < 1e-8);  // a place on an edge is rounded, and a product of large factors multiplies that
  }
}

TEST_CASE_TEMPLATE("the course goes down phi, as its derivatives have it", Power, std::integral_constant<int, 1>,
                   std::integral_constant<int, 2>, std::integral_constant<int, 4>) {
  // Where k is a power of two the root in phi is one of square roots, of which lab::Dual knows the derivative.
  using D = wend::lab::Dual<2>;
  constexpr int k = Power::value;
  World const world = four_discs(k);
  std::mt19937_64 random(13);
  std::uniform_real_distribution<double> draw(-5.0, 5.0);
  double worst = 0.0;
  int compared = 0;
  for (int i = 0; i < 3'000; ++i) {
    V const q = world.centre() + V{draw(random), draw(random)};
    wend::Course<double> const course = world.course(q);
    if (!world.is_free(q) || course.confidence < 1e-3) {
      continue;
    }
    ++compared;
    auto const at = world.scene<D>({D::variable(q.x(), 0), D::variable(q.y(), 1)});
    auto const [gamma, beta] = world.field().parts(at.percept());
    D power = gamma;
    for (int n = 1; n < k; n *= 2) {
      power = power * power;
    }
    D phi = power / (power + beta);
    for (int n = 1; n < k; n *= 2) {
      phi = sqrt(phi);
    }
    V const downhill = -V{phi.slope(0), phi.slope(1)}.normalized();
    worst = std::max(worst, (course.direction - downhill).norm());
  }
  CAPTURE(k);
  CHECK(compared > 1'500);
  CHECK(worst < 1e-10);
}

TEST_CASE("with a large k there is one saddle a disc, no other level place, and all ways end on the goal") {
  World world = four_discs(8);
  for (std::size_t discs = 4; discs + 1 > 0; --discs) {
    world.discs.resize(discs);
    std::vector<V> const found = level_places(world, 60);
    CAPTURE(discs);
    CHECK(found.size() == discs);
    for (V const& q : found) {
      Shape const here = shape(world, q);
      CAPTURE(q.transpose());
      CHECK(here.slope.norm() < 1e-5);
      CHECK(here.determinant < -1e-4);
    }
    Ends const ends = descend_from_all_over(world);
    CHECK(ends.starts > 180);
    CHECK(ends.elsewhere.empty());
  }
}

TEST_CASE("with a k too small some ways end in a low that is not the goal") {
  World const world = screen(1);
  Ends const ends = descend_from_all_over(world);
  REQUIRE(ends.elsewhere.size() > 20);
  // One of Newton's places is where they end; it is a low. As many lows as there are more than the goal, as many
  // saddles there are more than discs (Morse theory: lows and highs less saddles are 1 less the number of discs).
  std::vector<V> lows;
  std::size_t saddles = 0;
  for (V const& q : level_places(world, 60)) {
    Shape const here = shape(world, q);
    CHECK(here.slope.norm() < 1e-5);
    if (here.determinant > 0.0 && here.trace > 0.0) {
      lows.push_back(q);
    }
    saddles += here.determinant < 0.0 ? 1U : 0U;
  }
  REQUIRE(lows.size() == 1);
  CHECK(saddles == world.discs.size() + lows.size());
  for (V const& end : ends.elsewhere) {
    CHECK((end - lows.front()).norm() < 0.01);
  }
  // And a larger k cures it.
  CHECK(descend_from_all_over(screen(12)).elsewhere.empty());
  MESSAGE(ends.elsewhere.size(), " of ", ends.starts, " ways end at ", lows.front().transpose());
}
