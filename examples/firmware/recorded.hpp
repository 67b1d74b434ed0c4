// The recorded run: what a cart measured on its rounds through a nursery, 20 times a second. Whole numbers only, so
// that nothing has to be parsed and every machine reads the same. Written by record.cpp, compiled in by recorded.S.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <numbers>

#include <wend/wend.hpp>

namespace recorded {

inline constexpr int beams = 24;
inline constexpr std::uint32_t period_ms = 50;
inline constexpr int ticks = 6000;

/// One tick. Little-endian, as all machines here are.
struct Tick {
  std::int16_t x_mm;
  std::int16_t y_mm;
  std::int16_t heading_x;  // of a unit vector, times heading_one
  std::int16_t heading_y;
  std::uint8_t goal;  // an index into `goals`
  std::uint8_t dt_ms;
  std::uint16_t age_ms;
  std::uint16_t range_mm[beams];  // no_echo_mm: nothing came back; 0: the beam is broken
};
static_assert(sizeof(Tick) == 60);

inline constexpr float heading_one = 16384.0F;
inline constexpr std::uint16_t no_echo_mm = 65535;

/// Where the cart goes in turn: the potting bench, the tap, the gate, the cold frame. Metres.
inline wend::Vec2<float> goal(int index) noexcept {
  constexpr float places[4][2] = {{11.0F, 1.0F}, {10.5F, 7.0F}, {1.0F, 6.5F}, {1.0F, 1.0F}};
  return {places[index & 3][0], places[index & 3][1]};
}

/// Twenty-four rangers round the body, all alike.
inline constexpr wend::Ring<beams> ring{.directions = wend::even_bearings<beams>(0.0, 2.0 * std::numbers::pi / beams),
                                        .min_range = 0.05F,
                                        .max_range = 4.0F,
                                        .noise = 0.015F,
                                        .no_echo = 65.535F};

// A quotient of whole numbers is rounded once, so it is the very float that its decimal form means: 65.535 above.
inline float metres(int mm) noexcept { return static_cast<float>(mm) / 1000.0F; }

/// What the loop is given of a tick.
inline void unpack(Tick const& tick, wend::Situation<float>& now, std::array<float, beams>& ranges) noexcept {
  now.pose = {{metres(tick.x_mm), metres(tick.y_mm)},
              {static_cast<float>(tick.heading_x) / heading_one, static_cast<float>(tick.heading_y) / heading_one}};
  now.goal = goal(tick.goal);
  now.dt = metres(tick.dt_ms);
  now.age = metres(tick.age_ms);
  for (std::size_t i = 0; i < ranges.size(); ++i) {
    ranges[i] = metres(tick.range_mm[i]);
  }
}

}  // namespace recorded
