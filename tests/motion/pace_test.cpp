// Pace: against the stopping law v t_r + v^2 / (2 a) = d (reaction distance and braking distance; common practice, no
// source), by substitution and by driving a point at discs.
#include <cmath>
#include <deque>
#include <limits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/motion/pace.hpp"

using wend::Disc;
using wend::DiscSet;
using wend::Pace;
using wend::Pose;
using wend::Vec2;

namespace {

constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();
constexpr float infinity = std::numeric_limits<float>::infinity();
constexpr float robot_radius = 0.2F;

// The allowed speed on the x axis, nose along it, with one disc or two on the axis.
template <typename S, int N>
S allowed_at(Pace const& pace, double x, DiscSet<S, N> const& discs, double nose = 1.0, double goal = 100.0) {
  using Plain = numbers::plain_t<S>;
  Pose<S> const pose{{S(static_cast<Plain>(x)), S(0.0F)}, {S(static_cast<Plain>(nose)), S(0.0F)}};
  Vec2<S> const at{S(static_cast<Plain>(goal)), S(0.0F)};
  return pace(wend::look(pose, at, discs, S(robot_radius), S(0.05F)));
}

}  // namespace

TEST_CASE_TEMPLATE("the stoppable speed solves the stopping law to rounding", S, float, double) {
  double const epsilon = static_cast<double>(std::numeric_limits<S>::epsilon());
  for (Pace const& pace :
       {Pace{}, Pace{.reaction = 0.11F, .braking = 0.37F}, Pace{.reaction = 1.3F, .braking = 6.1F}}) {
    double const reaction = static_cast<double>(pace.reaction);
    double const braking = static_cast<double>(pace.braking);
    for (double room = 1.0e-6; room <= 1.0e3; room *= 1.07) {
      double const given = static_cast<double>(static_cast<S>(room));
      double const v = static_cast<double>(pace.stoppable(static_cast<S>(room)));
      CAPTURE(room);
      CHECK(std::abs(v * reaction + v * v / (2.0 * braking) - given) < 8.0 * epsilon * given);
    }
  }
}

TEST_CASE_TEMPLATE("the stoppable speed never falls as the room grows", S, float, double) {
  Pace const pace{};
  S last = S(0.0F);
  for (double room = 1.0e-6; room <= 1.0e3; room *= 1.003) {
    S const v = pace.stoppable(static_cast<S>(room));
    CHECK(v > S(0.0F));
    CHECK(v >= last);
    last = v;
  }
}

TEST_CASE_TEMPLATE("without room there is no speed, and with endless room a finite one", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  for (float room :
       {0.0F, -0.0F, -1.0e-6F, -1.0F, -std::numeric_limits<float>::max(), -infinity, not_a_number, -not_a_number}) {
    S const v = pace.stoppable(S(room));
    CAPTURE(room);
    CHECK(numbers::all<S>(v >= S(0.0F) && v <= S(0.0F)));
  }
  for (float room : {1.0e6F, 1.0e30F, std::numeric_limits<float>::max(), infinity}) {
    S const v = pace.stoppable(S(room));
    CAPTURE(room);
    CHECK(numbers::all<S>(v > S(1000.0F) && v < S(2000.0F)));  // 1265 m/s from far_away at 0.8 m/s^2
  }
}

TEST_CASE_TEMPLATE("pace is the top speed in the open, and eases off before the goal", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  DiscSet<S, 2> const none;
  CHECK(numbers::all<S>(allowed_at<S>(pace, 0.0, none) >= S(pace.top_speed)));
  CHECK(numbers::all<S>(allowed_at<S>(pace, 0.0, none) <= S(pace.top_speed)));
  S const near = allowed_at<S>(pace, 99.9, none);
  CHECK(numbers::all<S>(near < S(pace.top_speed) && near > S(0.0F)));
  CHECK(numbers::all<S>(allowed_at<S>(pace, 100.0, none) <= S(0.0F)));
}

TEST_CASE_TEMPLATE("a disc left behind is not counted, one ahead and one abeam are", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  // One disc at an angle from the nose, its edge `gap` metres from the robot's.
  auto const with = [&](double angle, float gap) {
    float const distance = gap + robot_radius + 0.1F;
    DiscSet<S, 2> discs;
    discs.add({{S(distance * static_cast<float>(std::cos(angle))), S(distance * static_cast<float>(std::sin(angle)))},
               S(0.1F)});
    return allowed_at<S>(pace, 0.0, discs);
  };
  double const pi = 3.14159265358979;
  CHECK(numbers::all<S>(with(0.0, 0.02F) <= S(0.0F)));
  CHECK(numbers::all<S>(with(pi / 2.0, 0.02F) <= S(0.0F)));
  CHECK(numbers::all<S>(with(pi, 0.02F) >= S(pace.top_speed)));
  // `behind` is a cosine of 0.5: 60 degrees either side of straight astern, so 120 degrees off the nose
  CHECK(numbers::all<S>(with(119.0 / 180.0 * pi, 0.02F) <= S(0.0F)));
  CHECK(numbers::all<S>(with(-119.0 / 180.0 * pi, 0.02F) <= S(0.0F)));
  CHECK(numbers::all<S>(with(121.0 / 180.0 * pi, 0.02F) >= S(pace.top_speed)));
  CHECK(numbers::all<S>(with(-121.0 / 180.0 * pi, 0.02F) >= S(pace.top_speed)));
}

TEST_CASE_TEMPLATE("of one disc behind and one ahead, only the one ahead sets the pace", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  Disc<S> const behind{{S(-0.35F), S(0.0F)}, S(0.1F)};
  Disc<S> const ahead{{S(0.7F), S(0.0F)}, S(0.1F)};
  DiscSet<S, 2> one;
  one.add(ahead);
  DiscSet<S, 2> both;
  both.add(behind);
  both.add(ahead);
  DiscSet<S, 2> both_turned;
  both_turned.add(ahead);
  both_turned.add(behind);
  S const alone = allowed_at<S>(pace, 0.0, one);
  CHECK(numbers::all<S>(alone > S(0.1F) && alone < S(pace.top_speed)));
  for (DiscSet<S, 2> const& discs : {both, both_turned}) {
    S const v = allowed_at<S>(pace, 0.0, discs);
    CHECK(numbers::all<S>(v >= alone && v <= alone));
  }
  // and with the nose the other way round, the near one alone: there is no room before it
  CHECK(numbers::all<S>(allowed_at<S>(pace, 0.0, both, -1.0) <= S(0.0F)));
}

TEST_CASE_TEMPLATE("in the middle of a disc, and in one that reaches over it, there is no pace", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  DiscSet<S, 2> centred;
  centred.add({{S(0.0F), S(0.0F)}, S(0.3F)});
  CHECK(numbers::all<S>(allowed_at<S>(pace, 0.0, centred) <= S(0.0F)));
  DiscSet<S, 2> over;
  over.add({{S(0.2F), S(0.0F)}, S(0.5F)});
  CHECK(numbers::all<S>(allowed_at<S>(pace, 0.0, over) <= S(0.0F)));
  CHECK(numbers::all<S>(allowed_at<S>(pace, 0.0, over, -1.0) > S(0.0F)));  // out of it, it may go
}

TEST_CASE_TEMPLATE("for a machine that goes another way than its nose points, that way counts", S, WEND_TEST_NUMBERS) {
  Pace const pace{};
  DiscSet<S, 2> discs;
  discs.add({{S(0.0F), S(0.4F)}, S(0.1F)});  // to the left
  auto const percept = wend::look(Pose<S>{}, Vec2<S>(S(9.0F), S(0.0F)), discs, S(robot_radius), S(0.05F));
  auto const along = [&](float x, float y) { return pace(percept, Vec2<S>(S(x), S(y))); };
  CHECK(numbers::all<S>(along(0.0F, -1.0F) >= S(pace.top_speed)));
  CHECK(numbers::all<S>(along(0.0F, 1.0F) < S(0.2F)));
  CHECK(numbers::all<S>(along(1.0F, 0.0F) < S(0.2F)));
  S const as_nose = along(1.0F, 0.0F);
  CHECK(numbers::all<S>(pace(percept) >= as_nose && pace(percept) <= as_nose));
  CHECK(numbers::all<S>(pace.room(percept, Vec2<S>(S(0.0F), S(-1.0F))) > S(1000.0F)));
}

// An emergency stop: it drives on at the allowed speed for the reaction time, then brakes as hard as it surely can.
TEST_CASE_TEMPLATE("a point told to stop at any moment comes to rest outside the margin", S, float, double) {
  double const step = 1.0e-4;
  for (Pace const& pace : {Pace{}, Pace{.top_speed = 2.0F, .reaction = 0.1F, .braking = 1.5F}}) {
    for (double clearance = 0.0; clearance < 4.0; clearance += 0.037) {
      DiscSet<S, 1> discs;
      discs.add({{S(5.0F), S(0.0F)}, S(0.5F)});
      double x = 4.5 - static_cast<double>(robot_radius) - clearance;
      double v = static_cast<double>(allowed_at<S>(pace, x, discs));
      if (v > 0.0) {
        for (double t = 0.0; v > 0.0; t += step) {
          x += v * step;
          v -= t >= static_cast<double>(pace.reaction) ? static_cast<double>(pace.braking) * step : 0.0;
        }
        CAPTURE(clearance);
        CHECK(4.5 - static_cast<double>(robot_radius) - x >= static_cast<double>(pace.margin) - 2.0 * step);
      }
    }
  }
}

// The whole loop: the speed follows what was allowed `delay` seconds ago and is renewed every `tick` seconds, both
// together the reaction time; it slows down by the braking at most, and speeds up at once, which is the worst.
TEST_CASE_TEMPLATE("a point that drives at a disc with a late drive never comes nearer than the margin", S, float,
                   double) {
  double const step = 5.0e-4;
  for (Pace const& pace : {Pace{}, Pace{.top_speed = 1.5F, .reaction = 0.4F, .braking = 0.8F, .margin = 0.1F},
                           Pace{.top_speed = 0.4F, .reaction = 0.1F, .braking = 0.3F, .margin = 0.02F}}) {
    for (double share : {0.0, 0.3, 0.8, 0.999}) {  // of the reaction time that is dead time; the rest is the tick
      double const delay = share * static_cast<double>(pace.reaction);
      double const tick = static_cast<double>(pace.reaction) - delay;
      double nearest = std::numeric_limits<double>::infinity();
      double reached = 0.0;
      for (double start : {0.0, 1.0, 2.3, 3.4, 3.9}) {
        DiscSet<S, 1> discs;
        discs.add({{S(5.0F), S(0.0F)}, S(0.5F)});
        double x = start;
        double v = 0.0;
        double allowed = 0.0;
        double next_tick = 0.0;
        auto const late = static_cast<std::size_t>(delay / step);
        std::deque<double> under_way(late, 0.0);
        for (double t = 0.0; t < 15.0; t += step) {
          if (t >= next_tick) {
            allowed = static_cast<double>(allowed_at<S>(pace, x, discs));
            next_tick += tick;
          }
          under_way.push_back(allowed);
          double const told = under_way.front();
          under_way.pop_front();
          v = std::fmax(told, v - static_cast<double>(pace.braking) * step);
          x += v * step;
          nearest = std::fmin(nearest, 4.5 - static_cast<double>(robot_radius) - x);
          reached = std::fmax(reached, v);
        }
      }
      CAPTURE(share);
      CHECK(nearest >= static_cast<double>(pace.margin) - 2.0 * step * static_cast<double>(pace.top_speed));
      CHECK(nearest < static_cast<double>(pace.margin) + 0.15);  // and it did drive up to it
      CHECK(reached > 0.9 * static_cast<double>(pace.top_speed));
    }
  }
}
