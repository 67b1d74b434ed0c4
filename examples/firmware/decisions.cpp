// See decisions.hpp. All forms decide the same drives: a machine among discs, each tick much like the one before, every
// branch of the decision met. One disc stands in the way; the others stand farther off, so that a decision on many
// discs is the decision on one, plus the looking at the others.
#include "decisions.hpp"

#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>

#include "control.hpp"
#include "line.hpp"
#include "machines/machine.hpp"
#include "rivals.h"
#include "stack.hpp"

namespace {

constexpr int drives = 32;
constexpr std::size_t ticks = 32;  // of one drive
constexpr std::array<int, 5> disc_counts{1, 4, 8, 16, 32};

// Numbers from whole numbers only, so the same on every machine (Numerical Recipes' "quick and dirty" generator, Press
// et al. 1992, section 7.1, from memory; its high 24 bits fit a float).
class Random {
 public:
  float between(float low, float high) noexcept {
    state_ = state_ * 1664525U + 1013904223U;
    return low + (high - low) * (static_cast<float>(state_ >> 8U) / 16777216.0F);
  }

 private:
  std::uint32_t state_ = 1;
};

struct Drive {
  std::array<Scene, ticks> scenes;
  std::array<hand_scene, ticks> by_hand;
  std::array<float, ticks> headings;  // radians, which the textbook form wants
};

Drive drive;  // too large for a stack
DecisionMemory memory;
ExampleMemory example_memory;
hand_memory of_hand;
hand_memory of_hand_plain;
textbook_memory of_textbook;

void forget() noexcept {
  memory = {};
  example_memory = {};
  of_hand = {};
  of_hand_plain = {};
  of_textbook = {};
}

hand_scene same_for_hand(Scene const& scene) noexcept {
  hand_scene hand{};
  hand.x = scene.pose.position.x();
  hand.y = scene.pose.position.y();
  hand.heading_x = scene.pose.heading.x();
  hand.heading_y = scene.pose.heading.y();
  hand.goal_x = scene.goal.x();
  hand.goal_y = scene.goal.y();
  hand.robot_radius = robot_radius;
  for (wend::Disc<float> const& disc : scene.discs) {
    hand.discs[hand.disc_count++] = {disc.centre.x(), disc.centre.y(), disc.radius};
  }
  return hand;
}

// A drive through `count` discs. Half-way another disc takes the place of the one in the way, on its other side.
void make_drive(Random& random, int count) noexcept {
  forget();
  Scene scene{{}, {random.between(4.0F, 6.0F), random.between(-1.0F, 1.0F)}, {}};
  float const beyond = random.between(0.4F, 2.0F);
  wend::Disc<float> const first{{beyond, random.between(-0.4F, 0.4F)}, random.between(0.1F, 0.3F)};
  wend::Disc<float> const second{{first.centre.x(), -first.centre.y() - 0.3F}, first.radius};
  std::array<wend::Disc<float>, most_discs> others;
  for (wend::Disc<float>& other : others) {
    float const side = random.between(-1.0F, 1.0F) < 0.0F ? -1.0F : 1.0F;
    other = {{random.between(-6.0F, 6.0F), side * random.between(4.0F, 9.0F)}, random.between(0.1F, 0.5F)};
  }
  for (std::size_t k = 0; k < ticks; ++k) {
    scene.discs = {};
    scene.discs.add(k < ticks / 2 ? first : second);
    for (int i = 1; i < count; ++i) {
      scene.discs.add(others[static_cast<std::size_t>(i)]);
    }
    drive.scenes[k] = scene;
    drive.by_hand[k] = same_for_hand(scene);
    drive.headings[k] = std::atan2(scene.pose.heading.y(), scene.pose.heading.x());
    wend::Course<float> course;
    wend_decide(&scene, &memory, &course);
    if (course.confidence > 0.0F) {
      scene.pose.heading = course.direction;
      scene.pose.position += 0.04F * course.direction;
    }
  }
}

bool same(float a, float b) noexcept { return std::bit_cast<std::uint32_t>(a) == std::bit_cast<std::uint32_t>(b); }

bool same(wend::Course<float> const& course, hand_course const& hand) noexcept {
  return same(course.direction.x(), hand.x) && same(course.direction.y(), hand.y) &&
         same(course.confidence, hand.confidence) && same(course.speed_share, hand.speed_share);
}

// Rounding of an angle shows more, the more the blended directions cancel.
bool near(wend::Course<float> const& course, textbook_course const& textbook) noexcept {
  float const tolerance = 1.0e-5F / (course.confidence > 1.0e-3F ? course.confidence : 1.0e-3F);
  return std::abs(std::cos(textbook.angle) - course.direction.x()) < tolerance &&
         std::abs(std::sin(textbook.angle) - course.direction.y()) < tolerance &&
         std::abs(textbook.confidence - course.confidence) < 1.0e-5F;
}

// What kinds of decisions there were: beside a disc, blended, or straight away or to the goal.
std::array<std::uint32_t, 3> met{};

bool agree_on_drive() noexcept {
  forget();
  for (std::size_t k = 0; k < ticks; ++k) {
    wend::Course<float> course;
    hand_course hand;
    textbook_course textbook;
    wend_decide(&drive.scenes[k], &memory, &course);
    hand_decide_out_of_line(&drive.by_hand[k], &of_hand, &hand);
    hand_course hand_plain;
    hand_decide_plainly(&drive.by_hand[k], &of_hand_plain, &hand_plain);
    textbook_decide_out_of_line(&drive.by_hand[k], drive.headings[k], &of_textbook, &textbook);
    if (!same(course, hand) || !same(course, hand_plain) || !near(course, textbook)) {
      return false;
    }
    ++met[of_hand.passing ? 0U : course.confidence < 0.9999F ? 1U : 2U];
  }
  return true;
}

// The rims of the decision: no disc, on the goal, a goal or a place that is none, at the centre of a disc, overlap.
bool agree_at_rims() noexcept {
  constexpr float infinite = std::numeric_limits<float>::infinity();
  constexpr float none = std::numeric_limits<float>::quiet_NaN();
  constexpr std::array<std::array<float, 4>, 9> places{{{0.0F, 0.0F, 4.0F, 1.0F},
                                                        {4.0F, 1.0F, 4.0F, 1.0F},
                                                        {0.0F, 0.0F, infinite, 1.0F},
                                                        {0.0F, 0.0F, 4.0F, none},
                                                        {0.0F, 0.0F, 1.0e25F, 0.0F},
                                                        {0.0F, 0.0F, 2.0e6F, 0.0F},
                                                        {none, 0.0F, 4.0F, 1.0F},
                                                        {0.0F, -infinite, 4.0F, 1.0F},
                                                        {1.0e-20F, 0.0F, 0.0F, 1.0e-20F}}};
  constexpr std::array<std::array<float, 3>, 6> things{{{0.0F, 0.0F, 0.0F},
                                                        {0.0F, 0.0F, 0.3F},
                                                        {1.0F, 0.2F, 0.3F},
                                                        {0.5F, 0.0F, 0.2F},
                                                        {9.0e5F, 0.0F, 1.0F},
                                                        {1.0e-20F, 0.0F, 0.1F}}};
  for (auto const& place : places) {
    for (std::size_t i = 0; i <= things.size(); ++i) {  // the last time round without a disc
      forget();
      Scene scene{{{place[0], place[1]}, {1.0F, 0.0F}}, {place[2], place[3]}, {}};
      if (i < things.size()) {
        scene.discs.add({{things[i][0], things[i][1]}, things[i][2]});
      }
      hand_scene const by_hand = same_for_hand(scene);
      for (int again = 0; again < 2; ++again) {
        wend::Course<float> course;
        hand_course hand;
        wend_decide(&scene, &memory, &course);
        hand_decide_out_of_line(&by_hand, &of_hand, &hand);
        // By value, not by bits: where there is no direction, its zeros may have either sign.
        if (!(course.direction.x() == hand.x && course.direction.y() == hand.y &&
              course.confidence == hand.confidence)) {
          return false;
        }
      }
    }
  }
  return true;
}

// Never inlined, and with nothing in it: what the loop over a drive costs by itself, and the return.
[[gnu::noinline]] void nothing(Scene const*, DecisionMemory*, wend::Course<float>*) noexcept { asm volatile(""); }

template <typename F>
std::uint32_t count_drive(F const& decide) noexcept {
  forget();
  std::uint32_t const start = machine::reading();
  for (std::size_t k = 0; k < ticks; ++k) {
    decide(k);
  }
  return machine::instructions(start, machine::reading());
}

constexpr std::array<char const*, 6> names{"nothing", "wend", "by_hand", "textbook", "example", "by_hand_plain"};

// Instructions over all drives, in each form.
void count(int discs) noexcept {
  Random random;
  std::array<std::uint32_t, names.size()> totals{};
  for (int i = 0; i < drives; ++i) {
    make_drive(random, discs);
    wend::Course<float> course;
    hand_course hand;
    textbook_course textbook;
    totals[0] += count_drive([&](std::size_t k) noexcept { nothing(&drive.scenes[k], &memory, &course); });
    totals[1] += count_drive([&](std::size_t k) noexcept { wend_decide(&drive.scenes[k], &memory, &course); });
    totals[2] +=
        count_drive([&](std::size_t k) noexcept { hand_decide_out_of_line(&drive.by_hand[k], &of_hand, &hand); });
    totals[3] += count_drive([&](std::size_t k) noexcept {
      textbook_decide_out_of_line(&drive.by_hand[k], drive.headings[k], &of_textbook, &textbook);
    });
    totals[4] +=
        count_drive([&](std::size_t k) noexcept { wend_decide_example(&drive.scenes[k], &example_memory, &course); });
    totals[5] +=
        count_drive([&](std::size_t k) noexcept { hand_decide_plainly(&drive.by_hand[k], &of_hand_plain, &hand); });
  }
  Line line;
  for (std::size_t i = 0; i < names.size(); ++i) {
    line.word("count").word(names[i]).number(static_cast<std::uint32_t>(discs));
    line.number(totals[i]).number(drives * static_cast<std::uint32_t>(ticks)).print();
  }
}

// The deepest stack over the drives with eight discs.
void print_stacks() noexcept {
  Random random;
  std::array<std::uint32_t, names.size()> deepest{};
  auto const deepen = [&](std::size_t i, std::uint32_t depth) noexcept {
    deepest[i] = depth > deepest[i] ? depth : deepest[i];
  };
  for (int i = 0; i < drives; ++i) {
    make_drive(random, discs_kept);
    forget();
    for (std::size_t k = 0; k < ticks; ++k) {
      wend::Course<float> course;
      hand_course hand;
      textbook_course textbook;
      deepen(0, stack_of([&]() noexcept { nothing(&drive.scenes[k], &memory, &course); }));
      deepen(1, stack_of([&]() noexcept { wend_decide(&drive.scenes[k], &memory, &course); }));
      deepen(2, stack_of([&]() noexcept { hand_decide_out_of_line(&drive.by_hand[k], &of_hand, &hand); }));
      deepen(3, stack_of([&]() noexcept {
               textbook_decide_out_of_line(&drive.by_hand[k], drive.headings[k], &of_textbook, &textbook);
             }));
      deepen(4, stack_of([&]() noexcept { wend_decide_example(&drive.scenes[k], &example_memory, &course); }));
      deepen(5, stack_of([&]() noexcept { hand_decide_plainly(&drive.by_hand[k], &of_hand_plain, &hand); }));
    }
  }
  Line line;
  for (std::size_t i = 0; i < names.size(); ++i) {
    line.word("stack").word(names[i]).number(deepest[i]).print();
  }
}

}  // namespace

bool compare_decisions() noexcept {
  Line line;
  line.word("bytes memory_by_hand").number(sizeof(hand_memory)).print();
  line.word("bytes memory_textbook").number(sizeof(textbook_memory)).print();
  for (int const discs : disc_counts) {
    Random random;
    for (int i = 0; i < drives; ++i) {
      make_drive(random, discs);
      if (!agree_on_drive()) {
        line.word("disagreement on drive").number(static_cast<std::uint32_t>(i)).print();
        return false;
      }
    }
  }
  if (!agree_at_rims()) {
    line.word("disagreement at a rim of the decision").print();
    return false;
  }
  line.word("agreed: beside a disc").number(met[0]).word("blended").number(met[1]).word("straight").number(met[2]);
  line.print();
  if (machine::counts) {
    for (int const discs : disc_counts) {
      count(discs);
    }
    print_stacks();
  }
  return met[0] > 0 && met[1] > 0 && met[2] > 0;
}
