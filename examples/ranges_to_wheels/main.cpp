// ranges_to_wheels: from the raw readings of eight ultrasonic rangers, in millimetres, to the rates of two wheels, as a
// firmware loop would do it.
#include <array>
#include <cstdint>
#include <cstdio>
#include <numbers>
#include <span>

#include <wend/wend.hpp>

using namespace wend;

constexpr int beams = 8;

// Eight rangers round the body, 45 degrees apart, the first straight ahead. 65.535 is what theirs reads for no echo.
constexpr Ring<beams> ring{.directions = even_bearings<beams>(0.0, 2.0 * std::numbers::pi / beams),
                           .min_range = 0.03F,
                           .max_range = 4.0F,
                           .noise = 0.01F,
                           .no_echo = 65.535F};

constexpr auto policy = guarded(held(below(clearance, 0.30F, 0.50F), 0.4F), past_disc{}, toward_goal{});
constexpr Loop<decltype(policy), Ring<beams>> loop{
    .policy = policy, .sensing = ring, .drive = {.wheel_radius = 0.04F, .track = 0.24F, .max_rate = 15.0F}};

// A stand-in for the hardware: three rows of readings, and a dead bus.
constexpr std::array<std::array<std::uint16_t, beams>, 4> rows{{
    {1900, 65535, 65535, 65535, 65535, 65535, 65535, 65535},
    {760, 910, 65535, 65535, 65535, 65535, 65535, 65535},
    {430, 540, 880, 65535, 65535, 65535, 65535, 65535},
    {0, 0, 0, 0, 0, 0, 0, 0},
}};

int main() {
  memory_t<decltype(loop), float> memory;
  for (auto const& row : rows) {
    std::array<float, beams> ranges;
    for (std::size_t k = 0; k < beams; ++k) {
      ranges[k] = static_cast<float>(row[k]) * 0.001F;
    }
    Situation<float> now;  // in the robot's own frame: the goal is 3 m ahead
    now.goal = {3.0F, 0.0F};
    now.dt = 0.05F;  // seconds since the last tick
    now.age = 0.02F;  // seconds since the first of these ranges was measured
    Command<float> const command = loop.tick(now, std::span<float const, beams>(ranges), memory);
    std::printf("%-9s left %6.2f rad/s, right %6.2f rad/s\n", text(status_of(command)),
                static_cast<double>(command.wheels.left), static_cast<double>(command.wheels.right));
  }
}
