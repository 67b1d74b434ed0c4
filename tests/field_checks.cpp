// What must hold for every heading field, whatever list it is in. Compiled once for all lists: the fields themselves
// hide behind subjects.hpp.
#include "field_checks.hpp"

#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <memory>
#include <vector>

#include <doctest/doctest.h>

#include "guests.hpp"
#include "numbers.hpp"
#include "scenes.hpp"
#include "subjects.hpp"

namespace field_checks {

using scenes::Plain;
using scenes::Scene;
using scenes::Wanderer;
using subjects::Subject;
using subjects::Subjects;

namespace {

// Unit direction and confidence in (0, 1], or (0, 0) and 0; a share of the speed in [0, 1]. To 4 roundings of single
// precision: a root, a division, a product, and the length that is formed here.
template <wend::PlainNumber S>
bool is_sound(wend::Course<S> const& course) {
  double const x = static_cast<double>(course.direction.x());
  double const y = static_cast<double>(course.direction.y());
  double const confidence = static_cast<double>(course.confidence);
  double const share = static_cast<double>(course.speed_share);
  if (!(share >= 0.0 && share <= 1.0)) {
    return false;
  }
  if (confidence == 0.0) {
    return x == 0.0 && y == 0.0;
  }
  return confidence > 0.0 && confidence <= 1.0 && std::abs(std::hypot(x, y) - 1.0) < 2.4e-7;
}

template <wend::Number S>
wend::Course<numbers::plain_t<S>> lane(wend::Course<S> const& course, int k) {
  return {numbers::lane(course.direction, k), numbers::lane(course.confidence, k)};
}

// Scenes in which something is degenerate, or not a number that a sensor should ever give.
std::vector<Plain> odd_scenes() {
  std::vector<Plain> odd;
  Plain plain;
  plain.discs = {{{1.0F, 0.0F, 0.3F}, {0.0F, 1.0F, 0.2F}, {-1.0F, 0.5F, 0.1F}, {0.3F, -1.0F, 0.4F}}};
  auto const also = [&](auto const& change) {
    odd.push_back(plain);
    change(odd.back());
  };
  also([](Plain& p) { p.goal = p.position; });
  also([](Plain& p) { p.position = {1.0F, 0.0F}; });                    // at a disc's centre
  also([](Plain& p) { p.position = p.goal = {0.0F, 1.0F}; });           // and on the goal
  also([](Plain& p) { p.discs.fill({1.0F, 0.0F, 0.3F}); });             // all at one place
  also([](Plain& p) { p.discs.fill({0.0F, 0.0F, 0.0F}); });             // all points, and at the machine's centre
  also([](Plain& p) { p.discs.fill({wend::far_away, 0.0F, 0.0F}); });   // as good as none
  also([](Plain& p) { p.position = {1.3F, 0.0F}; });                    // centre on a disc's edge
  also([](Plain& p) { p.discs.fill({1.0F, 0.0F, 3.0e5F}); });           // inside a huge one
  also([](Plain& p) { p.heading = {0.0F, 0.0F}; });
  also([](Plain& p) { p.dt = 0.0F; });
  also([](Plain& p) { p.dt = -1.0F; });
  also([](Plain& p) { p.robot_radius = 1.0e30F; });
  for (float const x : {scenes::nan, -scenes::nan, scenes::infinity, -scenes::infinity, 3.0e38F, -3.0e38F, 1.0e-44F}) {
    for (std::size_t i = 0; i < 2; ++i) {
      also([x, i](Plain& p) { p.position[i] = x; });
      if (!(std::abs(x) > 1.0e18F)) {  // the own fields use course_along, which is not for vectors that overflow
        also([x, i](Plain& p) { p.heading[i] = x; });
      }
      also([x, i](Plain& p) { p.goal[i] = x; });
    }
    for (std::size_t i = 0; i < 3; ++i) {
      also([x, i](Plain& p) { p.discs[0][i] = x; });
    }
    also([x](Plain& p) { p.robot_radius = x; });
    also([x](Plain& p) { p.dt = x; });
    also([x](Plain& p) { p.position = {x, x}, p.goal = {x, x}, p.dt = x; });
  }
  return odd;
}

// As many wanderers as S has lanes.
template <wend::Number S>
class Party {
 public:
  explicit Party(std::uint32_t seed) {
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      wanderers_.emplace_back(seed + static_cast<std::uint32_t>(k), true);
    }
  }
  [[nodiscard]] Scene<S> step() {
    std::vector<Plain> now;
    for (Wanderer& wanderer : wanderers_) {
      now.push_back(wanderer.step());
    }
    return scenes::gather<S>([&now](int k) { return now[static_cast<std::size_t>(k)]; });
  }

 private:
  std::vector<Wanderer> wanderers_;
};

}  // namespace

template <wend::Number S>
bool all_sound(wend::Course<S> const& course) {
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    if (!is_sound(lane(course, k))) {
      return false;
    }
  }
  return true;
}

template <wend::Number S>
std::vector<Trace> traces(Subject<S> const& subject, std::uint32_t seed) {
  constexpr int width = numbers::lanes<S>();
  Party<S> party(seed);
  std::vector<Trace> result(width);
  std::unique_ptr<Subject<S>> const one = subject.fresh();
  for (int tick = 0; tick < ticks; ++tick) {
    wend::Course<S> course;
    one->answer(party.step(), course);
    for (int k = 0; k < width; ++k) {
      std::vector<std::uint64_t> bits = scenes::bits_of<S>(course, k);
      std::vector<std::uint64_t> const remembered = one->remembered(k);
      bits.insert(bits.end(), remembered.begin(), remembered.end());
      result[static_cast<std::size_t>(k)].push_back(bits);
    }
  }
  return result;
}

template <wend::Number S>
void give_sound_courses(Subjects<S> const& all) {
  for (auto const& subject : all) {
    Party<S> party(100);
    int unsound = 0;
    int opinions = 0;
    for (int tick = 0; tick < ticks; ++tick) {
      wend::Course<S> course;
      subject->answer(party.step(), course);
      unsound += all_sound(course) ? 0 : 1;
      opinions += numbers::first(course.confidence) > 0 ? 1 : 0;
    }
    CAPTURE(subject->name);
    CHECK(unsound == 0);
    CHECK((opinions > ticks / 20) == (subject->name != "no_opinion"));
  }
}

// The first of the odd scenes in which a field breaks its promise is reported, with a fresh memory or with one carried
// along; -1 if none does. Lanes are in different scenes.
template <wend::Number S>
void keep_their_promise_in_odd_scenes(Subjects<S> const& all) {
  std::vector<Plain> const odd = odd_scenes();
  for (auto const& subject : all) {
    int first_unsound = -1;
    for (std::size_t i = 0; i < odd.size() && first_unsound == -1; ++i) {
      Scene<S> const scene =
          scenes::gather<S>([&](int k) { return odd[(i + static_cast<std::size_t>(k)) % odd.size()]; });
      wend::Course<S> with_fresh;
      wend::Course<S> with_carried;
      subject->fresh()->answer(scene, with_fresh);
      subject->answer(scene, with_carried);
      if (!all_sound(with_fresh) || !all_sound(with_carried)) {
        first_unsound = static_cast<int>(i);
      }
    }
    CAPTURE(subject->name);
    CHECK(first_unsound == -1);
  }
}

template <wend::Number S>
void run_without_discs(Subjects<S> const& all) {
  for (auto const& subject : all) {
    Scene<S> scene;
    wend::Course<S> on_goal;
    wend::Course<S> off_goal;
    subject->answer(scene, on_goal);
    scene.goal = {S(1.0F), S(-2.0F)};
    subject->answer(scene, off_goal);
    CAPTURE(subject->name);
    CHECK(all_sound(on_goal));
    CHECK(all_sound(off_goal));
  }
}

template <wend::Number S>
void start_out_with_nothing(Subjects<S> const& all) {
  for (auto const& subject : all) {
    CAPTURE(subject->name);
    for (std::uint64_t const bits : subject->fresh()->remembered(0)) {
      bool const zero = bits == 0;
      bool const far = bits == std::bit_cast<std::uint64_t>(static_cast<double>(wend::far_away));
      CHECK((zero || far));
    }
  }
}

void agree_lane_by_lane(Subjects<wend::lab::Pack<8>> const& lanes, Subjects<float> const& alone) {
  for (std::size_t i = 0; i < lanes.size(); ++i) {
    std::vector<Trace> const together = traces<wend::lab::Pack<8>>(*lanes[i], 7);
    CAPTURE(lanes[i]->name);
    for (std::size_t k = 0; k < together.size(); ++k) {
      CAPTURE(k);
      CHECK(together[k] == traces<float>(*alone[i], static_cast<std::uint32_t>(7 + k)).front());
    }
  }
}

void turn_and_shift_with_the_scene(Subjects<double> const& all) {
  double const angle = 2.4;
  wend::Vec2<double> const by{std::cos(angle), std::sin(angle)};
  wend::Vec2<double> const shift{3.7, -11.2};
  auto const moved = [&](wend::Vec2<double> const& p) -> wend::Vec2<double> {
    return wend::turned_out_of(by, p) + shift;
  };
  for (auto const& subject : all) {
    Wanderer wanderer(31, false);
    std::unique_ptr<Subject<double>> const elsewhere = subject->fresh();
    double worst = 0.0;
    for (int tick = 0; tick < ticks; ++tick) {
      Plain const now = wanderer.step();
      Scene<double> const here = scenes::gather<double>([&now](int) { return now; });
      Scene<double> there = here;
      there.pose = {moved(here.pose.position), wend::turned_out_of(by, here.pose.heading)};
      there.goal = moved(here.goal);
      there.discs = {};
      for (int i = 0; i < here.discs.size(); ++i) {
        there.discs.add({moved(here.discs[i].centre), here.discs[i].radius},
                        wend::turned_out_of(by, here.discs.velocities()[i]), there.pose.position);
      }
      wend::Course<double> course;
      wend::Course<double> course_there;
      subject->answer(here, course);
      elsewhere->answer(there, course_there);
      // Weighed with the confidence: where fields nearly cancel, the direction hangs on the last bits.
      wend::Vec2<double> const expected = wend::turned_out_of(by, course.direction) * course.confidence;
      wend::Vec2<double> const off = course_there.direction * course_there.confidence - expected;
      worst = std::max({worst, wend::length(off), std::abs(course.confidence - course_there.confidence),
                        std::abs(course.speed_share - course_there.speed_share)});
    }
    CAPTURE(subject->name);
    CAPTURE(worst);
    CHECK(worst <= subject->turns_within);
  }
}

void go_on_from_a_copied_memory(Subjects<float> const& all) {
  for (auto const& subject : all) {
    Wanderer wanderer(53, true);
    auto const tick = [](Plain const& now, Subject<float>& of) {
      Scene<float> const scene = scenes::gather<float>([&now](int) { return now; });
      wend::Course<float> course;
      of.answer(scene, course);
      return scenes::bits_of<float>(course, 0);
    };
    for (int i = 0; i < ticks / 2; ++i) {
      tick(wanderer.step(), *subject);
    }
    std::unique_ptr<Subject<float>> const copy = subject->copy();
    int differences = 0;
    for (int i = 0; i < ticks / 2; ++i) {
      Plain const now = wanderer.step();
      differences += tick(now, *subject) == tick(now, *copy) ? 0 : 1;
    }
    CAPTURE(subject->name);
    CHECK(differences == 0);
  }
}

// Runs on boxes beside plain ones on their points. Half of the runs start fresh, the others with every memory there is
// and, on the points, with any.
template <typename I>
void enclose_every_point(subjects::AllEnclosed<I> const& all) {
  constexpr int boxes_wanted = 50'000;  // of each kind of interval, shared out among the fields of a list of 30
  constexpr int runs = boxes_wanted / (30 * guests::ticks_a_run) + 1;
  std::uint64_t seed = 1;
  for (auto const& field : all) {
    guests::Random random(seed++);
    guests::Tally tally;
    for (int run = 0; run < runs; ++run) {
      field->start(run % 2 == 0, random);
      for (int tick = 0; tick < guests::ticks_a_run; ++tick) {
        field->tick(guests::Cloud<I>(random), tally);
      }
    }
    CAPTURE(field->name);
    CHECK(tally.boxes == runs * guests::ticks_a_run);
    CHECK(tally.courses_out == 0);
    CHECK(tally.memories_out == 0);
  }
}

// Where AutoDiffScalar has no derivative (the root of exactly 0) it gives not-a-number; there is nothing to compare
// then.
void have_the_right_slopes(subjects::AllSloped const& all) {
  using Values = subjects::Sloped::Values;
  std::uint64_t seed = 1001;
  for (auto const& field : all) {
    guests::Random random(seed++);
    int compared = 0, values_off = 0, auto_off = 0, no_auto = 0, smooth = 0, differences_off = 0;
    double worst = 0.0;
    for (int k = 0; k < 60; ++k) {
      field->start(random);
      bool const odd = k % 4 == 0;
      guests::Row<double> const row = random.row(odd);
      // By the five-point formula (Abramowitz and Stegun 1964, 25.3.6): its error is step^4 / 30 times the fifth
      // derivative.
      auto const difference = [&](std::size_t place, double step) {
        auto const at = [&](double by) {
          guests::Row<double> moved = row;
          moved[place] += by;
          return field->plain(moved);
        };
        Values const a = at(-2.0 * step), b = at(-step), c = at(step), d = at(2.0 * step);
        Values slope;
        for (std::size_t i = 0; i < slope.size(); ++i) {
          slope[i] = (a[i] - 8.0 * b[i] + 8.0 * c[i] - d[i]) / (12.0 * step);
        }
        return slope;
      };
      for (std::size_t first = 0; first < guests::inputs; first += 2) {
        std::array<Values, 3> dual;
        std::array<Values, 3> other;
        field->by_dual(row, first, dual);
        field->by_autodiff(row, first, other);
        for (std::size_t place = 0; place < 2; ++place) {
          Values const coarse = difference(first + place, 4e-4);
          Values const fine = difference(first + place, 2e-4);
          Values const& of_dual = dual[1 + place];
          Values const& of_other = other[1 + place];
          for (std::size_t i = 0; i < fine.size(); ++i) {
            ++compared;
            values_off += dual[0][i] == other[0][i] ? 0 : 1;
            if (std::isfinite(of_other[i])) {
              auto_off += guests::near(of_dual[i], of_other[i], 1e-12) ? 0 : 1;
            } else {
              ++no_auto;
            }
            // Two steps that agree tell that nothing switches between here and there, unless it is right here.
            if (!odd && guests::near(coarse[i], fine[i], 1e-9)) {
              ++smooth;
              double const off = std::abs(of_dual[i] - fine[i]) / std::max(1.0, std::abs(fine[i]));
              worst = std::max(worst, off);
              differences_off += off <= 1e-9 ? 0 : 1;
            }
          }
        }
      }
    }
    CAPTURE(field->name);
    CAPTURE(worst);
    CHECK(values_off == 0);
    CHECK(auto_off == 0);
    CHECK(no_auto < compared / 10);
    CHECK(differences_off == 0);
    CHECK(smooth > compared * 6 / 10);  // of the three quarters that are not odd
  }
}

#define WEND_COMPILE_CHECKS(...)                                                  \
  template bool all_sound(wend::Course<__VA_ARGS__> const&);                      \
  template std::vector<Trace> traces(Subject<__VA_ARGS__> const&, std::uint32_t); \
  template void give_sound_courses(Subjects<__VA_ARGS__> const&);                 \
  template void keep_their_promise_in_odd_scenes(Subjects<__VA_ARGS__> const&);   \
  template void run_without_discs(Subjects<__VA_ARGS__> const&);                  \
  template void start_out_with_nothing(Subjects<__VA_ARGS__> const&);
WEND_COMPILE_CHECKS(float)
WEND_COMPILE_CHECKS(double)
WEND_COMPILE_CHECKS(wend::lab::Pack<8>)
#undef WEND_COMPILE_CHECKS
template void enclose_every_point(subjects::AllEnclosed<wend::lab::Interval> const&);
template void enclose_every_point(subjects::AllEnclosed<wend::lab::FloatInterval> const&);

}  // namespace field_checks
