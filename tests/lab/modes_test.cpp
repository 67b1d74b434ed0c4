// The bits that modes_of reads, against what each guard of a policy answers.
#include <array>
#include <cstdint>

#include <doctest/doctest.h>

#include "wend/lab/modes.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;
using lab::modes_of;

constexpr auto inner = guarded(below(goal_distance, 1.0F, 2.0F), away_from_discs{}, toward_goal{});
constexpr auto outer = guarded(below(clearance, 0.3F, 0.5F), inner, toward_goal{});
constexpr auto beside = blend(ramp(clearance, 0.1F, 0.2F), inner, outer);

}  // namespace

TEST_CASE("modes_of a policy that never switches is 0") {
  memory_t<toward_goal, float> none;
  CHECK(modes_of(none) == 0);
  memory_t<past_disc, float> remembers;
  remembers.disc_on_right = true;
  CHECK(modes_of(remembers) == 0);
  CHECK(modes_of(memory_t<decltype(held(below(clearance, 0.3F, 0.5F), 1.0F)), float>{{}, 0.0F, true, true}) == 0);
}

TEST_CASE("modes_of gives one bit for each guarded, outermost first") {
  memory_t<decltype(outer), float> memory;
  CHECK(modes_of(memory) == 0b00);
  memory.is_inside = true;
  CHECK(modes_of(memory) == 0b10);
  memory.inside.is_inside = true;
  CHECK(modes_of(memory) == 0b11);
  memory.is_inside = false;
  CHECK(modes_of(memory) == 0b01);
}

TEST_CASE("modes_of finds guards inside blends and inside a loop") {
  memory_t<decltype(beside), double> memory;
  memory.low.is_inside = true;
  CHECK(modes_of(memory) == 0b100);
  memory.high.inside.is_inside = true;
  CHECK(modes_of(memory) == 0b101);
  memory_t<Loop<decltype(beside)>, float> of_loop;
  of_loop.policy.high.is_inside = true;
  CHECK(modes_of(of_loop) == 0b010);
}

TEST_CASE("modes_of follows the guards of a policy that is evaluated") {
  memory_t<decltype(outer), float> memory;
  auto const modes_at = [&memory](float disc_x, float goal_x) {
    DiscSet<float, 2> discs;
    discs.add({{disc_x, 0.0F}, 0.1F});
    static_cast<void>(evaluate(outer, look(Pose<float>{}, Vec2<float>(goal_x, 0.0F), discs, 0.2F, 0.1F), memory));
    return modes_of(memory);
  };
  // Clearance is the disc's distance less 0.3 m.
  CHECK(modes_at(2.0F, 3.0F) == 0b00);
  CHECK(modes_at(0.5F, 3.0F) == 0b10);   // 0.2 m: in
  CHECK(modes_at(0.7F, 0.5F) == 0b11);   // 0.4 m: still in; the goal near
  CHECK(modes_at(0.7F, 1.5F) == 0b11);   // between both pairs of thresholds
  CHECK(modes_at(0.7F, 2.5F) == 0b10);
  CHECK(modes_at(0.9F, 2.5F) == 0b00);   // 0.6 m: out
}
