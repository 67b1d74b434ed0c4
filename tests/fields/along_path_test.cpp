#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "../scenes.hpp"
#include "wend/fields/along_path.hpp"

namespace {

constexpr double pi = std::numbers::pi;
using Vec = wend::Vec2<double>;

// A figure that crosses itself at (1, 0): east along the axis, round by the north, and south across it.
constexpr auto crossing =
    wend::path_of(wend::straight({-1.0F, 0.0F}, {3.0F, 0.0F}), wend::arc({3.0F, 0.0F}, {3.0F, 2.0F}, 1.0F),
                  wend::straight({3.0F, 2.0F}, {2.0F, 2.0F}), wend::arc({2.0F, 2.0F}, {1.0F, 1.0F}, 1.0F),
                  wend::straight({1.0F, 1.0F}, {1.0F, -2.0F}));

// Two arms beside each other, 0.2 m apart.
constexpr auto hairpin = wend::path_of(wend::straight({0.0F, 0.0F}, {3.0F, 0.0F}),
                                       wend::arc({3.0F, 0.0F}, {3.0F, 0.2F}, 10.0F),
                                       wend::straight({3.0F, 0.2F}, {0.0F, 0.2F}));

// Arcs of all kinds: chords of 0.2 m to 3 m along the sides of triangles of 3, 4 and 5, bent up to 1.96 over the chord.
consteval std::array<wend::PathPiece, 60> some_arcs() {
  std::array<wend::PathPiece, 60> arcs{};
  for (std::size_t i = 0; i < arcs.size(); ++i) {
    float const k = static_cast<float>(i);
    float const chord = 0.2F + 2.8F * k / 60.0F;
    float const x = i % 3 == 0 ? 0.6F : -0.8F;
    float const y = i % 3 == 0 ? 0.8F : 0.6F;
    wend::PathPoint const start{0.1F * k - 3.0F, 2.0F - 0.05F * k};
    wend::PathPoint const end{start.x + chord * x, start.y + chord * y};
    arcs[i] = wend::arc(start, end, (i % 2 == 0 ? 1.0F : -1.0F) * (0.02F + 1.94F * k / 60.0F) / chord);
  }
  return arcs;
}

template <typename Field, wend::Number S>
wend::Course<S> ask(Field const& field, wend::Vec2<S> const& position, wend::PathProgress<S>& memory) {
  scenes::Scene<S> scene;
  scene.pose.position = position;
  return scenes::answer(field, scene, memory);
}

// The nearest distance to a path, by points a millimetre or two apart, from angles.
double distance_to(wend::PathPiece const& piece, Vec const& at) {
  double nearest = 1.0e9;
  Vec const start{static_cast<double>(piece.start.x), static_cast<double>(piece.start.y)};
  Vec const end{static_cast<double>(piece.end.x), static_cast<double>(piece.end.y)};
  for (int i = 0; i <= 2000; ++i) {
    double const share = i / 2000.0;
    Vec point = start + share * (end - start);
    if (piece.curvature != 0.0F) {
      double const radius = 1.0 / static_cast<double>(piece.curvature);
      double const turned = 2.0 * std::asin(std::clamp(wend::length(Vec(end - start)) / (2.0 * radius), -1.0, 1.0));
      double const first = std::atan2(end.y() - start.y(), end.x() - start.x()) - turned / 2.0;  // heading at the start
      double const now = first + share * turned;
      point = start + radius * Vec(std::sin(now) - std::sin(first), std::cos(first) - std::cos(now));
    }
    nearest = std::min(nearest, wend::length(Vec(point - at)));
  }
  return nearest;
}

template <typename Path>
double distance_to_path(Path const& path, Vec const& at) {
  double nearest = 1.0e9;
  for (wend::PathPiece const& piece : path.pieces) {
    nearest = std::min(nearest, distance_to(piece, at));
  }
  return nearest;
}

struct Run {
  Vec last;
  double worst = 0.0;
  double way = 0.0;
  bool ended = false;
};

template <typename Field>
Run follow(Field const& field, Vec const& start, double at_most, double settled = 0.0) {
  Run run{start};
  wend::PathProgress<double> memory;
  double before = 0.0;
  while (run.way < at_most) {
    wend::Course<double> const course = ask(field, run.last, memory);
    CHECK(memory.pieces >= before);
    before = memory.pieces;
    if (course.confidence == 0.0) {
      run.ended = true;
      break;
    }
    run.last += 0.005 * course.direction;
    run.way += 0.005;
    if (run.way > settled) {
      run.worst = std::max(run.worst, distance_to_path(field.path, run.last));
    }
  }
  return run;
}

}  // namespace

TEST_CASE("an arc's centre lies to the side it bends to, as far from both ends as its radius") {
  constexpr auto arcs = some_arcs();
  for (wend::PathPiece const& piece : arcs) {
    double const radius = 1.0 / std::abs(static_cast<double>(piece.curvature));
    Vec const start{static_cast<double>(piece.start.x), static_cast<double>(piece.start.y)};
    Vec const end{static_cast<double>(piece.end.x), static_cast<double>(piece.end.y)};
    Vec const centre{static_cast<double>(piece.centre.x), static_cast<double>(piece.centre.y)};
    CHECK(wend::length(Vec(centre - start)) == doctest::Approx(radius).epsilon(1.0e-4));
    CHECK(wend::length(Vec(centre - end)) == doctest::Approx(radius).epsilon(1.0e-4));
    CHECK((wend::cross(Vec(end - start), Vec(centre - start)) > 0.0) == (piece.curvature > 0.0F));
  }
}

TEST_CASE(
    "both fields go along a path that crosses itself, each branch in its turn, and have no opinion past the end") {
  // All of it: 4 + pi + 1 + pi / 2 + 3 metres, less what pursuit cuts off.
  double const whole = 8.0 + 1.5 * pi;
  Run const pursued = follow(wend::along_path{crossing, 0.25F}, {-1.0, 0.05}, 30.0);
  CHECK(pursued.ended);
  CHECK(pursued.way == doctest::Approx(whole).epsilon(0.04));
  CHECK(pursued.worst < 0.06);
  CHECK(wend::length(Vec(pursued.last - Vec(1.0, -2.0))) < 0.02);
  Run const flown = follow(wend::onto_path{crossing}, {-1.0, 0.05}, 30.0);
  CHECK(flown.ended);
  CHECK(flown.way == doctest::Approx(whole).epsilon(0.02));
  CHECK(flown.worst < 0.06);
  CHECK(wend::length(Vec(flown.last - Vec(1.0, -2.0))) < 0.05);
}

TEST_CASE("a machine pushed onto another branch of the path goes on with its own") {
  wend::along_path const field{hairpin, 0.3F};
  wend::PathProgress<double> memory;
  (void)ask(field, Vec(1.0, 0.0), memory);
  for (double const y : {0.0, 0.1, 0.19, 0.2, 0.25}) {  // across to the other arm, which leads west
    wend::Course<double> const course = ask(field, Vec(1.2, y), memory);
    CHECK(course.direction.x() > 0.5);
    CHECK(memory.pieces < 1.0);
  }
  CHECK(ask(wend::onto_path{hairpin}, Vec(1.2, 0.2), memory).direction.x() > 0.5);
  Run const whole = follow(field, {0.0, 0.0}, 20.0);
  CHECK(whole.ended);
  CHECK(whole.way > 5.4);  // 6 + 0.1 pi, less twice the look-ahead that it cuts off at the turn
  CHECK(whole.way < 6.32);
}

TEST_CASE("a machine pushed back aims at the point that it pursued") {
  wend::along_path const field{crossing, 0.3F};
  wend::PathProgress<double> memory;
  (void)ask(field, Vec(1.7, 0.0), memory);
  CHECK(memory.pieces == doctest::Approx(0.75));  // 0.3 ahead, at (2, 0)
  wend::Course<double> const course = ask(field, Vec(0.0, 1.0), memory);
  CHECK(memory.pieces == doctest::Approx(0.75));
  CHECK(course.direction.x() == doctest::Approx(2.0 / std::sqrt(5.0)));
  CHECK(course.direction.y() == doctest::Approx(-1.0 / std::sqrt(5.0)));
  // The vector field does not turn back to a piece that it has left.
  wend::PathProgress<double> left{1.2};
  (void)ask(wend::onto_path{crossing}, Vec(0.0, 0.1), left);
  CHECK(left.pieces >= 1.2);
}

TEST_CASE("the point that is pursued lies on the path, at the look-ahead, and is the first one that does") {
  std::mt19937 random(4);
  auto const uniform = [&random] { return -1.0 + 2.0 * (static_cast<double>(random()) / 4294967296.0); };
  wend::along_path const field{crossing, 0.4F};
  auto const place = [](double pieces) {
    std::size_t const k = std::min(static_cast<std::size_t>(pieces), crossing.pieces.size() - 1);
    return wend::detail::point_at(crossing.pieces[k], pieces - static_cast<double>(k));
  };
  int at_look_ahead = 0;
  for (int i = 0; i < 600; ++i) {
    wend::PathProgress<double> memory{2.5 + 2.5 * uniform()};
    double const from = memory.pieces;
    Vec const position = place(from) + 0.25 * Vec(uniform(), uniform());
    (void)ask(field, position, memory);
    Vec const point = field.target(memory);
    double const away = wend::length(Vec(point - position));
    CHECK(distance_to_path(crossing, point) < 2.0e-3);
    bool const at_end = memory.pieces >= 5.0;
    CHECK((at_end || std::abs(away - 0.4) < 1.0e-6));
    at_look_ahead += at_end ? 0 : 1;
    // Marched along the path: nothing from there to the point is as far away.
    double farthest = 0.0;
    for (double pieces = from; pieces < memory.pieces; pieces += 1.0e-3) {
      farthest = std::max(farthest, wend::length(Vec(place(pieces) - position)));
    }
    CHECK(farthest < 0.4 + 1.0e-6);
    CHECK(memory.pieces >= from);
  }
  CHECK(at_look_ahead > 400);
}

TEST_CASE("a corner may be cut: the next piece counts from where it is nearer") {
  constexpr auto corner =
      wend::path_of(wend::straight({0.0F, 0.0F}, {2.0F, 0.0F}), wend::straight({2.0F, 0.0F}, {0.5F, 1.0F}));
  for (float const look_ahead : {0.2F, 0.6F, 1.0F}) {
    Run const run = follow(wend::along_path{corner, look_ahead}, {0.0, 0.0}, 9.0);
    CHECK(run.ended);
    CHECK(wend::length(Vec(run.last - Vec(0.5, 1.0))) < 0.02);
    CHECK(run.worst < 0.6 * static_cast<double>(look_ahead));
  }
}

TEST_CASE("past the line that parts an acute corner the vector field goes along the next piece") {
  constexpr auto corner =
      wend::path_of(wend::straight({0.0F, 0.0F}, {2.0F, 0.0F}), wend::straight({2.0F, 0.0F}, {0.5F, 1.0F}));
  wend::PathProgress<double> memory;
  CHECK(ask(wend::onto_path{corner}, Vec(1.4, 0.1), memory).direction.x() > 0.0);
  CHECK(memory.pieces < 1.0);
  CHECK(ask(wend::onto_path{corner}, Vec(1.4, 0.35), memory).direction.x() < 0.0);
  CHECK(memory.pieces > 1.0);
}

TEST_CASE("a closed path does not begin with its second piece, though that ends where the first begins") {
  constexpr auto circle =
      wend::path_of(wend::arc({2.0F, 0.0F}, {-2.0F, 0.0F}, 0.5F), wend::arc({-2.0F, 0.0F}, {2.0F, 0.0F}, 0.5F));
  wend::PathProgress<double> memory;
  CHECK(ask(wend::onto_path{circle}, Vec(2.3, -0.2), memory).direction.y() > 0.0);
  CHECK(memory.pieces < 1.0);
  wend::PathProgress<double> pursuit;
  CHECK(ask(wend::along_path{circle, 0.5F}, Vec(2.3, -0.2), pursuit).direction.y() > 0.0);
  CHECK(pursuit.pieces < 1.0);
}

TEST_CASE("the point that is pursued does not go back round an arc to where that leaves the look-ahead behind it") {
  // Nearly all of the circle lies within the look-ahead, from 100 degrees on to 90 degrees a turn later, and the point
  // is at 101 degrees: so the rest of the half that is the path is within it, and the point goes to the end.
  wend::along_path const field{wend::path_of(wend::arc({1.0F, 0.0F}, {-1.0F, 0.0F}, 1.0F)), 1.0997F};
  double const angle = 275.0 * pi / 180.0;
  wend::PathProgress<double> memory{0.5 - 0.5 * std::cos(101.0 * pi / 180.0)};
  Vec const position{0.1 * std::cos(angle), 0.1 * std::sin(angle)};
  wend::Course<double> const course = ask(field, position, memory);
  CHECK(memory.pieces == 1.0);
  CHECK(wend::cross(course.direction, Vec(Vec(-1.0, 0.0) - position)) == doctest::Approx(0.0));
  CHECK(course.direction.x() < 0.0);
}

TEST_CASE_TEMPLATE("a path has no opinion past its end, nor for a machine that is nowhere", S, WEND_TEST_NUMBERS) {
  wend::along_path const pursuit{crossing, 0.3F};
  wend::onto_path const field{crossing};
  wend::PathProgress<S> ended{S(5.0F)};
  CHECK(numbers::first(ask(pursuit, wend::Vec2<S>(S(1.2F), S(-2.1F)), ended).confidence) == 0);
  CHECK(numbers::first(ask(field, wend::Vec2<S>(S(0.0F), S(0.0F)), ended).confidence) == 0);
  // Pursuit comes back to the end from where it has not been passed.
  CHECK(numbers::first(ask(pursuit, wend::Vec2<S>(S(1.0F), S(0.0F)), ended).direction.y()) == -1);
  for (float const broken : {scenes::nan, scenes::infinity, 2.0e6F}) {
    wend::PathProgress<S> memory{S(1.5F)};
    CHECK(numbers::first(ask(pursuit, wend::Vec2<S>(S(broken), S(0.0F)), memory).confidence) == 0);
    CHECK(numbers::first(ask(field, wend::Vec2<S>(S(0.0F), S(broken)), memory).confidence) == 0);
    CHECK(numbers::first(memory.pieces) == 1.5);
  }
}

TEST_CASE_TEMPLATE("at an arc's centre pursuit aims at the path, and the vector field has no opinion", S,
                   WEND_TEST_NUMBERS) {
  wend::PathProgress<S> memory{S(1.5F)};
  wend::Vec2<S> const centre{S(3.0F), S(1.0F)};
  // Half way along the arc's chord is its easternmost point.
  wend::Course<S> const course = ask(wend::along_path{crossing, 0.3F}, centre, memory);
  CHECK(numbers::first(course.direction.x()) == doctest::Approx(1.0));
  CHECK(numbers::first(ask(wend::onto_path{crossing}, centre, memory).confidence) == 0);
}

TEST_CASE("a path takes no notice of goal, discs and time step") {
  wend::along_path const field{crossing, 0.3F};
  scenes::Scene<double> scene;
  scene.pose.position = {0.5, 0.1};
  wend::PathProgress<double> memory;
  wend::PathProgress<double> other;
  wend::Course<double> const before = scenes::answer(field, scene, memory);
  scene.goal = scene.pose.position;
  scene.dt = 0.0;
  for (int i = 0; i < scenes::disc_count; ++i) {
    scene.put(0.5, 0.1, 0.3);
  }
  CHECK(numbers::same(before.direction, scenes::answer(field, scene, other).direction));
}
