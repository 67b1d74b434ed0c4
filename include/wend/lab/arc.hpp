// wend/lab/arc.hpp - the path of a body that moves at constant speed and turn rate: exact, not in small steps.
#pragma once

#include <algorithm>
#include <cmath>
#include <numbers>

#include "wend/motion/body_velocity.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// sin(x) / x, and 1 at 0.
[[nodiscard]] inline double sinc(double x) { return std::abs(x) < 1e-8 ? 1.0 : std::sin(x) / x; }

/// Where a body is after `time` seconds at constant velocity: the chord of the arc lies at half the angle turned, and
/// is speed * time * sinc(half the angle) long, straight motion included.
[[nodiscard]] inline Pose<double> along_arc(Pose<double> const& from, BodyVelocity<double> const& velocity,
                                            double time) {
  double const half = 0.5 * velocity.turn_rate * time;
  double const chord = velocity.speed * time * sinc(half);
  Vec2<double> const half_turned{std::cos(half), std::sin(half)};
  Vec2<double> const chord_direction = turned_out_of(from.heading, half_turned);
  Pose<double> to;
  to.position = from.position + chord * chord_direction;
  to.heading = polar(turned_out_of(chord_direction, half_turned)).direction;
  return to;
}

/// The least distance from a point to the arc that a body draws in `time` seconds, exact: on a circle the nearest point
/// lies towards the point asked about, if the arc gets there, else at an end.
[[nodiscard]] inline double distance_to_arc(Pose<double> const& from, BodyVelocity<double> const& velocity, double time,
                                            Vec2<double> const& point) {
  Vec2<double> const end = along_arc(from, velocity, time).position;
  double nearest = std::min((point - from.position).norm(), (point - end).norm());
  double const angle = velocity.turn_rate * time;
  if (std::abs(angle) < 1e-6) {  // straight, to within a hair: angle / 8 of its length
    Vec2<double> const way = end - from.position;
    double const size = way.squaredNorm();
    double const share = size > 0.0 ? std::clamp(way.dot(point - from.position) / size, 0.0, 1.0) : 0.0;
    return std::min(nearest, (from.position + share * way - point).norm());
  }
  double const radius = velocity.speed / velocity.turn_rate;  // signed: positive when the centre is on the left
  Vec2<double> const centre = from.position + radius * left_of(from.heading);
  Vec2<double> const to_start = from.position - centre;
  Vec2<double> const to_point = point - centre;
  double swept = std::atan2(cross(to_start, to_point), to_start.dot(to_point));  // from the start, towards the point
  if (angle > 0.0 && swept < 0.0) {
    swept += 2.0 * std::numbers::pi;
  } else if (angle < 0.0 && swept > 0.0) {
    swept -= 2.0 * std::numbers::pi;
  }
  if (std::abs(swept) <= std::abs(angle)) {
    nearest = std::min(nearest, std::abs(to_point.norm() - std::abs(radius)));
  }
  return nearest;
}

}  // namespace wend::inline v0::lab
