// wend/lab/still_world.hpp - a world at rest as a policy finds it, from any place, on any number.
#pragma once

#include <stdexcept>
#include <string>

#include "wend/disc.hpp"
#include "wend/field.hpp"
#include "wend/lab/world.hpp"
#include "wend/number.hpp"
#include "wend/percept.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// What stays the same while a policy is asked from many places: discs at rest, a goal, and a machine of a radius, in
/// metres, whose nose points along `heading`, a unit vector.
template <int Capacity>
class StillWorld {
 public:
  /// Throws std::invalid_argument for discs that move or are more than Capacity. `who` is named in the message.
  StillWorld(char const* who, World const& world, Vec2<double> const& goal, Parameter robot_radius,
             Vec2<double> const& heading)
      : goal_(goal), heading_(heading), robot_radius_(robot_radius) {
    expect_still(who, world, Capacity);
    for (WorldDisc const& d : world.discs) {
      discs_.add(d.disc);
    }
  }

  /// In the order of the world.
  [[nodiscard]] DiscSet<double, Capacity> const& discs() const noexcept { return discs_; }
  /// Metres, in the world's frame.
  [[nodiscard]] Vec2<double> const& goal() const noexcept { return goal_; }
  /// Metres.
  [[nodiscard]] Parameter robot_radius() const noexcept { return robot_radius_; }

  /// The same discs on another number, exact.
  template <Number S>
  [[nodiscard]] DiscSet<S, Capacity> discs_on() const noexcept {
    DiscSet<S, Capacity> set;
    for (Disc<double> const& disc : discs_) {
      set.add({on<S>(disc.centre), S(disc.radius)});
    }
    return set;
  }

  /// What a machine at a place knows. `discs` must be those of `discs_on`, and outlive the percept.
  template <Number S>
  [[nodiscard]] Percept<S, Capacity> percept(Vec2<S> const& position, Vec2<S> const& heading,
                                             DiscSet<S, Capacity> const& discs) const noexcept {
    constexpr Parameter tick = 0.05F;  // seconds; matters to nobody who remembers nothing
    return look(Pose<S>{position, heading}, on<S>(goal_), discs, S(robot_radius_), S(tick));
  }
  /// With the nose along the heading that the world was made with.
  template <Number S>
  [[nodiscard]] Percept<S, Capacity> percept(Vec2<S> const& position,
                                             DiscSet<S, Capacity> const& discs) const noexcept {
    return percept(position, on<S>(heading_), discs);
  }

  /// The course of a policy that starts with a fresh memory at a place.
  template <typename Policy, Number S>
  [[nodiscard]] Course<S> course(Policy const& policy, Vec2<S> const& position,
                                 DiscSet<S, Capacity> const& discs) const noexcept {
    memory_t<Policy, S> memory{};
    return evaluate(policy, percept(position, discs), memory);
  }

 private:
  template <Number S>
  [[nodiscard]] static Vec2<S> on(Vec2<double> const& v) noexcept {
    return {S(v.x()), S(v.y())};
  }

  DiscSet<double, Capacity> discs_;
  Vec2<double> goal_;
  Vec2<double> heading_;
  Parameter robot_radius_;
};

}  // namespace wend::inline v0::lab
