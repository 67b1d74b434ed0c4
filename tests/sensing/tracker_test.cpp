// Tracker: against worlds whose motion is known. What it may be off by comes from the filter's own theory: a machine
// that assumes manoeuvres, of discs that make none, errs by less than its spread says (Kalman 1960).
#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <limits>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/random.hpp"
#include "wend/sensing/tracker.hpp"

using wend::Disc;
using wend::MovingDiscSet;
using wend::Pose;
using wend::Tracker;
using wend::Vec2;
using wend::lab::Draws;

namespace {

constexpr double dt = 0.05;
constexpr double noise = 0.03;  // metres, the tracker's default

struct Mover {
  Vec2<double> at, velocity;
  double radius = 0.2;
};

Pose<double> pose_at(double x, double y, double theta) { return {{x, y}, {std::cos(theta), std::sin(theta)}}; }

// What is seen of a mover from a pose: its centre in the robot's frame, and noise.
template <typename S>
Disc<S> seen(Mover const& mover, Pose<double> const& pose, Draws const& draws, std::uint32_t tick, std::uint32_t i) {
  Vec2<double> const off{noise * draws.normal({tick, i, 0}), noise * draws.normal({tick, i, 1})};
  Vec2<double> const centre = wend::into_frame(pose, Vec2<double>(mover.at + off));
  return {centre.cast<S>(), static_cast<S>(mover.radius)};
}

template <typename S>
Pose<S> as(Pose<double> const& pose) {
  return {pose.position.cast<S>(), pose.heading.cast<S>()};
}

// The track nearest to a place, by its index; -1 without any.
template <typename Memory>
int track_at(Memory const& memory, Vec2<double> const& place) {
  int best = -1;
  double least = 1.0e9;
  for (std::size_t t = 0; t < memory.tracks.size(); ++t) {
    double const off = (memory.tracks[t].disc.centre.template cast<double>() - place).norm();
    if (memory.tracks[t].hits > 0 && off < least) {
      least = off;
      best = static_cast<int>(t);
    }
  }
  return best;
}

template <typename Memory>
int in_use(Memory const& memory) {
  return static_cast<int>(
      std::count_if(memory.tracks.begin(), memory.tracks.end(), [](auto const& t) { return t.hits > 0; }));
}

}  // namespace

TEST_CASE_TEMPLATE("crossers' velocities are found from a machine that drives and turns", S, float, double) {
  Tracker<16> const tracker{};
  double squares = 0.0, worst = 0.0, spread = 0.0;
  int count = 0, untold = 0, extra = 0;
  for (std::uint32_t run = 0; run < 20; ++run) {
    Draws const draws(1, run);
    std::array<Mover, 4> movers;
    for (std::uint32_t i = 0; i < 4; ++i) {
      double const angle = draws.between(-3.1, 3.1, {9, i, 0});
      double const speed = draws.between(0.4, 1.2, {9, i, 1});
      movers[i] = {{4.0 * i - 6.0, draws.between(-2.0, 2.0, {9, i, 2})},
                   {speed * std::cos(angle), speed * std::sin(angle)}};
    }
    typename Tracker<16>::template Memory<S> memory;
    for (std::uint32_t tick = 0; tick < 80; ++tick) {
      Pose<double> const pose = pose_at(0.5 * tick * dt, 0.1, 0.8 * tick * dt);
      MovingDiscSet<S, 8> discs;
      for (std::uint32_t i = 0; i < 4; ++i) {
        discs.add(seen<S>(movers[i], pose, draws, tick, i));
      }
      tracker(as<S>(pose), static_cast<S>(dt), discs, memory);
      REQUIRE(discs.size() >= 4);  // rarely one more: seen outside its gate, and expected within it
      extra += discs.size() - 4;
      for (std::uint32_t i = 0; i < 4; ++i) {
        if (tick >= 40) {
          // over the ground, along the robot's axes
          Vec2<double> const truth = wend::turned_into(pose.heading, movers[i].velocity);
          Vec2<double> const off = discs.velocity(static_cast<int>(i)).template cast<double>() - truth;
          bool const told = discs.velocity(static_cast<int>(i)).norm() > S(0);
          untold += told ? 0 : 1;
          squares += told ? off.squaredNorm() / 2.0 : 0.0;
          worst = told ? std::max(worst, off.norm()) : worst;
          ++count;
        }
        movers[i].at += dt * movers[i].velocity;
      }
    }
    spread = std::sqrt(static_cast<double>(memory.tracks[0].spread.velocity));
  }
  double const rms = std::sqrt(squares / (count - untold));
  MESSAGE("velocity error along each axis: ", rms, " m/s, worst ", worst, "; spread ", spread, " m/s; untold ", untold,
          ", extra ", extra, " of ", count);
  CHECK(untold <= count / 100);  // where the gate, or the spread, lets one go for a tick
  CHECK(extra <= count / 100);
  CHECK(rms < spread);  // the filter allows for manoeuvres that nobody made
  CHECK(rms > 0.2 * spread);
  CHECK(worst < 4.0 * spread);
}

TEST_CASE_TEMPLATE("discs are handed on where and as large as they were seen", S, float, double) {
  Tracker<8> const tracker{};
  Draws const draws(2, 0);
  typename Tracker<8>::template Memory<S> memory;
  Mover mover{{2.0, 0.5}, {-0.5, 0.2}};
  for (std::uint32_t tick = 0; tick < 30; ++tick) {
    Pose<double> const pose = pose_at(0.0, 0.0, 0.3);
    MovingDiscSet<S, 8> discs;
    Disc<S> const given = seen<S>(mover, pose, draws, tick, 0);
    discs.add(given);
    tracker(as<S>(pose), static_cast<S>(dt), discs, memory);
    REQUIRE(discs.size() == 1);
    CHECK(discs[0].centre == given.centre);
    CHECK(discs[0].radius == given.radius);
    mover.at += dt * mover.velocity;
  }
}

TEST_CASE("what stands still is told to stand still, from a machine that drives and turns") {
  Tracker<16> const tracker{};
  int told = 0, all = 0;
  for (std::uint32_t run = 0; run < 20; ++run) {
    Draws const draws(3, run);
    Tracker<16>::Memory<float> memory;
    std::array<Mover, 5> still;
    for (std::uint32_t i = 0; i < 5; ++i) {
      still[i] = {{draws.between(-3.0, 3.0, {7, i, 0}), 1.5 * i - 3.0}, {0.0, 0.0}};
    }
    for (std::uint32_t tick = 0; tick < 100; ++tick) {
      Pose<double> const pose = pose_at(0.4 * tick * dt, 0.0, std::sin(0.05 * tick));
      MovingDiscSet<float, 8> discs;
      for (std::uint32_t i = 0; i < 5; ++i) {
        discs.add(seen<float>(still[i], pose, draws, tick, i));
      }
      tracker(as<float>(pose), static_cast<float>(dt), discs, memory);
      for (int i = 0; i < discs.size(); ++i) {
        told += discs.velocity(i).norm() > 0.0F ? 1 : 0;
        ++all;
      }
    }
  }
  MESSAGE("told to move: ", told, " of ", all);
  CHECK(told <= all / 50);  // a filter that allows for manoeuvres is surer than its `certain` says
}

namespace {

// Which is which after two crossers met in one point at one moment. `ahead`: by the tracker; else by taking the disc
// that lies nearest to where each was seen last.
int swaps(double angle, bool predicts, double& most_off) {
  Tracker<8> const tracker{};
  int swapped = 0;
  most_off = 0.0;
  for (std::uint32_t run = 0; run < 100; ++run) {
    Draws const draws(4, run);
    double const speed = 0.8;
    std::array<Mover, 2> movers{Mover{{2.0 - 1.2 * speed, 0.0}, {speed, 0.0}, 0.1},
                                Mover{{2.0 - 1.2 * speed * std::cos(angle), -1.2 * speed * std::sin(angle)},
                                      {speed * std::cos(angle), speed * std::sin(angle)},
                                      0.1}};
    Tracker<8>::Memory<float> memory;
    std::array<Vec2<float>, 2> last{movers[0].at.cast<float>(), movers[1].at.cast<float>()};
    int first = -1;
    for (std::uint32_t tick = 0; tick < 48; ++tick) {
      MovingDiscSet<float, 4> discs;
      std::uint32_t const order = draws.uniform({tick, 5}) < 0.5 ? 0U : 1U;  // a ring does not keep the order either
      for (std::uint32_t i = 0; i < 2; ++i) {
        discs.add(seen<float>(movers[(i + order) % 2], Pose<double>{}, draws, tick, (i + order) % 2));
      }
      int const near = (discs[0].centre - last[0]).norm() < (discs[1].centre - last[0]).norm() ? 0 : 1;
      last = {discs[near].centre, discs[1 - near].centre};
      tracker(Pose<float>{}, static_cast<float>(dt), discs, memory);
      if (tick == 12) {
        first = track_at(memory, movers[0].at);
      }
      if (tick < 47) {
        for (Mover& mover : movers) {
          mover.at += dt * mover.velocity;
        }
      }
    }
    if (predicts) {
      int const now = track_at(memory, movers[0].at);
      swapped += now == first ? 0 : 1;
      auto const& track = memory.tracks[static_cast<std::size_t>(now)];
      most_off = std::max(most_off, (track.velocity.cast<double>() - movers[0].velocity).norm());
    } else {
      swapped += (last[0].cast<double>() - movers[0].at).norm() < (last[0].cast<double>() - movers[1].at).norm() ? 0
                                                                                                                 : 1;
    }
  }
  return swapped;
}

}  // namespace

TEST_CASE("two that cross in one point at one moment keep their names") {
  for (double const angle : {1.5707963, 2.3, 3.1415926, 1.0}) {
    double most_off = 0.0;
    int const by_tracker = swaps(angle, true, most_off);
    double unused = 0.0;
    int const by_place = swaps(angle, false, unused);
    MESSAGE("at ", angle, " rad: swapped ", by_tracker, " of 100, by place alone ", by_place, "; velocity off by ",
            most_off);
    CHECK(by_tracker == 0);
    CHECK(by_place > 10);  // without velocities this could not be held apart
    CHECK(most_off < 0.5);
  }
}

TEST_CASE("two that move together are told apart even when one comes nearest to where the other was") {
  Tracker<4> const tracker{.motion = {.noise = 0.05F}};
  Tracker<4>::Memory<float> memory;
  auto const tick = [&](float first, float second) {
    MovingDiscSet<float, 4> discs;
    discs.add({{1.0F, first}, 0.02F});
    discs.add({{1.0F, second}, 0.02F});
    tracker(Pose<float>{}, 0.05F, discs, memory);
  };
  for (int k = 0; k < 20; ++k) {
    tick(0.0F, 0.1F);
  }
  int const lower = track_at(memory, {1.0, 0.0});
  int const upper = track_at(memory, {1.0, 0.1});
  REQUIRE(lower != upper);
  // both by 0.06 and 0.05: by themselves the nearest pair would be the upper track and the lower disc, 0.04 apart
  tick(0.06F, 0.15F);
  auto const& tracks = memory.tracks;
  CHECK(tracks[static_cast<std::size_t>(lower)].disc.centre.y() > 0.0F);
  CHECK(tracks[static_cast<std::size_t>(lower)].disc.centre.y() < 0.06F);
  CHECK(tracks[static_cast<std::size_t>(upper)].disc.centre.y() > 0.1F);
  CHECK(in_use(memory) == 2);
}

TEST_CASE("a disc that is not seen for a few ticks goes on where it went, and after that it is gone") {
  Tracker<8> const tracker{};
  Draws const draws(6, 0);
  Tracker<8>::Memory<float> memory;
  Mover mover{{-1.0, 1.0}, {0.7, 0.0}, 0.15};
  for (std::uint32_t tick = 0; tick < 60; ++tick) {
    MovingDiscSet<float, 4> discs;
    bool const hidden = (tick >= 30 && tick < 35) || tick >= 45;
    if (!hidden) {
      discs.add(seen<float>(mover, Pose<double>{}, draws, tick, 0));
    }
    tracker(Pose<float>{}, static_cast<float>(dt), discs, memory);
    CAPTURE(tick);
    if (tick < 50) {
      REQUIRE(discs.size() == 1);
      CHECK((discs[0].centre.cast<double>() - mover.at).norm() < 0.15);
      CHECK(in_use(memory) == 1);
      if (tick > 20) {
        CHECK((discs.velocity(0).cast<double>() - mover.velocity).norm() < 0.3);
      }
    } else {
      CHECK(discs.size() == 0);
      CHECK(in_use(memory) == 0);
    }
    mover.at += dt * mover.velocity;
  }
}

TEST_CASE("a disc seen once or twice is neither told to move nor missed when it is gone") {
  Tracker<8> const tracker{};
  Tracker<8>::Memory<float> memory;
  for (int tick = 0; tick < 4; ++tick) {
    MovingDiscSet<float, 4> discs;
    if (tick < 2) {
      discs.add({{1.0F + 0.1F * static_cast<float>(tick), 0.0F}, 0.1F});
    }
    tracker(Pose<float>{}, 0.05F, discs, memory);
    CHECK(discs.size() == (tick < 2 ? 1 : 0));
    if (tick < 2) {
      CHECK(discs.velocity(0) == Vec2<float>(0.0F, 0.0F));
    }
  }
}

TEST_CASE("with more discs than tracks the nearest are tracked, and all are handed on") {
  Tracker<3> const tracker{};
  Draws const draws(8, 0);
  Tracker<3>::Memory<float> memory;
  std::array<Mover, 7> movers;
  for (std::uint32_t i = 0; i < 7; ++i) {
    movers[i] = {{7.0 - i, 0.0}, {0.0, i % 2 == 0 ? 0.8 : -0.8}, 0.1};  // the nearest are seen last
  }
  for (std::uint32_t tick = 0; tick < 30; ++tick) {
    MovingDiscSet<float, 8> discs;
    for (std::uint32_t i = 0; i < 7; ++i) {
      discs.add(seen<float>(movers[i], Pose<double>{}, draws, tick, i));
    }
    tracker(Pose<float>{}, static_cast<float>(dt), discs, memory);
    REQUIRE(discs.size() == 7);
    CHECK(in_use(memory) == 3);
    if (tick > 20) {
      for (int i = 0; i < 7; ++i) {
        CAPTURE(i);
        CHECK((discs.velocity(i).norm() > 0.3F) == (i >= 4));
      }
    }
    for (Mover& mover : movers) {
      mover.at += dt * mover.velocity;
    }
  }
}

TEST_CASE("what a set dropped or rejected is still told after tracking") {
  Tracker<4> const tracker{};
  Tracker<4>::Memory<float> memory;
  MovingDiscSet<float, 2> discs;
  for (float x : {1.0F, 2.0F, 3.0F}) {
    discs.add({{x, 0.0F}, 0.1F});
  }
  discs.add({{std::numeric_limits<float>::quiet_NaN(), 0.0F}, 0.1F});
  tracker(Pose<float>{}, 0.05F, discs, memory);
  CHECK(discs.dropped() == 2);
  CHECK(discs.rejected());
}

TEST_CASE_TEMPLATE("without a sound pose or a time step all tracks are forgotten, and nothing moves", S, float,
                   double) {
  Tracker<8> const tracker{};
  S const not_a_number = std::numeric_limits<S>::quiet_NaN();
  S const infinity = std::numeric_limits<S>::infinity();
  auto const check = [&](Pose<S> const& pose, S step) {
    typename Tracker<8>::template Memory<S> memory;
    for (int tick = 0; tick < 20; ++tick) {
      MovingDiscSet<S, 4> discs;
      discs.add({{S(1) + S(0.05F) * S(static_cast<float>(tick)), S(1)}, S(0.2F)});
      tracker(Pose<S>{}, S(0.05F), discs, memory);
      REQUIRE((tick < 10 || discs.velocity(0).x() > S(0.5F)));
    }
    MovingDiscSet<S, 4> discs;
    discs.add({{S(2), S(1)}, S(0.2F)});
    tracker(pose, step, discs, memory);
    CHECK(discs.size() == 1);
    CHECK(discs.velocity(0) == Vec2<S>(S(0), S(0)));
    for (auto const& track : memory.tracks) {
      CHECK(track.hits <= 1);
      CHECK(wend::finite(track.disc.centre));
    }
  };
  for (S const step : {S(0), S(-0.05F), S(10), infinity, not_a_number}) {
    check(Pose<S>{}, step);
  }
  check(Pose<S>{{not_a_number, S(0)}, {S(1), S(0)}}, S(0.05F));
  check(Pose<S>{{S(0), S(0)}, {S(0), S(0)}}, S(0.05F));
}

TEST_CASE("no discs, discs at one place and discs far away do no harm") {
  Tracker<4> const tracker{};
  Tracker<4>::Memory<float> memory;
  for (int tick = 0; tick < 20; ++tick) {
    MovingDiscSet<float, 8> none;
    tracker(Pose<float>{}, 0.05F, none, memory);
    CHECK(none.size() == 0);
  }
  for (int tick = 0; tick < 20; ++tick) {
    MovingDiscSet<float, 8> discs;
    for (int i = 0; i < 3; ++i) {
      discs.add({{1.0F, 1.0F}, 0.1F});
    }
    discs.add({});
    tracker(Pose<float>{}, 0.05F, discs, memory);
    CHECK(discs.size() == 4);
    for (int i = 0; i < 4; ++i) {
      CHECK(discs.velocity(i) == Vec2<float>(0.0F, 0.0F));
    }
  }
  CHECK(in_use(memory) == 3);  // what stands in for no disc is no track
}

TEST_CASE("a memory of nonsense is forgotten") {
  Tracker<4> const tracker{};
  for (float const x : {std::numeric_limits<float>::quiet_NaN(), std::numeric_limits<float>::infinity(), 3.0e38F}) {
    Tracker<4>::Memory<float> memory;
    for (auto& track : memory.tracks) {
      track = {{{x, x}, x}, {x, x}, {x, x, x}, 200, 3};
    }
    for (int tick = 0; tick < 8; ++tick) {
      MovingDiscSet<float, 4> discs;
      discs.add({{1.0F, 0.0F}, 0.1F});
      tracker(Pose<float>{}, 0.05F, discs, memory);
      CHECK(discs.size() == 1);
      CHECK_FALSE(discs.rejected());
      CHECK(discs.velocity(0) == Vec2<float>(0.0F, 0.0F));
    }
    CHECK(in_use(memory) == 1);
  }
}
