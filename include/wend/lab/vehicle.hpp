// wend/lab/vehicle.hpp - the machine in simulation: its body, its drive, and how badly it sees.
#pragma once

#include "wend/motion/differential_drive.hpp"
#include "wend/number.hpp"

namespace wend::inline v0::lab {

/// A machine with two wheels and a ranger. What the loop believes about it (its own drive, its reaction time) may
/// differ; that is what simulation is for.
struct Vehicle {
  DifferentialDrive drive{};  ///< of the machine as it really is
  double radius = 0.20;        ///< metres: of the circle that holds the whole body
  double acceleration = 2.0;   ///< metres a second squared that a wheel's rim can speed up or brake with
  double latency = 0.05;       ///< seconds from the readings to the wheels' first response
  double watchdog = 1e9;       ///< seconds after which wheels that were told nothing new stop by themselves
  double period = 0.05;        ///< seconds between ticks
  double jitter = 0.0;         ///< share by which a period varies, evenly to both sides
  double range_noise = 0.01;   ///< metres, standard deviation of one range
  double sight = 6.0;          ///< metres: how far a loop is told of discs that has no ranger of its own
  double dropout = 0.01;       ///< share of the beams that read 0 at any time
  double position_noise = 0.0;  ///< metres, standard deviation of each coordinate of the pose estimate, anew each tick
  double heading_noise = 0.0;  ///< radians, standard deviation of the estimated heading, anew each tick
  double disc_noise = 0.0;  ///< metres, standard deviation of each coordinate of a disc that is told, anew each tick
  double radius_noise = 0.0;  ///< metres: a told radius is off by up to this, evenly and anew each tick, at least 0
  double disc_dropout = 0.0;  ///< share of the discs that are not told at any tick, of a loop that is told discs
  double slip = 0.0;  ///< share of its rim speed that a wheel loses at most, evenly drawn anew each tick
  double wheel_spread = 0.0;  ///< share by which each wheel's radius is off at most, evenly drawn once a run
  double track_spread = 0.0;  ///< share by which the track is off at most, evenly drawn once a run
};

/// A loop as it should be for a machine: with the machine's drive and radius. (What a loop believes besides, such as
/// the reaction time of its pace, is its own.)
template <typename Loop>
[[nodiscard]] Loop fitted(Loop loop, Vehicle const& vehicle) {
  loop.drive = vehicle.drive;
  loop.robot_radius = static_cast<Parameter>(vehicle.radius);
  return loop;
}

}  // namespace wend::inline v0::lab
