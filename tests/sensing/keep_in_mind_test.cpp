// KeepInMind: against where things are that no sensor sees any more.
#include <cmath>
#include <limits>

#include <doctest/doctest.h>

#include "wend/sensing/keep_in_mind.hpp"

using wend::Disc;
using wend::KeepInMind;
using wend::MovingDiscSet;
using wend::Pose;
using wend::Vec2;

namespace {

template <typename S>
Pose<S> looking(double angle, double x = 0.0, double y = 0.0) {
  return {{static_cast<S>(x), static_cast<S>(y)}, {static_cast<S>(std::cos(angle)), static_cast<S>(std::sin(angle))}};
}

// What stands at a place of the world, seen from a pose.
template <typename S>
Disc<S> from(Pose<S> const& pose, double x, double y, double radius) {
  return {wend::into_frame(pose, Vec2<S>(static_cast<S>(x), static_cast<S>(y))), static_cast<S>(radius)};
}

}  // namespace

TEST_CASE_TEMPLATE("a disc that a fan leaves behind is kept where it stands, grows, and is forgotten in time", S, float,
                   double) {
  KeepInMind<8> const mind{.seconds = 2.0F, .growth = 0.1F, .half_view = 0.5F};  // 60 degrees either side
  typename KeepInMind<8>::template Memory<S> memory;
  double const dt = 0.1;
  for (int tick = 0; tick < 40; ++tick) {
    double const angle = 0.1 * tick;  // it turns to the left, and drives
    Pose<S> const pose = looking<S>(angle, 0.02 * tick, 0.0);
    MovingDiscSet<S, 4> discs;
    Disc<S> const truth = from(pose, 2.0, 0.0, 0.3);
    bool const sees = static_cast<double>(truth.centre.x()) > 0.5 * static_cast<double>(truth.centre.norm());
    if (sees) {
      discs.add(truth, {S(0), S(0)});
    }
    mind(pose, static_cast<S>(dt), discs, memory);
    int const last = 10;  // on which it is seen, at 1.0 rad; at 1.1 it is out of view
    CAPTURE(tick);
    REQUIRE(sees == (tick <= last));
    double const age = dt * (tick - last);
    if (tick <= last || age <= 2.0 - 1.0e-3) {
      REQUIRE(discs.size() == 1);
      CHECK(static_cast<double>((discs[0].centre - truth.centre).norm()) < 1.0e-5);
      CHECK(static_cast<double>(discs[0].radius) == doctest::Approx(0.3 + (sees ? 0.0 : 0.1 * age)));
    } else if (age > 2.0 + 1.0e-3) {
      CHECK(discs.size() == 0);
    }
  }
}

TEST_CASE("a disc that would be in view and is not seen is forgotten at once") {
  KeepInMind<8> const mind{};
  KeepInMind<8>::Memory<float> memory;
  MovingDiscSet<float, 4> discs;
  discs.add({{2.0F, 0.0F}, 0.3F}, {0.0F, 0.0F});
  mind(Pose<float>{}, 0.05F, discs, memory);
  MovingDiscSet<float, 4> empty;
  mind(Pose<float>{}, 0.05F, empty, memory);
  CHECK(empty.size() == 0);
}

TEST_CASE("a disc hidden by another one is kept, and one beside it is not") {
  KeepInMind<8> const mind{};
  KeepInMind<8>::Memory<float> memory;
  MovingDiscSet<float, 4> discs;
  discs.add({{3.0F, 0.1F}, 0.2F}, {0.0F, 0.0F});
  discs.add({{3.0F, 1.5F}, 0.2F}, {0.0F, 0.0F});
  mind(Pose<float>{}, 0.05F, discs, memory);
  MovingDiscSet<float, 4> hidden;
  hidden.add({{1.5F, 0.0F}, 0.3F}, {0.0F, 0.0F});
  mind(Pose<float>{}, 0.05F, hidden, memory);
  REQUIRE(hidden.size() == 2);
  CHECK(static_cast<double>(hidden[1].centre.x()) == doctest::Approx(3.0));
  CHECK(static_cast<double>(hidden[1].centre.y()) == doctest::Approx(0.1));
}

TEST_CASE("a disc too near or too far to be seen is kept") {
  KeepInMind<8> const mind{.nearest = 0.2F, .reach = 4.0F};
  for (float const x : {0.25F, 4.5F}) {
    KeepInMind<8>::Memory<float> memory;
    MovingDiscSet<float, 4> discs;
    discs.add({{x, 0.0F}, 0.1F}, {0.0F, 0.0F});
    mind(Pose<float>{}, 0.05F, discs, memory);
    MovingDiscSet<float, 4> none;
    mind(Pose<float>{}, 0.05F, none, memory);
    CAPTURE(x);
    CHECK(none.size() == 1);
  }
}

TEST_CASE("a disc that moved goes on moving out of view, over the ground") {
  KeepInMind<8> const mind{.half_view = 0.0F};
  KeepInMind<8>::Memory<float> memory;
  MovingDiscSet<float, 4> discs;
  discs.add({{0.5F, 1.0F}, 0.2F}, {-0.5F, 0.2F});
  mind(Pose<float>{}, 0.1F, discs, memory);
  Pose<float> const away = looking<float>(-1.5, 0.3, 0.0);
  for (int tick = 1; tick <= 10; ++tick) {
    MovingDiscSet<float, 4> none;
    mind(away, 0.1F, none, memory);
    REQUIRE(none.size() == 1);
    Disc<float> const truth = from(away, 0.5 - 0.05 * tick, 1.0 + 0.02 * tick, 0.2);
    CHECK((none[0].centre - truth.centre).norm() < 1.0e-5F);
    Vec2<float> const velocity = wend::turned_out_of(away.heading, none.velocity(0));
    CHECK((velocity - Vec2<float>(-0.5F, 0.2F)).norm() < 1.0e-6F);
  }
}

TEST_CASE("what is kept never piles up: one copy of each disc, and the nearest where there is no room for all") {
  KeepInMind<3> const mind{.half_view = 0.0F};
  KeepInMind<3>::Memory<float> memory;
  for (int tick = 0; tick < 50; ++tick) {
    MovingDiscSet<float, 8> discs;
    for (float x : {3.0F, 2.0F, 1.0F, 2.5F, 1.5F}) {
      discs.add({{x, 0.5F}, 0.1F}, {0.0F, 0.0F});
    }
    mind(Pose<float>{}, 0.05F, discs, memory);
    CHECK(discs.size() == 5);
  }
  MovingDiscSet<float, 8> none;
  mind(looking<float>(3.1), 0.05F, none, memory);
  REQUIRE(none.size() == 3);
  for (int i = 0; i < 3; ++i) {
    CHECK(none[i].centre.norm() < 2.2F);
  }
}

TEST_CASE_TEMPLATE("without a sound pose or a time step nothing is added, learned or forgotten", S, float, double) {
  KeepInMind<8> const mind{.half_view = 0.0F};
  S const not_a_number = std::numeric_limits<S>::quiet_NaN();
  S const infinity = std::numeric_limits<S>::infinity();
  auto const check = [&](Pose<S> const& pose, S dt) {
    typename KeepInMind<8>::template Memory<S> memory;
    MovingDiscSet<S, 4> discs;
    discs.add({{S(1), S(0)}, S(0.1F)}, {S(0), S(0)});
    mind(Pose<S>{}, S(0.05F), discs, memory);
    MovingDiscSet<S, 4> others;
    others.add({{S(2), S(1)}, S(0.1F)}, {S(0), S(0)});
    mind(pose, dt, others, memory);
    CHECK(others.size() == 1);
    MovingDiscSet<S, 4> none;
    mind(looking<S>(3.1), S(0.05F), none, memory);
    CHECK(none.size() == 1);
  };
  for (S const dt : {S(0), S(-1), not_a_number, infinity}) {
    check(Pose<S>{}, dt);
  }
  check(Pose<S>{{S(0), not_a_number}, {S(1), S(0)}}, S(0.05F));
  check(Pose<S>{{S(0), S(0)}, {S(3), S(0)}}, S(0.05F));
}

TEST_CASE("a memory of nonsense is forgotten, and adds no disc that is none") {
  KeepInMind<4> const mind{.half_view = 0.0F};
  for (float const x : {std::numeric_limits<float>::quiet_NaN(), std::numeric_limits<float>::infinity(), 3.0e38F}) {
    KeepInMind<4>::Memory<float> memory;
    for (auto& one : memory.discs) {
      one = {{{-1.0F, x}, x}, {x, x}, 0.5F};
    }
    memory.discs[1] = {{{-1.0F, 0.0F}, 0.1F}, {0.0F, 0.0F}, x};
    memory.discs[2] = {{{-1.0F, 0.0F}, -0.1F}, {0.0F, 0.0F}, 0.1F};
    MovingDiscSet<float, 4> none;
    mind(Pose<float>{}, 0.05F, none, memory);
    CHECK(none.size() == 0);
    CHECK_FALSE(none.rejected());
  }
}
