// wend/lab/scene_words.hpp - the words of a scene file, and what numbers each of them takes.
#pragma once

#include <array>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numbers>
#include <optional>
#include <string>

#include "wend/lab/scene_line.hpp"
#include "wend/lab/vehicle.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

namespace detail {

// A number that a word of a scene file takes.
struct SceneNumber {
  char const* name;
  NumberRange range;
};

// Farther off, the single precision that ships would lose centimetres.
inline constexpr double farthest_place = 1.0e6;
inline constexpr NumberRange a_place{-farthest_place, farthest_place, "metres"};
// Around discs that are as large and as far off as can be.
inline constexpr NumberRange a_border{-3.0 * farthest_place, 3.0 * farthest_place, "metres"};
inline constexpr NumberRange a_size{0.0, farthest_place, "metres", true};
inline constexpr NumberRange a_distance{0.0, farthest_place, "metres"};
inline constexpr NumberRange a_velocity{-1000.0, 1000.0, "metres a second"};
inline constexpr NumberRange a_time{0.0, 1.0e9, "seconds", true};
inline constexpr NumberRange a_share{0.0, 1.0, ""};
inline constexpr NumberRange a_spread{0.0, 0.99, ""};  // at 1 a period, a radius or a track could be nothing

// What lines begin with, but for settings. `heading` is apart: it takes one number or two.
struct SceneWord {
  char const* name;
  bool once;
  std::size_t count;
  std::array<SceneNumber, 5> numbers;

  [[nodiscard]] std::string usage() const {
    std::string text = std::string("'") + name;
    for (std::size_t i = 0; i < count; ++i) {
      text += std::string(" ") + numbers[i].name;
    }
    return text + "'";
  }
};
inline constexpr SceneNumber no_number{"", a_share};
inline constexpr SceneNumber x_place{"X", a_place};
inline constexpr SceneNumber y_place{"Y", a_place};
inline constexpr SceneNumber disc_radius{"RADIUS", a_size};
inline constexpr SceneWord disc_word{"disc", false, 3, {{x_place, y_place, disc_radius, no_number, no_number}}};
inline constexpr SceneWord moving_disc_word{
    "moving_disc", false, 5, {{x_place, y_place, disc_radius, {"VX", a_velocity}, {"VY", a_velocity}}}};
inline constexpr SceneWord start_word{"start", true, 2, {{x_place, y_place, no_number, no_number, no_number}}};
inline constexpr SceneWord goal_word{"goal", true, 2, {{x_place, y_place, no_number, no_number, no_number}}};
inline constexpr SceneWord time_limit_word{
    "time_limit", true, 1, {{{"SECONDS", a_time}, no_number, no_number, no_number, no_number}}};
inline constexpr SceneWord region_word{
    "region",
    true,
    4,
    {{{"LOW_X", a_border}, {"LOW_Y", a_border}, {"HIGH_X", a_border}, {"HIGH_Y", a_border}, no_number}}};

// Calls f(group, name, place of the number, range) for every setting of a scene.
template <typename Scene, typename F>
void for_each_setting(Scene& scene, F const& f) {
  f("draw", "clear", scene.clear, a_distance);
  f("draw", "least_way", scene.least_way, a_distance);
  // All members by name: this compiles no more when there is one that files cannot say.
  auto& [drive, radius, acceleration, latency, watchdog, period, jitter, range_noise, sight, dropout, position_noise,
         heading_noise, disc_noise, radius_noise, disc_dropout, slip, wheel_spread, track_spread] = scene.vehicle;
  auto& [wheel_radius, track, max_rate] = drive;
  f("drive", "wheel_radius", wheel_radius, NumberRange{0.001, 1000.0, "metres"});
  f("drive", "track", track, NumberRange{0.001, 1000.0, "metres"});
  f("drive", "max_rate", max_rate, NumberRange{0.001, 1.0e6, "radians a second"});
  f("vehicle", "radius", radius, a_size);
  f("vehicle", "acceleration", acceleration, NumberRange{0.0, 1.0e6, "metres a second squared", true});
  f("vehicle", "latency", latency, NumberRange{0.0, 1000.0, "seconds"});
  f("vehicle", "watchdog", watchdog, a_time);
  f("vehicle", "period", period, NumberRange{0.0001, 1000.0, "seconds"});
  f("vehicle", "jitter", jitter, a_spread);
  f("vehicle", "range_noise", range_noise, a_distance);
  f("vehicle", "sight", sight, a_distance);
  f("vehicle", "dropout", dropout, a_share);
  f("vehicle", "position_noise", position_noise, a_distance);
  f("vehicle", "heading_noise", heading_noise, NumberRange{0.0, 10.0, "radians"});
  f("vehicle", "disc_noise", disc_noise, a_distance);
  f("vehicle", "radius_noise", radius_noise, a_distance);
  f("vehicle", "disc_dropout", disc_dropout, a_share);
  f("vehicle", "slip", slip, a_share);
  f("vehicle", "wheel_spread", wheel_spread, a_spread);
  f("vehicle", "track_spread", track_spread, a_spread);
  auto& [keeps_clear, seen_within, arrives, contacts] = scene.claims;
  f("claim", "keeps_clear", keeps_clear, a_distance);
  f("claim", "seen_within", seen_within, a_distance);
  f("claim", "arrives", arrives, a_share);
  f("claim", "contacts", contacts, a_share);
}

// A heading in degrees as a unit vector. Whole quarter turns are exact, and no component is -0.
[[nodiscard]] inline Vec2<double> heading_at(double degrees) {
  int quarters = 0;
  double const rest = std::remquo(degrees, 90.0, &quarters) + 0.0;
  double const c = std::cos(rest * (std::numbers::pi / 180.0));
  double const s = std::sin(rest * (std::numbers::pi / 180.0));
  switch (static_cast<unsigned>(quarters) & 3U) {
    case 1: return {0.0 - s, c};
    case 2: return {0.0 - c, 0.0 - s};
    case 3: return {s, 0.0 - c};
    default: return {c, s};
  }
}

// Degrees with up to twelve decimals of which heading_at gives these very bits, with as few as do; nothing where there
// are none.
[[nodiscard]] inline std::optional<double> degrees_of(Vec2<double> const& heading) {
  auto const gives_it = [&heading](double degrees) {
    Vec2<double> const found = heading_at(degrees);
    // As bits: -0 is another text than 0.
    return std::bit_cast<std::uint64_t>(found.x()) == std::bit_cast<std::uint64_t>(heading.x()) &&
           std::bit_cast<std::uint64_t>(found.y()) == std::bit_cast<std::uint64_t>(heading.y());
  };
  double const near = std::atan2(heading.y(), heading.x()) * (180.0 / std::numbers::pi);
  for (double const steps : {1.0, 1.0e3, 1.0e6, 1.0e9, 1.0e12}) {
    if (double const round = std::round(near * steps) / steps; gives_it(round)) {
      return round;
    }
  }
  return std::nullopt;
}

}  // namespace detail

}  // namespace wend::inline v0::lab
