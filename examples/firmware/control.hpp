// The library's part of the image, behind three functions in objects of their own: whatever those refer to, the library
// wants. cmake/firmware.sh holds them to a list.
#pragma once

#include <array>

#include "../policies.hpp"
#include "recorded.hpp"

/// What ships: ranges in, wheel rates out.
struct ControlLoop : wend::Loop<decltype(policies::composed), wend::Ring<recorded::beams>> {};
using ControlMemory = ControlLoop::Memory<float>;

/// The decision that bench/by_hand.h takes, composed: past the nearest disc while it is near, else away from it, to the
/// goal, or a blend of the two.
inline constexpr auto decision =
    wend::guarded(wend::below(wend::clearance, 0.30F, 0.50F), wend::past_disc{},
                  wend::blend(wend::ramp(wend::clearance, 0.5F, 1.2F), wend::away_from_discs{}, wend::toward_goal{}));
using DecisionMemory = wend::memory_t<decltype(decision), float>;
using ExampleMemory = wend::memory_t<decltype(policies::composed), float>;

inline constexpr int most_discs = 32;
inline constexpr int discs_kept = 8;
inline constexpr float robot_radius = 0.20F;

/// What a decision is taken on.
struct Scene {
  wend::Pose<float> pose;
  wend::Vec2<float> goal;
  wend::DiscSet<float, most_discs> discs;
};

static_assert(sizeof(DecisionMemory) <= 64 && sizeof(ExampleMemory) <= 64 && sizeof(ControlMemory) <= 64);

/// One whole tick: Ring, policy, pace, steering, drive. Returned, not assigned: so it is made where it is wanted.
wend::Command<float> wend_tick(wend::Situation<float> const& now, std::array<float, recorded::beams> const& ranges,
                               ControlMemory& memory) noexcept;

extern "C" {
/// look and evaluate, of the decision and of the examples' policy.
void wend_decide(Scene const* scene, DecisionMemory* memory, wend::Course<float>* course) noexcept;
void wend_decide_example(Scene const* scene, ExampleMemory* memory, wend::Course<float>* course) noexcept;
}
