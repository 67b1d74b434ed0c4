// The search without derivatives: on published test problems with known optima; the trade-offs against their
// definition.
#include <algorithm>
#include <array>
#include <atomic>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <limits>
#include <numbers>
#include <optional>
#include <stdexcept>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/pattern_search.hpp"
#include "wend/lab/random.hpp"

namespace {

using namespace wend;
using lab::Judgement;
using lab::PatternSearch;
using lab::PatternSearchOptions;
using lab::SearchRange;
using Point = std::vector<double>;

constexpr double none = std::numeric_limits<double>::quiet_NaN();
constexpr double infinite = std::numeric_limits<double>::infinity();

// A published problem: least f(x), where all g(x) are at least 0, in a box. The boxes are ours, where the problem has
// no bounds, and wide.
struct Problem {
  std::vector<SearchRange> box;
  Point start;
  std::function<double(Point const&)> value;
  std::function<Point(Point const&)> constraints;
  Point optimum;
  double least;
};

Judgement judged(Problem const& problem, Point const& x) {
  Judgement result{0.0, problem.value(x)};
  for (double const g : problem.constraints(x)) {
    result.violation += std::max(0.0, -g);
  }
  return result;
}

Point free_of_constraints(Point const&) { return {}; }

// Rosenbrock 1960, "An automatic method for finding the greatest or least value of a function"; from memory.
Problem rosenbrock() {
  auto const value = [](Point const& x) {
    double const a = x[1] - x[0] * x[0];
    double const b = 1.0 - x[0];
    return 100.0 * a * a + b * b;
  };
  return {{{-2.0, 2.0}, {-2.0, 2.0}}, {-1.2, 1.0}, value, free_of_constraints, {1.0, 1.0}, 0.0};
}

// Branin 1972, as Dixon and Szego 1978 have it: three minima, all as low. From memory.
Problem branin() {
  constexpr double pi = std::numbers::pi;
  auto const value = [](Point const& x) {
    double const a = x[1] - 5.1 / (4.0 * pi * pi) * x[0] * x[0] + 5.0 / pi * x[0] - 6.0;
    return a * a + 10.0 * (1.0 - 1.0 / (8.0 * pi)) * std::cos(x[0]) + 10.0;
  };
  double const least = 10.0 / (8.0 * pi);  // 0.397887
  return {{{-5.0, 10.0}, {0.0, 15.0}}, {0.0, 0.0}, value, free_of_constraints, {pi, 2.275}, least};
}

// Problems 24, 35 and 43 of Hock and Schittkowski 1981, "Test examples for nonlinear programming codes"; from memory.
Problem hock_schittkowski_24() {
  double const root = std::numbers::sqrt3;
  auto const value = [root](Point const& x) {
    return ((x[0] - 3.0) * (x[0] - 3.0) - 9.0) * x[1] * x[1] * x[1] / (27.0 * root);
  };
  auto const constraints = [root](Point const& x) {
    return Point{x[0] / root - x[1], x[0] + root * x[1], 6.0 - x[0] - root * x[1]};
  };
  return {{{0.0, 10.0}, {0.0, 10.0}}, {1.0, 0.5}, value, constraints, {3.0, root}, -1.0};
}
Problem hock_schittkowski_35() {
  auto const value = [](Point const& x) {
    return 9.0 - 8.0 * x[0] - 6.0 * x[1] - 4.0 * x[2] + 2.0 * x[0] * x[0] + 2.0 * x[1] * x[1] + x[2] * x[2] +
           2.0 * x[0] * x[1] + 2.0 * x[0] * x[2];
  };
  auto const constraints = [](Point const& x) { return Point{3.0 - x[0] - x[1] - 2.0 * x[2]}; };
  return {{{0.0, 3.0}, {0.0, 3.0}, {0.0, 3.0}}, {0.5, 0.5, 0.5}, value, constraints,
          {4.0 / 3.0, 7.0 / 9.0, 4.0 / 9.0},    1.0 / 9.0};
}
Problem hock_schittkowski_43() {
  auto const value = [](Point const& x) {
    return x[0] * x[0] + x[1] * x[1] + 2.0 * x[2] * x[2] + x[3] * x[3] - 5.0 * x[0] - 5.0 * x[1] - 21.0 * x[2] +
           7.0 * x[3];
  };
  auto const constraints = [](Point const& x) {
    double const a = x[0] * x[0];
    double const b = x[1] * x[1];
    double const c = x[2] * x[2];
    double const d = x[3] * x[3];
    return Point{8.0 - a - b - c - d - x[0] + x[1] - x[2] + x[3], 10.0 - a - 2.0 * b - c - 2.0 * d + x[0] + x[3],
                 5.0 - 2.0 * a - b - c - 2.0 * x[0] + x[1] + x[3]};
  };
  return {{{-3.0, 3.0}, {-3.0, 3.0}, {-3.0, 3.0}, {-3.0, 3.0}},
          {0.0, 0.0, 0.0, 0.0},
          value,
          constraints,
          {0.0, 1.0, 2.0, -1.0},
          -44.0};
}

bool anything(Point const&) { return true; }

PatternSearch solve(Problem const& problem, PatternSearchOptions const& options) {
  return lab::pattern_search(
      problem.box, problem.start, anything,
      [&](Point const& x) -> std::optional<Judgement> { return judged(problem, x); }, options);
}

}  // namespace

TEST_CASE("the search finds published optima, with constraints and without") {
  struct Wanted {
    Problem problem;
    double within;
    int budget;
  };
  // How near it has to come is ours; the optima are published. The last has two constraints that meet at the optimum.
  for (Wanted const& wanted :
       {Wanted{rosenbrock(), 1e-4, 3000}, Wanted{branin(), 1e-3, 400}, Wanted{hock_schittkowski_24(), 1e-3, 600},
        Wanted{hock_schittkowski_35(), 5e-3, 600}, Wanted{hock_schittkowski_43(), 0.5, 3000}}) {
    Problem const& problem = wanted.problem;
    Judgement const known = judged(problem, problem.optimum);  // the problem is written down as published
    CHECK(known.value == doctest::Approx(problem.least).epsilon(1e-12));
    CHECK(known.violation < 1e-12);
    for (std::uint64_t const seed : {1U, 2U, 3U}) {
      PatternSearchOptions options;
      options.budget = wanted.budget;
      options.spread = 20;
      options.least_step = 1e-6;
      options.seed = seed;
      PatternSearch const found = solve(problem, options);
      REQUIRE(found.best < found.tried.size());
      CHECK(found.tried.size() <= static_cast<std::size_t>(wanted.budget));
      CHECK(found.tried.front().at == problem.start);
      lab::Tried const& best = found.tried[found.best];
      CHECK(best.judged.violation == 0.0);
      CHECK(best.judged.value < problem.least + wanted.within);
      CHECK(best.judged.value > problem.least - 1e-9);
    }
  }
}

TEST_CASE("what keeps the constraints is better than what does not") {
  // The three rules of Deb 2000.
  CHECK(lab::better({0.0, 5.0}, {0.1, 1.0}));
  CHECK_FALSE(lab::better({0.1, 1.0}, {0.0, 5.0}));
  CHECK(lab::better({0.0, 1.0}, {0.0, 2.0}));
  CHECK_FALSE(lab::better({0.0, 2.0}, {0.0, 2.0}));
  CHECK(lab::better({0.1, 9.0}, {0.2, 1.0}));
  CHECK_FALSE(lab::better({0.2, 9.0}, {0.2, 10.0}));
  // What is not a number never wins.
  CHECK(lab::better({0.0, 1.0}, {0.0, none}));
  CHECK_FALSE(lab::better({0.0, none}, {0.0, 1.0}));
  CHECK_FALSE(lab::better({none, 1.0}, {0.3, none}));
  CHECK(lab::better({0.3, none}, {none, 1.0}));
}

TEST_CASE("spread points are those of van der Corput") {
  // Niederreiter 1992, "Random number generation and quasi-Monte Carlo methods", the radical inverses in bases 2 and 3.
  std::array<double, 5> const in_two{0.5, 0.25, 0.75, 0.125, 0.625};
  std::array<double, 5> const in_three{1.0 / 3.0, 2.0 / 3.0, 1.0 / 9.0, 4.0 / 9.0, 7.0 / 9.0};
  for (std::size_t i = 0; i < 5; ++i) {
    CHECK(lab::detail::mirrored_digits(i + 1, 2) == in_two[i]);
    CHECK(lab::detail::mirrored_digits(i + 1, 3) == doctest::Approx(in_three[i]).epsilon(1e-15));
  }
}

TEST_CASE("only points in the box that are allowed are judged, each once, until somebody ends it") {
  std::vector<SearchRange> const box{{-1.0, 2.0}, {0.0, 4.0}, {3.0, 3.0}};
  Point const start{-1.0, 0.5, 3.0};
  auto const in_order = [](Point const& x) { return x[0] <= x[1]; };
  std::vector<Point> seen;
  auto const judge = [&](Point const& x) -> std::optional<Judgement> {
    seen.push_back(x);
    return Judgement{0.0, x[1] - 3.0 * x[0]};  // least along the edge of what is allowed, at (2, 2)
  };
  PatternSearch const found = lab::pattern_search(box, start, in_order, judge, {.budget = 400, .spread = 30});
  CHECK(seen.size() == found.tried.size());
  for (Point const& x : seen) {
    CHECK(in_order(x));
    CHECK((x[0] >= -1.0 && x[0] <= 2.0 && x[1] >= 0.0 && x[1] <= 4.0 && x[2] == 3.0));
  }
  std::sort(seen.begin(), seen.end());
  CHECK(std::adjacent_find(seen.begin(), seen.end()) == seen.end());
  Point const& best = found.tried[found.best].at;
  CHECK(best[0] == doctest::Approx(2.0).epsilon(0.01));
  CHECK(best[1] == doctest::Approx(2.0).epsilon(0.02));

  int left = 7;
  auto const ends = [&](Point const&) { return left-- > 0 ? std::optional(Judgement{0.0, 1.0}) : std::nullopt; };
  CHECK(lab::pattern_search(box, start, anything, ends).tried.size() == 7);
  std::atomic<bool> stop{true};
  CHECK(lab::pattern_search(box, start, anything, ends, {.stop = &stop}).tried.empty());
  CHECK_THROWS_AS((void)lab::pattern_search(box, Point{-2.0, 0.5, 3.0}, anything, judge), std::invalid_argument);
  CHECK_THROWS_AS((void)lab::pattern_search(box, Point{1.0, 0.5, 3.0}, in_order, judge), std::invalid_argument);
  CHECK_THROWS_AS((void)lab::pattern_search(box, Point{0.0, 0.5}, anything, judge), std::invalid_argument);
  CHECK_THROWS_AS((void)lab::pattern_search(box, start, anything, judge, {.budget = 0}), std::invalid_argument);
  CHECK_THROWS_AS((void)lab::pattern_search(box, start, anything, judge, {.least_step = 0.0}), std::invalid_argument);
  CHECK_THROWS_AS((void)lab::pattern_search(std::vector<SearchRange>{}, Point{}, anything, judge),
                  std::invalid_argument);
}

TEST_CASE("a search with nothing to gain settles at its start") {
  Problem flat = rosenbrock();
  flat.value = [](Point const&) { return 1.0; };
  PatternSearch const found = solve(flat, {.budget = 1000, .spread = 5, .least_step = 1e-3});
  CHECK(found.settled);
  CHECK(found.best == 0);
  // 6 starts at most, of 8 halvings with 4 points each, and the start once more.
  CHECK(found.tried.size() <= 6 + 7 * 8 * 4);
  CHECK(solve(flat, {.budget = 30, .spread = 5}).tried.size() == 30);
  CHECK_FALSE(solve(flat, {.budget = 30, .spread = 5}).settled);
}

TEST_CASE("a search that starts in the lesser of two valleys finds the deeper one") {
  // Wide and shallow around (0.2, 0.2), narrow and deep around (0.8, 0.8); the shallow one is better at most points.
  Problem valleys = rosenbrock();
  valleys.box = {{0.0, 1.0}, {0.0, 1.0}};
  valleys.start = {0.25, 0.2};
  valleys.value = [](Point const& x) {
    auto const far = [&x](double at) { return std::hypot(x[0] - at, x[1] - at); };
    return std::min(far(0.2), 2.5 * far(0.8) - 0.5);
  };
  PatternSearchOptions options{.budget = 1000, .spread = 8, .least_step = 0.01};
  for (options.seed = 1; options.seed <= 10; ++options.seed) {
    PatternSearch const found = solve(valleys, options);
    CHECK(found.tried[found.best].at[0] == doctest::Approx(0.8).epsilon(0.02));
    CHECK(found.tried[found.best].judged.value < -0.4);
  }
}

TEST_CASE("trade-offs are what no other point dominates") {
  lab::Draws const draws(7, 0);
  for (std::uint32_t set = 0; set < 50; ++set) {
    std::vector<lab::TradeOff> points;
    for (std::uint32_t i = 0; i < set; ++i) {  // on a coarse grid, so that many are equal in one or both
      points.push_back({std::floor(12.0 * draws.uniform({1, set, i})), std::floor(12.0 * draws.uniform({2, set, i}))});
    }
    if (set > 20) {
      points[5].cost = none;
      points[6].gain = none;
      points[7].gain = infinite;  // met no disc
    }
    std::vector<std::size_t> expected;  // by the definition, each against each
    for (std::size_t i = 0; i < points.size(); ++i) {
      auto const& a = points[i];
      bool keep = !std::isnan(a.cost) && !std::isnan(a.gain);
      for (std::size_t j = 0; j < points.size(); ++j) {
        auto const& b = points[j];
        bool const no_worse = b.cost <= a.cost && b.gain >= a.gain;
        bool const equal = b.cost == a.cost && b.gain == a.gain;
        keep = keep && !(no_worse && (!equal || j < i));
      }
      if (keep) {
        expected.push_back(i);
      }
    }
    std::sort(expected.begin(), expected.end(),
              [&](std::size_t a, std::size_t b) { return points[a].cost < points[b].cost; });
    CHECK(lab::non_dominated(points) == expected);
  }
}
