// Equilibria against what can be worked out by hand, and against Poincare and Hopf's theorem (Guillemin and Pollack
// 1974, Differential Topology, chapter 3.5): the indices add up to the turns of the course along the boundary.
#include <algorithm>
#include <cmath>
#include <complex>
#include <cstddef>
#include <random>
#include <stdexcept>
#include <utility>
#include <vector>

#include <doctest/doctest.h>

#include "../dense.hpp"
#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guarded.hpp"
#include "wend/arbiters/signal.hpp"
#include "wend/fields/away_from_discs.hpp"
#include "wend/fields/past_disc.hpp"
#include "wend/fields/toward_goal.hpp"
#include "wend/lab/equilibria.hpp"

namespace {

using namespace wend;
using lab::Doubt;
using lab::equilibria;
using lab::Equilibria;
using lab::EquilibriumKind;
using lab::Region;
using lab::World;

constexpr auto drawn = blend(ramp(clearance, 0.5F, 1.2F), away_from_discs{}, toward_goal{});
constexpr Parameter robot_radius = 0.20F;
Region const hall{{-4.0, -3.5}, {4.1, 3.6}};

World one_disc() {
  World world;
  world.add(0.25, -0.125, 0.5);
  return world;
}
World three_discs() {  // so far apart that between any two the goal alone counts
  World world;
  world.add(-1.5, 1.5, 0.3), world.add(1.9, 1.6, 0.3), world.add(0.2, -1.9, 0.3);
  return world;
}

std::ptrdiff_t count(Equilibria const& e, EquilibriumKind kind) {
  return std::count_if(e.points.begin(), e.points.end(), [kind](auto const& point) { return point.kind == kind; });
}

// Where the clearance lets away and goal cancel straight behind a disc: 1 - w = w in the middle of the ramp.
double balance_from_centre(double radius) {
  double const middle = 0.5 * (static_cast<double>(0.5F) + static_cast<double>(1.2F));
  return middle + radius + static_cast<double>(robot_radius);
}

// v = M (p - centre), a linear flow, with the confidence it has by its length.
struct linear {
  Parameter xx, xy, yx, yy;
  Parameter centre_x = 0.5F;
  Parameter centre_y = -0.25F;

  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    S const x = percept.pose.position.x() - S(centre_x);
    S const y = percept.pose.position.y() - S(centre_y);
    Polar<S> const way = polar(Vec2<S>{S(xx) * x + S(xy) * y, S(yx) * x + S(yy) * y});
    return course_along(way, least(way.length, S(1.0F)));
  }
};

}  // namespace

TEST_CASE("eigenvalues of two by two matrices are those of Eigen's eigensolver") {
  std::mt19937_64 draw(3);
  std::uniform_real_distribution<double> entry(-1.0, 1.0);
  std::uniform_int_distribution<int> power(-30, 30), form(0, 4);
  int pairs = 0;
  for (int i = 0; i < 5000; ++i) {
    Eigen::Matrix2d a;
    a << entry(draw), entry(draw), entry(draw), entry(draw);
    switch (form(draw)) {
      case 0: a(1, 0) = a(0, 1); break;
      case 1: a(1, 0) = 0.0, a(1, 1) = a(0, 0); break;  // one value, one eigenvector
      case 2: a.row(1) = 0.25 * a.row(0); break;        // no inverse
      case 3: a(0, 0) *= std::ldexp(1.0, power(draw)); break;
      default: break;
    }
    auto const ours = lab::detail::eigenvalues_of(a);
    Eigen::VectorXcd theirs = dense::spectrum(a).values;
    if (std::pair(theirs(1).real(), -theirs(1).imag()) < std::pair(theirs(0).real(), -theirs(0).imag())) {
      std::swap(theirs(0), theirs(1));
    }
    pairs += theirs(0).imag() != 0.0 ? 1 : 0;
    double const apart = std::abs(theirs(0) - theirs(1));  // the closer they are, the more rounding moves them
    for (int k = 0; k < 2; ++k) {
      double const error = std::abs(ours[static_cast<std::size_t>(k)] - theirs(k));
      CHECK(error * std::max(error, apart) <= 1e-14 * a.squaredNorm());
    }
  }
  CHECK(pairs > 500);
  CHECK(lab::detail::eigenvalues_of(Eigen::Matrix2d::Zero())[1] == 0.0);
}

TEST_CASE("equilibria finds nothing but the goal where there is no disc") {
  Equilibria const e = equilibria(drawn, World{}, {3.0, 0.5}, hall);
  REQUIRE(e.points.size() == 1);
  CHECK(e.points[0].kind == EquilibriumKind::goal);
  CHECK(e.points[0].position == Vec2<double>{3.0, 0.5});
  CHECK(e.boundary_index == 1);
  CHECK(e.complete());
}

TEST_CASE("equilibria finds the one saddle of a blend behind a disc, where 1 - w = w") {
  World const world = one_disc();
  Disc<double> const disc = world.discs[0].disc;
  Vec2<double> const goal{3.0, 0.5};
  Equilibria const e = equilibria(drawn, world, goal, hall);
  REQUIRE(e.points.size() == 2);
  CHECK(e.complete());
  CHECK(e.boundary_index == 0);
  lab::Equilibrium const& saddle = e.points[0];
  double const d = balance_from_centre(disc.radius);
  Vec2<double> const to_goal = (goal - disc.centre).normalized();
  CHECK((saddle.position - (disc.centre - d * to_goal)).norm() < 1e-12);
  CHECK(saddle.kind == EquilibriumKind::saddle);
  CHECK(saddle.index == -1);
  // By hand: along the line both halves change with w, across it each direction turns about its own centre.
  double const ramp_slope = 1.0 / (static_cast<double>(1.2F) - static_cast<double>(0.5F));
  double const across = 0.5 / d - 0.5 / (d + (goal - disc.centre).norm());
  CHECK(saddle.eigenvalues[0].real() == doctest::Approx(-2.0 * ramp_slope).epsilon(1e-10));
  CHECK(saddle.eigenvalues[1].real() == doctest::Approx(across).epsilon(1e-10));
  CHECK(saddle.eigenvalues[0].imag() == 0.0);
}

TEST_CASE("equilibria finds three saddles behind three discs") {
  World const world = three_discs();
  Vec2<double> const goal{3.4, 0.2};
  Equilibria const e = equilibria(drawn, world, goal, hall);
  CHECK(count(e, EquilibriumKind::saddle) == 3);
  CHECK(count(e, EquilibriumKind::goal) == 1);
  CHECK(e.points.size() == 4);
  CHECK(e.boundary_index == 1 - 3);
  CHECK(e.found_index == 1 - 3);
  CHECK(e.complete());
  for (lab::WorldDisc const& d : world.discs) {
    Vec2<double> const expected = d.disc.centre -
                                  balance_from_centre(d.disc.radius) * (goal - d.disc.centre).normalized();
    CHECK(std::any_of(e.points.begin(), e.points.end(),
                      [&expected](auto const& point) { return (point.position - expected).norm() < 1e-12; }));
  }
  MESSAGE("three discs: ", e.boxes, " boxes");
}

TEST_CASE("a saddle that equilibria has no budget to find shows in the sum of the indices") {
  lab::EquilibriaOptions options;
  options.box_budget = 300;
  Equilibria const e = equilibria(drawn, three_discs(), {3.4, 0.2}, hall, options);
  CHECK(count(e, EquilibriumKind::saddle) < 3);
  CHECK(e.boundary_index == -2);
  CHECK(e.found_index > -2);
  CHECK_FALSE(e.index_agrees);
  CHECK_FALSE(e.complete());
  CHECK(std::any_of(e.unresolved.begin(), e.unresolved.end(), [](auto const& u) { return u.doubt == Doubt::budget; }));
  // What was not found lies where it is said to be in doubt.
  for (auto const& missed : equilibria(drawn, three_discs(), {3.4, 0.2}, hall).points) {
    bool const found = std::any_of(e.points.begin(), e.points.end(), [&missed](auto const& point) {
      return (point.position - missed.position).norm() < 1e-9;
    });
    bool const in_doubt = std::any_of(e.unresolved.begin(), e.unresolved.end(),
                                      [&missed](auto const& u) { return lab::detail::holds(u.box, missed.position); });
    CHECK((found || in_doubt));
  }
}

TEST_CASE("equilibria takes the goal for a sink only where the course points to it all round") {
  // A stream to the right does not care for the goal.
  auto const stream = [](auto const& percept) {
    using S = std::remove_cvref_t<decltype(percept.dt)>;
    return Course<S>{{S(1.0F), S(0.0F)}, S(1.0F)};
  };
  Equilibria const e = equilibria(stream, World{}, {0.0, 0.0}, hall);
  CHECK(e.points.empty());
  CHECK(e.boundary_index == 0);
  CHECK(e.complete());
  // Out of the region it does not count.
  Equilibria const beside = equilibria(drawn, one_disc(), {6.0, 0.5}, hall);
  CHECK(beside.points.size() == 1);
  CHECK(beside.boundary_index == -1);
  CHECK(beside.complete());
}

TEST_CASE("equilibria tells kinds and eigenvalues of linear flows") {
  // Strogatz 2015, Nonlinear Dynamics and Chaos, section 5.2: by trace t and determinant d the eigenvalues are
  // (t +- sqrt(t^2 - 4 d)) / 2; saddle for d < 0, else sink for t < 0, source for t > 0, centre for t = 0.
  struct Case {
    linear field;
    EquilibriumKind kind;
  };
  for (Case const& c : {Case{{1.0F, 0.5F, 0.25F, -2.0F}, EquilibriumKind::saddle},
                        Case{{-1.0F, 0.5F, 0.25F, -2.0F}, EquilibriumKind::sink},
                        Case{{-0.5F, 2.0F, -2.0F, -0.5F}, EquilibriumKind::sink},
                        Case{{1.0F, 0.5F, 0.25F, 2.0F}, EquilibriumKind::source},
                        Case{{0.25F, -1.0F, 1.0F, 0.25F}, EquilibriumKind::source},
                        Case{{0.5F, -1.0F, 1.25F, -0.5F}, EquilibriumKind::centre}}) {
    Equilibria const e = equilibria(c.field, World{}, {9.0, 9.0}, hall);
    REQUIRE(e.points.size() == 1);
    CHECK(e.complete());
    CHECK(e.points[0].kind == c.kind);
    CHECK((e.points[0].position - Vec2<double>{0.5, -0.25}).norm() < 1e-14);
    double const trace = static_cast<double>(c.field.xx + c.field.yy);
    double const determinant = static_cast<double>(c.field.xx * c.field.yy - c.field.xy * c.field.yx);
    std::complex<double> const root = std::sqrt(std::complex<double>(trace * trace - 4.0 * determinant));
    CHECK(e.points[0].index == (determinant > 0.0 ? 1 : -1));
    for (std::complex<double> const& expected : {0.5 * (trace - root), 0.5 * (trace + root)}) {
      CHECK(std::min(std::abs(e.points[0].eigenvalues[0] - expected), std::abs(e.points[0].eigenvalues[1] - expected)) <
            1e-7);
    }
  }
}

TEST_CASE("equilibria leaves in doubt what first derivatives do not tell, and counts its index") {
  // conj(z)^2 turns twice clockwise on the way round 0: index -2 (a monkey saddle).
  auto const monkey = [](auto const& percept) {
    using S = std::remove_cvref_t<decltype(percept.dt)>;
    S const x = percept.pose.position.x() - S(0.3F);
    S const y = percept.pose.position.y() - S(0.1F);
    Polar<S> const way = polar(Vec2<S>{squared(x) - squared(y), S(-2.0F) * x * y});
    return course_along(way, least(way.length, S(1.0F)));
  };
  lab::EquilibriaOptions options;
  options.finest = 0.01;
  Equilibria const e = equilibria(monkey, World{}, {9.0, 9.0}, hall, options);
  CHECK(e.points.empty());
  REQUIRE(e.unresolved.size() == 1);
  CHECK(e.unresolved[0].doubt == Doubt::degenerate);
  CHECK(e.unresolved[0].index == -2);
  CHECK(lab::detail::holds(e.unresolved[0].box, {static_cast<double>(0.3F), static_cast<double>(0.1F)}));
  CHECK(e.index_agrees);
  CHECK_FALSE(e.complete());
}

TEST_CASE("equilibria shows the trap before a gap where the nearest disc changes") {
  // On the line between two discs the course jumps from one to the other; half way (Filippov 1988) the machine rests
  // where the mean of both cancels: (1 - w) x / |(x, h)| + w = 0.
  World world;
  double const h = 0.8;
  world.add(0.0, h, 0.3), world.add(0.0, -h, 0.3);
  Equilibria const e = equilibria(drawn, world, {3.5, 0.0}, hall);
  auto const along = [h](double x) {
    double const distance = std::hypot(x, h);
    double const low = static_cast<double>(0.5F);
    double const clear = distance - 0.3 - static_cast<double>(robot_radius);
    double const w = std::clamp((clear - low) / (static_cast<double>(1.2F) - low), 0.0, 1.0);
    return (1.0 - w) * x / distance + w;
  };
  double far = -2.0;  // pulled on to the gap
  double near = -0.6;  // pushed back from it
  REQUIRE(along(far) > 0.0);
  REQUIRE(along(near) < 0.0);
  while (near - far > 1e-12) {
    double const middle = 0.5 * (far + near);
    (along(middle) > 0.0 ? far : near) = middle;
  }
  auto const trap = std::find_if(e.unresolved.begin(), e.unresolved.end(),
                                 [&](auto const& u) { return lab::detail::holds(u.box, {far, 0.0}); });
  REQUIRE(trap != e.unresolved.end());
  CHECK(trap->doubt == Doubt::jump);
  CHECK(trap->index == 1);
  CHECK((trap->box.high - trap->box.low).norm() < 0.02);
  CHECK(count(e, EquilibriumKind::saddle) == 2);
  CHECK(e.boundary_index == 1 - 2);
  CHECK(e.index_agrees);
}

TEST_CASE("equilibria counts round discs that overlap and stick out of the region") {
  World world;
  world.add(0.0, 0.15, 0.4), world.add(0.1, -0.2, 0.4), world.add(0.0, 0.15, 0.4), world.add(-4.0, 2.0, 0.4);
  // Two heaps, of which one stands on the boundary; the saddle behind it lies outside.
  Equilibria const e = equilibria(drawn, world, {3.5, 0.4}, hall);
  CHECK(e.boundary_index == 1 - 1);
  CHECK(e.index_agrees);
}

TEST_CASE("equilibria says where a policy has no opinion, and does not spend its budget there") {
  constexpr auto shy = only_when(below(clearance, 0.4F, 0.4F), away_from_discs{});
  lab::EquilibriaOptions options;
  options.finest = 0.02;
  Equilibria const e = equilibria(shy, one_disc(), {3.0, 0.5}, hall, options);
  REQUIRE(e.unresolved.size() == 1);
  CHECK(e.unresolved[0].doubt == Doubt::no_opinion);
  CHECK_FALSE(e.boundary_index.has_value());
  CHECK_FALSE(e.index_agrees);
  CHECK(e.boxes < 10'000);
}

TEST_CASE("equilibria does not mistake a hard switch that is crossed for a place of rest") {
  // Round one disc, away inside and goal outside: only straight behind the disc are the two opposed.
  World const world = one_disc();
  Disc<double> const disc = world.discs[0].disc;
  Vec2<double> const goal{3.0, 0.5};
  Equilibria const e =
      equilibria(guarded(below(clearance, 0.4F, 0.4F), away_from_discs{}, toward_goal{}), world, goal, hall);
  REQUIRE(e.unresolved.size() == 1);
  CHECK(e.unresolved[0].doubt == Doubt::jump);
  CHECK(e.unresolved[0].index == -1);
  double const d = static_cast<double>(0.4F) + disc.radius + static_cast<double>(robot_radius);
  CHECK(lab::detail::holds(e.unresolved[0].box, disc.centre - d * (goal - disc.centre).normalized()));
  CHECK(e.index_agrees);
}

TEST_CASE("equilibria gives the same on several threads") {
  lab::EquilibriaOptions options;
  options.threads = 2;
  Equilibria const a = equilibria(drawn, three_discs(), {3.4, 0.2}, hall);
  Equilibria const b = equilibria(drawn, three_discs(), {3.4, 0.2}, hall, options);
  CHECK(b.complete());
  REQUIRE(a.points.size() == b.points.size());
  for (std::size_t i = 0; i < a.points.size(); ++i) {
    CHECK((a.points[i].position - b.points[i].position).norm() < 1e-12);
  }
}

TEST_CASE("equilibria refuses discs that move or do not fit") {
  World moving;
  moving.add(0.0, 0.0, 0.3, {0.1, 0.0});
  CHECK_THROWS_AS(static_cast<void>(equilibria(drawn, moving, {3.0, 0.0}, hall)), std::invalid_argument);
  CHECK_THROWS_AS(static_cast<void>(equilibria<2>(drawn, three_discs(), {3.0, 0.0}, hall)), std::invalid_argument);
}
