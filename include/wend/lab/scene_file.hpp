// wend/lab/scene_file.hpp - a scene as a text that people write, read and written.
#pragma once

#include <cmath>
#include <stdexcept>
#include <string>
#include <string_view>
#include <type_traits>

#include "wend/lab/row_file.hpp"
#include "wend/lab/scene_parts.hpp"
#include "wend/lab/scene_reader.hpp"
#include "wend/lab/scene_words.hpp"

namespace wend::inline v0::lab {

/// The text of a scene, read. Throws FileError with the line, the column (in characters) and what was expected.
///
/// A scene file is a text of lines; what is behind a '#' is a comment. The first line that is no comment is
///
///     wend scene 1
///
/// and says how the rest is to be read. Every other line is a word and what it takes, with blanks between, in any
/// order. Places are in metres, x to the east and y to the north of any origin; angles are counter-clockwise from
/// the x axis.
///
///     title TEXT                      the rest of the line, a '#' too; none: no title
///     disc X Y RADIUS                 metres; a disc at rest; as many as there are
///     moving_disc X Y RADIUS VX VY    metres, metres a second: where it is at time 0, and its velocity
///     start X Y                       metres; must be there
///     heading DEGREES                 of the machine at the start, from -360 to 360; none: 0, along x. But for whole
///                                     quarter turns the last bit of the unit vector is the C library's
///     heading DX DY                   the same as a vector of any length; a unit vector is taken as it is
///     goal X Y                        metres; must be there
///     time_limit SECONDS              of a run; none: 120
///     region LOW_X LOW_Y HIGH_X HIGH_Y   metres: where drawn starts and goals lie and claims hold; none: 1 m around
///                                     start, goal and all discs as they are at time 0
///     draw NAME NUMBER                of drawn starts and goals: `clear` (metres to the nearest disc's edge; 0.5) and
///                                     `least_way` (metres between them; 0)
///     vehicle NAME NUMBER             a member of Vehicle, in the unit and with the default that stand there: radius,
///                                     acceleration, latency, watchdog, period, jitter, range_noise, sight, dropout,
///                                     position_noise, heading_noise (radians), disc_noise, radius_noise,
///                                     disc_dropout, slip, wheel_spread, track_spread
///     drive NAME NUMBER               a member of its DifferentialDrive: wheel_radius, track, max_rate
///     claim NAME NUMBER               what is to be shown: `keeps_clear` (metres), `seen_within` (metres that discs
///                                     are seen off), `arrives` (least share of drawn runs, from 0 to 1), `contacts`
///                                     (greatest probability, from 0 to 1); none: nothing is claimed
///
/// Only disc and moving_disc lines may be there more than once; each NAME has a line of its own. A number is decimal,
/// such as -2, 0.35 or 1e-3, finite, and within bounds that keep it sensible: places within 1000 km, radii over 0,
/// shares from 0 to 1, spreads and jitter to 0.99, a period of 0.1 ms or more. At the start the body must be clear of
/// all discs; the goal must not lie in a disc at rest. A line has up to 1000 bytes and may end in CR LF; a byte order
/// mark is passed over; other control characters than tabs are refused, and a title has to be UTF-8.
[[nodiscard]] inline SceneFile parse_scene(std::string const& name, std::string_view content) {
  return detail::SceneReader(name).read(content);
}

/// A scene as parse_scene reads it back: each number with the same bits, and all settings, those that are as by default
/// too. Throws FileError, or std::invalid_argument for a title of several lines or a heading of another length than 1,
/// where the scene is none that can be read back; then the line in the message is that of the text which is not given.
[[nodiscard]] inline std::string scene_text(SceneFile const& scene) {
  std::string text = "wend scene 1\n";
  auto const put = [&text](char const* word, auto... numbers) {
    text += word;
    ((text += ' ', detail::append(text, numbers)), ...);
    text += '\n';
  };
  auto const is_plain_zero = [](double value) { return value == 0.0 && !std::signbit(value); };
  if (!scene.title.empty()) {
    text += "title " + scene.title + "\n";
  }
  Trip const& trip = scene.trip;
  put("start", trip.start.position.x(), trip.start.position.y());
  if (auto const degrees = detail::degrees_of(trip.start.heading)) {
    put("heading", *degrees);
  } else {
    put("heading", trip.start.heading.x(), trip.start.heading.y());
  }
  put("goal", trip.goal.x(), trip.goal.y());
  put("time_limit", trip.time_limit);
  put("region", scene.region.low.x(), scene.region.low.y(), scene.region.high.x(), scene.region.high.y());
  detail::for_each_setting(
      scene, [&]<typename T>(char const* group, char const* name, T const& value, detail::NumberRange const&) {
        std::string const both = std::string(group) + " " + name;
        if constexpr (std::is_arithmetic_v<T>) {
          put(both.c_str(), value);
        } else if (value) {
          put(both.c_str(), *value);
        }
      });
  for (WorldDisc const& d : scene.world.discs) {
    Vec2<double> const& at = d.disc.centre;
    if (is_plain_zero(d.velocity.x()) && is_plain_zero(d.velocity.y())) {
      put("disc", at.x(), at.y(), d.disc.radius);
    } else {
      put("moving_disc", at.x(), at.y(), d.disc.radius, d.velocity.x(), d.velocity.y());
    }
  }
  SceneFile const again = parse_scene("scene", text);
  if (again.title != scene.title || again.trip.start.heading != scene.trip.start.heading) {
    throw std::invalid_argument("wend: scene_text: expected a title of one line and a heading of length 1");
  }
  return text;
}

}  // namespace wend::inline v0::lab
