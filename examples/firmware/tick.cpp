// One control tick, as firmware would call it.
#include <span>

#include "control.hpp"

namespace {

constexpr ControlLoop loop{{.policy = policies::composed, .sensing = recorded::ring, .robot_radius = robot_radius}};

}  // namespace

wend::Command<float> wend_tick(wend::Situation<float> const& now, std::array<float, recorded::beams> const& ranges,
                               ControlMemory& memory) noexcept {
  return loop.tick<discs_kept>(now, std::span<float const, recorded::beams>(ranges), memory);
}
